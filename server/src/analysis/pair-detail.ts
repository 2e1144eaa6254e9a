import { COULOMB_KJ_A_PER_MOL } from '../physics/constants';
import { debyeAverage } from '../physics/induction-pair';
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
  /** Debye induction averaged over all orientations, undamped. */
  readonly inductionKJPerMol: number;
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
  inductionKJPerMol: Number.NaN,
};

/** The thermal average of two neutral dipoles, or of a dipole beside an ion (whose own dipole is left out); none for two ions. */
export function thermalOf(system: System, pair: Pair): PairThermal {
  const { moments, isIon, couplingKJA, kTKJPerMol } = system;
  const { first, second, distanceA: r } = pair;
  if (pair.contact === 'bonded' || pair.enclosed) return NO_THERMAL;
  const inductionKJPerMol = averagedInduction(system, pair);
  if (isIon[first] && isIon[second]) return { ...NO_THERMAL, inductionKJPerMol };
  let coupling: number;
  const withIon = isIon[first] === 1 || isIon[second] === 1;
  if (withIon) {
    const [ion, dipole] = isIon[first] ? [first, second] : [second, first];
    coupling = (couplingKJA * Math.abs(moments.chargeE[ion]!) * normOf(system, dipole)) / (r * r * kTKJPerMol);
  } else {
    coupling = (couplingKJA * normOf(system, first) * normOf(system, second)) / (r * r * r * kTKJPerMol);
  }
  if (Number.isNaN(coupling)) return { ...NO_THERMAL, inductionKJPerMol };
  const average = withIon ? ionDipoleAverage(coupling) : dipoleDipoleAverage(coupling);
  return {
    coupling,
    averageKJPerMol: average.averageKT * kTKJPerMol,
    freeEnergyKJPerMol: average.freeEnergyKT * kTKJPerMol,
    leadingKJPerMol: average.leadingKT * kTKJPerMol,
    alignment: average.alignment,
    motion: motionOf(average.alignment),
    inductionKJPerMol,
  };
}

function averagedInduction(system: System, { first, second, distanceA }: Pair): number {
  const { moments, settings } = system;
  const { chargeE, polarizabilityA3 } = moments;
  const energy = debyeAverage(
    chargeE[first]!,
    normOf(system, first),
    polarizabilityA3[first]!,
    chargeE[second]!,
    normOf(system, second),
    polarizabilityA3[second]!,
    distanceA,
  );
  return (energy * COULOMB_KJ_A_PER_MOL) / (settings.relativePermittivity * settings.relativePermittivity);
}

/**
 * How far the energy of the fixed arrangement is off on average because dipoles that are published or estimated have errors, kJ/mol; NaN
 * where the file gives both. To first order E = −μ·F: the error of the size moves μ along itself, that of the direction across, in the
 * field F of the other fragment; both fragments' errors are independent.
 */
export function uncertaintyOf(system: System, pair: Pair): number {
  if (pair.contact === 'bonded' || pair.enclosed) return Number.NaN;
  const { dipoleSource, dipoleErrorEA, dipoleAngleErrorDeg, dipoleNormEA } = system.moments;
  let squares = 0;
  let isAny = false;
  for (const f of [pair.first, pair.second]) {
    if (dipoleSource[f] !== 'library' && dipoleSource[f] !== 'estimated') continue;
    const sizeError = dipoleErrorEA[f]!;
    if (Number.isNaN(sizeError)) continue;
    isAny = true;
    const direction = directionOf(system, f);
    const field = fieldOfOther(system, pair, f);
    // A dipole of no size has no error by symmetry.
    if (direction === null && dipoleNormEA[f]! < ZERO_DIPOLE_EA) continue;
    if (direction === null) return Number.NaN;
    const along = field[0] * direction[0] + field[1] * direction[1] + field[2] * direction[2];
    const turn = Math.sin(Math.min(dipoleAngleErrorDeg[f]! || 0, 90) / DEGREES);
    squares += (along * sizeError) ** 2 + (Math.hypot(...field) * dipoleNormEA[f]! * turn) ** 2;
  }
  return isAny ? Math.sqrt(squares) * system.couplingKJA : Number.NaN;
}

/** Field of the other fragment's charge and dipole at the centre of `f`, e/Å². */
function fieldOfOther(system: System, pair: Pair, f: number): [number, number, number] {
  const { chargeE, dipoleEA } = system.moments;
  const other = f === pair.first ? pair.second : pair.first;
  const away = f === pair.first ? -1 : 1;
  const [ux, uy, uz] = pair.u.map((component) => away * component) as [number, number, number];
  const r2 = pair.distanceA * pair.distanceA;
  const [mx, my, mz] = [dipoleEA[3 * other]!, dipoleEA[3 * other + 1]!, dipoleEA[3 * other + 2]!];
  const along = 3 * (mx * ux + my * uy + mz * uz);
  const charge = chargeE[other]! / r2;
  const cube = r2 * pair.distanceA;
  return [
    charge * ux + (along * ux - mx) / cube,
    charge * uy + (along * uy - my) / cube,
    charge * uz + (along * uz - mz) / cube,
  ];
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
