import { THOLE_WIDTH, tholeArgument, tholeCharge, tholeDipole } from './thole-damping';

/** Charge, dipole and polarizability of one partner, the moments about its centre. */
export interface PolarizableSite {
  /** Net charge, e. */
  readonly chargeE: number;
  /** Dipole about the centre, e·Å, from negative to positive. */
  readonly dipoleEA: ArrayLike<number>;
  /** Polarizability volume, Å³; 0 for none. */
  readonly polarizabilityA3: number;
}

/** Whether a polarizability volume can be worked with: finite and not negative. */
export function isPolarizability(alphaA3: number): boolean {
  return Number.isFinite(alphaA3) && alphaA3 >= 0;
}

/**
 * Square of the field of a charge and dipole at a point, e²/Å⁴.
 *
 * E = λ₃ Q r/r³ + [3λ₅(μ·r)r/r² − λ₃ μ]/r³ for the vector r (Å) from the source to the point, `x` the argument of the damping.
 */
export function fieldSquare(site: PolarizableSite, rxA: number, ryA: number, rzA: number, x: number): number {
  const [mx, my, mz] = [site.dipoleEA[0]!, site.dipoleEA[1]!, site.dipoleEA[2]!];
  const r2 = rxA * rxA + ryA * ryA + rzA * rzA;
  const inverse3 = 1 / (r2 * Math.sqrt(r2));
  const charge = tholeCharge(x) * inverse3;
  const along = charge * site.chargeE + (3 * tholeDipole(x) * (mx * rxA + my * ryA + mz * rzA) * inverse3) / r2;
  const ex = along * rxA - charge * mx;
  const ey = along * ryA - charge * my;
  const ez = along * rzA - charge * mz;
  return ex * ex + ey * ey + ez * ez;
}

/**
 * Debye induction of a pair in a fixed arrangement, each partner polarized by the other's permanent charge and dipole alone:
 * −½ α₂|E₁(c₂)|² − ½ α₁|E₂(c₁)|², in e²/Å (multiply by k_e/ε_r² for kJ/mol).
 *
 * `offsetA` is the vector from centre 1 to centre 2, Å. `width` is Thole's a; Infinity leaves the damping out. Never positive. NaN
 * where the centres coincide or a polarizability is negative. A field through a medium of permittivity ε_r is screened once on each
 * of its two ways, hence ε_r².
 * Source: P. Debye, Phys. Z. 21 (1920) 178; A. J. Stone, The Theory of Intermolecular Forces, 2nd ed. (2013), eq. 4.2.4; damping
 * as in thole-damping.ts.
 */
export function debyeEnergy(
  one: PolarizableSite,
  two: PolarizableSite,
  offsetA: ArrayLike<number>,
  width = THOLE_WIDTH,
): number {
  const [x, y, z] = [offsetA[0]!, offsetA[1]!, offsetA[2]!];
  const distanceA = Math.sqrt(x * x + y * y + z * z);
  if (!(distanceA > 0) || !isPolarizability(one.polarizabilityA3) || !isPolarizability(two.polarizabilityA3)) {
    return Number.NaN;
  }
  const argument = tholeArgument(distanceA, one.polarizabilityA3, two.polarizabilityA3, width);
  return (
    -0.5 * two.polarizabilityA3 * fieldSquare(one, x, y, z, argument) -
    0.5 * one.polarizabilityA3 * fieldSquare(two, -x, -y, -z, argument)
  );
}

/**
 * Debye induction averaged over all orientations of both dipoles, undamped: −(μ₁²α₂ + μ₂²α₁)/R⁶ − (Q₁²α₂ + Q₂²α₁)/(2R⁴), in e²/Å.
 *
 * Each dipole polarizes the other partner once. Dipoles in e·Å, polarizability volumes in Å³, R in Å. Sources: P. Debye, Phys. Z. 21
 * (1920) 178; J. N. Israelachvili, Intermolecular and Surface Forces, 3rd ed. (2011), eqs. 5.22 and 5.2.
 */
export function debyeAverage(
  q1E: number,
  mu1EA: number,
  alpha1A3: number,
  q2E: number,
  mu2EA: number,
  alpha2A3: number,
  distanceA: number,
): number {
  if (!(distanceA > 0) || !isPolarizability(alpha1A3) || !isPolarizability(alpha2A3)) return Number.NaN;
  const r2 = distanceA * distanceA;
  const r4 = r2 * r2;
  const dipoles = (mu1EA * mu1EA * alpha2A3 + mu2EA * mu2EA * alpha1A3) / (r4 * r2);
  return -dipoles - (q1E * q1E * alpha2A3 + q2E * q2E * alpha1A3) / (2 * r4);
}
