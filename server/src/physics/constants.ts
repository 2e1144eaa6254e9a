/**
 * Physical constants, each written once. The SI-2019 ones are exact by definition (BIPM, SI Brochure, 9th ed., 2019);
 * ε₀ and a₀ are the CODATA 2022 recommended values (NIST SP 961, 2024).
 */

/** Elementary charge, C (exact). */
export const ELEMENTARY_CHARGE_C = 1.602176634e-19;

/** Boltzmann constant, J/K (exact). */
export const BOLTZMANN_J_PER_K = 1.380649e-23;

/** Avogadro constant, 1/mol (exact). */
export const AVOGADRO_PER_MOL = 6.02214076e23;

/** Planck constant, J·s (exact). */
export const PLANCK_J_S = 6.62607015e-34;

/** Speed of light in vacuum, m/s (exact). */
export const LIGHT_SPEED_M_PER_S = 299792458;

/** Vacuum permittivity, F/m; standard uncertainty 1.4e-21 F/m. */
export const VACUUM_PERMITTIVITY_F_PER_M = 8.8541878188e-12;

/** Bohr radius, m; standard uncertainty 8.2e-21 m. */
export const BOHR_RADIUS_M = 5.29177210544e-11;

/** Thermochemical kilocalorie, kJ (exact by definition). */
export const KILOCALORIE_KJ = 4.184;

const ANGSTROM_M = 1e-10;

/** Bohr radius, Å; also the atomic unit of dipole in e·Å. */
export const BOHR_A = BOHR_RADIUS_M / ANGSTROM_M;

/** Coulomb energy of two elementary charges 1 Å apart, kJ/mol: e²·N_A/(4πε₀·1 Å), about 1389.35. */
export const COULOMB_KJ_A_PER_MOL =
  ((ELEMENTARY_CHARGE_C * ELEMENTARY_CHARGE_C * AVOGADRO_PER_MOL) /
    (4 * Math.PI * VACUUM_PERMITTIVITY_F_PER_M * ANGSTROM_M)) *
  1e-3;

/** One electronvolt for each particle, kJ/mol. Exact since SI-2019: e N_A. */
export const ELECTRONVOLT_KJ_PER_MOL = ELEMENTARY_CHARGE_C * AVOGADRO_PER_MOL * 1e-3;

/** Molar gas constant, kJ/(mol·K): k_B·N_A (exact). */
export const GAS_CONSTANT_KJ_PER_MOL_K = BOLTZMANN_J_PER_K * AVOGADRO_PER_MOL * 1e-3;

/** One debye, e·Å: 1e-21 C·m²/s divided by c, about 0.208194 (exact). */
export const DEBYE_E_A = 1e-21 / LIGHT_SPEED_M_PER_S / (ELEMENTARY_CHARGE_C * ANGSTROM_M);

/** One coulomb-metre, e·Å. */
export const COULOMB_METRE_E_A = 1 / (ELEMENTARY_CHARGE_C * ANGSTROM_M);

/** Hartree energy, kJ/mol, from e, ε₀ and a₀: e²·N_A/(4πε₀·a₀). */
export const HARTREE_KJ_PER_MOL = COULOMB_KJ_A_PER_MOL / BOHR_A;

/** Thermal energy kT of one mole, kJ/mol, at `temperatureK`. */
export function thermalEnergyKJPerMol(temperatureK: number): number {
  return GAS_CONSTANT_KJ_PER_MOL_K * temperatureK;
}
