/** Below this ratio of a pivot to the largest element of the matrix the system counts as singular. */
const SINGULAR = 1e-13;

/**
 * Solves the dense system A x = b by elimination with row pivoting; both `matrix` (n × n, row by row) and `right` are used up, and
 * `right` becomes x. Returns false where A is singular to rounding or not finite; `right` is then of no use.
 * Source: G. H. Golub, C. F. Van Loan, Matrix Computations, 4th ed. (2013), alg. 3.4.1. Cost: n³/3 multiplications.
 */
export function solveDense(n: number, matrix: Float64Array, right: Float64Array): boolean {
  let scale = 0;
  for (let k = 0; k < n * n; k++) scale = Math.max(scale, Math.abs(matrix[k]!));
  if (!(scale > 0 && Number.isFinite(scale))) return n === 0;
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let row = column + 1; row < n; row++) {
      if (Math.abs(matrix[row * n + column]!) > Math.abs(matrix[pivot * n + column]!)) pivot = row;
    }
    if (!(Math.abs(matrix[pivot * n + column]!) > SINGULAR * scale)) return false;
    if (pivot !== column) swapRows(n, matrix, right, pivot, column);
    const inverse = 1 / matrix[column * n + column]!;
    for (let row = column + 1; row < n; row++) {
      const factor = matrix[row * n + column]! * inverse;
      if (factor === 0) continue;
      for (let k = column + 1; k < n; k++) matrix[row * n + k]! -= factor * matrix[column * n + k]!;
      right[row]! -= factor * right[column]!;
    }
  }
  for (let row = n - 1; row >= 0; row--) {
    let value = right[row]!;
    for (let k = row + 1; k < n; k++) value -= matrix[row * n + k]! * right[k]!;
    right[row] = value / matrix[row * n + row]!;
    if (!Number.isFinite(right[row]!)) return false;
  }
  return true;
}

function swapRows(n: number, matrix: Float64Array, right: Float64Array, one: number, two: number): void {
  for (let k = 0; k < n; k++) {
    const kept = matrix[one * n + k]!;
    matrix[one * n + k] = matrix[two * n + k]!;
    matrix[two * n + k] = kept;
  }
  const kept = right[one]!;
  right[one] = right[two]!;
  right[two] = kept;
}

/** How a conjugate-gradient search ended. */
export type ConjugateGradientEnd = 'converged' | 'not positive' | 'slow';

/**
 * Solves A x = b for a symmetric positive definite A given as a product `apply(p, out)`; `solution` holds the first guess and
 * becomes x. Ends when |b − A x| ≤ `tolerance`·|b|. `not positive`: a direction of no or negative curvature was met, so A has an
 * eigenvalue ≤ 0; `slow`: `limit` steps did not do.
 * Source: M. R. Hestenes, E. Stiefel, J. Res. Natl. Bur. Stand. 49 (1952) 409, eqs. 3:1. Cost: one product a step.
 */
export function conjugateGradients(
  apply: (direction: Float64Array, out: Float64Array) => void,
  right: Float64Array,
  solution: Float64Array,
  tolerance: number,
  limit: number,
): ConjugateGradientEnd {
  const n = right.length;
  const residual = new Float64Array(n);
  const product = new Float64Array(n);
  apply(solution, product);
  let square = 0;
  let goal = 0;
  for (let i = 0; i < n; i++) {
    residual[i] = right[i]! - product[i]!;
    square += residual[i]! * residual[i]!;
    goal += right[i]! * right[i]!;
  }
  goal *= tolerance * tolerance;
  const direction = residual.slice();
  for (let step = 0; step < limit && square > goal; step++) {
    apply(direction, product);
    let curvature = 0;
    for (let i = 0; i < n; i++) curvature += direction[i]! * product[i]!;
    if (!(curvature > 0)) return 'not positive';
    const length = square / curvature;
    let next = 0;
    for (let i = 0; i < n; i++) {
      solution[i]! += length * direction[i]!;
      residual[i]! -= length * product[i]!;
      next += residual[i]! * residual[i]!;
    }
    const turn = next / square;
    square = next;
    for (let i = 0; i < n; i++) direction[i] = residual[i]! + turn * direction[i]!;
  }
  return square <= goal ? 'converged' : 'slow';
}
