/** Constants: SI 2019 exact values; CODATA 2022 for the vacuum permittivity and the Bohr radius. */

const ELEMENTARY_CHARGE_C = 1.602176634e-19;
const BOLTZMANN_J_PER_K = 1.380649e-23;
const AVOGADRO_PER_MOL = 6.02214076e23;
const LIGHT_SPEED_M_PER_S = 299792458;
const VACUUM_PERMITTIVITY_F_PER_M = 8.8541878188e-12;
const BOHR_RADIUS_M = 5.29177210544e-11;

/** e² N_A / (4 π ε0 · 1 Å), kJ·Å/(mol·e²). */
export const COULOMB =
  (ELEMENTARY_CHARGE_C ** 2 * AVOGADRO_PER_MOL) / (4 * Math.PI * VACUUM_PERMITTIVITY_F_PER_M * 1e-10) / 1000;

/** Molar gas constant, kJ/(mol·K). */
export const GAS_CONSTANT = (BOLTZMANN_J_PER_K * AVOGADRO_PER_MOL) / 1000;

/** One debye in e·Å: 1e-21 C·m²/s / c. */
export const DEBYE = 1e-21 / LIGHT_SPEED_M_PER_S / (ELEMENTARY_CHARGE_C * 1e-10);

/** One atomic unit of dipole, e·a0, in e·Å. */
export const ATOMIC_UNIT = BOHR_RADIUS_M / 1e-10;

/** One coulomb metre in e·Å. */
export const COULOMB_METRE = 1 / (ELEMENTARY_CHARGE_C * 1e-10);

/** Size of a dipole unit in e·Å. */
export function dipoleUnit(word: string): number {
  switch (word.toLowerCase().replace(/\s/g, '')) {
    case 'd':
    case 'debye':
      return DEBYE;
    case 'e*angstrom':
    case 'e*a':
    case 'eang':
      return 1;
    case 'a.u.':
    case 'au':
      return ATOMIC_UNIT;
    case 'c*m':
      return COULOMB_METRE;
    default:
      throw new Error(`unknown dipole unit ${word}`);
  }
}
