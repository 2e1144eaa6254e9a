import type { FindingDetail } from '../../base/finding';
import type { Span } from '../../base/span';
import { AtomFlag } from '../../formats/tree';
import { DEBYE_E_A } from '../../physics/constants';
import { type RuleContext, shown } from './context';

const CHARGE_TOLERANCE_E = 0.05;
/** A frame's dipole and the sum over its fragments differ noticeably from this share and size on. */
const DIPOLE_SHARE = 0.05;
const DIPOLE_TOLERANCE_EA = 0.1 * DEBYE_E_A;

/** Checks charge and multiplicity against the number of electrons, where both are given. */
export function reportElectronParity(context: RuleContext): void {
  const { frameNotes, tree } = context.frame.model;
  const { totalChargeE, multiplicity } = frameNotes;
  if (totalChargeE === null || multiplicity === null) return;
  let electrons = -totalChargeE.value;
  for (let i = 0; i < tree.atoms.count; i++) {
    if (tree.atoms.flags[i]! & AtomFlag.unknownElement) return;
    electrons += tree.atoms.element[i]!;
  }
  if (!Number.isInteger(electrons) || (electrons - multiplicity.value) % 2 !== 0) return;
  const lowest = electrons % 2 === 0 ? 1 : 2;
  context.findings.add(
    'electron-parity',
    multiplicity.span,
    () => {
      const kind = electrons % 2 === 0 ? 'even' : 'odd';
      return `The frame has ${electrons} electrons, an ${kind} number, and the multiplicity is ${multiplicity.value}.`;
    },
    () => ({
      fix: { title: `Set the multiplicity to ${lowest}`, edits: [{ ...multiplicity.span, text: String(lowest) }] },
    }),
  );
}

/** Checks the sum of the fragment charges against the total charge. */
export function reportChargeSum(context: RuleContext): void {
  const { frameNotes } = context.frame.model;
  const { moments } = context.frame;
  const total = frameNotes.totalChargeE;
  const own = context.ownFragments;
  if (total === null || own === 0) return;
  let sum = 0;
  for (let f = 0; f < own; f++) sum += moments.chargeE[f]!;
  if (!(Math.abs(sum - total.value) > CHARGE_TOLERANCE_E)) return;
  // A guess from the library is not the file's mistake.
  const guessed = moments.chargeSource.findIndex(
    (source, f) => f < own && source === 'library' && moments.chargeE[f] !== 0,
  );
  const guess = guessed < 0 ? '' : ` The charge of ${context.nameOf(guessed)} is the library's.`;
  const assumed = moments.chargeSource.slice(0, own).every((source) => source === 'assumed');
  context.findings.add(
    'charge-sum',
    total.span,
    () =>
      assumed
        ? `The total charge is ${shown(total.value)} e, and nothing says which fragment carries it; all are taken as neutral.`
        : `The charges of the fragments add up to ${shown(sum)} e, and the total charge is ${shown(total.value)} e.${guess}`,
    () => totalFix(context, total.span, sum),
  );
}

/** Sets the total to the sum, where the file itself gives all charges, and its multiplicity fits that sum as well. */
function totalFix(context: RuleContext, span: Span, sum: number): FindingDetail {
  const { frameNotes, tree } = context.frame.model;
  const { chargeSource } = context.frame.moments;
  const isGiven = chargeSource
    .slice(0, context.ownFragments)
    .every((source) => source !== 'assumed' && source !== 'library');
  const whole = Math.round(sum);
  const total = Math.abs(sum - whole) <= CHARGE_TOLERANCE_E ? whole + 0 : Number(sum.toPrecision(6));
  const { multiplicity } = frameNotes;
  const electrons = tree.atoms.element.reduce((count, z) => count + z, -total);
  const fits = multiplicity === null || !Number.isInteger(electrons) || (electrons - multiplicity.value) % 2 !== 0;
  if (!isGiven || !fits) return {};
  return { fix: { title: `Set the total charge to ${total}`, edits: [{ ...span, text: String(total) }] } };
}

/** Compares the dipole of the whole frame with the sum over its fragments; only for a neutral frame with every dipole known. */
export function reportDipoleSum(context: RuleContext): void {
  const { frameNotes } = context.frame.model;
  const { moments } = context.frame;
  const given = frameNotes.dipoleEA;
  if (given === null) return;
  const sum = [0, 0, 0];
  let charge = 0;
  for (let f = 0; f < context.ownFragments; f++) {
    charge += moments.chargeE[f]!;
    for (let a = 0; a < 3; a++) {
      sum[a]! += moments.dipoleEA[3 * f + a]! + moments.chargeE[f]! * moments.centreA[3 * f + a]!;
    }
  }
  // With a net charge the sum depends on the origin, which the file does not name.
  if (Math.abs(charge) > 1e-3) return;
  const difference = Math.hypot(...given.value.map((value, a) => value - sum[a]!));
  const size = Math.hypot(...given.value);
  if (!(difference > Math.max(DIPOLE_TOLERANCE_EA, DIPOLE_SHARE * size))) return;
  context.findings.add('dipole-sum', given.span, () => {
    const summed = `${shown(Math.hypot(...sum) / DEBYE_E_A)} D`;
    return `The dipole of the frame is ${shown(size / DEBYE_E_A)} D, the sum over its fragments ${summed}, ${shown(difference / DEBYE_E_A)} D apart as vectors.`;
  });
}
