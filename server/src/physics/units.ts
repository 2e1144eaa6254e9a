import {
  AVOGADRO_PER_MOL,
  BOHR_A,
  COULOMB_METRE_E_A,
  DEBYE_E_A,
  ELEMENTARY_CHARGE_C,
  HARTREE_KJ_PER_MOL,
  KILOCALORIE_KJ,
  LIGHT_SPEED_M_PER_S,
  PLANCK_J_S,
} from './constants';

/** Units in which energies can be shown. `kT` depends on the temperature. */
export const ENERGY_UNITS = ['kJ/mol', 'kcal/mol', 'meV', 'cm-1', 'mHartree', 'kT'] as const;
export type EnergyUnit = (typeof ENERGY_UNITS)[number];

/** How many of `unit` make one kJ/mol; `kTKJPerMol` is the thermal energy at the temperature in use. */
export function energyUnitsPerKJPerMol(unit: EnergyUnit, kTKJPerMol: number): number {
  switch (unit) {
    case 'kJ/mol':
      return 1;
    case 'kcal/mol':
      return 1 / KILOCALORIE_KJ;
    case 'meV':
      return 1e6 / (ELEMENTARY_CHARGE_C * AVOGADRO_PER_MOL);
    case 'cm-1':
      return 1e3 / (PLANCK_J_S * LIGHT_SPEED_M_PER_S * 100 * AVOGADRO_PER_MOL);
    case 'mHartree':
      return 1e3 / HARTREE_KJ_PER_MOL;
    case 'kT':
      return 1 / kTKJPerMol;
  }
}

/** The units a dipole may be written in, by the spelling that annotations use, with their size in e·Å. */
export const DIPOLE_UNITS: ReadonlyMap<string, number> = new Map([
  ['D', DEBYE_E_A],
  ['e*angstrom', 1],
  ['a.u.', BOHR_A],
  ['C*m', COULOMB_METRE_E_A],
]);

const DIPOLE_UNIT_SPELLINGS = new Map<string, string>([
  ['d', 'D'],
  ['debye', 'D'],
  ['debyes', 'D'],
  ['e*angstrom', 'e*angstrom'],
  ['e*a', 'e*angstrom'],
  ['ea', 'e*angstrom'],
  ['e*å', 'e*angstrom'],
  ['eå', 'e*angstrom'],
  ['e*ang', 'e*angstrom'],
  ['a.u.', 'a.u.'],
  ['au', 'a.u.'],
  ['a.u', 'a.u.'],
  ['e*bohr', 'a.u.'],
  ['e*a0', 'a.u.'],
  ['c*m', 'C*m'],
  ['cm', 'C*m'],
  ['coulomb*metre', 'C*m'],
  ['coulomb*meter', 'C*m'],
]);

/** The standard spelling of a dipole unit (`D`, `e*angstrom`, `a.u.`, `C*m`), or `undefined` where it is none. */
export function standardDipoleUnit(text: string): string | undefined {
  return DIPOLE_UNIT_SPELLINGS.get(text.trim().toLowerCase().replace(/[·⋅ ]/g, '*'));
}

/** Size of a dipole unit in e·Å, or `undefined` where `text` names none. */
export function dipoleUnitEA(text: string): number | undefined {
  const standard = standardDipoleUnit(text);
  return standard === undefined ? undefined : DIPOLE_UNITS.get(standard);
}
