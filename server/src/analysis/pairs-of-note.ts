import type { Steps } from '../base/steps';
import { NOTICEABLE_KT } from './advice';
import type { FrameAnalysis } from './frame-analysis';
import { evaluatePair, type Pair } from './pair';
import { NoteKind } from './pair-notes';
import { CONTACT_REACH_A, isWithinCutoff } from './partners';
import { NEGLIGIBLE_KT } from './reference';
import type { PairSurvey } from './survey';
import type { System } from './system';

/** Fragments or pairs looked at between two pauses. */
const FRAGMENTS_A_STEP = 32;
const PAIRS_A_STEP = 512;
/** A frame with more pairs, all of them weak, is not searched for the strongest. */
const MOST_WEAK_PAIRS = 200000;

type Surveyed = Pick<FrameAnalysis, 'system' | 'partners'>;

/** The strongest pair of a frame, with a strength above zero. */
export interface StrongestPair {
  readonly pair: Pair | null;
  /** False where all pairs are weaker than half of kT and too many to look at each. */
  readonly isSearched: boolean;
}

/** Which pairs (flat) are worth a quantum calculation, in order: what a survey noted tells it. */
export function* pairsToCompute({ system }: Surveyed, { notes }: PairSurvey): Steps<number[]> {
  const pairs: number[] = [];
  const least = NOTICEABLE_KT * system.kTKJPerMol;
  for (let k = 0; k < notes.count; k++) {
    const [first, second, kind] = [notes.first[k]!, notes.second[k]!, notes.kind[k]!];
    const isAtEdge = kind === NoteKind.edge && notes.strengthKJPerMol[k]! > least;
    // At the edge only those that touch are to be computed, which the note does not tell.
    const isWanted =
      kind === NoteKind.near ||
      kind === NoteKind.compute ||
      (isAtEdge && evaluatePair(system, first, second).advice === 'compute');
    if (isWanted) pairs.push(first, second);
    if (k % PAIRS_A_STEP === PAIRS_A_STEP - 1) yield;
  }
  return pairs;
}

/**
 * The strongest pair of a frame. Strong near pairs are noted; of the others only those are evaluated that could be stronger by a bound that
 * needs nothing but charges, dipole sizes and distance.
 */
export function* strongestPair(frame: Surveyed, survey: PairSurvey): Steps<StrongestPair> {
  const { system } = frame;
  const { notes, pairs } = survey;
  let best: Pair | null = null;
  let strongest = -1;
  for (let k = 0; k < notes.count; k++) {
    if (strongest < 0 || notes.strengthKJPerMol[k]! > notes.strengthKJPerMol[strongest]!) strongest = k;
  }
  if (strongest >= 0) best = evaluatePair(system, notes.first[strongest]!, notes.second[strongest]!);
  best = yield* strongerThan(frame, best, new StrengthBound(system));
  if ((best?.strengthKJPerMol ?? 0) > NOTICEABLE_KT * system.kTKJPerMol) return { pair: best, isSearched: true };
  // A weak pair may be near, where no bound holds.
  if (pairs > MOST_WEAK_PAIRS) return { pair: best, isSearched: false };
  best = yield* strongerThan(frame, best, null);
  return { pair: best !== null && best.strengthKJPerMol > 0 ? best : null, isSearched: true };
}

/** The strongest of a pair and all that a bound does not rule out; of equal ones the first in the list. */
function* strongerThan(
  { system, partners }: Surveyed,
  pair: Pair | null,
  bound: StrengthBound | null,
): Steps<Pair | null> {
  let best = pair;
  for (let f = 0; f < system.count; f++) {
    const { index, vectorA, count } = partners.around(f, true);
    for (let k = 0; k < count; k++) {
      const distanceA = Math.hypot(vectorA[3 * k]!, vectorA[3 * k + 1]!, vectorA[3 * k + 2]!);
      if (bound !== null && best !== null && bound.of(f, index[k]!, distanceA) < best.strengthKJPerMol) continue;
      const other = evaluatePair(system, f, index[k]!);
      if (!(other.contact !== 'apart' || isWithinCutoff(system, f, index[k]!, other.distanceA))) continue;
      if (best === null || isBefore(other, best)) best = other;
    }
    if (f % FRAGMENTS_A_STEP === FRAGMENTS_A_STEP - 1) yield;
  }
  return best;
}

function isBefore(a: Pair, b: Pair): boolean {
  if (a.strengthKJPerMol !== b.strengthKJPerMol) return a.strengthKJPerMol > b.strengthKJPerMol;
  return a.first - b.first < 0 || (a.first === b.first && a.second < b.second);
}

/** What a pair that is neither near nor at the edge can be worth at most. */
class StrengthBound {
  readonly #system: System;

  constructor(system: System) {
    this.#system = system;
  }

  of(f: number, g: number, distanceA: number): number {
    const { moments, couplingKJA, kTKJPerMol, settings } = this.#system;
    const { chargeE, dipoleNormEA, extentA } = moments;
    const known = (value: number) => (Number.isNaN(value) ? 0 : Math.abs(value));
    const [q1, q2] = [known(chargeE[f]!), known(chargeE[g]!)];
    const [m1, m2] = [known(dipoleNormEA[f]!), known(dipoleNormEA[g]!)];
    const point = (q1 * q2 + (q1 * m2 + q2 * m1 + (2 * m1 * m2) / distanceA) / distanceA) / distanceA;
    // The reference of such a pair is off the point dipole by its tolerance, or by a negligible energy.
    const most = Math.max(
      (couplingKJA * point) / (1 - settings.tolerance),
      couplingKJA * point + NEGLIGIBLE_KT * kTKJPerMol,
    );
    // Touching pairs count without the medium.
    const mayTouch = distanceA - extentA[f]! - extentA[g]! <= CONTACT_REACH_A;
    return most * (mayTouch ? settings.relativePermittivity : 1);
  }
}
