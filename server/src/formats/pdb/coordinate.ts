const ZEROS = 0x30303030;
/** Four times the digit zero, but the first a point. */
const POINT_AND_ZEROS = 0x3030302e;
/** What a blank and a minus sign are where they are read as digits. */
const BLANK_AS_DIGIT = 0x10;
const MINUS_AS_DIGIT = 0x1d;

const WIDTH = 8;

/**
 * Reads x, y and z as the format has them, each `%8.3f`: in four columns blanks, perhaps a minus sign, and at least one digit; then
 * the point and three digits. Writes them into `out` from `index` on, to the last bit what `Number()` gives. False where one is
 * anything else; `out` may have been written. A field is two words, so that neither its blanks nor its digits are walked over.
 */
export function readCoordinates(view: DataView, start: number, out: Float64Array, index: number): boolean {
  for (let axis = 0; axis < 3; axis++) {
    const field = start + axis * WIDTH;
    const fraction = view.getInt32(field + 4, true) ^ POINT_AND_ZEROS;
    // No bit of a digit, nor of six more than a digit, lies in the upper half of its byte.
    if (((fraction | (fraction + 0x06060600)) & 0xf0f0f0ff) !== 0) return false;
    const whole = view.getInt32(field, true) ^ ZEROS;
    const isNoDigit = (whole >>> 4) & 0x01010101;
    const signMask = Math.imul(isNoDigit, 255);
    // What is no digit stands before all digits, and a digit follows.
    if ((signMask & (signMask + 1)) !== 0 || signMask < 0) return false;
    const digits = whole & ~signMask;
    if (((digits | (digits + 0x06060606)) & 0xf0f0f0f0) !== 0) return false;
    const sign = (whole & signMask) ^ Math.imul(isNoDigit, BLANK_AS_DIGIT);
    // A minus sign is the last of them, right before the digits.
    if (sign !== 0 && sign !== Math.imul((signMask + 1) >>> 8, MINUS_AS_DIGIT ^ BLANK_AS_DIGIT)) return false;
    const pairs = Math.imul(digits, 10) + (digits >>> 8);
    const wholeA = (pairs & 255) * 100 + ((pairs >>> 16) & 255);
    const decimals = ((fraction >>> 8) & 255) * 100 + ((fraction >>> 16) & 255) * 10 + (fraction >>> 24);
    const value = (wholeA * 1000 + decimals) / 1000;
    out[index + axis] = sign === 0 ? value : -value;
  }
  return true;
}
