/** Eigenvalues (ascending order not guaranteed) and eigenvectors of a symmetric 3×3 matrix. */
export interface Eigen3 {
  readonly values: Float64Array;
  /** Row k holds the unit eigenvector of `values[k]`. */
  readonly vectors: Float64Array;
}

/**
 * Diagonalizes a symmetric matrix given as xx xy xz yy yz zz by cyclic Jacobi rotations.
 * Source: C. G. J. Jacobi, J. Reine Angew. Math. 30 (1846) 51. Converges to rounding in a few sweeps for any finite input.
 */
export function eigen3(packed: ArrayLike<number>): Eigen3 {
  const a = [
    [packed[0]!, packed[1]!, packed[2]!],
    [packed[1]!, packed[3]!, packed[4]!],
    [packed[2]!, packed[4]!, packed[5]!],
  ];
  const v = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ];
  for (let sweep = 0; sweep < 40; sweep++) {
    const off = a[0]![1]! ** 2 + a[0]![2]! ** 2 + a[1]![2]! ** 2;
    const scale = a[0]![0]! ** 2 + a[1]![1]! ** 2 + a[2]![2]! ** 2;
    if (off <= 1e-34 * scale || off === 0) break;
    for (const [p, q] of [
      [0, 1],
      [0, 2],
      [1, 2],
    ] as const) {
      const apq = a[p]![q]!;
      if (apq === 0) continue;
      const theta = (a[q]![q]! - a[p]![p]!) / (2 * apq);
      const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
      const c = 1 / Math.sqrt(t * t + 1);
      const s = t * c;
      for (let k = 0; k < 3; k++) {
        const akp = a[k]![p]!;
        const akq = a[k]![q]!;
        a[k]![p] = c * akp - s * akq;
        a[k]![q] = s * akp + c * akq;
      }
      for (let k = 0; k < 3; k++) {
        const apk = a[p]![k]!;
        const aqk = a[q]![k]!;
        a[p]![k] = c * apk - s * aqk;
        a[q]![k] = s * apk + c * aqk;
      }
      for (const row of v) {
        const vp = row[p]!;
        const vq = row[q]!;
        row[p] = c * vp - s * vq;
        row[q] = s * vp + c * vq;
      }
    }
  }
  const vectors = new Float64Array(9);
  for (let k = 0; k < 3; k++) for (let i = 0; i < 3; i++) vectors[3 * k + i] = v[i]![k]!;
  return { values: Float64Array.of(a[0]![0]!, a[1]![1]!, a[2]![2]!), vectors };
}
