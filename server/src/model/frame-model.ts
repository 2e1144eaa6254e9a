import type { FindingCollector } from '../base/finding';
import { finish, inStrides, type Steps } from '../base/steps';
import { AtomFlag, type CoordinateTree, type FrameTree } from '../formats/tree';
import { annotatePdb } from './annotate-pdb';
import { annotateXyz } from './annotate-xyz';
import { type FragmentNotes, type FrameNotes, ValueReader } from './annotation';
import { type Cell, createCell } from './cell';
import { type ClosePairs, closePairSteps } from './close-pairs';
import { FormulaBook } from './formula';
import { atomsOf, type FragmentSet } from './fragment-set';
import { chainBonds, formFragments } from './perceive';
import { wholeSteps } from './whole';

/** A frame understood: its fragments, what the file says of them, and the atoms put side by side. */
export interface FrameModel {
  readonly tree: FrameTree;
  readonly cell: Cell | null;
  readonly pairs: ClosePairs;
  readonly fragments: FragmentSet;
  /** Composition of each fragment (Hill). */
  readonly formulas: readonly string[];
  /** Name of each: annotation, else the residue name, else the composition. */
  readonly names: readonly string[];
  /** `chain:residue:number` of each in a PDB model, '' elsewhere. */
  readonly labels: readonly string[];
  readonly notes: readonly FragmentNotes[];
  readonly frameNotes: FrameNotes;
  /** x y z of each atom with fragments made whole, Å. */
  readonly positionA: Float64Array;
  /** 1 where every atom of the fragment is known and it has an end: it can have moments. */
  readonly usable: Uint8Array;
  readonly endless: Uint8Array;
  /** Atom pairs (flat) that bond two fragments of one covalent whole. */
  readonly chainBonds: Int32Array;
}

/** What later frames take from the first one. */
export interface FirstFrame {
  readonly tree: FrameTree;
  readonly fragments: FragmentSet | null;
}

/** Fragments looked at between two pauses. */
const FRAGMENTS_A_STEP = 1024;

/** Understands one frame. `periodic` switches on a cell that the format by itself does not use. */
export function buildFrameModel(
  file: CoordinateTree,
  tree: FrameTree,
  first: FirstFrame | null,
  periodic: boolean,
  problems: FindingCollector,
): FrameModel {
  return finish(frameModelSteps(file, tree, first, periodic, problems));
}

/** The same with pauses. */
export function* frameModelSteps(
  file: CoordinateTree,
  tree: FrameTree,
  first: FirstFrame | null,
  periodic: boolean,
  problems: FindingCollector,
): Steps<FrameModel> {
  const { text } = file;
  const reader = new ValueReader(text, problems);
  const fileEntries = file.remarks.filter((remark) => remark.selector === null).flatMap((remark) => remark.entries);
  const frameNotes = reader.frameNotes([...tree.entries, ...fileEntries]);
  const cell = usableCell(file, tree, periodic || frameNotes.periodic === true, problems);
  const pairs = yield* closePairSteps(tree.atoms, tree.atoms.positionA, cell);
  yield;
  const heir = first !== null && sameElements(first.tree, tree) ? first : null;
  const fragments = pairs.tooDense
    ? noFragments(tree.atoms.count)
    : formFragments(text, tree, pairs, cell, heir?.fragments ?? null, problems);
  yield;
  const formulas: string[] = [];
  const book = new FormulaBook();
  yield* inStrides(fragments.count, FRAGMENTS_A_STEP, (f) => {
    formulas.push(book.formulaOf(tree.atoms, atomsOf(fragments, f)));
  });
  // Without fragments the lists of the annotation have nothing to fit.
  const notes = pairs.tooDense
    ? []
    : file.language === 'pdb'
      ? annotatePdb(text, tree, fragments, file.remarks, problems)
      : yield* annotateXyz(text, tree, fragments, formulas, heir?.tree ?? null, problems);
  yield;
  const { positionA, endless } = yield* wholeSteps(tree.atoms, fragments, pairs, cell);
  const usable = new Uint8Array(fragments.count);
  const names: string[] = [];
  const labels: string[] = [];
  yield* inStrides(fragments.count, FRAGMENTS_A_STEP, (f) => {
    usable[f] = endless[f] || hasHoles(tree, fragments, f) ? 0 : 1;
    const residue = residueName(tree, fragments, f);
    names.push(notes[f]!.name ?? residue?.name ?? formulas[f]!);
    labels.push(residue?.label ?? '');
  });
  const bonds = chainBonds(tree, pairs, fragments);
  yield;
  return {
    tree,
    cell,
    pairs,
    fragments,
    formulas,
    names,
    labels,
    notes,
    frameNotes,
    positionA,
    usable,
    endless,
    chainBonds: bonds,
  };
}

/** The fragments that later frames may take over from a file's first frame: declared ones only. */
export function inheritableFragments(model: FrameModel): FragmentSet | null {
  const { origin } = model.fragments;
  return origin === 'column' || origin === 'list' ? model.fragments : null;
}

function noFragments(atomCount: number): FragmentSet {
  return {
    count: 0,
    origin: 'bonds',
    ofAtom: new Int32Array(atomCount).fill(-1),
    starts: new Int32Array(1),
    members: new Int32Array(0),
    declared: new Uint8Array(0),
  };
}

function usableCell(file: CoordinateTree, tree: FrameTree, asked: boolean, problems: FindingCollector): Cell | null {
  if (tree.cell === null || (file.language === 'pdb' && !asked)) return null;
  const periodic = asked ? ([true, true, true] as const) : tree.cell.periodic;
  if (!periodic.includes(true)) return null;
  const cell = createCell(tree.cell.vectorsA, periodic);
  if (typeof cell !== 'string') return cell;
  problems.add('cell-unusable', tree.cell.span, () => cell);
  return null;
}

export function sameElements(a: FrameTree, b: FrameTree): boolean {
  if (a === b || a.atoms.count !== b.atoms.count) return false;
  return a.atoms.element.every((z, i) => z === b.atoms.element[i]);
}

function hasHoles(tree: FrameTree, set: FragmentSet, f: number): boolean {
  return atomsOf(set, f).some(
    (atom) => (tree.atoms.flags[atom]! & (AtomFlag.unknownElement | AtomFlag.noPosition)) !== 0,
  );
}

function residueName(tree: FrameTree, set: FragmentSet, f: number): { name: string; label: string } | null {
  if (tree.residues === null) return null;
  const indices = [...new Set(Array.from(atomsOf(set, f), (atom) => tree.atoms.residue![atom]!))];
  const residues = indices.map((index) => tree.residues![index]!);
  const label = ({ chain, name, number, insertion }: (typeof residues)[number]) =>
    `${chain || '_'}:${name}:${Number.isNaN(number) ? '?' : number}${insertion}`;
  return { name: residues.map((residue) => residue.name).join('+'), label: residues.map(label).join('+') };
}
