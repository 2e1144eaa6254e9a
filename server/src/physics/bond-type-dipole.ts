import { BOND_TYPES, type BondType, bondTypeOf } from './bond-types';
import { BOHR_A, DEBYE_E_A } from './constants';
import { COVALENT_RADIUS_A } from './elements';
import { erf } from './error-function';
import type { FragmentGraph } from './fragment-graph';
import { conjugateGradients, solveDense } from './linear-solve';

/** Up to this many bonds the equations are solved by elimination, beyond it by conjugate gradients. */
const DENSE_BONDS = 200;
const TOLERANCE = 1e-12;
/** Width of an atom's Gaussian charge over its covalent radius. */
const WIDTH = 1.6;
/** Hardness beyond that of the Gaussian charge, hartree. */
const HARDNESS_AU = 0.1;
/** What a bond holds against carrying charge, hartree; bonds of Li, Na and K hold much more. */
const BOND_HARDNESS_AU = 0.05;
const IONIC_HARDNESS_AU = 4;
const IONIC = [3, 11, 19];
/** Past this many widths a Gaussian charge acts as a point. */
const POINT = 6;

/**
 * Dipole of a molecule from its geometry, by charge carried along bonds and by atomic dipoles; an own fit, not a published scheme.
 *
 * Each bond carries the charge p that minimizes ½ qᵀJq + χᵀq + ½ Σ K p² with q = Tᵀp (T: bond by atom, +1 and −1): so
 * q = −Tᵀ(TJTᵀ + K)⁻¹Tχ, J_ij = erf(R/√(a_i² + a_j²))/R, J_ii = √(2/π)/a_i + 0.1, a = 1.6 r. Then μ = Σ q r + Σ_i d_i Σ_j (r_i − r_j)/r_ij over
 * the bonded j. χ and d go by element and bonds ({@link BOND_TYPES}). The charges carry the dipole and nothing else: they add to 0 in
 * every piece and are no atomic charges to show.
 *
 * `positionsA` x y z, Å; the dipole, e·Å, is written to `dipoleEA`. False where an atom has no type or the equations are singular.
 * Form: charge equilibration along bonds, R. A. Nistor et al., J. Chem. Phys. 125 (2006) 094108, eqs. 5–9. Fitted to dipole vectors of
 * molecules, measured in tests/reference/outside-dipole-estimates.test.ts. Cost: bonds³/3 up to 200 bonds, else some dozens of products
 * atoms²/2.
 */
export function bondTypeDipole(
  graph: FragmentGraph,
  elements: ArrayLike<number>,
  positionsA: Float64Array,
  dipoleEA: Float64Array,
): boolean {
  const { count, bonds } = graph;
  const types: BondType[] = [];
  for (let i = 0; i < count; i++) {
    const type = bondTypeOf(graph, elements, i);
    if (type === null) return false;
    types.push(type);
  }
  const coulomb = coulombMatrix(count, elements, positionsA);
  const carried = carriedCharges(graph, elements, coulomb, types);
  if (carried === null) return false;
  dipoleEA.fill(0, 0, 3);
  for (let b = 0; 2 * b < bonds.length; b++) {
    const [i, j] = [bonds[2 * b]!, bonds[2 * b + 1]!];
    const x = positionsA[3 * i]! - positionsA[3 * j]!;
    const y = positionsA[3 * i + 1]! - positionsA[3 * j + 1]!;
    const z = positionsA[3 * i + 2]! - positionsA[3 * j + 2]!;
    const ends = DEBYE_E_A * (BOND_TYPES[types[i]!][1] - BOND_TYPES[types[j]!][1]);
    const weight = carried[b]! + ends / Math.sqrt(x * x + y * y + z * z);
    dipoleEA[0]! += weight * x;
    dipoleEA[1]! += weight * y;
    dipoleEA[2]! += weight * z;
  }
  return Number.isFinite(dipoleEA[0]! + dipoleEA[1]! + dipoleEA[2]!);
}

/** The lower half of J, row by row, hartree. */
function coulombMatrix(count: number, elements: ArrayLike<number>, positionsA: Float64Array): Float64Array {
  const matrix = new Float64Array((count * (count + 1)) / 2);
  for (let i = 0, k = 0; i < count; i++) {
    const width = (WIDTH * COVALENT_RADIUS_A[elements[i]!]!) / BOHR_A;
    for (let j = 0; j < i; j++, k++) {
      const other = (WIDTH * COVALENT_RADIUS_A[elements[j]!]!) / BOHR_A;
      const x = positionsA[3 * i]! - positionsA[3 * j]!;
      const y = positionsA[3 * i + 1]! - positionsA[3 * j + 1]!;
      const z = positionsA[3 * i + 2]! - positionsA[3 * j + 2]!;
      const bohr = Math.sqrt(x * x + y * y + z * z) / BOHR_A;
      const widths = Math.sqrt(width * width + other * other);
      matrix[k] = bohr >= POINT * widths ? 1 / bohr : erf(bohr / widths) / bohr;
    }
    matrix[k++] = Math.sqrt(2 / Math.PI) / width + HARDNESS_AU;
  }
  return matrix;
}

/** The charge that each bond carries to its first atom, e. */
function carriedCharges(
  graph: FragmentGraph,
  elements: ArrayLike<number>,
  coulomb: Float64Array,
  types: readonly BondType[],
): Float64Array | null {
  const { count, bonds } = graph;
  const n = bonds.length / 2;
  const right = new Float64Array(n);
  const own = new Float64Array(n);
  for (let b = 0; b < n; b++) {
    const [i, j] = [bonds[2 * b]!, bonds[2 * b + 1]!];
    right[b] = BOND_TYPES[types[j]!][0] - BOND_TYPES[types[i]!][0];
    own[b] = IONIC.includes(elements[i]!) || IONIC.includes(elements[j]!) ? IONIC_HARDNESS_AU : BOND_HARDNESS_AU;
  }
  if (n <= DENSE_BONDS) {
    const at = (i: number, j: number) => coulomb[i >= j ? (i * (i + 1)) / 2 + j : (j * (j + 1)) / 2 + i]!;
    const matrix = new Float64Array(n * n);
    for (let b = 0; b < n; b++) {
      const [i, j] = [bonds[2 * b]!, bonds[2 * b + 1]!];
      for (let c = 0; c < n; c++) {
        const [k, l] = [bonds[2 * c]!, bonds[2 * c + 1]!];
        matrix[b * n + c] = at(i, k) - at(i, l) - at(j, k) + at(j, l);
      }
      matrix[b * n + b]! += own[b]!;
    }
    return solveDense(n, matrix, right) ? right : null;
  }
  const charges = new Float64Array(count);
  const potential = new Float64Array(count);
  const apply = (from: Float64Array, out: Float64Array): void => {
    charges.fill(0);
    for (let b = 0; b < n; b++) {
      charges[bonds[2 * b]!]! += from[b]!;
      charges[bonds[2 * b + 1]!]! -= from[b]!;
    }
    potential.fill(0);
    for (let i = 0, k = 0; i < count; i++) {
      let sum = 0;
      for (let j = 0; j < i; j++, k++) {
        sum += coulomb[k]! * charges[j]!;
        potential[j]! += coulomb[k]! * charges[i]!;
      }
      potential[i]! += sum + coulomb[k++]! * charges[i]!;
    }
    for (let b = 0; b < n; b++) {
      out[b] = potential[bonds[2 * b]!]! - potential[bonds[2 * b + 1]!]! + own[b]! * from[b]!;
    }
  };
  const carried = new Float64Array(n);
  return conjugateGradients(apply, right, carried, TOLERANCE, 20 * n) === 'converged' ? carried : null;
}
