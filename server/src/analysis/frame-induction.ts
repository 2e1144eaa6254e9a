import { type InductionResult, inducedDipoles } from '../physics/induced-dipoles';
import type { FrameAnalysis } from './frame-analysis';
import { ZERO_DIPOLE_EA } from './settings';

/** Induction of a whole frame, or why there is no number. */
export type FrameInduction = InductionResult;

/** A frame of more pairs is not solved while someone waits. */
const MOST_PAIRS = 100_000;

/**
 * Induced dipoles of all fragments of a frame, each in the field of all others within the cutoff, and what the mutual action adds to the sum
 * of the pairs. Every fragment must have a known charge, dipole and polarizability, and none may be bonded to another.
 */
export function inductionOfFrame({ system, partners }: Pick<FrameAnalysis, 'system' | 'partners'>): FrameInduction {
  const { moments, count, chains } = system;
  if (count < 2) return { ok: false, reason: 'One fragment alone induces nothing.' };
  let unknown = 0;
  for (let f = 0; f < count; f++) if (!isKnown(system, f)) unknown++;
  if (unknown > 0) {
    const what = unknown === 1 ? 'one fragment is' : `${unknown} fragments are`;
    return { ok: false, reason: `Charge, dipole or polarizability of ${what} not known.` };
  }
  const first: number[] = [];
  const second: number[] = [];
  const offsets: number[] = [];
  for (let f = 0; f < count; f++) {
    if (chains.isCut(f)) return { ok: false, reason: 'Fragments are bonded to each other.' };
    const near = partners.around(f, true);
    for (let k = 0; k < near.count; k++) {
      first.push(f);
      second.push(near.index[k]!);
      offsets.push(near.vectorA[3 * k]!, near.vectorA[3 * k + 1]!, near.vectorA[3 * k + 2]!);
    }
    if (first.length > MOST_PAIRS)
      return { ok: false, reason: `More than ${MOST_PAIRS} pairs are not solved together.` };
  }
  const dipolesEA = moments.dipoleEA.map((value) => (Math.abs(value) < ZERO_DIPOLE_EA ? 0 : value));
  return inducedDipoles({
    chargesE: moments.chargeE,
    dipolesEA,
    polarizabilitiesA3: moments.polarizabilityA3,
    first: Uint32Array.from(first),
    second: Uint32Array.from(second),
    offsetsA: Float64Array.from(offsets),
    permittivity: system.settings.relativePermittivity,
  });
}

function isKnown({ moments, usable }: FrameAnalysis['system'], f: number): boolean {
  const { chargeE, dipoleEA, polarizabilityA3 } = moments;
  return usable[f] === 1 && Number.isFinite(chargeE[f]! + dipoleEA[3 * f]! + polarizabilityA3[f]!);
}
