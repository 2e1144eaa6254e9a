const ZEROS = 0x30303030;
/** What a blank and a minus sign are where they are read as digits. */
const BLANK_AS_DIGIT = 0x10;
const MINUS_AS_DIGIT = 0x1d;

/**
 * Reads the four characters before a decimal point, given as a word: blanks, perhaps a minus sign, and at least one digit. Returns twice
 * the number, and one more where there is a minus sign (`-0.5` has one, too); −1 for anything else. Nothing depends on how many blanks
 * and digits there are, so that a processor has nothing to guess in columns of numbers of different lengths.
 */
export function scanWholePart(four: number): number {
  const units = four ^ ZEROS;
  const isNoDigit = (units >>> 4) & 0x01010101;
  const signMask = Math.imul(isNoDigit, 255);
  // What is no digit stands before all digits, and a digit follows.
  if ((signMask & (signMask + 1)) !== 0 || signMask < 0) return -1;
  const digits = units & ~signMask;
  if (!areDigits(digits)) return -1;
  const sign = (units & signMask) ^ Math.imul(isNoDigit, BLANK_AS_DIGIT);
  // A minus sign is the last of them, right before the digits.
  if (sign !== 0 && sign !== Math.imul((signMask + 1) >>> 8, MINUS_AS_DIGIT ^ BLANK_AS_DIGIT)) return -1;
  return 2 * fourDigits(digits) + (sign === 0 ? 0 : 1);
}

/** Four digits, given as a word, as a number; −1 for anything else. */
export function scanFourDigits(four: number): number {
  const digits = four ^ ZEROS;
  return areDigits(digits) ? fourDigits(digits) : -1;
}

/** Whether each byte is at most 9: neither it nor six more than it reaches into its upper half. */
function areDigits(units: number): boolean {
  return ((units | (units + 0x06060606)) & 0xf0f0f0f0) === 0;
}

/** The number of four digits from the lowest byte on: first in pairs, then both pairs. */
function fourDigits(digits: number): number {
  const pairs = Math.imul(digits, 10) + (digits >>> 8);
  return (pairs & 255) * 100 + ((pairs >>> 16) & 255);
}
