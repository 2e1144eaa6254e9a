const ZEROS = 0x30303030;
/** Four times the digit zero, but the first a point. */
const POINT_AND_ZEROS = 0x3030302e;
/** What a blank and a minus sign are where they are read as digits. */
const BLANK_AS_DIGIT = 0x10;
const MINUS_AS_DIGIT = 0x1d;

/**
 * Reads a coordinate as the format has it, `%8.3f`: in four columns blanks, perhaps a minus sign, and at least one digit; then the
 * point and three digits. Writes it into `out[index]`, to the last bit what `Number()` gives. False for anything else, with `out` as
 * it was. The eight columns are two words, so that neither blanks nor digits are walked over.
 */
export function readCoordinate(view: DataView, start: number, out: Float64Array, index: number): boolean {
  const fraction = view.getInt32(start + 4, true) ^ POINT_AND_ZEROS;
  // No bit of a digit, nor of six more than a digit, lies in the upper half of its byte.
  if (((fraction | (fraction + 0x06060600)) & 0xf0f0f0ff) !== 0) return false;
  const whole = view.getInt32(start, true) ^ ZEROS;
  const isNoDigit = (whole >>> 4) & 0x01010101;
  const signMask = Math.imul(isNoDigit, 255);
  // What is no digit stands before all digits, and a digit follows.
  if ((signMask & (signMask + 1)) !== 0 || signMask < 0) return false;
  const digits = whole & ~signMask;
  if (((digits | (digits + 0x06060606)) & 0xf0f0f0f0) !== 0) return false;
  const sign = (whole & signMask) ^ Math.imul(isNoDigit, BLANK_AS_DIGIT);
  // A minus sign is the last of them, right before the digits.
  const isNegative = sign !== 0;
  if (isNegative && sign !== Math.imul((signMask + 1) >>> 8, MINUS_AS_DIGIT ^ BLANK_AS_DIGIT)) return false;
  const pairs = Math.imul(digits, 10) + (digits >>> 8);
  const wholeA = (pairs & 255) * 100 + ((pairs >>> 16) & 255);
  const thousandths =
    wholeA * 1000 + ((fraction >>> 8) & 255) * 100 + ((fraction >>> 16) & 255) * 10 + (fraction >>> 24);
  out[index] = (isNegative ? -thousandths : thousandths) / 1000;
  return true;
}
