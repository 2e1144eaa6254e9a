import { COULOMB_KJ_A_PER_MOL } from './constants';
import { largestEigenvalue } from './largest-eigenvalue';
import { conjugateGradients } from './linear-solve';
import { THOLE_WIDTH, tholeArgument, tholeCharge, tholeDipole } from './thole-damping';

/** The polarizable points of a frame and which of them see each other. */
export interface PolarizableFrame {
  /** Net charges, e. */
  readonly chargesE: Float64Array;
  /** Permanent dipoles, x y z, e·Å. */
  readonly dipolesEA: Float64Array;
  /** Polarizability volumes, Å³; 0 for a point that takes no part but as a source. */
  readonly polarizabilitiesA3: Float64Array;
  /** The pairs, each once: numbers of their points. */
  readonly first: Uint32Array;
  readonly second: Uint32Array;
  /** For each pair the vector from its first to its second point (the nearest image, where the frame is periodic), x y z, Å. */
  readonly offsetsA: Float64Array;
  readonly permittivity: number;
  /** Thole's width; Infinity for no damping. */
  readonly tholeWidth?: number;
}

export type InductionResult =
  | {
      readonly ok: true;
      /** Induced dipoles, x y z, e·Å. */
      readonly inducedEA: Float64Array;
      /** Energy of induction, kJ/mol: −½ Σ μ_ind·E. Never positive. */
      readonly energyKJPerMol: number;
      /** The same without the induced dipoles acting on each other: −½ Σ α E². */
      readonly directKJPerMol: number;
      /** Sum over the pairs of what each would have by itself, without mutual action (Debye). */
      readonly pairSumKJPerMol: number;
      /** What the sum of pairs misses: energy − pairSum; of either sign. */
      readonly nonAdditiveKJPerMol: number;
      /** Largest eigenvalue of √α T √α: below 1 the dipoles are stable, near 1 they answer wildly. */
      readonly largestEigenvalue: number;
      /** Largest remainder of μ = α(E + T μ) over the largest induced dipole. */
      readonly remainder: number;
    }
  | { readonly ok: false; readonly reason: string };

/** Relative residual at which the search stops, and the remainder that must hold in the end. */
const TOLERANCE = 1e-13;
const REMAINDER = 1e-10;
const MOST_STEPS = 400;
/** A pair with 4α₁α₂ > R⁶ has no finite induced dipoles when it is not damped (J. Applequist et al., J. Am. Chem. Soc. 94 (1972) 2952). */
const CATASTROPHE = 'The polarizable points stand so close that their induced dipoles would grow without end';

/**
 * Induced dipoles of a whole frame, each in the field of all permanent charges and dipoles and of all other induced dipoles.
 *
 * Solves μ_i = α_i (E_i + Σ_j T_ij μ_j) with E_i the permanent field over ε_r and T_ij = [3λ₅ u u − λ₃]/(ε_r R³), damped as in
 * thole-damping.ts, by conjugate gradients on the symmetric (1 − √α T √α) x = √α E. The energy is −½ Σ μ_i·E_i. Where an eigenvalue of
 * √α T √α reaches 1 there is no minimum (polarization catastrophe): refused, as are coincident points and inputs that are not numbers.
 * Source: J. Applequist, J. R. Carl, K.-K. Fung, J. Am. Chem. Soc. 94 (1972) 2952, eqs. 2–5; energy: A. J. Stone, The Theory of
 * Intermolecular Forces, 2nd ed. (2013), eq. 9.1.7. Cost: a few dozen passes over the pairs (5 s for 3.7 million); 16 bytes a pair.
 */
export function inducedDipoles(frame: PolarizableFrame): InductionResult {
  const wrong = whatIsWrong(frame);
  if (wrong !== null) return { ok: false, reason: wrong };
  const { polarizabilitiesA3: alpha, first, second, offsetsA } = frame;
  const count = alpha.length;
  const width = frame.tholeWidth ?? THOLE_WIDTH;
  const charge3 = new Float64Array(first.length);
  const dipole5 = new Float64Array(first.length);
  const field = new Float64Array(3 * count);
  let pairSum = 0;
  for (let k = 0; k < first.length; k++) {
    const [x, y, z] = [offsetsA[3 * k]!, offsetsA[3 * k + 1]!, offsetsA[3 * k + 2]!];
    const r2 = x * x + y * y + z * z;
    const r = Math.sqrt(r2);
    const argument = tholeArgument(r, alpha[first[k]!]!, alpha[second[k]!]!, width);
    charge3[k] = tholeCharge(argument) / (r2 * r * frame.permittivity);
    dipole5[k] = (3 * tholeDipole(argument)) / (r2 * r2 * r * frame.permittivity);
    pairSum += addPermanentFields(frame, k, charge3[k]!, dipole5[k]!, field);
  }
  const root = new Float64Array(3 * count);
  for (let i = 0; i < 3 * count; i++) root[i] = Math.sqrt(alpha[Math.floor(i / 3)]!);
  const scaled = new Float64Array(3 * count);
  const applyTensor = (from: Float64Array, out: Float64Array): void => {
    for (let i = 0; i < 3 * count; i++) scaled[i] = root[i]! * from[i]!;
    out.fill(0);
    addDipoleFields(frame, charge3, dipole5, scaled, out);
    for (let i = 0; i < 3 * count; i++) out[i]! *= root[i]!;
  };
  const largest = largestEigenvalue(3 * count, applyTensor);
  if (!(largest < 1))
    return { ok: false, reason: `${CATASTROPHE} (eigenvalue ${largest.toPrecision(3)}, to stay below 1).` };
  const right = new Float64Array(3 * count);
  for (let i = 0; i < 3 * count; i++) right[i] = root[i]! * field[i]!;
  const solution = right.slice();
  const apply = (from: Float64Array, out: Float64Array): void => {
    applyTensor(from, out);
    for (let i = 0; i < 3 * count; i++) out[i] = from[i]! - out[i]!;
  };
  const end = conjugateGradients(apply, right, solution, TOLERANCE, MOST_STEPS);
  if (end === 'not positive') return { ok: false, reason: `${CATASTROPHE}.` };
  const induced = new Float64Array(3 * count);
  let energy = 0;
  let direct = 0;
  for (let i = 0; i < 3 * count; i++) {
    induced[i] = root[i]! * solution[i]!;
    energy -= 0.5 * induced[i]! * field[i]!;
    direct -= 0.5 * right[i]! * right[i]!;
  }
  const remainder = remainderOf(frame, charge3, dipole5, field, induced);
  if (!(remainder <= REMAINDER)) {
    return {
      ok: false,
      reason: `The induced dipoles did not settle in ${MOST_STEPS} steps (remainder ${remainder.toExponential(1)}).`,
    };
  }
  const unit = COULOMB_KJ_A_PER_MOL;
  return {
    ok: true,
    inducedEA: induced,
    energyKJPerMol: unit * energy,
    directKJPerMol: unit * direct,
    pairSumKJPerMol: unit * pairSum,
    nonAdditiveKJPerMol: unit * (energy - pairSum),
    largestEigenvalue: largest,
    remainder,
  };
}

function whatIsWrong(frame: PolarizableFrame): string | null {
  const count = frame.polarizabilitiesA3.length;
  for (const value of frame.polarizabilitiesA3) {
    if (!(value >= 0 && Number.isFinite(value))) return 'A polarizability is negative or not a number.';
  }
  if (frame.chargesE.length !== count || frame.dipolesEA.length !== 3 * count) return 'The lists differ in length.';
  if (frame.second.length !== frame.first.length || frame.offsetsA.length !== 3 * frame.first.length) {
    return 'The lists of pairs differ in length.';
  }
  if (!(frame.permittivity > 0 && Number.isFinite(frame.permittivity)))
    return 'The permittivity is not a positive number.';
  if (frame.tholeWidth !== undefined && !(frame.tholeWidth > 0)) return 'The width of the damping is not positive.';
  for (const list of [frame.chargesE, frame.dipolesEA, frame.offsetsA]) {
    for (const value of list) if (!Number.isFinite(value)) return 'A charge, dipole or position is not a number.';
  }
  for (let k = 0; k < frame.first.length; k++) {
    const [x, y, z] = [frame.offsetsA[3 * k]!, frame.offsetsA[3 * k + 1]!, frame.offsetsA[3 * k + 2]!];
    if (!(x * x + y * y + z * z > 0)) return 'Two polarizable points coincide.';
    if (frame.first[k]! >= count || frame.second[k]! >= count) return 'A pair names a point that is not there.';
  }
  return null;
}

/** Adds the permanent fields of pair k to both its points; returns its own −½(α₂E₁² + α₁E₂²), e²/Å. */
function addPermanentFields(
  frame: PolarizableFrame,
  k: number,
  charge3: number,
  dipole5: number,
  field: Float64Array,
): number {
  const { chargesE, dipolesEA, polarizabilitiesA3, offsetsA } = frame;
  const [i, j] = [frame.first[k]!, frame.second[k]!];
  const [x, y, z] = [offsetsA[3 * k]!, offsetsA[3 * k + 1]!, offsetsA[3 * k + 2]!];
  const fromI = dipole5 * (dipolesEA[3 * i]! * x + dipolesEA[3 * i + 1]! * y + dipolesEA[3 * i + 2]! * z);
  const fromJ = dipole5 * (dipolesEA[3 * j]! * x + dipolesEA[3 * j + 1]! * y + dipolesEA[3 * j + 2]! * z);
  const alongI = charge3 * chargesE[i]! + fromI;
  const alongJ = -charge3 * chargesE[j]! + fromJ;
  let squareI = 0;
  let squareJ = 0;
  for (let a = 0; a < 3; a++) {
    const r = offsetsA[3 * k + a]!;
    const atJ = alongI * r - charge3 * dipolesEA[3 * i + a]!;
    const atI = alongJ * r - charge3 * dipolesEA[3 * j + a]!;
    field[3 * j + a]! += atJ;
    field[3 * i + a]! += atI;
    squareJ += atJ * atJ;
    squareI += atI * atI;
  }
  return -0.5 * (polarizabilitiesA3[j]! * squareJ + polarizabilitiesA3[i]! * squareI);
}

/** Adds T μ, the fields of the dipoles `from` at each other, to `out`. */
function addDipoleFields(
  frame: PolarizableFrame,
  charge3: Float64Array,
  dipole5: Float64Array,
  from: Float64Array,
  out: Float64Array,
): void {
  const { first, second, offsetsA } = frame;
  for (let k = 0; k < first.length; k++) {
    const i = 3 * first[k]!;
    const j = 3 * second[k]!;
    const x = offsetsA[3 * k]!;
    const y = offsetsA[3 * k + 1]!;
    const z = offsetsA[3 * k + 2]!;
    const c = charge3[k]!;
    const alongI = dipole5[k]! * (from[i]! * x + from[i + 1]! * y + from[i + 2]! * z);
    const alongJ = dipole5[k]! * (from[j]! * x + from[j + 1]! * y + from[j + 2]! * z);
    out[j]! += alongI * x - c * from[i]!;
    out[j + 1]! += alongI * y - c * from[i + 1]!;
    out[j + 2]! += alongI * z - c * from[i + 2]!;
    out[i]! += alongJ * x - c * from[j]!;
    out[i + 1]! += alongJ * y - c * from[j + 1]!;
    out[i + 2]! += alongJ * z - c * from[j + 2]!;
  }
}

function remainderOf(
  frame: PolarizableFrame,
  charge3: Float64Array,
  dipole5: Float64Array,
  field: Float64Array,
  induced: Float64Array,
): number {
  const total = field.slice();
  addDipoleFields(frame, charge3, dipole5, induced, total);
  let worst = 0;
  let largest = 0;
  for (let i = 0; i < induced.length; i++) {
    const off = induced[i]! - frame.polarizabilitiesA3[Math.floor(i / 3)]! * total[i]!;
    worst = Math.max(worst, Math.abs(off));
    largest = Math.max(largest, Math.abs(induced[i]!));
  }
  return largest === 0 ? 0 : worst / largest;
}
