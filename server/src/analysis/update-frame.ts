import { finish } from '../base/steps';
import type { AtomChange } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import { AtomFlag, type AtomTable } from '../formats/tree';
import type { Cell } from '../model/cell';
import { ClosePairSearch, closePairGrid } from '../model/close-pairs';
import type { PointGrid } from '../model/point-grid';
import { runsOf, type UpdatedModel, updateModel } from '../model/update-model';
import { updateClosePairs } from '../model/update-pairs';
import { isNarrow } from '../model/whole';
import { ChainGraph } from './chain-graph';
import type { FrameAnalysis } from './frame-analysis';
import { ModelKnowledge } from './model-knowledge';
import { clearMoments, fillMoments, type Moments, momentColumns, roomForMoments, wordColumns } from './moments';
import { PairNotes } from './pair-notes';
import { Partners } from './partners';
import { countSteps, type PairSurvey } from './survey';
import { emptySystem, layOut, type System } from './system';

/** A frame with all that an edit can go on from. An update writes into it and hands on what it does not replace. */
export interface StandingFrame {
  readonly frame: FrameAnalysis;
  readonly survey: PairSurvey;
  /** Cells of the atoms, made at the first update. */
  readonly atomGrid: PointGrid | null;
}

/**
 * Brings a file's only frame up to date after the numbers of some atoms have changed. Everything that did not change is taken over, and the
 * result is that of analysing the file afresh, down to the last bit. Returns `null` where only that will do; the standing frame must then
 * not be used any more, but for its system, partners and survey.
 *
 * @param tree the file after the edit, its atoms as before
 */
export function updateFrame(
  standing: StandingFrame,
  tree: CoordinateTree,
  changes: readonly AtomChange[],
): StandingFrame | null {
  const { frame, survey } = standing;
  const frameTree = tree.frames[0]!;
  const { atoms } = frameTree;
  const old = frame.model;
  if (old.fragments.count < 2 || old.pairs.tooDense || (old.cell !== null && isNarrow(old.cell))) return null;
  if (changes.length > MOST_CHANGES || !isPlain(atoms)) return null;
  const moved = changes.filter(({ atom, reading }) =>
    reading.positionA.some((x, a) => x !== atoms.positionA[3 * atom + a]),
  );
  const atomGrid = gridForMoves(standing.atomGrid, atoms, old.cell, moved);
  if (atomGrid === null) return null;
  for (const { atom, reading } of moved) atomGrid.move(atom, ...reading.positionA);
  for (const { atom, reading } of changes) write(atoms, atom, reading);
  if (atomGrid.tooDense) return null;
  const search = new ClosePairSearch(atoms, atomGrid);
  const movedAtoms = moved.map(({ atom }) => atom);
  const pairs = updateClosePairs(atoms, old.pairs, movedAtoms, search);
  const touched = changes.map(({ atom }) => atom);
  const updated = updateModel(old, frameTree, tree.text, touched, pairs);
  // What was said of the annotation may not hold for other fragments.
  if (updated?.model.fragments !== old.fragments && frame.problems.list().length > 0) return null;
  if (updated === null || updated.model.fragments.count < 2) return null;
  const gone: number[] = [];
  for (let f = 0; f < updated.newOf.length; f++) if (updated.newOf[f]! < 0) gone.push(f);
  const lost = finish(countSteps(frame.system, frame.partners, gone));
  const isSameSet = updated.model.fragments === old.fragments;
  const { system, partners } = isSameSet ? rewritten(frame, updated) : rebuilt(frame, updated);
  const added = new PairNotes();
  const found = finish(countSteps(system, partners, updated.fresh, added));
  const { notes } = survey;
  notes.change(updated.newOf, added.sorted());
  return {
    frame: { ...frame, model: updated.model, moments: system.moments, system, partners },
    survey: { pairs: survey.pairs - lost + found, notes, looked: lost + found },
    atomGrid,
  };
}

/** A grid in which atoms can move; `null` where only one of their new places would do. */
function gridForMoves(
  known: PointGrid | null,
  atoms: AtomTable,
  cell: Cell | null,
  moved: readonly AtomChange[],
): PointGrid | null {
  const allows = (grid: PointGrid) => moved.every(({ atom, reading }) => grid.canMove(atom, ...reading.positionA));
  if (known !== null && allows(known)) return known;
  const grid = closePairGrid(atoms, atoms.positionA, cell);
  return allows(grid) ? grid : null;
}

/** With more atoms changed a fresh analysis is as fast. */
const MOST_CHANGES = 32;

/** Whether all atoms are readable and none is a ghost. */
function isPlain({ flags }: AtomTable): boolean {
  const special = AtomFlag.ghost | AtomFlag.unknownElement | AtomFlag.noPosition;
  for (let i = 0; i < flags.length; i++) if (flags[i]! & special) return false;
  return true;
}

function write(atoms: AtomTable, atom: number, { positionA, chargeE, dipoleEA }: AtomChange['reading']): void {
  atoms.positionA.set(positionA, 3 * atom);
  if (chargeE !== null) atoms.chargeE![atom] = chargeE;
  if (dipoleEA !== null) atoms.dipoleEA!.set(dipoleEA, 3 * atom);
}

interface Rewritten {
  readonly system: System;
  readonly partners: Partners;
}

/** The system of the same fragments, some of which have changed, in the arrays of the old one. */
function rewritten(frame: FrameAnalysis, { model, fresh }: UpdatedModel): Rewritten {
  const { moments, settings, knowledge } = frame;
  const known = knowledge === null ? null : new ModelKnowledge(model, knowledge);
  const system = { ...frame.system, chains: new ChainGraph([model]) };
  const before = fresh.map((f) => ({
    centreA: [...moments.centreA.subarray(3 * f, 3 * f + 3)] as [number, number, number],
    usable: system.usable[f]!,
    isIon: system.isIon[f]!,
  }));
  for (const f of fresh) {
    clearMoments(moments, f);
    fillMoments(model, settings.centre, f, moments, known);
    layOut(system, model, f, f, 0);
  }
  const followed = fresh.map((f, n) => frame.partners.follow(f, before[n]!));
  return { system, partners: followed.includes(false) ? new Partners(system) : frame.partners };
}

/** The system of other fragments: those that stay are copied in runs. */
function rebuilt(frame: FrameAnalysis, { model, newOf, fresh }: UpdatedModel): Rewritten {
  const moments = roomForMoments(model.fragments.count);
  const known = frame.knowledge === null ? null : new ModelKnowledge(model, frame.knowledge);
  const system = emptySystem([{ model, moments }], moments, frame.settings, frame.knowledge);
  system.starts.set(model.fragments.starts);
  for (const [from, to, count] of runsOf(newOf)) copyRun(frame.system, system, from, to, count);
  for (const f of fresh) {
    clearMoments(moments, f);
    fillMoments(model, frame.settings.centre, f, moments, known);
    layOut(system, model, f, f, 0);
  }
  return { system, partners: new Partners(system) };
}

function copyRun(old: System, now: System, from: number, to: number, count: number): void {
  const copy = <T extends Float64Array | Uint8Array | Int32Array>(
    a: T,
    b: T,
    width: number,
    at: number,
    into: number,
    n: number,
  ) => b.set(a.subarray(width * at, width * (at + n)), width * into);
  const columns = momentColumns(now.moments);
  for (const [k, [column, width]] of momentColumns(old.moments).entries()) {
    copy(column, columns[k]![0], width, from, to, count);
  }
  copyWords(old.moments, now.moments, from, to, count);
  const flags = ['usable', 'hasColumn', 'ownCharges', 'fitted', 'featureless', 'isIon'] as const;
  for (const flag of flags) copy(old[flag], now[flag], 1, from, to, count);
  copy(old.moments.isAtom, now.moments.isAtom, 1, from, to, count);
  copy(old.doubtEA2, now.doubtEA2, 1, from, to, count);
  const [at, into] = [old.starts[from]!, now.starts[to]!];
  const atoms = old.starts[from + count]! - at;
  for (const column of ['element', 'ghost', 'columnE', 'fittedE'] as const) {
    copy<Float64Array | Uint8Array>(old[column], now[column], 1, at, into, atoms);
  }
  copy(old.atomNumbers, now.atomNumbers, 1, at, into, atoms);
  copy(old.localA, now.localA, 3, at, into, atoms);
}

function copyWords(old: Moments, now: Moments, from: number, to: number, count: number): void {
  const columns = wordColumns(now);
  for (const [n, column] of wordColumns(old).entries()) {
    for (let k = 0; k < count; k++) columns[n]![to + k] = column[from + k]!;
  }
}
