import type { Steps } from '../base/steps';
import { imageResult, minimumImage } from '../model/cell';
import type { FragmentMatch } from './match-fragments';
import { evaluatePair } from './pair';
import { NoteKind, noteOf, PairNotes } from './pair-notes';
import { PairSieve, Sieved } from './pair-sieve';
import { isWithinCutoff, type Partners } from './partners';
import type { System } from './system';

/** What the findings need of the pairs of a frame: how many there are, and the few of which something is to be said. */
export interface PairSurvey {
  readonly pairs: number;
  readonly notes: PairNotes;
  /** Pairs that had to be looked at for this survey. */
  readonly looked: number;
}

/** Fragments looked at between two pauses. */
const FRAGMENTS_A_STEP = 32;

/**
 * Looks through all pairs of a system in order of the first fragment, pausing now and then. Pairs that are surely apart and far are passed
 * over without being evaluated; the result is that of evaluating every one.
 */
export function* surveySteps(system: System, partners: Partners): Steps<PairSurvey> {
  const surveyor = new Surveyor(system);
  const notes = new PairNotes();
  let pairs = 0;
  for (let f = 0; f < system.count; f++) {
    const { index, vectorA, count } = partners.around(f, true);
    const begin = notes.count;
    for (let k = 0; k < count; k++) {
      pairs += surveyor.look(f, index[k]!, vectorA[3 * k]!, vectorA[3 * k + 1]!, vectorA[3 * k + 2]!, notes);
    }
    notes.sortRow(begin);
    if (f % FRAGMENTS_A_STEP === FRAGMENTS_A_STEP - 1) yield;
  }
  return { pairs, notes, looked: pairs };
}

/** A system whose pairs have been looked through, with the means to find partners in it. */
export interface Surveyed {
  readonly system: System;
  readonly partners: Partners;
  readonly survey: PairSurvey;
}

/**
 * The survey of a system that differs from an earlier one in a few fragments: pairs of all others are taken over. The result is that of
 * {@link surveySteps}; the notes of the earlier survey become those of the new one.
 */
export function* resurveySteps(
  earlier: Surveyed,
  system: System,
  partners: Partners,
  { newOf, gone, fresh }: FragmentMatch,
): Steps<PairSurvey> {
  const before = countSteps(earlier.system, earlier.partners, gone);
  const lost = yield* before;
  const added = new PairNotes();
  const found = yield* countSteps(system, partners, fresh, added);
  const { notes } = earlier.survey;
  notes.change(newOf, added.sorted());
  return { pairs: earlier.survey.pairs - lost + found, notes, looked: lost + found };
}

/** How many pairs some fragments (ascending) have in the list; notes them where that is wanted. */
export function* countSteps(
  system: System,
  partners: Partners,
  fragments: readonly number[],
  notes = new PairNotes(),
): Steps<number> {
  const surveyor = new Surveyor(system);
  const isAmong = new Uint8Array(system.count);
  for (const f of fragments) isAmong[f] = 1;
  let pairs = 0;
  for (const [n, f] of fragments.entries()) {
    const { index, count } = partners.around(f, false);
    for (let k = 0; k < count; k++) {
      const g = index[k]!;
      if (!(isAmong[g] && g < f)) pairs += surveyor.lookAfresh(Math.min(f, g), Math.max(f, g), notes);
    }
    if (n % FRAGMENTS_A_STEP === FRAGMENTS_A_STEP - 1) yield;
  }
  return pairs;
}

/** Looks at single pairs and notes what is to be said of them. */
class Surveyor {
  readonly #system: System;
  readonly #sieve: PairSieve;
  readonly #image = imageResult();

  constructor(system: System) {
    this.#system = system;
    this.#sieve = new PairSieve(system);
  }

  /** 1 where fragments `f` < `g` with the given vector between their centres are in the list, else 0. */
  look(f: number, g: number, x: number, y: number, z: number, notes: PairNotes): 0 | 1 {
    const sieved = this.#sieve.look(f, g, x, y, z);
    if (sieved !== Sieved.open) return sieved;
    const pair = evaluatePair(this.#system, f, g);
    if (pair.contact === 'apart' && !isWithinCutoff(this.#system, f, g, pair.distanceA)) return 0;
    const kind = noteOf(this.#system, pair);
    if (kind !== NoteKind.none) notes.add(f, g, kind, pair.strengthKJPerMol);
    return 1;
  }

  /** The same where no vector is known, or one from `g` to `f` only, whose image may be another by rounding. */
  lookAfresh(f: number, g: number, notes: PairNotes): 0 | 1 {
    const { cell, moments } = this.#system;
    const { centreA } = moments;
    const x = centreA[3 * g]! - centreA[3 * f]!;
    const y = centreA[3 * g + 1]! - centreA[3 * f + 1]!;
    const z = centreA[3 * g + 2]! - centreA[3 * f + 2]!;
    if (cell === null) return this.look(f, g, x, y, z, notes);
    minimumImage(cell, x, y, z, this.#image);
    const { vectorA } = this.#image;
    return this.look(f, g, vectorA[0]!, vectorA[1]!, vectorA[2]!, notes);
  }
}
