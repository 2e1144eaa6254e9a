import type { EnergyUnit } from '../physics/units';
import type { Maybe } from './records';

/** Stands where a number is not known. */
export const NOTHING = '–';

/** A number with so many decimals and a true minus sign, never −0. */
export function fixed(value: Maybe, digits: number): string {
  if (value === null) return NOTHING;
  const text = value.toFixed(digits);
  return (Number(text) === 0 ? text.replace('-', '') : text).replace('-', '−');
}

/** A unit of energy as it is printed. */
export function unitText(unit: EnergyUnit): string {
  return unit === 'cm-1' ? 'cm⁻¹' : unit;
}

/** "1 pair", "2 pairs". */
export function plural(count: number, what: string): string {
  return `${count} ${what}${count === 1 ? '' : 's'}`;
}
