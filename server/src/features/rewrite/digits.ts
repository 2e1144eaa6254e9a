/** Fewest significant digits that a number is written with in place of another. */
const FEWEST = 4;
const MOST = 15;

/** Digits of a number as written, without leading zeros, point, sign and exponent. */
function digitsOf(text: string): number {
  return text.replace(/[eEdD].*$/, '').replace(/^[-+0.]+|[^0-9]/g, '').length;
}

/**
 * A component of a vector of a certain size, written with about the digits that stood there: to the place of the last of them, counted
 * from the size. What is less than that is zero.
 */
export function significant(value: number, before: readonly string[], size: number): string {
  const digits = Math.min(MOST, Math.max(FEWEST, ...before.map(digitsOf)));
  const least = 10 ** (Math.floor(Math.log10(size)) - digits + 1);
  const rounded = Math.round(value / least) * least;
  return rounded === 0 || !Number.isFinite(rounded) ? '0' : String(Number(rounded.toPrecision(digits)));
}
