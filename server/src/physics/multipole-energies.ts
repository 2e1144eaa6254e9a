/**
 * Energies of two multipoles in a fixed arrangement, in e²/Å (multiply by k_e/ε_r for kJ/mol).
 *
 * R runs from centre 1 to centre 2, u = R/R. Each law is the contraction of the interaction tensor T_ab.. = ∇_a∇_b..(1/R)
 * with the moments, written out for traceless quadrupoles Θ_ab = ½ Σ q(3 r_a r_b − r² δ_ab).
 * Source: A. J. Stone, The Theory of Intermolecular Forces, 2nd ed. (2013), ch. 3 (interaction tensors and signs).
 *
 * Moments are read from packed arrays at an offset: dipoles x y z (e·Å); quadrupoles xx xy xz yy yz zz (e·Å²).
 */

/** Charge–charge: Q₁Q₂/R. Charges in e, distance in Å. */
export function chargeCharge(q1: number, q2: number, distanceA: number): number {
  return (q1 * q2) / distanceA;
}

/** Charge–dipole, both ways: T_a(Q₁μ₂_a − μ₁_aQ₂) = (Q₂ μ₁·u − Q₁ μ₂·u)/R². `mu1U`, `mu2U` are μ·u in e·Å. */
export function chargeDipole(q1: number, mu1U: number, q2: number, mu2U: number, distanceA: number): number {
  return (q2 * mu1U - q1 * mu2U) / (distanceA * distanceA);
}

/** Dipole–dipole: (μ₁·μ₂ − 3 μ₁·u μ₂·u)/R³. `mu1Mu2` is μ₁·μ₂ in e²·Å². */
export function dipoleDipole(mu1Mu2: number, mu1U: number, mu2U: number, distanceA: number): number {
  return (mu1Mu2 - 3 * mu1U * mu2U) / (distanceA * distanceA * distanceA);
}

/** Charge–quadrupole, both ways: (Q₁ uΘ₂u + Q₂ uΘ₁u)/R³. `uT1u` is u·Θ₁·u in e·Å². */
export function chargeQuadrupole(q1: number, uT1u: number, q2: number, uT2u: number, distanceA: number): number {
  return (q1 * uT2u + q2 * uT1u) / (distanceA * distanceA * distanceA);
}

/**
 * Dipole–quadrupole, both ways: ⅓T_abc(Θ₁_ab μ₂_c − μ₁_a Θ₂_bc)
 * = [5(uΘ₂u)(μ₁·u) − 2 uΘ₂μ₁ − 5(uΘ₁u)(μ₂·u) + 2 uΘ₁μ₂]/R⁴.
 */
export function dipoleQuadrupole(
  mu1U: number,
  uT1u: number,
  uT1mu2: number,
  mu2U: number,
  uT2u: number,
  uT2mu1: number,
  distanceA: number,
): number {
  const r2 = distanceA * distanceA;
  return (5 * uT2u * mu1U - 2 * uT2mu1 - 5 * uT1u * mu2U + 2 * uT1mu2) / (r2 * r2);
}

/**
 * Quadrupole–quadrupole: (1/9)T_abcd Θ₁_ab Θ₂_cd = [35(uΘ₁u)(uΘ₂u) − 20 (Θ₁u)·(Θ₂u) + 2 Θ₁:Θ₂]/(3R⁵).
 */
export function quadrupoleQuadrupole(
  uT1u: number,
  uT2u: number,
  t1uT2u: number,
  t1T2: number,
  distanceA: number,
): number {
  const r2 = distanceA * distanceA;
  return (35 * uT1u * uT2u - 20 * t1uT2u + 2 * t1T2) / (3 * r2 * r2 * distanceA);
}
