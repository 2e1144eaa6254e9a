import type { FindingCollector } from '../base/finding';
import { AtomFlag, type FrameTree, type Residue } from '../formats/tree';
import type { Snapshot } from '../text/snapshot';
import type { Cell } from './cell';
import { bondLimitA, type ClosePairs } from './close-pairs';
import { readFragmentAtoms } from './fragment-list';
import { type FragmentSet, fragmentsFromLabels, UnionFind } from './fragment-set';
import { NeighbourBuffer } from './neighbour-buffer';
import { PointGrid } from './point-grid';

/** A ghost site belongs to the fragment of the nearest atom within this distance, Å; virtual charge sites lie closer. */
const GHOST_REACH_A = 1;

/**
 * Forms the fragments of a frame, strongest first: the fragment column; `fragment_atoms` (atoms left out form fragments by their
 * bonds); residues of a PDB model; bonds. `inherited` are the declared fragments of the file's first frame, where they hold for
 * this one.
 */
export function formFragments(
  text: Snapshot,
  frame: FrameTree,
  pairs: ClosePairs,
  cell: Cell | null,
  inherited: FragmentSet | null,
  problems: FindingCollector,
): FragmentSet {
  if (frame.atoms.group !== null) return fragmentsFromLabels(frame.atoms.group, 'column', () => true);
  const list = frame.entries.find((entry) => entry.key === 'fragment_atoms');
  if (list !== undefined) {
    const labels = readFragmentAtoms(text, frame, list, problems);
    return withRestByBonds(labels, frame, pairs, cell);
  }
  if (frame.residues !== null) return fragmentsFromResidues(frame, frame.residues);
  if (inherited !== null) return inherited;
  return fragmentsFromLabels(bondLabels(frame, pairs, cell, null), 'bonds', () => false);
}

/** Labels by bonds: the smallest atom of each connected set; −1 for atoms that cannot be placed. */
function bondLabels(frame: FrameTree, pairs: ClosePairs, cell: Cell | null, taken: Int32Array | null): Int32Array {
  const { atoms } = frame;
  const sets = new UnionFind(atoms.count);
  for (let k = 0; k < pairs.count; k++) {
    if (pairs.bonded[k] === 0) continue;
    const i = pairs.first[k]!;
    const j = pairs.second[k]!;
    if (taken !== null && (taken[i]! >= 0 || taken[j]! >= 0)) continue;
    sets.union(i, j);
  }
  const labels = new Int32Array(atoms.count);
  for (let i = 0; i < atoms.count; i++) {
    const outside = atoms.flags[i]! & (AtomFlag.ghost | AtomFlag.unknownElement | AtomFlag.noPosition);
    labels[i] = outside || (taken !== null && taken[i]! >= 0) ? -1 : sets.find(i);
  }
  attachGhosts(frame, cell, labels);
  attachUnreadable(frame, labels, taken);
  return labels;
}

/**
 * Puts an atom that could not be read into the fragment of the atom written before it (or the first after it): files list molecules
 * together, and a fragment with a hole must show no numbers.
 */
function attachUnreadable(frame: FrameTree, labels: Int32Array, taken: Int32Array | null): void {
  const { flags, count } = frame.atoms;
  const unreadable = AtomFlag.unknownElement | AtomFlag.noPosition;
  let before = -1;
  for (let i = 0; i < count; i++) {
    if (labels[i]! >= 0) before = labels[i]!;
    else if (flags[i]! & unreadable && !(taken !== null && taken[i]! >= 0)) labels[i] = before;
  }
  let after = -1;
  for (let i = count - 1; i >= 0; i--) {
    if (labels[i]! >= 0) after = labels[i]!;
    else if (flags[i]! & unreadable && !(taken !== null && taken[i]! >= 0)) labels[i] = after;
  }
}

function attachGhosts(frame: FrameTree, cell: Cell | null, labels: Int32Array): void {
  const { atoms } = frame;
  const isGhost = (i: number) => (atoms.flags[i]! & (AtomFlag.ghost | AtomFlag.noPosition)) === AtomFlag.ghost;
  let any = false;
  for (let i = 0; i < atoms.count && !any; i++) any = isGhost(i);
  if (!any) return;
  const grid = new PointGrid(atoms.positionA, null, GHOST_REACH_A, cell);
  if (grid.tooDense) return;
  const buffer = new NeighbourBuffer();
  const joined: [number, number][] = [];
  for (let i = 0; i < atoms.count; i++) {
    if (!isGhost(i)) continue;
    grid.gather(i, GHOST_REACH_A, false, buffer);
    let best = -1;
    let bestA = Number.POSITIVE_INFINITY;
    for (let k = 0; k < buffer.count; k++) {
      const j = buffer.index[k]!;
      const d = Math.hypot(buffer.vectorA[3 * k]!, buffer.vectorA[3 * k + 1]!, buffer.vectorA[3 * k + 2]!);
      if (labels[j]! >= 0 && !isGhost(j) && d < bestA) {
        best = j;
        bestA = d;
      }
    }
    if (best >= 0) joined.push([i, labels[best]!]);
  }
  for (const [ghost, label] of joined) labels[ghost] = label;
}

/** Declared labels stay; the other atoms form fragments by the bonds among themselves. */
function withRestByBonds(declared: Int32Array, frame: FrameTree, pairs: ClosePairs, cell: Cell | null): FragmentSet {
  const rest = bondLabels(frame, pairs, cell, declared);
  let most = 0;
  for (const label of declared) most = Math.max(most, label + 1);
  const labels = declared.map((label, i) => (label >= 0 ? label : rest[i]! < 0 ? -1 : most + rest[i]!));
  return fragmentsFromLabels(labels, 'list', (label) => label < most);
}

const AMINO_LINK = ['C', 'N'] as const;
const NUCLEIC_LINK = ["O3'", 'P'] as const;
const OLD_NUCLEIC_LINK = ['O3*', 'P'] as const;

/** Whether a bond between two residues is one of the polymer backbone: C–N or O3'–P. */
export function isBackboneBond(name1: string, name2: string): boolean {
  return [AMINO_LINK, NUCLEIC_LINK, OLD_NUCLEIC_LINK].some(
    ([a, b]) => (name1 === a && name2 === b) || (name1 === b && name2 === a),
  );
}

/** Residues, those joined by CONECT or LINK outside the polymer backbone as one. */
function fragmentsFromResidues(frame: FrameTree, residues: readonly Residue[]): FragmentSet {
  const { atoms, bonds } = frame;
  const sets = new UnionFind(residues.length);
  for (let k = 0; k < bonds.length; k += 2) {
    const [i, j] = [bonds[k]!, bonds[k + 1]!];
    const [r1, r2] = [atoms.residue![i]!, atoms.residue![j]!];
    if (r1 !== r2 && !isBackboneBond(nameOfAtom(frame, i), nameOfAtom(frame, j))) sets.union(r1, r2);
  }
  return fragmentsFromLabels(
    Int32Array.from(atoms.residue!, (residue) => sets.find(residue)),
    'residues',
    () => true,
  );
}

/** Name of an atom of a PDB model, or '' in other formats. */
export function nameOfAtom(frame: FrameTree, atom: number): string {
  const residue = frame.residues?.[frame.atoms.residue?.[atom] ?? -1];
  return residue === undefined ? '' : (residue.atomNames[residue.atoms.indexOf(atom)] ?? '');
}

/**
 * Pairs of different fragments that are parts of one covalent whole, as atom pairs: neighbours in a polymer (C–N, O3'–P within the
 * covalent distance), a residue and a further one at the same place of the chain, and declared bonds that did not join them.
 */
export function chainBonds(frame: FrameTree, pairs: ClosePairs, set: FragmentSet): Int32Array {
  if (frame.residues === null) return new Int32Array(0);
  const found: number[] = [];
  const { residues, atoms } = frame;
  const apart = (i: number, j: number) => set.ofAtom[i] !== set.ofAtom[j];
  for (let k = 0; k < frame.bonds.length; k += 2) {
    const [i, j] = [frame.bonds[k]!, frame.bonds[k + 1]!];
    if (apart(i, j)) found.push(i, j);
  }
  for (let k = 0; k < pairs.count; k++) {
    const i = pairs.first[k]!;
    const j = pairs.second[k]!;
    if (!apart(i, j)) continue;
    const r1 = residues[atoms.residue![i]!]!;
    const r2 = residues[atoms.residue![j]!]!;
    const limit = bondLimitA(atoms.element[i]!, atoms.element[j]!);
    if (!(pairs.distanceA[k]! <= limit) || r1.chain !== r2.chain) continue;
    const samePlace = r1.number === r2.number && r1.insertion === r2.insertion && r1.segment === r2.segment;
    const backbone = isBackboneBond(nameOfAtom(frame, i), nameOfAtom(frame, j)) && r1.segment === r2.segment;
    if (backbone || (samePlace && pairs.bonded[k] === 1)) found.push(i, j);
  }
  return Int32Array.from(found);
}
