import type { Contact } from '../analysis/contact';
import { evaluatePairAt, type Pair } from '../analysis/pair';
import { thermalOf, uncertaintyOf, validBeyondOf } from '../analysis/pair-detail';
import type { Regime } from '../analysis/reference';
import type { System } from '../analysis/system';
import type { Steps } from '../base/steps';
import { known, type Maybe } from './records';

/** The energies of a pair at one separation of its centres, its orientations kept. */
export interface CurvePoint {
  readonly distanceA: number;
  readonly pointKJPerMol: Maybe;
  readonly referenceKJPerMol: Maybe;
  /** Mean error of the reference for those of the dipoles, with the doubt of estimated charges; null where there is none. */
  readonly plusMinusKJPerMol: Maybe;
  /** Boltzmann average of the point dipoles' energy where both turn freely. */
  readonly thermalKJPerMol: Maybe;
  readonly regime: Regime | null;
  readonly contact: Contact;
}

/** Energy of a pair against separation, along its present line of centres. */
export interface SeparationCurve {
  readonly points: readonly CurvePoint[];
  readonly presentA: number;
  readonly validBeyondA: Maybe;
}

const MOST_POINTS = 121;
const LEAST_POINTS = 25;
/** Pairs of atoms that one curve may look at. */
const MOST_ATOM_PAIRS = 3_000_000;
const BISECTIONS = 12;
/** The curve begins this much inside of where the fragments would clash. */
const INSIDE = 0.97;
/** It reaches at least this far beyond the present separation, as a ratio, and to where the point dipole holds unless that is far off. */
const OUTSIDE = 1.6;
const FARTHEST = 3;
const SHORTEST_A = 0.5;
const LEAST_WIDTH_A = 3;

/** The curve of a pair; `null` where its parts are bonded, one lies within the other, or nothing is known of its energy. */
export function* separationCurveSteps(system: System, pair: Pair): Steps<SeparationCurve | null> {
  const { first, second, distanceA: presentA } = pair;
  if (pair.contact === 'bonded' || pair.enclosed || !(presentA > 0)) return null;
  if (Number.isNaN(pair.energies.pointDipole) && Number.isNaN(pair.referenceKJPerMol)) return null;
  const at = (r: number): Pair =>
    evaluatePairAt(system, first, second, [pair.u[0] * r, pair.u[1] * r, pair.u[2] * r], pair.image);
  const sizes = [first, second].map((f) => system.starts[f + 1]! - system.starts[f]!) as [number, number];
  const affordable = Math.floor(MOST_ATOM_PAIRS / Math.max(1, sizes[0] * sizes[1]));
  const count = Math.min(MOST_POINTS, Math.max(LEAST_POINTS, affordable));
  const { extentA } = system.moments;
  const shortest = Math.max(extentA[first]!, extentA[second]!, SHORTEST_A) * 1.001;
  const fromA = Math.min(INSIDE * (yield* clearFrom(at, shortest, presentA)), 0.9 * presentA);
  const validBeyondA = validBeyondOf(system, pair);
  yield;
  const wanted = Number.isNaN(validBeyondA) ? 0 : Math.min(1.2 * validBeyondA, FARTHEST * presentA);
  const startA = Math.max(fromA, shortest);
  const toA = Math.max(OUTSIDE * presentA, wanted, startA + LEAST_WIDTH_A);
  const points: CurvePoint[] = [];
  for (let k = 0; k < count; k++) {
    points.push(pointOf(system, at(startA + ((toA - startA) * k) / (count - 1))));
    yield;
  }
  return { points, presentA, validBeyondA: known(validBeyondA) };
}

/** The smallest separation from which the fragments do not clash, about; where they clash now, the present one. */
function* clearFrom(at: (r: number) => Pair, shortest: number, presentA: number): Steps<number> {
  if (at(presentA).contact === 'clash') return presentA;
  let [low, high] = [shortest, presentA];
  for (let k = 0; k < BISECTIONS && low < high; k++) {
    const middle = (low + high) / 2;
    if (at(middle).contact === 'clash') low = middle;
    else high = middle;
    yield;
  }
  return high;
}

function pointOf(system: System, pair: Pair): CurvePoint {
  const uncertainty = uncertaintyOf(system, pair);
  const { doubtKJPerMol } = pair;
  const plusMinus = Math.hypot(uncertainty || 0, doubtKJPerMol);
  return {
    distanceA: pair.distanceA,
    pointKJPerMol: known(pair.energies.pointDipole),
    referenceKJPerMol: known(pair.referenceKJPerMol),
    plusMinusKJPerMol: plusMinus > 0 ? known(plusMinus) : null,
    thermalKJPerMol: known(thermalOf(system, pair).averageKJPerMol),
    regime: pair.regime,
    contact: pair.contact,
  };
}
