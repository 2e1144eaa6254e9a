import { dipoleDipoleAverage, ionDipoleAverage, motionOf } from '../physics/thermal-average';
import { type Arrangement, nameArrangement } from './arrangement';
import type { Pair } from './pair';
import { validBeyond } from './reference';
import { ZERO_DIPOLE_EA } from './settings';
import { ROUNDING_DIPOLE_EA, type System } from './system';

/** The angles of a pair; NaN where a dipole has no direction. */
export interface PairAngles {
  readonly theta1Deg: number;
  readonly theta2Deg: number;
  readonly phiDeg: number;
  readonly angularFactor: number;
  readonly arrangement: Arrangement | null;
}

/** Boltzmann average of a pair that rotates freely; NaN and null where there is none. */
export interface PairThermal {
  readonly coupling: number;
  readonly averageKJPerMol: number;
  readonly freeEnergyKJPerMol: number;
  readonly leadingKJPerMol: number;
  readonly alignment: number;
  readonly motion: 'free' | 'hindered' | 'locked' | null;
}

const DEGREES = 180 / Math.PI;
const SMALLEST_SINE = 1e-6;

/** Direction of a dipole, or `null`: unknown, zero, or no more than the rounding of the coordinates. */
function directionOf(system: System, f: number): [number, number, number] | null {
  const { dipoleEA, dipoleSource } = system.moments;
  const size = Math.hypot(dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!);
  if (!(size >= ZERO_DIPOLE_EA) || (dipoleSource[f] === 'charges' && size < ROUNDING_DIPOLE_EA)) return null;
  return [dipoleEA[3 * f]! / size, dipoleEA[3 * f + 1]! / size, dipoleEA[3 * f + 2]! / size];
}

/** θ₁, θ₂, φ, the angular factor g = 3(μ̂₁·u)(μ̂₂·u) − μ̂₁·μ̂₂, and the name of the arrangement. */
export function anglesOf(system: System, pair: Pair): PairAngles {
  const [ux, uy, uz] = pair.u;
  const d1 = directionOf(system, pair.first);
  const d2 = directionOf(system, pair.second);
  const theta = (d: [number, number, number] | null) => {
    if (d === null) return Number.NaN;
    // atan2 of the perpendicular part keeps small angles exact where acos would not.
    const cross = [d[1] * uz - d[2] * uy, d[2] * ux - d[0] * uz, d[0] * uy - d[1] * ux] as const;
    return Math.atan2(Math.hypot(...cross), d[0] * ux + d[1] * uy + d[2] * uz);
  };
  const theta1 = theta(d1);
  const theta2 = theta(d2);
  if (d1 === null || d2 === null || Number.isNaN(ux)) {
    const unknown = { phiDeg: Number.NaN, angularFactor: Number.NaN, arrangement: null };
    return { theta1Deg: theta1 * DEGREES, theta2Deg: theta2 * DEGREES, ...unknown };
  }
  const c1 = d1[0] * ux + d1[1] * uy + d1[2] * uz;
  const c2 = d2[0] * ux + d2[1] * uy + d2[2] * uz;
  const product = d1[0] * d2[0] + d1[1] * d2[1] + d1[2] * d2[2];
  let phiDeg = Number.NaN;
  if (Math.sin(theta1) >= SMALLEST_SINE && Math.sin(theta2) >= SMALLEST_SINE) {
    const p1 = [d1[0] - c1 * ux, d1[1] - c1 * uy, d1[2] - c1 * uz] as const;
    const p2 = [d2[0] - c2 * ux, d2[1] - c2 * uy, d2[2] - c2 * uz] as const;
    const turn =
      ux * (p1[1] * p2[2] - p1[2] * p2[1]) +
      uy * (p1[2] * p2[0] - p1[0] * p2[2]) +
      uz * (p1[0] * p2[1] - p1[1] * p2[0]);
    phiDeg = Math.atan2(turn, p1[0] * p2[0] + p1[1] * p2[1] + p1[2] * p2[2]) * DEGREES;
    if (phiDeg === -180) phiDeg = 180;
  }
  const [theta1Deg, theta2Deg] = [theta1 * DEGREES, theta2 * DEGREES];
  return {
    theta1Deg,
    theta2Deg,
    phiDeg,
    angularFactor: 3 * c1 * c2 - product,
    arrangement: nameArrangement(theta1Deg, theta2Deg, phiDeg),
  };
}

const NO_THERMAL: PairThermal = {
  coupling: Number.NaN,
  averageKJPerMol: Number.NaN,
  freeEnergyKJPerMol: Number.NaN,
  leadingKJPerMol: Number.NaN,
  alignment: Number.NaN,
  motion: null,
};

/** The thermal average of two neutral dipoles, or of a dipole beside an ion (whose own dipole is left out); none for two ions. */
export function thermalOf(system: System, pair: Pair): PairThermal {
  const { moments, isIon, couplingKJA, kTKJPerMol } = system;
  const { first, second, distanceA: r } = pair;
  if (pair.contact === 'bonded' || pair.enclosed || (isIon[first] && isIon[second])) return NO_THERMAL;
  let coupling: number;
  const withIon = isIon[first] === 1 || isIon[second] === 1;
  if (withIon) {
    const [ion, dipole] = isIon[first] ? [first, second] : [second, first];
    coupling = (couplingKJA * Math.abs(moments.chargeE[ion]!) * normOf(system, dipole)) / (r * r * kTKJPerMol);
  } else {
    coupling = (couplingKJA * normOf(system, first) * normOf(system, second)) / (r * r * r * kTKJPerMol);
  }
  if (Number.isNaN(coupling)) return NO_THERMAL;
  const average = withIon ? ionDipoleAverage(coupling) : dipoleDipoleAverage(coupling);
  return {
    coupling,
    averageKJPerMol: average.averageKT * kTKJPerMol,
    freeEnergyKJPerMol: average.freeEnergyKT * kTKJPerMol,
    leadingKJPerMol: average.leadingKT * kTKJPerMol,
    alignment: average.alignment,
    motion: motionOf(average.alignment),
  };
}

function normOf(system: System, f: number): number {
  const size = system.moments.dipoleNormEA[f]!;
  return size < ZERO_DIPOLE_EA ? 0 : size;
}

/** Smallest separation from which the point dipole holds, Å; NaN for bonded pairs and without a basis. */
export function validBeyondOf(system: System, pair: Pair): number {
  if (pair.contact === 'bonded' || Number.isNaN(pair.u[0])) return Number.NaN;
  return validBeyond(system, pair.first, pair.second, pair.u, pair.basis);
}
