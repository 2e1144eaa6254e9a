import { nearbyShifts } from './connectivity.js';
import { COULOMB, DEBYE, GAS_CONSTANT } from './constants.js';
import { findContact, isIon, sharesProton } from './contact.js';
import { Decisions } from './doubts.js';
import { judge } from './judgement.js';
import { add, cross, dot, length, scale, subtract } from './linear.js';
import {
  chargeOperator,
  chargeSites,
  dipoleOperator,
  operatorEnergy,
  quadrupoleOperator,
  siteEnergy,
} from './multipoles.js';
import { dispersionEnergy, inductionEnergy } from './polarization.js';
import { dipolePairAverage, ionDipoleAverage } from './thermal.js';
import type { EnergyResult, Fragment, PairResult, ParsedFrame, Settings, ThermalResult, Vec } from './types.js';

const DEGREE = Math.PI / 180;

/** Everything about one pair, or null where it is not in the list. */
export function buildPair(
  first: Fragment,
  second: Fragment,
  frame: ParsedFrame,
  settings: Settings,
  bonds: [number, number][],
): PairResult | null {
  const decide = new Decisions();
  const { image, shift, vector } = minimumImage(first, second, frame, decide);
  const distanceA = length(vector);
  const contact = findContact(first, second, shift, bonds, frame.crossBonds, decide);
  const gap = distanceA - first.extent - second.extent;
  const bothIons = isIon(first, decide) && isIon(second, decide);
  const near = decide.atMost(gap, settings.cutoffA * (bothIons ? 3 : 1), 'listed');
  if (!near && contact.kind === 'apart' && !decide.doubts.has('listed')) return null;

  const bonded = contact.kind === 'bonded';
  const enclosed = decide.below(distanceA, Math.max(first.extent, second.extent), 'numbers');
  const energies = bonded
    ? noEnergies()
    : energiesOf(first, second, vector, shift, enclosed, settings.relativePermittivity);
  const verdict = judge({
    first,
    second,
    vector,
    shift,
    contact,
    enclosed,
    point: enclosed ? null : energies.pointDipole,
    coulomb: energies.coulomb,
    polarization: [energies.induction, energies.dispersion],
    sharedProton: !bonded && sharesProton(first, second, shift, decide),
    settings,
    decide,
  });
  return {
    first: first.number,
    second: second.number,
    image,
    distanceA,
    ...anglesOf(first, second, vector, decide),
    energyKJPerMol: energies,
    thermal: bonded || enclosed ? noThermal() : thermalOf(first, second, distanceA, settings, decide),
    closest: contact.closest,
    contact: contact.kind,
    ...verdict,
    doubts: decide.doubts,
  };
}

function minimumImage(first: Fragment, second: Fragment, frame: ParsedFrame, decide: Decisions) {
  const v = subtract(second.centre, first.centre);
  const images = nearbyShifts(v, frame, 4).map(({ image, shift }) => ({ image, shift, vector: add(v, shift) }));
  const nearest = images.reduce((best, it) => (length(it.vector) < length(best.vector) ? it : best));
  for (const other of images) {
    if (other !== nearest) decide.below(length(nearest.vector), length(other.vector), 'numbers');
  }
  return nearest;
}

/** Angles of both dipoles with the line of centres; of no use where the dipole is zero or only rounding. */
function anglesOf(first: Fragment, second: Fragment, vector: Vec, decide: Decisions) {
  const u = scale(vector, 1 / length(vector));
  const direction = (fragment: Fragment): Vec | null => {
    if (fragment.dipole === null) return null;
    const size = length(fragment.dipole);
    if (size === 0) return null;
    if (fragment.dipoleSource === 'charges' && decide.below(size, 0.02 * DEBYE, 'angles')) return null;
    return scale(fragment.dipole, 1 / size);
  };
  const [m1, m2] = [direction(first), direction(second)];
  const theta = (m: Vec | null) => (m === null ? null : Math.atan2(length(cross(m, u)), dot(m, u)) / DEGREE);
  const [theta1Deg, theta2Deg] = [theta(m1), theta(m2)];
  if (m1 === null || m2 === null || theta1Deg === null || theta2Deg === null) {
    return { theta1Deg, theta2Deg, phiDeg: null, angularFactor: null, arrangement: null };
  }
  const flat = [m1, m2].some((m) => decide.below(length(cross(m, u)), 1e-6, 'angles'));
  const [p1, p2] = [m1, m2].map((m) => subtract(m, scale(u, dot(m, u))));
  const phiDeg = flat ? null : Math.atan2(dot(u, cross(p1, p2)), dot(p1, p2)) / DEGREE;
  return {
    theta1Deg,
    theta2Deg,
    phiDeg,
    angularFactor: 3 * dot(m1, u) * dot(m2, u) - dot(m1, m2),
    arrangement: arrangementOf(theta1Deg, theta2Deg, phiDeg, decide),
  };
}

/** A name where every angle that counts is within 15° of it. */
export function arrangementOf(theta1: number, theta2: number, phi: number | null, decide: Decisions): string {
  const near = (angle: number, target: number) => decide.atMost(Math.abs(angle - target), 15, 'arrangement');
  const along = (theta: number) => near(theta, 0) || near(theta, 180);
  if ((near(theta1, 0) && near(theta2, 0)) || (near(theta1, 180) && near(theta2, 180))) return 'head-to-tail';
  if (near(theta1, 0) && near(theta2, 180)) return 'head-to-head';
  if (near(theta1, 180) && near(theta2, 0)) return 'tail-to-tail';
  if ((along(theta1) && near(theta2, 90)) || (near(theta1, 90) && along(theta2))) return 'T-shaped';
  if (near(theta1, 90) && near(theta2, 90) && phi !== null) {
    if (near(Math.abs(phi), 180)) return 'antiparallel';
    if (near(Math.abs(phi), 90)) return 'crossed';
    if (near(phi, 0)) return 'parallel';
  }
  return 'skewed';
}

const noEnergies = (): EnergyResult => ({
  chargeCharge: null,
  chargeDipole: null,
  dipoleDipole: null,
  pointDipole: null,
  chargeQuadrupole: null,
  dipoleQuadrupole: null,
  quadrupoleQuadrupole: null,
  coulomb: null,
  induction: null,
  dispersion: null,
});

const noThermal = (): ThermalResult => ({
  coupling: null,
  averageKJPerMol: null,
  freeEnergyKJPerMol: null,
  leadingKJPerMol: null,
  alignment: null,
  motion: null,
});

function energiesOf(
  first: Fragment,
  second: Fragment,
  vector: Vec,
  shift: Vec,
  enclosed: boolean,
  permittivity: number,
): EnergyResult {
  const energies = noEnergies();
  if (first.column !== null && second.column !== null) {
    const a = chargeSites(first.positions, first.column);
    const b = chargeSites(second.positions, second.column);
    energies.coulomb = siteEnergy(a, b, shift) / permittivity;
  }
  if (enclosed) return energies;

  const q1 = chargeOperator(first.charge);
  const q2 = chargeOperator(second.charge);
  const d1 = first.dipole && dipoleOperator(first.dipole, -1);
  const d2 = second.dipole && dipoleOperator(second.dipole, 1);
  const t1 = first.quadrupole && quadrupoleOperator(first.quadrupole);
  const t2 = second.quadrupole && quadrupoleOperator(second.quadrupole);
  const between = (a: typeof q1, b: typeof q1) => operatorEnergy(a, b, vector) / permittivity;
  energies.chargeCharge = between(q1, q2);
  if (d1 && d2) {
    energies.chargeDipole = between(q1, d2) + between(d1, q2);
    energies.dipoleDipole = between(d1, d2);
    energies.pointDipole = energies.chargeCharge + energies.chargeDipole + energies.dipoleDipole;
  }
  if (t1 && t2) energies.chargeQuadrupole = between(q1, t2) + between(t1, q2);
  if (d1 && d2 && t1 && t2) energies.dipoleQuadrupole = between(d1, t2) + between(t1, d2);
  if (t1 && t2) energies.quadrupoleQuadrupole = between(t1, t2);
  const induced = inductionEnergy(first, second, vector);
  // The medium screens the field, and the energy goes with its square.
  if (induced !== null) energies.induction = induced / permittivity ** 2;
  energies.dispersion = dispersionEnergy(first, second, length(vector));
  return energies;
}

/** Free rotation: two neutral dipoles, or an ion and a neutral dipole; only the sizes count. */
function thermalOf(first: Fragment, second: Fragment, r: number, settings: Settings, decide: Decisions): ThermalResult {
  const kT = GAS_CONSTANT * settings.temperatureK;
  const unit = COULOMB / (settings.relativePermittivity * kT);
  const ions = [first, second].filter((fragment) => isIon(fragment, decide));
  if (ions.length === 2) return noThermal();
  const neutral = [first, second].filter((fragment) => !ions.includes(fragment));
  const sizes = neutral.map((fragment) => fragment.dipoleSize);
  const size = sizes.every((s) => s !== null) ? sizes.reduce((product: number, s) => product * (s ?? 0), 1) : null;
  if (size === null) return noThermal();
  const pair = ions.length === 0;
  const coupling = pair ? (unit * size) / r ** 3 : (unit * Math.abs(ions[0].charge) * size) / r ** 2;
  const { energy, logZ } = pair ? dipolePairAverage(coupling) : ionDipoleAverage(coupling);
  const most = pair ? 2 * coupling : coupling;
  const alignment = coupling === 0 ? 0 : -energy / most;
  const free = decide.below(alignment, 0.1, 'motion');
  const hindered = decide.atMost(alignment, 0.5, 'motion');
  return {
    coupling,
    averageKJPerMol: energy * kT,
    freeEnergyKJPerMol: -logZ * kT,
    leadingKJPerMol: -(pair ? 2 / 3 : 1 / 3) * coupling ** 2 * kT,
    alignment,
    motion: free ? 'free' : hindered ? 'hindered' : 'locked',
  };
}
