/** Steps after which the search gives what it has. */
const MOST_STEPS = 60;
/** Relative change of the estimate at which it counts as settled. */
const SETTLED = 1e-4;

/**
 * The largest eigenvalue of a symmetric operator, from below, by Lanczos steps from a fixed scattered start.
 *
 * `apply(from, out)` writes the product. The estimate never exceeds the true value; it settles to about 1e-4. 0 for an empty operator.
 * Source: C. Lanczos, J. Res. Natl. Bur. Stand. 45 (1950) 255; the tridiagonal's eigenvalue by bisection (Sturm counts, G. H. Golub,
 * C. F. Van Loan, Matrix Computations, 4th ed., §8.4). Cost: up to 60 products.
 */
export function largestEigenvalue(n: number, apply: (from: Float64Array, out: Float64Array) => void): number {
  if (n === 0) return 0;
  const current = new Float64Array(n);
  let state = 0x9e3779b9;
  for (let i = 0; i < n; i++) {
    state = (Math.imul(state, 1664525) + 1013904223) | 0;
    current[i] = state / 2 ** 31;
  }
  scale(current, 1 / norm(current));
  const previous = new Float64Array(n);
  const product = new Float64Array(n);
  const diagonal: number[] = [];
  const beside: number[] = [];
  let estimate = 0;
  for (let step = 0; step < Math.min(n, MOST_STEPS); step++) {
    apply(current, product);
    let own = 0;
    for (let i = 0; i < n; i++) own += current[i]! * product[i]!;
    const last = step === 0 ? 0 : beside[step - 1]!;
    for (let i = 0; i < n; i++) product[i]! -= own * current[i]! + last * previous[i]!;
    diagonal.push(own);
    const next = largestOfTridiagonal(diagonal, beside);
    const settled = step > 4 && Math.abs(next - estimate) <= SETTLED * Math.abs(next);
    estimate = next;
    const length = norm(product);
    if (settled || !(length > 1e-14 * Math.abs(estimate))) break;
    beside.push(length);
    previous.set(current);
    for (let i = 0; i < n; i++) current[i] = product[i]! / length;
  }
  return estimate;
}

function norm(vector: Float64Array): number {
  let sum = 0;
  for (const value of vector) sum += value * value;
  return Math.sqrt(sum);
}

function scale(vector: Float64Array, factor: number): void {
  for (let i = 0; i < vector.length; i++) vector[i]! *= factor;
}

function largestOfTridiagonal(diagonal: readonly number[], beside: readonly number[]): number {
  let low = Number.NEGATIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < diagonal.length; i++) {
    const reach = Math.abs(beside[i - 1] ?? 0) + (i < diagonal.length - 1 ? Math.abs(beside[i] ?? 0) : 0);
    low = Math.max(low, diagonal[i]!);
    high = Math.max(high, diagonal[i]! + reach);
  }
  for (let cut = 0; cut < 60 && high - low > 1e-12 * Math.max(1, Math.abs(high)); cut++) {
    const middle = (low + high) / 2;
    if (hasAbove(diagonal, beside, middle)) low = middle;
    else high = middle;
  }
  return high;
}

/** Whether the tridiagonal matrix has an eigenvalue above `value`: a positive pivot of T − value. */
function hasAbove(diagonal: readonly number[], beside: readonly number[], value: number): boolean {
  let pivot = diagonal[0]! - value;
  for (let i = 1; i < diagonal.length && !(pivot > 0); i++) {
    const safe = pivot === 0 ? -1e-300 : pivot;
    pivot = diagonal[i]! - value - (beside[i - 1]! * beside[i - 1]!) / safe;
  }
  return pivot > 0;
}
