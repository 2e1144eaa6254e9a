import type { Snapshot } from './snapshot';
import { scanFourDigits } from './whole-part';

const PLUS = 43;
const MINUS = 45;
const POINT = 46;
const ZERO = 48;
const LETTER_E = 101;
const LETTER_D = 100;
const LOWER_CASE = 32;

/** Powers of ten that a double holds exactly. */
const EXACT_POWERS = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));
const LARGEST_EXACT_MANTISSA = 2 ** 53;

/**
 * Reads the decimal number that starts at `start`, at most up to `end`, into `out[index]` and returns the offset just past it,
 * or −1 (leaving `out` as it is) where none starts there.
 *
 * Accepts an optional sign, digits with at most one point, and an exponent with e, E or Fortran's d, D. The value equals
 * `Number()` of the same text (with d read as e) to the last bit: where mantissa and power of ten are both exact (below 2⁵³
 * and 10²³) one multiplication or division rounds once; everything else goes through `Number()`. Infinities (1e400) are
 * returned as such. "nan" and "inf" are no numbers here.
 */
export function scanNumberInto(
  snapshot: Snapshot,
  start: number,
  end: number,
  out: Float64Array,
  index: number,
): number {
  const bytes = snapshot.bytes;
  let i = start;
  const negative = bytes[i] === MINUS;
  if (negative || bytes[i] === PLUS) i++;
  let mantissa = 0;
  const integerStart = i;
  while (i < end) {
    const digit = bytes[i]! - ZERO;
    if (digit < 0 || digit > 9) break;
    mantissa = mantissa * 10 + digit;
    i++;
  }
  let digits = i - integerStart;
  let exponent = 0;
  if (i < end && bytes[i] === POINT) {
    const fractionStart = ++i;
    while (i < end) {
      const digit = bytes[i]! - ZERO;
      if (digit < 0 || digit > 9) break;
      mantissa = mantissa * 10 + digit;
      i++;
    }
    exponent = fractionStart - i;
    digits -= exponent;
  }
  if (digits === 0) return -1;
  const letter = i < end ? bytes[i]! | LOWER_CASE : 0;
  if (letter === LETTER_E || letter === LETTER_D) {
    let at = i + 1;
    const negativeExponent = bytes[at] === MINUS;
    if (negativeExponent || bytes[at] === PLUS) at++;
    const exponentStart = at;
    let power = 0;
    while (at < end) {
      const digit = bytes[at]! - ZERO;
      if (digit < 0 || digit > 9) break;
      power = Math.min(power * 10 + digit, 99999);
      at++;
    }
    if (at === exponentStart) return -1;
    exponent += negativeExponent ? -power : power;
    i = at;
  }
  let value: number;
  if (mantissa < LARGEST_EXACT_MANTISSA && exponent >= -22 && exponent <= 22) {
    value = exponent < 0 ? mantissa / EXACT_POWERS[-exponent]! : mantissa * EXACT_POWERS[exponent]!;
    if (negative) value = -value;
  } else {
    value = Number(snapshot.slice(start, i).replace(/[dD]/, 'e'));
  }
  out[index] = value;
  return i;
}

const NINE = ZERO + 9;
/** As many digits as any double with an exact mantissa has at most. */
const FEW_DIGITS = 15;

/**
 * The same for the bulk of a file: a plain decimal of few digits (`-12.345678`) after blanks and before a blank or line end. Returns
 * −1 for anything else, which {@link scanNumberInto} then decides on; `out` may have been written.
 */
export function scanPlainDecimal(
  bytes: Uint8Array,
  view: DataView,
  start: number,
  out: Float64Array,
  index: number,
): number {
  let i = start;
  let unit = bytes[i]!;
  while (unit === 32 || unit === 9) unit = bytes[++i]!;
  const negative = unit === MINUS;
  if (negative) unit = bytes[++i]!;
  const first = i;
  let whole = 0;
  while (unit >= ZERO && unit <= NINE) {
    whole = (Math.imul(whole, 10) + unit - ZERO) | 0;
    unit = bytes[++i]!;
  }
  const wholeDigits = i - first;
  if (unit !== POINT || wholeDigits === 0 || wholeDigits > 9) return -1;
  const point = i++;
  let mantissa = whole;
  const four = scanFourDigits(view.getInt32(i, true));
  if (four >= 0) {
    mantissa = mantissa * 10000 + four;
    i += 4;
  }
  unit = bytes[i]!;
  while (unit >= ZERO && unit <= NINE) {
    mantissa = mantissa * 10 + (unit - ZERO);
    unit = bytes[++i]!;
  }
  const decimals = i - point - 1;
  if (unit > 32 || wholeDigits + decimals > FEW_DIGITS) return -1;
  const value = mantissa / EXACT_POWERS[decimals]!;
  out[index] = negative ? -value : value;
  return i;
}

const SINGLE = new Float64Array(1);

/** The decimal number that fills the text from `start` to `end`, or NaN where it holds anything else. */
export function scanNumber(snapshot: Snapshot, start: number, end: number): number {
  return scanNumberInto(snapshot, start, end, SINGLE, 0) === end ? SINGLE[0]! : Number.NaN;
}

/** Reads a whole number without sign of at most 15 digits, or −1. */
export function scanCount(bytes: Uint8Array, start: number, end: number): number {
  if (end <= start || end - start > 15) return -1;
  let value = 0;
  for (let i = start; i < end; i++) {
    const digit = bytes[i]! - ZERO;
    if (digit < 0 || digit > 9) return -1;
    value = value * 10 + digit;
  }
  return value;
}

/** Whether a byte separates fields: blank, tab, or another control character that is no line end. */
export function isBlank(unit: number): boolean {
  return unit === 32 || (unit < 32 && unit !== 10 && unit !== 13);
}

/** Offset of the first unit from `start` that is not blank, at most `end`. */
export function skipBlanks(bytes: Uint8Array, start: number, end: number): number {
  let i = start;
  while (i < end && isBlank(bytes[i]!)) i++;
  return i;
}

/** Offset just past the run of units that are not blank, at most `end`. */
export function skipField(bytes: Uint8Array, start: number, end: number): number {
  let i = start;
  while (i < end && !isBlank(bytes[i]!)) i++;
  return i;
}

/** Offset just past the last unit before `end` that is not blank, at least `start`. */
export function trimEnd(bytes: Uint8Array, start: number, end: number): number {
  let i = end;
  while (i > start && isBlank(bytes[i - 1]!)) i--;
  return i;
}
