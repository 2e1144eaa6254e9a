import { GAS_CONSTANT } from './constants.js';
import { type Contact, isIon } from './contact.js';
import type { Decisions } from './doubts.js';
import { length, scale } from './linear.js';
import { chargeOperator, dipoleOperator, operatorEnergy } from './multipoles.js';
import { bestReference, chargesReference, type Reference } from './reference.js';
import type { Fragment, Settings, Vec } from './types.js';

/** Whether the point dipole holds, from which distance, and what to do about the pair. */

export interface Case {
  first: Fragment;
  second: Fragment;
  /** From the first centre to the image of the second. */
  vector: Vec;
  shift: Vec;
  contact: Contact;
  /** One fragment encloses the centre of the other. */
  enclosed: boolean;
  /** Point-dipole energy, null where it does not exist. */
  point: number | null;
  /** Coulomb sum over the charge columns. */
  coulomb: number | null;
  /** Induction and dispersion, which no reference energy holds. */
  polarization: (number | null)[];
  sharedProton: boolean;
  settings: Settings;
  decide: Decisions;
}

export interface Verdict {
  regime: string | null;
  basis: string;
  referenceKJPerMol: number | null;
  errorKJPerMol: number | null;
  relativeError: number | null;
  validBeyondA: number | null;
  advice: string | null;
}

export function judge(it: Case): Verdict {
  const { first, second, contact, enclosed, point, settings, decide } = it;
  const verdict: Verdict = {
    regime: null,
    basis: 'none',
    referenceKJPerMol: null,
    errorKJPerMol: null,
    relativeError: null,
    validBeyondA: null,
    advice: null,
  };
  if (contact.kind === 'bonded') return verdict;

  const reference = enclosed ? chargesReference(first, second, decide) : bestReference(first, second, decide);
  verdict.basis = reference.basis;
  const overlapping =
    reference.basis === 'extent' && decide.atMost(length(it.vector), first.extent + second.extent, 'numbers');
  if (reference.energy !== null && !overlapping) {
    verdict.referenceKJPerMol = reference.energy(it.shift, (point ?? 0) * settings.relativePermittivity);
    verdict.referenceKJPerMol /= settings.relativePermittivity;
  }
  if (verdict.referenceKJPerMol !== null && point !== null) {
    const size = Math.abs(verdict.referenceKJPerMol);
    verdict.errorKJPerMol = Math.abs(point - verdict.referenceKJPerMol);
    verdict.relativeError = size === 0 ? null : verdict.errorKJPerMol / size;
    const bound = allowed(verdict.referenceKJPerMol, settings);
    const far = decide.atMost(verdict.errorKJPerMol, bound, 'regime', 'advice');
    const edge = decide.atMost(verdict.errorKJPerMol, 2 * bound, 'regime', 'advice');
    verdict.regime = far ? 'far' : edge ? 'edge' : 'near';
  } else if (enclosed || overlapping) {
    verdict.regime = 'near';
  }
  if (reference.energy !== null) verdict.validBeyondA = validBeyond(it, reference);
  verdict.advice = adviceOf(it, verdict);
  return verdict;
}

/** Largest error with which the point dipole still holds. */
function allowed(reference: number, settings: Settings): number {
  return Math.max(settings.tolerance * Math.abs(reference), 0.1 * GAS_CONSTANT * settings.temperatureK);
}

/** Smallest separation from which the point dipole holds at every larger one: a fine scan inward, then bisection. */
function validBeyond(it: Case, reference: Reference): number | null {
  const { first, second, settings } = it;
  const from = length(it.vector);
  const u = scale(it.vector, 1 / from);
  const terms = pointTerms(it);
  const holds = (r: number): boolean => {
    // Along a fixed direction the terms fall as 1/R, 1/R², 1/R³.
    const point = terms[0] / r + terms[1] / r ** 2 + terms[2] / r ** 3;
    const shift: Vec = [0, 1, 2].map((k) => it.shift[k] + u[k] * (r - from)) as Vec;
    const e = reference.energy!(shift, point * settings.relativePermittivity) / settings.relativePermittivity;
    return Math.abs(point - e) <= allowed(e, settings);
  };
  const lowest = reference.basis === 'extent' ? first.extent + second.extent : Math.max(first.extent, second.extent, 1);
  // Two atoms with point dipoles of their own: their reference is the point dipole itself.
  if (lowest === 0) return 0;
  let good = 1000;
  while (!holds(good) && good < 1e7) good *= 2;
  for (;;) {
    const next = Math.max(good / 1.005, lowest);
    if (!holds(next)) {
      let bad = next;
      while (good - bad > 1e-9 * good) {
        const middle = (good + bad) / 2;
        if (holds(middle)) good = middle;
        else bad = middle;
      }
      return good;
    }
    if (next === lowest) return lowest;
    good = next;
  }
}

/** Coefficients of 1/R, 1/R² and 1/R³ of the point-dipole energy along the line of centres: its terms at R = 1. */
function pointTerms(it: Case): [number, number, number] {
  const { first, second, settings } = it;
  const u = scale(it.vector, 1 / length(it.vector));
  const q1 = chargeOperator(first.charge);
  const q2 = chargeOperator(second.charge);
  const d1 = dipoleOperator(first.dipole ?? [0, 0, 0], -1);
  const d2 = dipoleOperator(second.dipole ?? [0, 0, 0], 1);
  const at = (a: typeof q1, b: typeof q1) => operatorEnergy(a, b, u) / settings.relativePermittivity;
  return [at(q1, q2), at(q1, d2) + at(d1, q2), at(d1, d2)];
}

/** The first rule that applies. */
function adviceOf(it: Case, verdict: Verdict): string {
  const { first, second, contact, settings, decide } = it;
  const kT = GAS_CONSTANT * settings.temperatureK;
  const touching = contact.kind === 'touching';
  // A bulk permittivity does not screen a touching pair.
  const screening = touching ? settings.relativePermittivity : 1;
  const known = it.enclosed ? [it.coulomb] : [verdict.referenceKJPerMol, it.point];
  const strength = screening * Math.max(...known.map((energy) => Math.abs(energy ?? 0)));
  const exceeds = (value: number, bound: number) => !decide.atMost(value, bound, 'advice');

  if (contact.kind === 'clash') return 'repair';
  if (it.enclosed && it.coulomb === null) return touching ? 'compute' : 'review';
  if (verdict.regime === 'near' && exceeds(strength, 0.5 * kT)) return 'compute';
  if (touching && exceeds(strength, kT)) return 'compute';

  const ion = isIon(first, decide) || isIon(second, decide);
  if (verdict.basis === 'none') {
    const known = first.dipole !== null && second.dipole !== null;
    const distant = exceeds(length(it.vector), 3 * (first.extent + second.extent));
    return known && !ion && distant ? 'accept' : 'review';
  }
  const { contactRatio } = contact.closest;
  if (ion && contactRatio !== null && decide.below(contactRatio, 1.5, 'advice')) return 'review';
  const beside = settings.tolerance * Math.abs(verdict.referenceKJPerMol ?? 0);
  const counts = (energy: number | null) =>
    energy !== null && exceeds(Math.abs(energy), kT) && exceeds(Math.abs(energy), beside);
  if (it.polarization.some(counts)) return 'review';
  if (it.sharedProton) return 'review';
  if (contact.kind === 'apart') {
    if (verdict.regime === 'far') return 'accept';
    const faint = (energy: number | null) => energy !== null && decide.below(Math.abs(energy), 0.1 * kT, 'advice');
    if (faint(strength) && faint(verdict.errorKJPerMol)) return 'accept';
  }
  return 'review';
}
