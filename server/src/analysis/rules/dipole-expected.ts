import type { WrittenDipole } from '../../model/annotation';
import { DEBYE_E_A } from '../../physics/constants';
import { ION_CHARGE_E } from '../settings';
import { type RuleContext, shown } from './context';
import { debye, percent, rederived, reversal, scaled, UNIT_FACTORS, type Vector, vectorAt } from './dipole-charges';

/** Smaller dipoles are not compared, e·Å. */
const SMALLEST_EA = 0.3 * DEBYE_E_A;
/** Directions agree within this, and within three times the mean error of an estimated one, degrees. */
const ALIKE_DEG = 20;
const ERRORS = 3;
/** A dipole turned by less than this and the errors is not called rotated: geometries differ. */
const ROTATED_DEG = 35;
/** Opposite vectors may differ by this factor in size. */
const REVERSED_FACTOR = 2.5;
const UNIT_SHARE = 0.07;
/** Molecules are polarized by their neighbours: water in the liquid has 2.6 to 2.9 D (common practice, no source). */
const MISMATCH_SHARE = 0.6;
const DEVIATION_SHARE = 0.2;

/**
 * Compares each annotated dipole of a neutral fragment without charges of its own with the published dipole of its molecule, or with one
 * estimated from its geometry. What is said says what it was compared with; an estimate must be wrong by far more than its error.
 */
export function reportDipolesAgainstKnowledge(context: RuleContext): void {
  const { moments, model } = context.frame;
  for (let f = 0; f < context.ownFragments; f++) {
    if (moments.expectedNote[f] === '' || !Number.isNaN(moments.columnChargeE[f]!)) continue;
    if (Math.abs(moments.chargeE[f]!) > ION_CHARGE_E) continue;
    const note = model.notes[f]!;
    const written = note.writtenDipole ?? note.writtenSize;
    if (written !== null) compare(context, f, written);
  }
}

function compare(context: RuleContext, f: number, written: WrittenDipole): void {
  const { moments } = context.frame;
  const annotated = vectorAt(moments.dipoleEA, f);
  const expected = vectorAt(moments.expectedEA, f);
  const size = moments.dipoleNormEA[f]!;
  const expectedSize = Math.hypot(...expected);
  if (!(Math.max(size, expectedSize) > SMALLEST_EA)) return;
  const isPublished = !moments.expectedNote[f]!.startsWith('estimated');
  const sizeError = moments.dipoleErrorEA[f]! || 0;
  const angleError = ERRORS * (moments.dipoleAngleErrorDeg[f]! || 0);
  const angle = angleBetween(annotated, expected);
  const ratio = size / expectedSize;
  const share = Math.abs(ratio - 1);
  const [source = ''] = moments.expectedNote[f]!.split(/[,(]/);
  const what = `${isPublished ? 'the published one' : 'the one estimated from its geometry'} ${debye(expectedSize)}${sizeError > 0 ? ` ± ${shown(sizeError / DEBYE_E_A, 1)} D` : ''}`;
  const compared = `The annotated dipole of ${context.nameOf(f)} is ${debye(size)}, ${what}${isPublished ? ` (${source.trim()})` : ''}`;
  const alike = ALIKE_DEG + angleError;
  const span = written.span;
  // From debye there is no way to another unit by the factor between those.
  const factors = written.unit === 'D' ? UNIT_FACTORS.slice(0, 2) : UNIT_FACTORS;
  const factor = factors.flatMap((k) => [k, 1 / k]).find((k) => Math.abs(ratio / k - 1) <= UNIT_SHARE);
  // Unknown or meaningless angles compare false.
  if (factor !== undefined && !(angle > alike) && Math.abs(size - expectedSize) > ERRORS * sizeError) {
    context.findings.add(
      'dipole-unit',
      span,
      () => `${compared}, a factor of ${shown(ratio)}.`,
      () => {
        const edits = isPublished ? scaled(context, written, 1 / factor) : [];
        return edits.length === 0 ? {} : { fix: { title: `Convert to ${written.unit}`, edits } };
      },
    );
  } else if (angle >= 180 - alike && ratio < REVERSED_FACTOR && ratio > 1 / REVERSED_FACTOR) {
    context.findings.add(
      'dipole-reversed',
      span,
      () => `${compared}, and the two point in opposite directions (${shown(angle)}°).`,
      () => reversal(context, f, written),
    );
  } else if (angle > ROTATED_DEG + angleError && Math.abs(size - expectedSize) <= Math.max(sizeError, 0.1 * size)) {
    context.findings.add(
      'dipole-rotated',
      span,
      () => `${compared}, of the same size and ${shown(angle)}° from it.`,
      () => {
        const isExact = isPublished && angleError === 0;
        return rederived(expected, written, `Take the ${isExact ? 'published' : 'estimated'} dipole`);
      },
    );
  } else if (Math.abs(size - expectedSize) > ERRORS * sizeError && share > MISMATCH_SHARE) {
    context.findings.add('dipole-mismatch', span, () => `${compared}, ${percent(share)} off.`);
  } else if (isPublished && share >= DEVIATION_SHARE) {
    context.findings.add('dipole-deviation', span, () => `${compared}, ${percent(share)} off.`);
  }
}

/** Degrees; NaN where a direction is not known. */
function angleBetween(a: Vector, b: Vector): number {
  const cosine = (a[0] * b[0] + a[1] * b[1] + a[2] * b[2]) / (Math.hypot(...a) * Math.hypot(...b));
  return (Math.acos(Math.max(-1, Math.min(1, cosine))) * 180) / Math.PI;
}
