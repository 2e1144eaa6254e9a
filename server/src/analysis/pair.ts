import { imageResult, minimumImage } from '../model/cell';
import { extendedDipoleEnergy } from '../physics/finite-dipole';
import * as law from '../physics/multipole-energies';
import { type Advice, adviseOn } from './advice';
import { type Contact, scanAtoms } from './contact';
import { dispersionOf, inductionOf } from './pair-polarization';
import { type Basis, basisOf, doubtAt, errorBound, extendedDipoleOf, type Regime, regimeOf } from './reference';
import { ZERO_DIPOLE_EA } from './settings';
import type { System } from './system';

/** Energies of a pair in its fixed arrangement, kJ/mol; NaN where one is not known. */
export interface PairEnergies {
  chargeCharge: number;
  chargeDipole: number;
  dipoleDipole: number;
  /** Sum of the three above: the point-dipole estimate. */
  pointDipole: number;
  chargeQuadrupole: number;
  dipoleQuadrupole: number;
  quadrupoleQuadrupole: number;
  /** Sum over both charge columns. */
  coulomb: number;
  induction: number;
  dispersion: number;
}

/** A pair with everything that the advice rests on; angles and averages are made on demand. Fragments count from 0. */
export interface Pair {
  readonly first: number;
  readonly second: number;
  readonly image: readonly [number, number, number];
  readonly distanceA: number;
  /** Unit vector from the first centre to the second. */
  readonly u: readonly [number, number, number];
  readonly energies: PairEnergies;
  /** Closest atoms as indices into the system, −1 where there are none. */
  readonly closest1: number;
  readonly closest2: number;
  readonly closestA: number;
  readonly contactRatio: number;
  readonly contact: Contact;
  /** One centre lies within the extent of the other fragment: multipoles mean nothing there. */
  readonly enclosed: boolean;
  readonly basis: Basis;
  readonly referenceKJPerMol: number;
  readonly errorKJPerMol: number;
  /** By how much the reference itself may be off because charges were estimated: the regime counts it with the error. */
  readonly doubtKJPerMol: number;
  readonly regime: Regime | null;
  /** What the pair matters, kJ/mol: the larger of reference and point estimate in size; with ε_r = 1 where they touch. */
  readonly strengthKJPerMol: number;
  /** Set last, since it rests on all the rest; `null` for parts of one molecule. */
  advice: Advice | null;
}

const IMAGE = imageResult();

/** Evaluates the pair of fragments `f` < `g`, both usable. Cost: their numbers of atoms multiplied. */
export function evaluatePair(system: System, f: number, g: number): Pair {
  const { centreA } = system.moments;
  const dx = centreA[3 * g]! - centreA[3 * f]!;
  const dy = centreA[3 * g + 1]! - centreA[3 * f + 1]!;
  const dz = centreA[3 * g + 2]! - centreA[3 * f + 2]!;
  let image: readonly [number, number, number] = [0, 0, 0];
  let [x, y, z] = [dx, dy, dz];
  if (system.cell !== null) {
    minimumImage(system.cell, dx, dy, dz, IMAGE);
    [x, y, z] = IMAGE.vectorA as unknown as [number, number, number];
    image = [IMAGE.image[0]!, IMAGE.image[1]!, IMAGE.image[2]!];
  }
  return evaluatePairAt(system, f, g, [x, y, z], image);
}

/**
 * The pair as it would be with its second fragment moved, rigid and unturned, so that `separationA` leads from the first centre to the second.
 * `image` is only noted.
 */
export function evaluatePairAt(
  system: System,
  f: number,
  g: number,
  [x, y, z]: readonly [number, number, number],
  image: readonly [number, number, number],
): Pair {
  const { couplingKJA, settings } = system;
  const { extentA } = system.moments;
  const distanceA = Math.sqrt(x * x + y * y + z * z);
  const u: [number, number, number] = [x / distanceA, y / distanceA, z / distanceA];
  const largest = Math.max(extentA[f]!, extentA[g]!);
  const enclosed = distanceA < largest || distanceA < 1e-6;
  const bonded = system.chains.areBonded(f, g);
  const basis = bonded ? 'none' : enclosed ? enclosedBasis(system, f, g) : basisOf(system, f, g);
  const scan = scanAtoms(system, f, g, x, y, z, basis === 'fitted');
  const contact: Contact = bonded ? 'bonded' : scan.clash ? 'clash' : scan.contactRatio < 1 ? 'touching' : 'apart';
  const energies = bonded ? unknownEnergies() : multipoleEnergies(system, f, g, u, distanceA, enclosed);
  if (!bonded) energies.coulomb = scan.columnSum * couplingKJA;
  if (!bonded && !enclosed) {
    energies.induction = inductionOf(system, f, g, x, y, z);
    energies.dispersion = dispersionOf(system, f, g, distanceA);
  }
  const reference = bonded ? Number.NaN : referenceEnergy(system, f, g, u, distanceA, basis, scan, energies);
  const error = enclosed ? Number.NaN : Math.abs(energies.pointDipole - reference);
  const doubt = Number.isNaN(error) ? 0 : doubtAt(system, f, g, basis, distanceA) * couplingKJA;
  const regime = judgeRegime(system, f, g, distanceA, bonded, enclosed, basis, reference, error + doubt);
  const point = Math.abs(energies.pointDipole);
  const known = enclosed ? Math.abs(energies.coulomb) : Math.max(point || 0, Math.abs(reference) || 0);
  const strength = (known || 0) * (contact === 'touching' ? settings.relativePermittivity : 1);
  const pair: Pair = {
    first: f,
    second: g,
    image,
    distanceA,
    u,
    energies,
    closest1: scan.closest1,
    closest2: scan.closest2,
    closestA: scan.closestA,
    contactRatio: scan.contactRatio,
    contact,
    enclosed,
    basis,
    referenceKJPerMol: reference,
    errorKJPerMol: error,
    doubtKJPerMol: doubt,
    regime,
    strengthKJPerMol: strength,
    advice: null,
  };
  pair.advice = adviseOn(system, pair, scan.sharedProton);
  return pair;
}

/** Within a fragment only the Coulomb sum stands, where the charges are those in use. */
function enclosedBasis(system: System, f: number, g: number): Basis {
  return system.ownCharges[f] && system.ownCharges[g] ? 'charges' : 'none';
}

function referenceEnergy(
  system: System,
  f: number,
  g: number,
  u: readonly [number, number, number],
  distanceA: number,
  basis: Basis,
  scan: { columnSum: number; fittedSum: number },
  energies: PairEnergies,
): number {
  const { couplingKJA } = system;
  if (basis === 'charges') return scan.columnSum * couplingKJA;
  if (basis === 'fitted') return scan.fittedSum * couplingKJA;
  const { extentA } = system.moments;
  if (basis === 'none' || distanceA <= extentA[f]! + extentA[g]!) return Number.NaN;
  const separation: [number, number, number] = [u[0] * distanceA, u[1] * distanceA, u[2] * distanceA];
  const point = energies.pointDipole / couplingKJA;
  return (
    extendedDipoleEnergy(extendedDipoleOf(system, f), extendedDipoleOf(system, g), separation, point) * couplingKJA
  );
}

function judgeRegime(
  system: System,
  f: number,
  g: number,
  distanceA: number,
  bonded: boolean,
  enclosed: boolean,
  basis: Basis,
  reference: number,
  error: number,
): Regime | null {
  if (bonded) return null;
  if (enclosed) return 'near';
  if (basis === 'none') return null;
  const { extentA } = system.moments;
  if (basis === 'extent' && distanceA <= extentA[f]! + extentA[g]!) return 'near';
  return Number.isNaN(error) ? null : regimeOf(error, errorBound(system, reference));
}

function unknownEnergies(): PairEnergies {
  return {
    chargeCharge: Number.NaN,
    chargeDipole: Number.NaN,
    dipoleDipole: Number.NaN,
    pointDipole: Number.NaN,
    chargeQuadrupole: Number.NaN,
    dipoleQuadrupole: Number.NaN,
    quadrupoleQuadrupole: Number.NaN,
    coulomb: Number.NaN,
    induction: Number.NaN,
    dispersion: Number.NaN,
  };
}

function multipoleEnergies(
  system: System,
  f: number,
  g: number,
  u: readonly [number, number, number],
  r: number,
  enclosed: boolean,
): PairEnergies {
  const energies = unknownEnergies();
  if (enclosed) return energies;
  const { chargeE, dipoleEA, quadrupoleEA2 } = system.moments;
  const k = system.couplingKJA;
  const q1 = chargeE[f]!;
  const q2 = chargeE[g]!;
  const m1 = dipoleOf(dipoleEA, f);
  const m2 = dipoleOf(dipoleEA, g);
  const m1u = dot(m1, u);
  const m2u = dot(m2, u);
  energies.chargeCharge = k * law.chargeCharge(q1, q2, r);
  energies.chargeDipole = k * law.chargeDipole(q1, m1u, q2, m2u, r);
  energies.dipoleDipole = k * law.dipoleDipole(dot(m1, m2), m1u, m2u, r);
  energies.pointDipole = energies.chargeCharge + energies.chargeDipole + energies.dipoleDipole;
  const t1u = contract(quadrupoleEA2, f, u);
  const t2u = contract(quadrupoleEA2, g, u);
  const t1uu = dot(t1u, u);
  const t2uu = dot(t2u, u);
  energies.chargeQuadrupole = k * law.chargeQuadrupole(q1, t1uu, q2, t2uu, r);
  energies.dipoleQuadrupole = k * law.dipoleQuadrupole(m1u, t1uu, dot(t1u, m2), m2u, t2uu, dot(t2u, m1), r);
  const both = doubleDot(quadrupoleEA2, f, g);
  energies.quadrupoleQuadrupole = k * law.quadrupoleQuadrupole(t1uu, t2uu, dot(t1u, t2u), both, r);
  return energies;
}

/** The energy that a pair is judged by, kJ/mol: the reference, and where there is none the point estimate; NaN where neither is known. */
export function energyInUse({ referenceKJPerMol, energies }: Pick<Pair, 'referenceKJPerMol' | 'energies'>): number {
  return Number.isFinite(referenceKJPerMol) ? referenceKJPerMol : energies.pointDipole;
}

type Vector = readonly [number, number, number];

/** A dipole; exactly zero where it counts as zero. */
function dipoleOf(dipoleEA: Float64Array, f: number): Vector {
  const v: Vector = [dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!];
  return dot(v, v) < ZERO_DIPOLE_EA * ZERO_DIPOLE_EA ? [0, 0, 0] : v;
}

function dot(a: Vector, b: Vector): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

/** Θ·u of a packed quadrupole (xx xy xz yy yz zz). */
function contract(theta: Float64Array, f: number, u: Vector): Vector {
  const t = 6 * f;
  return [
    theta[t]! * u[0] + theta[t + 1]! * u[1] + theta[t + 2]! * u[2],
    theta[t + 1]! * u[0] + theta[t + 3]! * u[1] + theta[t + 4]! * u[2],
    theta[t + 2]! * u[0] + theta[t + 4]! * u[1] + theta[t + 5]! * u[2],
  ];
}

function doubleDot(theta: Float64Array, f: number, g: number): number {
  const [s, t] = [6 * f, 6 * g];
  const diagonal = theta[s]! * theta[t]! + theta[s + 3]! * theta[t + 3]! + theta[s + 5]! * theta[t + 5]!;
  const off = theta[s + 1]! * theta[t + 1]! + theta[s + 2]! * theta[t + 2]! + theta[s + 4]! * theta[t + 4]!;
  return diagonal + 2 * off;
}
