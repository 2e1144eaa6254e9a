/**
 * Exponential damping of fields between two polarizable sites that come close.
 *
 * One site is smeared to the density (3a/4π) e^(−a u³) with u = R/(α₁α₂)^(1/6), R in Å and the polarizability volumes α in Å³.
 * With x = a u³ the field of a charge is multiplied by λ₃ = 1 − e^(−x), and in that of a dipole, 3(μ·u)u λ₅ − μ λ₃ over R³, stands
 * λ₅ = 1 − (1 + x) e^(−x). Both tend to 1 far away. A site without polarizability is a point: no damping.
 * Source: B. T. Thole, Chem. Phys. 59 (1981) 341 (exponential model); written with this exponent by P. Ren, J. W. Ponder, J. Phys.
 * Chem. B 107 (2003) 5933, eqs. 4–6.
 */

/** The width a of Ren and Ponder 2003, for sites that are whole small molecules or atoms alike. */
export const THOLE_WIDTH = 0.39;

/** x = a u³ = a R³/√(α₁α₂); infinite where either polarizability is 0. */
export function tholeArgument(distanceA: number, alpha1A3: number, alpha2A3: number, width = THOLE_WIDTH): number {
  const product = alpha1A3 * alpha2A3;
  return product > 0 ? (width * distanceA * distanceA * distanceA) / Math.sqrt(product) : Number.POSITIVE_INFINITY;
}

/** λ₃ = 1 − e^(−x). */
export function tholeCharge(x: number): number {
  return -Math.expm1(-x);
}

/** λ₅ = 1 − (1 + x) e^(−x). */
export function tholeDipole(x: number): number {
  return x > 700 ? 1 : -Math.expm1(-x) - x * Math.exp(-x);
}
