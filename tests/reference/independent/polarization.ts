import { ATOMIC_UNIT, COULOMB } from './constants.js';
import { element, GHOST } from './elements.js';
import { dot, scale } from './linear.js';
import { gaussLegendre } from './thermal.js';
import type { Fragment, Vec } from './types.js';

/**
 * Induction and dispersion in atomic units, from the physics behind the formulas rather than from the formulas.
 *
 * Induction: Thole's exponential model (Chem. Phys. 59 (1981) 341; a = 0.39: Ren and Ponder, J. Phys. Chem. B 107
 * (2003) 5933) spreads a charge over a cloud that holds 1 − exp(−a r³/√(α₁α₂)) of it within r. Gauss's law makes that
 * share of Coulomb's field the field of the charge; a point dipole is the limit of two such charges, so its field is
 * the derivative of theirs, taken exactly with dual numbers. The damped dipole tensor is never written out.
 *
 * Dispersion: two oscillators with N electrons each, α(iω) = α ω₀²/(ω₀² + ω²) with α ω₀² = N (the sum rule), and the
 * integral of Casimir and Polder, C₆ = (3/π) ∫ α₁(iω) α₂(iω) dω. For such oscillators it is Slater and Kirkwood's.
 */

const THOLE = 0.39;

/** One hartree, kJ/mol. */
const HARTREE = COULOMB / ATOMIC_UNIT;

/** Energy of what the permanent moments induce in each other, in vacuum, kJ/mol; `vector` from the first centre on. */
export function inductionEnergy(first: Fragment, second: Fragment, vector: Vec): number | null {
  const [alpha1, alpha2] = [volume(first), volume(second)];
  if (alpha1 === null || alpha2 === null || first.dipole === null || second.dipole === null) return null;
  const r = scale(vector, 1 / ATOMIC_UNIT);
  const cloud = Math.sqrt(alpha1 * alpha2);
  const atSecond = fieldOf(first.charge, scale(first.dipole, 1 / ATOMIC_UNIT), r, cloud);
  const atFirst = fieldOf(second.charge, scale(second.dipole, 1 / ATOMIC_UNIT), scale(r, -1), cloud);
  return (-HARTREE / 2) * (alpha2 * dot(atSecond, atSecond) + alpha1 * dot(atFirst, atFirst));
}

/** Slater–Kirkwood dispersion, undamped, kJ/mol. */
export function dispersionEnergy(first: Fragment, second: Fragment, distanceA: number): number | null {
  const [alpha1, alpha2] = [volume(first), volume(second)];
  if (alpha1 === null || alpha2 === null) return null;
  const c6 = casimirPolder(alpha1, electronsOf(first), alpha2, electronsOf(second));
  return -HARTREE * c6 * (ATOMIC_UNIT / distanceA) ** 6;
}

/** Polarizability in cubic bohr. */
function volume(fragment: Fragment): number | null {
  return fragment.polarizability === null ? null : fragment.polarizability / ATOMIC_UNIT ** 3;
}

/** Electrons that take part in dispersion; ghosts have none. */
export function electronsOf(fragment: Fragment): number {
  const counted = fragment.symbols.filter((symbol) => symbol !== GHOST);
  return counted.reduce((sum, symbol) => sum + element(symbol).electrons, 0);
}

/** A number and its derivative along one direction. */
interface Dual {
  value: number;
  slope: number;
}

const sum = (a: Dual, b: Dual): Dual => ({ value: a.value + b.value, slope: a.slope + b.slope });
const product = (a: Dual, b: Dual): Dual => ({
  value: a.value * b.value,
  slope: a.slope * b.value + a.value * b.slope,
});
const power = (a: Dual, n: number): Dual => ({ value: a.value ** n, slope: n * a.value ** (n - 1) * a.slope });
/** 1 − e^(−x). */
const share = (x: Dual): Dual => ({ value: -Math.expm1(-x.value), slope: Math.exp(-x.value) * x.slope });

/** Field at `r` from a charge and a dipole, each spread over a cloud of the given volume (0: a point). */
export function fieldOf(charge: number, dipole: Vec, r: Vec, cloud: number): Vec {
  // Moving the point against the dipole is moving the charge along it.
  const place = r.map((x, k): Dual => ({ value: x, slope: -dipole[k] }));
  const square = place.map((x) => product(x, x)).reduce(sum);
  const within: Dual =
    cloud === 0 ? { value: 1, slope: 0 } : share(product({ value: THOLE / cloud, slope: 0 }, power(square, 3 / 2)));
  const perLength = product(within, power(square, -3 / 2));
  return place.map((x) => {
    const ofUnitCharge = product(x, perLength);
    return charge * ofUnitCharge.value + ofUnitCharge.slope;
  }) as Vec;
}

const POINTS = gaussLegendre(200);

/** C₆ in atomic units; ω = √(ω₁ω₂) tan(θ) brings the half-line to a finite, smooth interval. */
export function casimirPolder(alpha1: number, electrons1: number, alpha2: number, electrons2: number): number {
  if (alpha1 * electrons1 * alpha2 * electrons2 === 0) return 0;
  const oscillator = (alpha: number, own: number, omega: number) => alpha / (1 + (omega / own) ** 2);
  const own1 = Math.sqrt(electrons1 / alpha1);
  const own2 = Math.sqrt(electrons2 / alpha2);
  const middle = Math.sqrt(own1 * own2);
  let integral = 0;
  for (const { node, weight } of POINTS) {
    const theta = (Math.PI / 4) * (1 + node);
    const omega = middle * Math.tan(theta);
    const stretch = middle / Math.cos(theta) ** 2;
    integral += weight * stretch * oscillator(alpha1, own1, omega) * oscillator(alpha2, own2, omega);
  }
  return (3 / Math.PI) * (Math.PI / 4) * integral;
}
