import { atomsOf } from '../model/fragment-set';
import type { FrameModel } from '../model/frame-model';
import type { FrameAnalysis } from './frame-analysis';
import { ModelKnowledge } from './model-knowledge';
import { clearMoments, fillMoments, type Moments, momentColumns, roomForMoments, wordColumns } from './moments';
import { evaluatePair, type Pair } from './pair';
import { layOut, type System } from './system';

/**
 * A frame as it would be with one of its fragments elsewhere, its bonds and all other fragments as they are. Where
 * nothing is so close that bonds would be told otherwise, it computes what a fresh analysis of such a file does. The frame itself stays
 * untouched.
 */
export class WhatIf {
  readonly #frame: FrameAnalysis;
  readonly #fragment: number;
  readonly #model: FrameModel;
  readonly #system: System;
  readonly #known: ModelKnowledge | null;

  /** Cost: a copy of the numbers of the frame. */
  constructor(frame: FrameAnalysis, fragment: number) {
    this.#frame = frame;
    this.#fragment = fragment;
    const { model, knowledge, system } = frame;
    this.#model = { ...model, positionA: model.positionA.slice(), notes: model.notes.slice() };
    this.#system = copyOf(system);
    this.#known = knowledge === null ? null : new ModelKnowledge(this.#model, knowledge);
  }

  /**
   * Puts the atoms of the fragment elsewhere.
   *
   * @param positionA x y z of each of its atoms in order, of the whole fragment
   * @param dipoleEA the vector that the file would give; `null` where it gives none
   */
  place(positionA: Float64Array, dipoleEA: readonly [number, number, number] | null): void {
    const f = this.#fragment;
    const { fragments, notes } = this.#model;
    for (const [k, atom] of atomsOf(fragments, f).entries()) {
      this.#model.positionA.set(positionA.subarray(3 * k, 3 * k + 3), 3 * atom);
    }
    if (dipoleEA !== null) (notes as FrameModel['notes'][number][])[f] = { ...notes[f]!, dipoleEA };
    const { moments } = this.#system;
    clearMoments(moments, f);
    fillMoments(this.#model, this.#frame.settings.centre, f, moments, this.#known);
    layOut(this.#system, this.#model, f, f, 0);
  }

  /** The pair of the fragment with another one. */
  pairWith(partner: number): Pair {
    return evaluatePair(this.#system, Math.min(this.#fragment, partner), Math.max(this.#fragment, partner));
  }
}

function copyOf(system: System): System {
  const flags = ['usable', 'hasColumn', 'ownCharges', 'fitted', 'featureless', 'isIon'] as const;
  const copies = Object.fromEntries(flags.map((flag) => [flag, system[flag].slice()])) as Pick<
    System,
    (typeof flags)[number]
  >;
  return {
    ...system,
    ...copies,
    moments: copyOfMoments(system.moments),
    localA: system.localA.slice(),
    columnE: system.columnE.slice(),
    fittedE: system.fittedE.slice(),
    doubtEA2: system.doubtEA2.slice(),
  };
}

function copyOfMoments(moments: Moments): Moments {
  const copy = roomForMoments(moments.count);
  const columns = momentColumns(copy);
  for (const [k, [column]] of momentColumns(moments).entries()) columns[k]![0].set(column);
  const words = wordColumns(copy);
  for (const [k, column] of wordColumns(moments).entries()) {
    for (let f = 0; f < column.length; f++) words[k]![f] = column[f]!;
  }
  copy.isAtom.set(moments.isAtom);
  return copy;
}
