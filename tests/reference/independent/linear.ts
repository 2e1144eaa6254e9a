import type { Matrix, Vec } from './types.js';

/** Plain vector arithmetic, and the eigenvectors of a symmetric 3×3 matrix. */

export const add = (a: Vec, b: Vec): Vec => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const subtract = (a: Vec, b: Vec): Vec => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const scale = (a: Vec, s: number): Vec => [a[0] * s, a[1] * s, a[2] * s];
export const dot = (a: Vec, b: Vec): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const length = (a: Vec): number => Math.sqrt(dot(a, a));
export const distance = (a: Vec, b: Vec): number => length(subtract(a, b));
export const cross = (a: Vec, b: Vec): Vec => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

export function mean(points: Vec[]): Vec {
  let sum: Vec = [0, 0, 0];
  for (const point of points) sum = add(sum, point);
  return scale(sum, 1 / points.length);
}

/** Coefficients of `v` in the basis of three (not necessarily orthogonal) vectors, by Cramer's rule. */
export function coefficients(v: Vec, basis: Vec[]): Vec {
  const [a, b, c] = basis as [Vec, Vec, Vec];
  const volume = dot(a, cross(b, c));
  return [dot(v, cross(b, c)) / volume, dot(v, cross(c, a)) / volume, dot(v, cross(a, b)) / volume];
}

/** Eigenvalues and unit eigenvectors by cyclic Jacobi rotations (Golub and Van Loan, section 8.5). */
export function eigen(symmetric: Matrix): { value: number; vector: Vec }[] {
  const a = symmetric.map((row) => [...row]);
  const v = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ];
  for (let sweep = 0; sweep < 60; sweep++) {
    for (const [p, q] of [
      [0, 1],
      [0, 2],
      [1, 2],
    ] as const) {
      if (a[p][q] === 0) continue;
      const angle = 0.5 * Math.atan2(2 * a[p][q], a[q][q] - a[p][p]);
      const cos = Math.cos(angle);
      const sin = Math.sin(angle);
      for (let k = 0; k < 3; k++) {
        const akp = a[k][p];
        const akq = a[k][q];
        a[k][p] = cos * akp - sin * akq;
        a[k][q] = sin * akp + cos * akq;
      }
      for (let k = 0; k < 3; k++) {
        const apk = a[p][k];
        const aqk = a[q][k];
        a[p][k] = cos * apk - sin * aqk;
        a[q][k] = sin * apk + cos * aqk;
        const vkp = v[k][p];
        const vkq = v[k][q];
        v[k][p] = cos * vkp - sin * vkq;
        v[k][q] = sin * vkp + cos * vkq;
      }
    }
  }
  return [0, 1, 2].map((k) => ({ value: a[k][k], vector: [v[0][k], v[1][k], v[2][k]] as Vec }));
}
