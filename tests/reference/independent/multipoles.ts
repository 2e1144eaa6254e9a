import { COULOMB } from './constants.js';
import { add, distance, dot, length, subtract } from './linear.js';
import type { Matrix, Vec } from './types.js';

/**
 * Multipole energies with multipoles written as derivative operators. A charge distribution seen from afar is
 * (Q ∓ μ·∇ + ⅓ Θ:∇∇) acting on 1/R (Stone, The Theory of Intermolecular Forces, chapter 3); two of them multiply to
 * a polynomial in ∂x, ∂y, ∂z. The derivatives of 1/R follow from the recursion of McMurchie and Davidson
 * (J. Comput. Phys. 26 (1978) 218) in its point-charge limit, so no interaction tensor is ever written out.
 */

/** One term c · ∂x^t ∂y^u ∂z^v. */
interface Term {
  c: number;
  powers: [number, number, number];
}

/** ∂x^t ∂y^u ∂z^v (1/R) at R⃗. */
export function derivativeOfInverse(t: number, u: number, v: number, r: Vec): number {
  return recursion([t, u, v], 0, r);
}

function recursion(powers: [number, number, number], n: number, r: Vec): number {
  const axis = powers.findIndex((p) => p > 0);
  if (axis < 0) return ((-1) ** n * oddFactorial(2 * n - 1)) / length(r) ** (2 * n + 1);
  const lower = (by: number): [number, number, number] => {
    const copy: [number, number, number] = [...powers];
    copy[axis] -= by;
    return copy;
  };
  const p = powers[axis] - 1;
  return r[axis] * recursion(lower(1), n + 1, r) + (p > 0 ? p * recursion(lower(2), n + 1, r) : 0);
}

/** 1·3·5·…·n, 1 for n < 2. */
function oddFactorial(n: number): number {
  return n < 2 ? 1 : n * oddFactorial(n - 2);
}

export const chargeOperator = (charge: number): Term[] => [{ c: charge, powers: [0, 0, 0] }];

/** `side` is −1 for the multipole at the tail of R⃗, +1 for the one at its head. */
export function dipoleOperator(dipole: Vec, side: 1 | -1): Term[] {
  return [0, 1, 2].map((a) => ({ c: side * dipole[a], powers: unitPowers(a) }));
}

export function quadrupoleOperator(theta: Matrix): Term[] {
  const terms: Term[] = [];
  for (let a = 0; a < 3; a++) {
    for (let b = 0; b < 3; b++) {
      terms.push({ c: theta[a][b] / 3, powers: add(unitPowers(a), unitPowers(b)) });
    }
  }
  return terms;
}

const unitPowers = (a: number): Vec => [a === 0 ? 1 : 0, a === 1 ? 1 : 0, a === 2 ? 1 : 0];

/** Energy in vacuum, kJ/mol. */
export function operatorEnergy(first: Term[], second: Term[], r: Vec): number {
  let sum = 0;
  for (const a of first) {
    for (const b of second) {
      if (a.c === 0 || b.c === 0) continue;
      const [t, u, v] = add(a.powers, b.powers);
      sum += a.c * b.c * derivativeOfInverse(t, u, v, r);
    }
  }
  return COULOMB * sum;
}

/** A place with a charge and perhaps a point dipole. */
export interface Site {
  position: Vec;
  charge: number;
  dipole: Vec;
}

/** Energy of two sets of sites in vacuum, the second moved by `shift`, kJ/mol. */
export function siteEnergy(first: Site[], second: Site[], shift: Vec): number {
  let sum = 0;
  for (const a of first) {
    for (const b of second) {
      const place = add(b.position, shift);
      if (dot(a.dipole, a.dipole) === 0 && dot(b.dipole, b.dipole) === 0) {
        sum += (COULOMB * a.charge * b.charge) / distance(a.position, place);
        continue;
      }
      const tail = [...chargeOperator(a.charge), ...dipoleOperator(a.dipole, -1)];
      const head = [...chargeOperator(b.charge), ...dipoleOperator(b.dipole, 1)];
      sum += operatorEnergy(tail, head, subtract(place, a.position));
    }
  }
  return sum;
}

export function chargeSites(positions: Vec[], charges: number[]): Site[] {
  return positions.map((position, i) => ({ position, charge: charges[i], dipole: [0, 0, 0] }));
}
