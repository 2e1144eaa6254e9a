import { evaluate } from 'mathjs';
import { describe, expect, it } from 'vitest';
import * as constants from '../../server/src/physics/constants';
import { readQuantity } from '../../server/src/physics/quantity';
import { dipoleUnitEA, type EnergyUnit, energyUnitsPerKJPerMol } from '../../server/src/physics/units';

/**
 * Constants and conversions against published values. CODATA 2018: Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010.
 * CODATA 2022: Mohr et al., NIST SP 961 (2024). Between the two years k_e and a₀ move by 7e-10 of their size.
 */

function expectRelative(value: number, expected: number, tolerance: number): void {
  expect(Math.abs(value / expected - 1)).toBeLessThanOrEqual(tolerance);
}

/** Room for the last printed digit of a value of 9 or 10 digits, and for rounding in a few operations. */
const ROUNDING = 4e-15;
/** A value of 2018 beside one of 2022. */
const BETWEEN_YEARS = 1e-8;

describe('constants that are exact by definition (BIPM, SI Brochure, 9th ed., 2019)', () => {
  it.each([
    ['elementary charge, C', constants.ELEMENTARY_CHARGE_C, 1.602176634e-19],
    ['Boltzmann constant, J/K', constants.BOLTZMANN_J_PER_K, 1.380649e-23],
    ['Avogadro constant, 1/mol', constants.AVOGADRO_PER_MOL, 6.02214076e23],
    ['Planck constant, J s', constants.PLANCK_J_S, 6.62607015e-34],
    ['speed of light, m/s', constants.LIGHT_SPEED_M_PER_S, 299792458],
    ['thermochemical kilocalorie, kJ', constants.KILOCALORIE_KJ, 4.184],
  ])('%s is %d', (_, value, expected) => {
    expect(value).toBe(expected);
  });
});

describe('measured constants', () => {
  it.each([
    ['CODATA 2022', 'vacuum permittivity, F/m', constants.VACUUM_PERMITTIVITY_F_PER_M, 8.8541878188e-12, 1.4e-21],
    ['CODATA 2022', 'Bohr radius, m', constants.BOHR_RADIUS_M, 5.29177210544e-11, 8.2e-21],
    ['CODATA 2018', 'vacuum permittivity, F/m', constants.VACUUM_PERMITTIVITY_F_PER_M, 8.8541878128e-12, 1e-20],
    ['CODATA 2018', 'Bohr radius, m', constants.BOHR_RADIUS_M, 5.29177210903e-11, 5e-20],
  ])('%s: %s', (_source, _name, value, published, uncertainty) => {
    expect(Math.abs(value - published)).toBeLessThanOrEqual(uncertainty);
  });

  it.each([
    ['vacuum permittivity', constants.VACUUM_PERMITTIVITY_F_PER_M, 8.8541878188e-12],
    ['Bohr radius', constants.BOHR_RADIUS_M, 5.29177210544e-11],
  ])('%s is the value of 2022 to its last digit, as its comment says', (_, value, published) => {
    expect(value).toBe(published);
  });
});

describe('derived conversions', () => {
  const conversions: [source: string, name: string, value: number, expected: number, tolerance: number][] = [
    ['definition 1e-21/c, 30-digit arithmetic', '1 D in e A', constants.DEBYE_E_A, 0.20819433270935597, ROUNDING],
    ['definition 1e-21/c, 30-digit arithmetic', '1 e A in D', 1 / constants.DEBYE_E_A, 4.803204712570264, ROUNDING],
    ['definition', '1 C m in e A', constants.COULOMB_METRE_E_A, 6.24150907446076e28, 1e-14],
    ['NIST CCCBDB, debye page', '1 D in e A', constants.DEBYE_E_A, 0.208194, 2.5e-6],
    ['NIST CCCBDB, debye page', '1 D in C m', constants.DEBYE_E_A / constants.COULOMB_METRE_E_A, 3.335641e-30, 1.5e-7],
    ['NIST CCCBDB, debye page', '1 D in e a0', constants.DEBYE_E_A / constants.BOHR_A, 0.39343, 1.3e-5],
    ['CODATA 2022', '1 e a0 in D', constants.BOHR_A / constants.DEBYE_E_A, 2.5417464714697275, 1e-13],
    ['CODATA 2018', '1 e a0 in D', constants.BOHR_A / constants.DEBYE_E_A, 2.541746473194078, BETWEEN_YEARS],
    ['CODATA 2022', '1 e a0 in C m', constants.BOHR_A / constants.COULOMB_METRE_E_A, 8.4783536198e-30, 1e-10],
    ['CODATA 2018', '1 e a0 in C m', constants.BOHR_A / constants.COULOMB_METRE_E_A, 8.4783536255e-30, BETWEEN_YEARS],
    ['CODATA 2022', 'k_e in kJ A/mol', constants.COULOMB_KJ_A_PER_MOL, 1389.3545755023306, 1e-13],
    ['CODATA 2018', 'k_e in kJ A/mol', constants.COULOMB_KJ_A_PER_MOL, 1389.3545764438204, BETWEEN_YEARS],
    ['CODATA 2018', 'k_e in kcal A/mol', constants.COULOMB_KJ_A_PER_MOL / 4.184, 332.0637132991923, BETWEEN_YEARS],
    ['exact', 'R in kJ/(mol K)', constants.GAS_CONSTANT_KJ_PER_MOL_K, 8.31446261815324e-3, ROUNDING],
    ['exact', 'kT at 298.15 K in kJ/mol', constants.thermalEnergyKJPerMol(298.15), 2.4789570296023884, ROUNDING],
    ['exact', 'kT at 300 K in kJ/mol', constants.thermalEnergyKJPerMol(300), 2.494338785445972, ROUNDING],
    ['CODATA 2022', 'hartree in kJ/mol', constants.HARTREE_KJ_PER_MOL, 2625.49963947916, 1e-9],
    ['CODATA 2018', 'hartree in kJ/mol', constants.HARTREE_KJ_PER_MOL, 2625.4996394798254, BETWEEN_YEARS],
    ['CRC Handbook, polarizabilities', '1 a0^3 in A^3', constants.BOHR_A ** 3, 0.148184, 7e-6],
    ['CODATA 2022', '1 a0^3 in A^3', constants.BOHR_A ** 3, 0.1481847111705721, 1e-13],
    [
      'Gaussian units, in which it is 1e-12 erg',
      'two dipoles of 1 D at 1 A in kJ/mol',
      constants.DEBYE_E_A ** 2 * constants.COULOMB_KJ_A_PER_MOL,
      60.2214076,
      1e-9,
    ],
  ];
  it.each(conversions)('%s: %s', (_source, _name, value, expected, tolerance) => {
    expectRelative(value, expected, tolerance);
  });
});

describe('energy units', () => {
  const kT = constants.thermalEnergyKJPerMol(298.15);
  const perKJ: [source: string, unit: EnergyUnit, expected: number, tolerance: number][] = [
    ['definition', 'kJ/mol', 1, 0],
    ['definition of the thermochemical calorie', 'kcal/mol', 0.239005736137667, 1e-14],
    ['exact from e and N_A', 'meV', 10.364269656262174, 1e-14],
    ['exact from h, c and N_A', 'cm-1', 83.59347229111778, 1e-14],
    ['CODATA 2022', 'mHartree', 0.3808798847134393, 1e-9],
    ['CODATA 2018', 'mHartree', 0.38087988471334316, BETWEEN_YEARS],
    ['exact from k_B and N_A', 'kT', 1 / 2.4789570296023884, 1e-14],
  ];
  it.each(perKJ)('%s: 1 kJ/mol in %s is %d', (_, unit, expected, tolerance) => {
    expectRelative(energyUnitsPerKJPerMol(unit, kT), expected, tolerance);
  });

  it('a dipole unit has the size of its conversion', () => {
    expect(['D', 'e*angstrom', 'a.u.', 'C*m'].map(dipoleUnitEA)).toEqual([
      constants.DEBYE_E_A,
      1,
      constants.BOHR_A,
      constants.COULOMB_METRE_E_A,
    ]);
  });
});

describe('quantities as mathjs, a general library, reads them', () => {
  const AS_CHARGE_LENGTH = 'to C m) / (elementaryCharge * 1e-10 m)';
  it.each([
    ['6.19e-30 C*m', 'dipoleEA', `(6.19e-30 C m ${AS_CHARGE_LENGTH}`, ROUNDING],
    ['1.855 D', 'dipoleEA', '1.855 * 1e-21 / 299792458 / 1.602176634e-19 * 1e10', ROUNDING],
    ['0.7298 a.u.', 'dipoleEA', `(0.7298 * elementaryCharge * bohrRadius ${AS_CHARGE_LENGTH}`, BETWEEN_YEARS],
    ['0.5 e*angstrom', 'dipoleEA', `(0.5 * elementaryCharge * 1 angstrom ${AS_CHARGE_LENGTH}`, ROUNDING],
    ['50 e*pm', 'dipoleEA', `(50 * elementaryCharge * 1 pm ${AS_CHARGE_LENGTH}`, ROUNDING],
    ['25 degC', 'temperatureK', 'number(25 degC, K)', ROUNDING],
    ['77 degF', 'temperatureK', 'number(77 degF, K)', 1e-12],
    ['310.5 K', 'temperatureK', 'number(310.5 K, K)', ROUNDING],
    ['1.2 nm', 'lengthA', 'number(1.2 nm, angstrom)', ROUNDING],
    ['120 pm', 'lengthA', 'number(120 pm, angstrom)', ROUNDING],
    ['2 bohr', 'lengthA', 'number(2 bohrRadius, angstrom)', BETWEEN_YEARS],
    ['1.45e-3 nm^3', 'volumeA3', 'number(1.45e-3 nm^3, angstrom^3)', ROUNDING],
    ['1.45e-24 cm^3', 'volumeA3', 'number(1.45e-24 cm^3, angstrom^3)', 1e-14],
    ['9.92 a.u.', 'volumeA3', 'number(9.92 bohrRadius^3, angstrom^3)', BETWEEN_YEARS],
    ['2500 J/mol', 'energyKJPerMol', 'number(2500 J/mol, kJ/mol)', ROUNDING],
    ['10 kcal/mol', 'energyKJPerMol', '10 * 4.184', ROUNDING],
    ['0.25 eV', 'energyKJPerMol', '0.25 * number(elementaryCharge, C) * number(avogadro, mol^-1) / 1000', ROUNDING],
    ['1 mHartree', 'energyKJPerMol', 'number(hartreeEnergy * avogadro, J/mol) / 1e6', BETWEEN_YEARS],
  ] as const)('"%s" as %s', (text, dimension, expression, tolerance) => {
    const result = readQuantity(text, dimension);
    expect(result.ok).toBe(true);
    if (result.ok) expectRelative(result.value, Number(evaluate(expression)), tolerance);
  });

  it('"e" is the elementary charge here, and Euler\'s number in mathjs', () => {
    expect(readQuantity('1 e*angstrom', 'dipoleEA')).toEqual({ ok: true, value: 1 });
    expect(evaluate('1 e')).toBeCloseTo(Math.E, 12);
  });
});
