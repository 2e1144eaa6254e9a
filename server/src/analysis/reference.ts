import { type ExtendedDipole, extendedDipoleEnergy } from '../physics/finite-dipole';
import type { System } from './system';

/** What a reference energy rests on, best first. */
export type Basis = 'charges' | 'fitted' | 'extent' | 'none';

/** How well the point dipole does beside a reference. */
export type Regime = 'far' | 'edge' | 'near';

/** Share of kT below which an error never matters. */
export const NEGLIGIBLE_KT = 0.1;

/** The best basis that both fragments allow. */
export function basisOf(system: System, f: number, g: number): Basis {
  const { dipoleEA } = system.moments;
  if (system.featureless[f] || system.featureless[g]) return 'none';
  if (Number.isNaN(dipoleEA[3 * f]!) || Number.isNaN(dipoleEA[3 * g]!)) return 'none';
  if (system.ownCharges[f] && system.ownCharges[g]) return 'charges';
  return system.fitted[f] && system.fitted[g] ? 'fitted' : 'extent';
}

/** Largest error that the point dipole may have and hold, kJ/mol. */
export function errorBound(system: System, referenceKJPerMol: number): number {
  return Math.max(system.settings.tolerance * Math.abs(referenceKJPerMol), NEGLIGIBLE_KT * system.kTKJPerMol);
}

/**
 * Share of a quadrupole's energy by which a reference that rests on estimated charges, or on none, may be off. With these the point dipole
 * is said to hold where true charges deny it in less than 2 % of pairs (tests/reference/calibration.test.ts).
 */
const DOUBT: Readonly<Record<Basis, number>> = { charges: 0, fitted: 0.3, extent: 0.6, none: 0 };

/** By how much a reference may be off because charges were estimated, at a distance of the centres, e²/Å; 0 for charges of the file. */
export function doubtAt(system: System, f: number, g: number, basis: Basis, distanceA: number): number {
  const { doubtEA2, moments } = system;
  const doubt1 = doubtEA2[f]!;
  const doubt2 = doubtEA2[g]!;
  if (doubt1 === 0 && doubt2 === 0) return 0;
  const { chargeE, dipoleNormEA } = moments;
  const charge = Math.abs(chargeE[f]!) * doubt2 + Math.abs(chargeE[g]!) * doubt1;
  const dipole = dipoleNormEA[f]! * doubt2 + dipoleNormEA[g]! * doubt1;
  return (DOUBT[basis] * (charge + dipole / distanceA)) / (distanceA * distanceA * distanceA);
}

export function regimeOf(errorKJPerMol: number, boundKJPerMol: number): Regime {
  if (errorKJPerMol <= boundKJPerMol) return 'far';
  return errorKJPerMol <= 2 * boundKJPerMol ? 'edge' : 'near';
}

export function extendedDipoleOf(system: System, f: number): ExtendedDipole {
  const { chargeE, dipoleEA, extentA } = system.moments;
  return {
    chargeE: chargeE[f]!,
    dipoleEA: [dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!],
    extentA: extentA[f]!,
  };
}

/** The pair's energies as functions of the separation alone, both fragments rigid and moved along the line of centres. */
interface RadialPair {
  /** Sum of the terms up to dipole–dipole, e²/Å. */
  point(distanceA: number): number;
  /** Reference energy on the pair's basis, e²/Å. */
  reference(distanceA: number): number;
}

function radialPair(
  system: System,
  f: number,
  g: number,
  u: readonly [number, number, number],
  basis: Basis,
): RadialPair {
  const { chargeE, dipoleEA } = system.moments;
  const q1 = chargeE[f]!;
  const q2 = chargeE[g]!;
  const along = (h: number) => dipoleEA[3 * h]! * u[0] + dipoleEA[3 * h + 1]! * u[1] + dipoleEA[3 * h + 2]! * u[2];
  const m1 = along(f);
  const m2 = along(g);
  let product = 0;
  for (let a = 0; a < 3; a++) product += dipoleEA[3 * f + a]! * dipoleEA[3 * g + a]!;
  const third = product - 3 * m1 * m2;
  const point = (r: number) => (q1 * q2 + (q2 * m1 - q1 * m2 + third / r) / r) / r;
  if (basis === 'extent') {
    const first = extendedDipoleOf(system, f);
    const second = extendedDipoleOf(system, g);
    return { point, reference: (r) => extendedDipoleEnergy(first, second, [u[0] * r, u[1] * r, u[2] * r], point(r)) };
  }
  return { point, reference: coulombAlong(system, f, g, u, basis === 'charges' ? system.columnE : system.fittedE) };
}

/** Σ q_i q_j/r_ij as a function of the distance of the centres. */
function coulombAlong(
  system: System,
  f: number,
  g: number,
  u: readonly [number, number, number],
  charges: Float64Array,
): (distanceA: number) => number {
  const { starts, localA } = system;
  const terms: number[] = [];
  for (let i = starts[f]!; i < starts[f + 1]!; i++) {
    for (let j = starts[g]!; j < starts[g + 1]!; j++) {
      const product = charges[i]! * charges[j]!;
      if (product === 0) continue;
      const x = localA[3 * j]! - localA[3 * i]!;
      const y = localA[3 * j + 1]! - localA[3 * i + 1]!;
      const z = localA[3 * j + 2]! - localA[3 * i + 2]!;
      terms.push(product, x * u[0] + y * u[1] + z * u[2], x * x + y * y + z * z);
    }
  }
  const table = Float64Array.from(terms);
  return (r) => {
    let sum = 0;
    for (let k = 0; k < table.length; k += 3)
      sum += table[k]! / Math.sqrt(r * r + 2 * r * table[k + 1]! + table[k + 2]!);
    return sum;
  };
}

/** Step of the inward search, as a ratio of distances. */
const STEP = 1.02;
const SHORTEST_START_A = 1;
const FARTHEST_A = 1e5;

/**
 * The smallest separation from which the point dipole holds at every larger one, both fragments rigid and moved along the line of
 * centres; the start of the search where it holds throughout; NaN without a basis. The search runs inward in steps of 2 %, looks
 * closer where the margin is about to touch zero between two steps, and bisects the last crossing.
 */
export function validBeyond(
  system: System,
  f: number,
  g: number,
  u: readonly [number, number, number],
  basis: Basis,
): number {
  if (basis === 'none') return Number.NaN;
  const { extentA } = system.moments;
  const a1 = extentA[f]!;
  const a2 = extentA[g]!;
  const start = basis === 'extent' ? a1 + a2 : Math.max(a1, a2, SHORTEST_START_A);
  const pair = radialPair(system, f, g, u, basis);
  // Positive where the point dipole holds.
  const margin = (r: number) => {
    const reference = pair.reference(r) * system.couplingKJA;
    const error = Math.abs(pair.point(r) * system.couplingKJA - reference);
    const value = errorBound(system, reference) - error - doubtAt(system, f, g, basis, r) * system.couplingKJA;
    return Number.isNaN(value) ? Number.NEGATIVE_INFINITY : value;
  };
  const first = Math.max(start, 1e-3);
  const outer = Math.max(2 * first, surelyValidBeyond(system, f, g, basis));
  let r = outer;
  let here = margin(r);
  let beyond = here;
  while (r > first) {
    const inner = Math.max(first, r / STEP);
    const next = margin(inner);
    if (here < beyond && here < next) {
      // A dip between the neighbours of r: its bottom may lie below zero.
      const bottom = lowest(margin, inner, Math.min(r * STEP, outer));
      if (margin(bottom) < 0) return bisect(margin, bottom, Math.min(r * STEP, outer));
    }
    if (next < 0) return bisect(margin, inner, r);
    beyond = here;
    here = next;
    r = inner;
  }
  // The last step has no neighbour that would show a dip.
  const edge = Math.min(first * STEP, outer);
  const bottom = lowest(margin, first, edge);
  return margin(bottom) < 0 ? bisect(margin, bottom, edge) : start;
}

/**
 * A separation beyond which the error stays below 0.1 kT whatever the arrangement. With 1/|R + d| = Σ (d/R)ⁿPₙ/R and |d| ≤ s, all that
 * the point dipole leaves out is at most k Σ|q₁| Σ|q₂| s²/(R²(R − s)); to this comes what charges and dipoles in use differ by from
 * those of the reference, and the doubt of it.
 */
function surelyValidBeyond(system: System, f: number, g: number, basis: Basis): number {
  const [side1, side2] = [f, g].map((h) => spreadOf(system, h, basis)) as [Spread, Spread];
  const s = side1.reachA + side2.reachA;
  const k = system.couplingKJA;
  const bound = (r: number) =>
    k *
    (doubtAt(system, f, g, basis, r) +
      (side1.absoluteE * side2.absoluteE * s * s) / (r * r * (r - s)) +
      (side1.absoluteE * side2.strayE + side2.absoluteE * side1.strayE) / r +
      (side1.absoluteE * side2.strayEA + side2.absoluteE * side1.strayEA) / (r * r) +
      (2 * (side1.dipoleEA * side2.strayEA + side2.dipoleEA * side1.strayEA)) / (r * r * r));
  let r = Math.max(2 * s, SHORTEST_START_A);
  while (r < FARTHEST_A && !(bound(r) < NEGLIGIBLE_KT * system.kTKJPerMol)) r *= 1.25;
  return r;
}

/** How far the reference of one fragment can stray from its point moments. */
interface Spread {
  /** Sum of the sizes of its charges, and at least its net charge. */
  readonly absoluteE: number;
  /** Farthest charge from the centre. */
  readonly reachA: number;
  readonly dipoleEA: number;
  /** Difference of net charge and dipole between reference and use. */
  readonly strayE: number;
  readonly strayEA: number;
}

function spreadOf(system: System, f: number, basis: Basis): Spread {
  const { chargeE, dipoleEA, extentA } = system.moments;
  const size = Math.hypot(dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!);
  const net = Math.abs(chargeE[f]!);
  if (basis === 'extent') {
    // A point dipole strays no farther than one of an ångström; else half the extent, and a quarter by which the midpoint moves.
    const a = extentA[f]! || 1;
    return { absoluteE: net + (2 * size) / a, reachA: 0.75 * a, dipoleEA: size, strayE: 0, strayEA: 0 };
  }
  const charges = basis === 'charges' ? system.columnE : system.fittedE;
  let absolute = 0;
  let sum = 0;
  let reach = 0;
  const own = [0, 0, 0];
  for (let i = system.starts[f]!; i < system.starts[f + 1]!; i++) {
    const q = charges[i]!;
    const r = [0, 1, 2].map((a) => system.localA[3 * i + a]!);
    absolute += Math.abs(q);
    sum += q;
    if (q !== 0) reach = Math.max(reach, Math.hypot(...r));
    for (let a = 0; a < 3; a++) own[a]! += q * r[a]!;
  }
  const strayEA = Math.hypot(...own.map((value, a) => value - dipoleEA[3 * f + a]!));
  return {
    absoluteE: Math.max(absolute, net),
    reachA: reach,
    dipoleEA: size,
    strayE: Math.abs(sum - chargeE[f]!),
    strayEA,
  };
}

/** Where a function is lowest between two points, by golden section. */
function lowest(value: (r: number) => number, low: number, high: number): number {
  const share = (Math.sqrt(5) - 1) / 2;
  let [a, b] = [low, high];
  for (let k = 0; k < 40; k++) {
    const c = b - share * (b - a);
    const d = a + share * (b - a);
    if (value(c) < value(d)) b = d;
    else a = c;
  }
  return (a + b) / 2;
}

/** The crossing between a point where the margin is negative and a larger one where it is not. */
function bisect(margin: (r: number) => number, low: number, high: number): number {
  let [a, b] = [low, high];
  for (let k = 0; k < 60 && b - a > 1e-12 * b; k++) {
    const middle = (a + b) / 2;
    if (margin(middle) < 0) a = middle;
    else b = middle;
  }
  return b;
}
