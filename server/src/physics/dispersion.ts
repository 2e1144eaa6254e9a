import { BOHR_A, COULOMB_KJ_A_PER_MOL } from './constants';

/**
 * Dispersion of a pair, −C₆/R⁶: isotropic, centre to centre and undamped, so for partners well apart. No permittivity enters.
 * How far the C₆ are from published ones is measured in tests/reference/outside-dispersion.test.ts.
 */

/**
 * C₆ by London's formula, kJ·Å⁶/mol: (3/2) I₁I₂/(I₁+I₂) α₁α₂, ionization energies I in kJ/mol, polarizability volumes α in Å³.
 * NaN for an input that is not finite or is negative, or where both ionization energies are 0. Symmetric in the two partners.
 * Source: F. London, Trans. Faraday Soc. 33 (1937) 8, eq. 11 (first in Z. Phys. 63 (1930) 245).
 */
export function londonC6(
  ionization1KJPerMol: number,
  alpha1A3: number,
  ionization2KJPerMol: number,
  alpha2A3: number,
): number {
  if (!allNotNegative(ionization1KJPerMol, alpha1A3, ionization2KJPerMol, alpha2A3)) return Number.NaN;
  const mean = (ionization1KJPerMol * ionization2KJPerMol) / (ionization1KJPerMol + ionization2KJPerMol);
  return 1.5 * mean * alpha1A3 * alpha2A3;
}

/**
 * C₆ by Slater and Kirkwood, kJ·Å⁶/mol: (3/2) α₁α₂/[√(α₁/N₁) + √(α₂/N₂)] in atomic units, N the number of electrons that take part.
 * Polarizability volumes α in Å³. A partner of no polarizability has C₆ 0; NaN where α is negative or N not positive.
 * Source: J. C. Slater, J. G. Kirkwood, Phys. Rev. 37 (1931) 682, eq. 54; for unlike partners K. S. Pitzer, Adv. Chem. Phys. 2 (1959)
 * 59, eq. 21. N from {@link dispersionElectrons}: with all valence electrons the C₆ of water comes out 43 % too large.
 */
export function slaterKirkwoodC6(electrons1: number, alpha1A3: number, electrons2: number, alpha2A3: number): number {
  if (!allNotNegative(alpha1A3, alpha2A3, 0, 0) || !(electrons1 > 0) || !(electrons2 > 0)) return Number.NaN;
  if (alpha1A3 === 0 || alpha2A3 === 0) return 0;
  const roots = Math.sqrt(alpha1A3 / electrons1) + Math.sqrt(alpha2A3 / electrons2);
  return (1.5 * COULOMB_KJ_A_PER_MOL * Math.sqrt(BOHR_A) * alpha1A3 * alpha2A3) / roots;
}

/** Energy of dispersion, kJ/mol: −C₆/R⁶. NaN where the centres coincide. */
export function dispersionEnergy(c6KJA6PerMol: number, distanceA: number): number {
  if (!(distanceA > 0)) return Number.NaN;
  const r3 = distanceA * distanceA * distanceA;
  return -c6KJA6PerMol / (r3 * r3);
}

/** Numbers of electrons that take part in dispersion, by atomic number (Halgren 1996). */
const EFFECTIVE_ELECTRONS = new Map([
  [1, 0.8],
  [6, 2.49],
  [7, 2.82],
  [8, 3.15],
  [9, 3.48],
  [14, 4.2],
  [15, 4.5],
  [16, 4.8],
  [17, 5.1],
  [35, 6],
  [53, 6.95],
]);

/** The noble gases that close a shell. */
const CORES = [2, 10, 18, 36, 54, 86];

/**
 * Electrons of one atom for {@link slaterKirkwoodC6}; those of a fragment are the sum over its atoms.
 *
 * Source: T. A. Halgren, J. Comput. Chem. 17 (1996) 520, the parameters N of H, C–F, Si–Cl, Br and I (fitted there to published C₆).
 * Any other element counts its valence electrons, which gives a C₆ at the upper end.
 */
export function dispersionElectrons(z: number): number {
  return EFFECTIVE_ELECTRONS.get(z) ?? valenceElectrons(z);
}

/**
 * Valence electrons of a neutral atom: those outside the last closed noble-gas core, without filled d and f shells beneath a p block.
 * Helium has 2 and the other noble gases 8.
 */
export function valenceElectrons(z: number): number {
  if (!(z >= 1 && z <= 118)) return 0;
  let core = 0;
  for (const noble of CORES) if (noble < z) core = noble;
  let outside = z - core;
  if (core >= 54 && outside > 16) outside -= 14;
  if (core >= 18 && outside > 12) outside -= 10;
  return outside;
}

function allNotNegative(a: number, b: number, c: number, d: number): boolean {
  return a >= 0 && b >= 0 && c >= 0 && d >= 0 && Number.isFinite(a + b + c + d);
}
