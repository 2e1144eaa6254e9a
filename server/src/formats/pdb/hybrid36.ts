const PLAIN = /^ *-?\d+$/;
const UPPER = /^[A-Z][0-9A-Z]*$/;
const LOWER = /^[a-z][0-9a-z]*$/;

/**
 * Decodes a hybrid-36 field of `width` characters (5 for serials, 4 for residue numbers): plain decimal as far as it goes, then
 * base 36 in capitals, then in small letters. A blank field is 0; NaN for anything else, such as the stars that some programs
 * write past the last number. Source: R. W. Grosse-Kunstleve, hybrid-36, http://cci.lbl.gov/hybrid_36/ (2007).
 */
export function decodeHybrid36(field: string, width: number): number {
  if (field.trim() === '') return field.length === width ? 0 : Number.NaN;
  if (PLAIN.test(field) || /^ *-?\d+ *$/.test(field)) return Number(field);
  if (field.length !== width) return Number.NaN;
  const offset = 10 ** width;
  const block = 26 * 36 ** (width - 1);
  const base = 10 * 36 ** (width - 1);
  if (UPPER.test(field)) return Number.parseInt(field, 36) - base + offset;
  if (LOWER.test(field)) return Number.parseInt(field, 36) - base + offset + block;
  return Number.NaN;
}
