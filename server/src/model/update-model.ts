import { FindingCollector } from '../base/finding';
import type { FrameTree } from '../formats/tree';
import type { Snapshot } from '../text/snapshot';
import { annotateSome, kindFormulas, LISTED_KEYS } from './annotate-xyz';
import { emptyNotes } from './annotation';
import { type ClosePairs, firstPairOf } from './close-pairs';
import { hillFormula } from './formula';
import { atomsOf, type FragmentSet, fragmentsFromLabels, UnionFind } from './fragment-set';
import type { FrameModel } from './frame-model';
import { chainBonds } from './perceive';
import type { UpdatedPairs } from './update-pairs';
import { WholePlacer } from './whole';

/** A model after some atoms have moved. */
export interface UpdatedModel {
  readonly model: FrameModel;
  /** For each old fragment its number now; −1 where its atoms, their places or its bonds to others have changed. */
  readonly newOf: Int32Array;
  /** The fragments now that stood not there before as they are, ascending. */
  readonly fresh: readonly number[];
}

/**
 * Understands a frame again after its atoms (all readable, none a ghost) have moved: only the fragments with a moved atom or a changed bond
 * are formed, named and made whole anew. `null` where fragments changed on which the annotation depends as a list.
 *
 * The positions of the old model are written over where a cell makes them differ from those of the atoms.
 */
export function updateModel(
  old: FrameModel,
  tree: FrameTree,
  text: Snapshot,
  moved: readonly number[],
  { pairs, rebonded }: UpdatedPairs,
): UpdatedModel | null {
  const set =
    rebonded.length > 0 && old.fragments.origin === 'bonds' ? refragmented(old, pairs, rebonded) : old.fragments;
  if (rebonded.length > 0 && old.fragments.origin === 'list') return null;
  const newOf = new Int32Array(old.fragments.count);
  for (let f = 0; f < newOf.length; f++) newOf[f] = set.ofAtom[old.fragments.members[old.fragments.starts[f]!]!]!;
  const bonds = chainBonds(tree, pairs, set);
  const touched = [...moved, ...rebonded, ...changedBonds(old.chainBonds, bonds)];
  for (const atom of touched) newOf[old.fragments.ofAtom[atom]!] = -1;
  const fresh = freshFragments(set, newOf);
  const described = set === old.fragments ? old : describe(old, tree, text, set, newOf, fresh);
  if (described === null) return null;
  const { formulas, names, labels, notes } = described;
  const usable = carriedOver(old.usable, newOf, set.count);
  const endless = carriedOver(old.endless, newOf, set.count);
  const { cell, frameNotes } = old;
  const positionA = cell === null ? tree.atoms.positionA : old.positionA;
  if (cell !== null) {
    const placer = new WholePlacer(tree.atoms, set, pairs, cell, { positionA, endless });
    for (const f of fresh) {
      endless[f] = 0;
      for (const atom of atomsOf(set, f)) {
        positionA.set(tree.atoms.positionA.subarray(3 * atom, 3 * atom + 3), 3 * atom);
      }
      placer.place(f);
    }
  }
  for (const f of fresh) usable[f] = endless[f] ? 0 : 1;
  return {
    model: {
      tree,
      cell,
      pairs,
      fragments: set,
      formulas,
      names,
      labels,
      notes,
      frameNotes,
      positionA,
      usable,
      endless,
      chainBonds: bonds,
    },
    newOf,
    fresh,
  };
}

/** The fragments by bonds after some atoms have changed theirs: only the atoms of their fragments are sorted anew. */
function refragmented({ fragments }: FrameModel, pairs: ClosePairs, rebonded: readonly number[]): FragmentSet {
  const { ofAtom, members, starts } = fragments;
  const labels = new Int32Array(ofAtom.length);
  for (let i = 0; i < labels.length; i++) labels[i] = ofAtom[i]! < 0 ? -1 : members[starts[ofAtom[i]!]!]!;
  const region = [...new Set(rebonded.flatMap((atom) => [...atomsOf(fragments, fragments.ofAtom[atom]!)]))].sort(
    (a, b) => a - b,
  );
  const placeOf = new Map(region.map((atom, place) => [atom, place]));
  const sets = new UnionFind(region.length);
  for (const [place, atom] of region.entries()) {
    for (let k = firstPairOf(pairs, atom); k < pairs.count && pairs.first[k] === atom; k++) {
      const partner = placeOf.get(pairs.second[k]!);
      if (pairs.bonded[k] && partner !== undefined) sets.union(place, partner);
    }
  }
  for (const [place, atom] of region.entries()) labels[atom] = region[sets.find(place)]!;
  return fragmentsFromLabels(labels, 'bonds', () => false);
}

/** Atoms at the ends of bonds that are in one of two lists alone. */
function changedBonds(old: Int32Array, now: Int32Array): number[] {
  if (old.length === now.length && old.every((atom, k) => atom === now[k])) return [];
  const bondsOf = (list: Int32Array) =>
    new Map(Array.from({ length: list.length / 2 }, (_, k) => [`${list[2 * k]} ${list[2 * k + 1]}`, 2 * k]));
  const [before, after] = [bondsOf(old), bondsOf(now)];
  const changed: number[] = [];
  for (const [bond, k] of before) if (!after.has(bond)) changed.push(old[k]!, old[k + 1]!);
  for (const [bond, k] of after) if (!before.has(bond)) changed.push(now[k]!, now[k + 1]!);
  return changed;
}

/** Runs of fragments that stay side by side: first old number, first new number, how many. */
export function runsOf(newOf: Int32Array): [from: number, to: number, count: number][] {
  const runs: [number, number, number][] = [];
  let last: [number, number, number] | undefined;
  for (let f = 0; f < newOf.length; f++) {
    const now = newOf[f]!;
    if (now < 0) continue;
    if (last !== undefined && last[0] + last[2] === f && last[1] + last[2] === now) last[2]++;
    else {
      last = [f, now, 1];
      runs.push(last);
    }
  }
  return runs;
}

function freshFragments({ count }: FragmentSet, newOf: Int32Array): number[] {
  const isKept = new Uint8Array(count);
  for (let f = 0; f < newOf.length; f++) if (newOf[f]! >= 0) isKept[newOf[f]!] = 1;
  const fresh: number[] = [];
  for (let f = 0; f < count; f++) if (!isKept[f]) fresh.push(f);
  return fresh;
}

function carriedOver(old: Uint8Array, newOf: Int32Array, count: number): Uint8Array {
  const now = new Uint8Array(count);
  for (let f = 0; f < newOf.length; f++) if (newOf[f]! >= 0) now[newOf[f]!] = old[f]!;
  return now;
}

/** Names and notes of fragments of which some were formed anew; `null` where the annotation may mean something else for all of them. */
function describe(
  old: FrameModel,
  tree: FrameTree,
  text: Snapshot,
  set: FragmentSet,
  newOf: Int32Array,
  fresh: readonly number[],
): Pick<FrameModel, 'formulas' | 'names' | 'labels' | 'notes'> | null {
  if (tree.entries.some((entry) => LISTED_KEYS.has(entry.key))) return null;
  const runs = runsOf(newOf);
  const carried = <T>(values: readonly T[], unknown: (f: number) => T): T[] => {
    const pieces: T[][] = [];
    let next = 0;
    const unknownUpTo = (to: number) => {
      pieces.push(Array.from({ length: to - next }, (_, k) => unknown(next + k)));
      next = to;
    };
    for (const [from, to, count] of runs) {
      unknownUpTo(to);
      pieces.push(values.slice(from, from + count));
      next += count;
    }
    unknownUpTo(set.count);
    return ([] as T[]).concat(...pieces);
  };
  const formulas = carried(old.formulas, (f) => hillFormula(tree.atoms, atomsOf(set, f)));
  const kinds = kindFormulas(text, tree.entries);
  if (kinds.some((kind) => old.formulas.includes(kind) !== formulas.includes(kind))) return null;
  const notes = carried(old.notes, emptyNotes);
  const problems = new FindingCollector();
  annotateSome(text, tree, set, formulas, notes, fresh, problems);
  // A kind is missing among a few fragments, not in the frame.
  if (problems.list().some(({ code }) => code !== 'selector-unmatched')) return null;
  const names = carried(old.names, (f) => notes[f]!.name ?? formulas[f]!);
  return { formulas, names, labels: carried(old.labels, () => ''), notes };
}
