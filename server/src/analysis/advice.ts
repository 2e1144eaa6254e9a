import type { Pair } from './pair';
import { NEGLIGIBLE_KT } from './reference';
import type { System } from './system';

/** What to do about a pair. */
export type Advice = 'accept' | 'review' | 'compute' | 'repair';

/** A near pair is worth a quantum calculation, and a finding, from this share of kT on. */
export const NOTICEABLE_KT = 0.5;
/** A touching pair is worth a quantum calculation from this share of kT on. */
const TOUCHING_KT = 1;
/** An ion this close (contact ratio) is looked at again: induction and charge transfer are missing from every number. */
const ION_CONTACT_RATIO = 1.5;
/** Centres farther apart than this many times the sum of the extents need no basis to be far. */
const SURELY_FAR = 3;

/** The advice on a pair, the first rule that applies; `null` for parts of one molecule. */
export function adviseOn(system: System, pair: Readonly<Pair>, sharedProton: boolean): Advice | null {
  const { moments, kTKJPerMol, isIon, settings } = system;
  const { first, second, contact, regime, basis, strengthKJPerMol, energies } = pair;
  if (contact === 'bonded') return null;
  if (contact === 'clash') return 'repair';
  const touching = contact === 'touching';
  if (pair.enclosed && Number.isNaN(energies.coulomb)) return touching ? 'compute' : 'review';
  if (regime === 'near' && strengthKJPerMol > NOTICEABLE_KT * kTKJPerMol) return 'compute';
  if (touching && strengthKJPerMol > TOUCHING_KT * kTKJPerMol) return 'compute';
  const ion = isIon[first] === 1 || isIon[second] === 1;
  if (basis === 'none') {
    const dipolesKnown = !Number.isNaN(moments.dipoleEA[3 * first]!) && !Number.isNaN(moments.dipoleEA[3 * second]!);
    const far = pair.distanceA > SURELY_FAR * (moments.extentA[first]! + moments.extentA[second]!);
    return dipolesKnown && !ion && far ? 'accept' : 'review';
  }
  if (ion && pair.contactRatio < ION_CONTACT_RATIO) return 'review';
  const limit = Math.max(kTKJPerMol, settings.tolerance * Math.abs(pair.referenceKJPerMol));
  if (Math.abs(energies.induction) > limit || Math.abs(energies.dispersion) > limit) return 'review';
  if (sharedProton) return 'review';
  const negligible = NEGLIGIBLE_KT * kTKJPerMol;
  const error = pair.errorKJPerMol + pair.doubtKJPerMol;
  if (!touching && (regime === 'far' || (strengthKJPerMol < negligible && error < negligible))) return 'accept';
  return 'review';
}
