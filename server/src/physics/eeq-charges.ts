import { BOHR_A } from './constants';
import { EEQ_ROWS } from './eeq-parameters';
import { erf } from './error-function';
import { conjugateGradients, solveDense } from './linear-solve';

/** Up to this many atoms the equations are solved by elimination, beyond it by conjugate gradients. */
export const EEQ_DENSE_ATOMS = 200;
/** Beyond this many atoms no charges are worked out: their matrix (n²/2 numbers) would fill the memory. */
export const EEQ_MOST_ATOMS = 2000;
/** Relative residual at which the conjugate gradients stop. */
export const EEQ_TOLERANCE = 1e-12;

/** Steepness of the step that counts a neighbour. */
const STEEPNESS = 7.5;
/** Covalent distances are stretched by this before they are compared. */
const STRETCH = 4 / 3;
/** No atom counts more neighbours than about this many. */
const CAP = 8;
/** Past this many widths a Gaussian charge acts as a point. */
const POINT = 6;

/** Whether the EEQ model has parameters of this element: hydrogen to iodine. */
export function hasEeqParameters(z: number): boolean {
  return z >= 1 && z <= EEQ_ROWS.length;
}

/**
 * Atomic charges q (e) by electronegativity equilibration of Gaussian charges, written to `chargesE`.
 *
 * Minimizes Σ (χ_i − κ_i√N_i) q_i + ½ Σ A_ij q_i q_j at Σ q = Q, with A_ii = η_i + √(2/π)/a_i, A_ij = erf(R/√(a_i² + a_j²))/R and the
 * coordination number N_i = Σ ½[1 + erf(−7.5(R/s − 1))], s = (4/3)(r_i + r_j), capped at 8; bohr and hartree inside.
 * `elements` are atomic numbers (each with parameters), `positionsA` x y z in Å, `netChargeE` Q in e. The sum of the charges is Q to
 * rounding. Returns null, or a sentence that says why there are no charges.
 * Source: E. Caldeweyher et al., J. Chem. Phys. 150 (2019) 154122, eqs. 6–9 and appendix. Cost: n³/3 up to 200 atoms, else some
 * dozens of products n²/2.
 */
export function eeqCharges(
  count: number,
  elements: ArrayLike<number>,
  positionsA: Float64Array,
  netChargeE: number,
  chargesE: Float64Array,
): string | null {
  if (count > EEQ_MOST_ATOMS)
    return `${count} atoms are more than the ${EEQ_MOST_ATOMS} whose charges can be equilibrated.`;
  const matrix = new Float64Array((count * (count + 1)) / 2);
  const coordination = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const [, , hardness, , width, radius] = EEQ_ROWS[elements[i]! - 1]!;
    const row = (i * (i + 1)) / 2;
    matrix[row + i] = hardness + Math.sqrt(2 / Math.PI) / width;
    for (let j = 0; j < i; j++) {
      const [, , , , otherWidth, otherRadius] = EEQ_ROWS[elements[j]! - 1]!;
      const x = positionsA[3 * i]! - positionsA[3 * j]!;
      const y = positionsA[3 * i + 1]! - positionsA[3 * j + 1]!;
      const z = positionsA[3 * i + 2]! - positionsA[3 * j + 2]!;
      const distance = Math.sqrt(x * x + y * y + z * z);
      const bond = STRETCH * (radius + otherRadius);
      const step = 0.5 * (1 + erf(-STEEPNESS * (distance / bond - 1)));
      coordination[i]! += step;
      coordination[j]! += step;
      const bohr = distance / BOHR_A;
      const widths = Math.sqrt(width * width + otherWidth * otherWidth);
      matrix[row + j] = bohr >= POINT * widths ? 1 / bohr : erf(bohr / widths) / bohr;
    }
  }
  const field = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const [, electronegativity, , slope] = EEQ_ROWS[elements[i]! - 1]!;
    const neighbours = Math.log1p(Math.exp(CAP)) - Math.log1p(Math.exp(CAP - coordination[i]!));
    field[i] = slope * Math.sqrt(Math.max(0, neighbours)) - electronegativity;
  }
  const done =
    count <= EEQ_DENSE_ATOMS
      ? solveBordered(count, matrix, field, netChargeE, chargesE)
      : solveIteratively(count, matrix, field, netChargeE, chargesE);
  return done ? null : 'The charge equations have no unique solution for this arrangement of atoms.';
}

/** Charges and the Lagrange multiplier together, by elimination. */
function solveBordered(
  count: number,
  matrix: Float64Array,
  field: Float64Array,
  netChargeE: number,
  chargesE: Float64Array,
): boolean {
  const n = count + 1;
  const full = new Float64Array(n * n);
  const right = new Float64Array(n);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j <= i; j++) {
      const value = matrix[(i * (i + 1)) / 2 + j]!;
      full[i * n + j] = value;
      full[j * n + i] = value;
    }
    full[i * n + count] = 1;
    full[count * n + i] = 1;
    right[i] = field[i]!;
  }
  right[count] = netChargeE;
  if (!solveDense(n, full, right)) return false;
  for (let i = 0; i < count; i++) chargesE[i] = right[i]!;
  return true;
}

/** A x = field and A y = 1 by conjugate gradients; q = x − λ y with λ from the net charge. */
function solveIteratively(
  count: number,
  matrix: Float64Array,
  field: Float64Array,
  netChargeE: number,
  chargesE: Float64Array,
): boolean {
  const apply = (direction: Float64Array, out: Float64Array): void => {
    out.fill(0);
    for (let i = 0, k = 0; i < count; i++) {
      const own = direction[i]!;
      let sum = 0;
      for (let j = 0; j < i; j++, k++) {
        const value = matrix[k]!;
        sum += value * direction[j]!;
        out[j]! += value * own;
      }
      out[i]! += sum + matrix[k++]! * own;
    }
  };
  const ones = new Float64Array(count).fill(1);
  const y = new Float64Array(count);
  chargesE.fill(0, 0, count);
  const x = chargesE.subarray(0, count);
  if (conjugateGradients(apply, field, x, EEQ_TOLERANCE, 20 * count) !== 'converged') return false;
  if (conjugateGradients(apply, ones, y, EEQ_TOLERANCE, 20 * count) !== 'converged') return false;
  let sumX = 0;
  let sumY = 0;
  for (let i = 0; i < count; i++) {
    sumX += x[i]!;
    sumY += y[i]!;
  }
  const multiplier = (sumX - netChargeE) / sumY;
  for (let i = 0; i < count; i++) x[i]! -= multiplier * y[i]!;
  return Number.isFinite(multiplier);
}
