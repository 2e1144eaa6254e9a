import { DEBYE_E_A } from './constants';
import { eigen3 } from './symmetric3';

/** Root-mean-square thickness below which a fragment counts as flat (or a line) in that direction, Å: coordinate rounding. */
const FLAT_A = 0.02;

/**
 * Moves charges by the smallest change (least squares) so that they have the net charge and dipole asked for.
 *
 * `positionsA` holds x y z of `count` sites, `charges` (in and out) their starting charges in e; `dipoleEA` is the dipole
 * wanted about `centreA`, e·Å. With m the mean position, the change is δ_i = ΔQ/n + g·(r_i − m), and g solves
 * C g = Δμ − ΔQ(m − c), C = Σ(r − m)(r − m)ᵀ; directions in which the sites are thinner than 0.02 Å carry no change.
 * Returns false, leaving `charges` as they were, where such a direction would have to carry more than 2 % of the dipole and
 * more than 0.02 D: the dipole then leaves the plane or line of the sites. Cost: linear in the sites.
 */
export function fitCharges(
  count: number,
  positionsA: Float64Array,
  charges: Float64Array,
  netChargeE: number,
  dipoleEA: readonly [number, number, number],
  centreA: readonly [number, number, number],
): boolean {
  if (count === 0) return false;
  const mean = [0, 0, 0];
  let sum = 0;
  const missing = [dipoleEA[0], dipoleEA[1], dipoleEA[2]];
  for (let i = 0; i < count; i++) {
    const q = charges[i]!;
    sum += q;
    for (let a = 0; a < 3; a++) {
      const r = positionsA[3 * i + a]!;
      mean[a]! += r / count;
      missing[a]! -= q * (r - centreA[a as 0 | 1 | 2]);
    }
  }
  const extraCharge = netChargeE - sum;
  for (let a = 0; a < 3; a++) missing[a]! -= extraCharge * (mean[a]! - centreA[a as 0 | 1 | 2]);
  const spread = new Float64Array(6);
  for (let i = 0; i < count; i++) {
    const x = positionsA[3 * i]! - mean[0]!;
    const y = positionsA[3 * i + 1]! - mean[1]!;
    const z = positionsA[3 * i + 2]! - mean[2]!;
    spread[0]! += x * x;
    spread[1]! += x * y;
    spread[2]! += x * z;
    spread[3]! += y * y;
    spread[4]! += y * z;
    spread[5]! += z * z;
  }
  const { values, vectors } = eigen3(spread);
  const norm = Math.hypot(dipoleEA[0], dipoleEA[1], dipoleEA[2]);
  const tolerance = Math.max(0.02 * norm, 0.02 * DEBYE_E_A);
  const gradient = [0, 0, 0];
  for (let k = 0; k < 3; k++) {
    const component =
      vectors[3 * k]! * missing[0]! + vectors[3 * k + 1]! * missing[1]! + vectors[3 * k + 2]! * missing[2]!;
    if (values[k]! <= count * FLAT_A * FLAT_A) {
      if (Math.abs(component) > tolerance) return false;
      continue;
    }
    for (let a = 0; a < 3; a++) gradient[a]! += (vectors[3 * k + a]! * component) / values[k]!;
  }
  for (let i = 0; i < count; i++) {
    let change = extraCharge / count;
    for (let a = 0; a < 3; a++) change += gradient[a]! * (positionsA[3 * i + a]! - mean[a]!);
    charges[i]! += change;
  }
  return true;
}
