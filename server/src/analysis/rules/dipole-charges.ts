import type { Fix, TextEdit } from '../../base/finding';
import type { WrittenDipole } from '../../model/annotation';
import { BOHR_A, DEBYE_E_A } from '../../physics/constants';
import { dipoleUnitEA } from '../../physics/units';
import { ION_CHARGE_E } from '../settings';
import { type RuleContext, shown } from './context';

/** Two dipoles closer than this agree, e·Å. */
const AGREEMENT_EA = 0.1 * DEBYE_E_A;
/** Factors between units in which dipoles are given: a.u./D, e·Å/D, e·Å/a.u. */
export const UNIT_FACTORS = [BOHR_A / DEBYE_E_A, 1 / DEBYE_E_A, 1 / BOHR_A];
const UNIT_SHARE = 0.05;
const SAME_DIRECTION_DEG = 15;
const OPPOSITE_DEG = 20;
const ROTATED_DEG = 20;
const ROTATED_SHARE = 0.05;
const MISMATCH_SHARE = 0.4;
const DEVIATION_SHARE = 0.2;

/** Compares each annotated dipole of a neutral fragment with the dipole of its charge column. */
export function reportDipolesAgainstCharges(context: RuleContext): void {
  const { moments, model } = context.frame;
  for (let f = 0; f < context.ownFragments; f++) {
    const source = moments.dipoleSource[f];
    if ((source !== 'annotated' && source !== 'axis') || Number.isNaN(moments.columnChargeE[f]!)) continue;
    if (Math.abs(moments.chargeE[f]!) > ION_CHARGE_E) continue;
    const annotated = vectorAt(moments.dipoleEA, f);
    const column = vectorAt(moments.columnDipoleEA, f);
    const difference = Math.hypot(...annotated.map((value, a) => value - column[a as 0]));
    const note = model.notes[f]!;
    const written = note.writtenDipole ?? note.writtenSize;
    // NaN (no direction) compares false.
    if (!(difference >= AGREEMENT_EA) || written === null) continue;
    compare(context, f, annotated, column, written);
  }
}

export type Vector = [number, number, number];

export function vectorAt(array: Float64Array, f: number): Vector {
  return [array[3 * f]!, array[3 * f + 1]!, array[3 * f + 2]!];
}

function compare(context: RuleContext, f: number, annotated: Vector, column: Vector, written: WrittenDipole): void {
  const size = Math.hypot(...annotated);
  const columnSize = Math.hypot(...column);
  const cosine = (annotated[0] * column[0] + annotated[1] * column[1] + annotated[2] * column[2]) / (size * columnSize);
  const angle = (Math.acos(Math.max(-1, Math.min(1, cosine))) * 180) / Math.PI;
  const ratio = size / columnSize;
  const share = Math.abs(ratio - 1);
  const sizes = `The annotated dipole of ${context.nameOf(f)} is ${debye(size)}, that of its charges ${debye(columnSize)}`;
  const factor = UNIT_FACTORS.flatMap((k) => [k, 1 / k]).find((k) => Math.abs(ratio / k - 1) <= UNIT_SHARE);
  const span = written.span;
  if (angle <= SAME_DIRECTION_DEG && factor !== undefined) {
    context.findings.add(
      'dipole-unit',
      span,
      () => `${sizes}, the same direction and a factor of ${shown(ratio)}.`,
      () => {
        const edits = scaled(context, written, 1 / factor);
        return edits.length === 0 ? {} : { fix: { title: `Convert to ${written.unit}`, edits } };
      },
    );
  } else if (angle >= 180 - OPPOSITE_DEG) {
    context.findings.add(
      'dipole-reversed',
      span,
      () => `${sizes}, and the two point in opposite directions (${shown(angle)}°).`,
      () => reversal(context, f, written),
    );
  } else if (share <= ROTATED_SHARE && angle > ROTATED_DEG) {
    context.findings.add(
      'dipole-rotated',
      span,
      () => `${sizes}, the same size, and ${shown(angle)}° from it.`,
      () => rederived(column, written),
    );
  } else if (share > MISMATCH_SHARE) {
    context.findings.add('dipole-mismatch', span, () => `${sizes}, ${percent(share)} off.`);
  } else if (share >= DEVIATION_SHARE) {
    context.findings.add('dipole-deviation', span, () => `${sizes}, ${percent(share)} off.`);
  }
}

/** A share in words. */
export function percent(share: number): string {
  return share > 10 ? 'far' : `${shown(100 * share, 2)} %`;
}

export function debye(sizeEA: number): string {
  return `${shown(sizeEA / DEBYE_E_A)} D`;
}

/** The written numbers times a factor, with as many significant digits as they have. */
export function scaled(context: RuleContext, written: WrittenDipole, factor: number): TextEdit[] {
  return written.items.flatMap(({ start, end }) => {
    // A size may have its unit behind it, which stays.
    const [text = ''] = /^[+-]?[\d.]+(?:[eEdD][+-]?\d+)?/.exec(context.file.text.slice(start, end)) ?? [];
    const value = Number(text.replace(/[dD]/, 'e'));
    if (!Number.isFinite(value) || value === 0 || text === '') return [];
    const digits = Math.max(4, text.replace(/[eEdD].*$/, '').replace(/^[-+0.]+|[^0-9]/g, '').length);
    return [
      { start, end: start + text.length, text: String(Number((value * factor).toPrecision(Math.min(digits, 15)))) },
    ];
  });
}

/** Changes the sign of each component as written, or turns the axis round. */
export function reversal(context: RuleContext, f: number, written: WrittenDipole): { fix?: Fix } {
  const { text } = context.file;
  const { axis } = context.frame.model.notes[f]!;
  if (written.items.length === 3) {
    const edits = written.items.flatMap(({ start, end }): TextEdit[] => {
      const item = text.slice(start, end);
      if (Number(item.replace(/[dD]/, 'e')) === 0) return [];
      if (item.startsWith('-')) return [{ start, end: start + 1, text: '' }];
      return [{ start, end: item.startsWith('+') ? start + 1 : start, text: '-' }];
    });
    return { fix: { title: 'Change the sign of the dipole', edits } };
  }
  if (axis === null) return {};
  const [before, after] = text.slice(axis.span.start, axis.span.end).split('>');
  const quoted = /^["'].*["']$/.test(text.slice(axis.span.start, axis.span.end));
  if (before === undefined || after === undefined || quoted) return {};
  return { fix: { title: 'Turn the axis round', edits: [{ ...axis.span, text: `${after}>${before}` }] } };
}

/** Replaces the vector by the dipole of the charges, in the unit as written. */
export function rederived(
  column: Vector,
  written: WrittenDipole,
  title = 'Take the dipole of the charges',
): { fix?: Fix } {
  if (written.items.length !== 3) return {};
  const scale = dipoleUnitEA(written.unit)!;
  const edits = written.items.map(({ start, end }, a) => ({
    start,
    end,
    text: String(Number((column[a as 0]! / scale).toPrecision(5))),
  }));
  return { fix: { title, edits } };
}
