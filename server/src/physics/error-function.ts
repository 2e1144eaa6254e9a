const TWO_OVER_ROOT_PI = 2 / Math.sqrt(Math.PI);

/** From here on erf(x) is 1 to the last bit of a double. */
const SATURATED = 6;

/**
 * The error function erf(x) = (2/√π)∫₀ˣ e^(−t²) dt.
 *
 * By the series e^(−x²) Σ 2ⁿ x^(2n+1)/(2n+1)!!, all of whose terms have one sign: absolute error below 1e-15 for every finite x.
 * Source: NIST Digital Library of Mathematical Functions, eq. 7.6.2. Cost: about 15 + x² + 5x terms.
 */
export function erf(x: number): number {
  const size = Math.abs(x);
  if (size >= SATURATED) return Math.sign(x);
  const square = x * x;
  let term = x;
  let sum = x;
  for (let n = 1; Math.abs(term) > 1e-17 * Math.abs(sum); n++) {
    term *= (2 * square) / (2 * n + 1);
    sum += term;
  }
  return TWO_OVER_ROOT_PI * Math.exp(-square) * sum;
}
