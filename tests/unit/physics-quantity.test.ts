import { describe, expect, test } from 'vitest';
import { findMedium, MEDIA } from '../../server/src/physics/media';
import { type Dimension, readQuantity } from '../../server/src/physics/quantity';
import { dipoleUnitEA, ENERGY_UNITS, energyUnitsPerKJPerMol } from '../../server/src/physics/units';

/** Numbers with units: what each unit is worth, and what is refused. */

const BOHR_A = 0.529177210544;
const E_C = 1.602176634e-19;
const DEBYE_E_A = 1e-21 / 299792458 / (E_C * 1e-10);

describe('a quantity', () => {
  test.each<[string, Dimension, number]>([
    ['1.855 D', 'dipoleEA', 1.855 * DEBYE_E_A],
    ['1.855 debye', 'dipoleEA', 1.855 * DEBYE_E_A],
    ['0.7298 a.u.', 'dipoleEA', 0.7298 * BOHR_A],
    ['0.7298 e*bohr', 'dipoleEA', 0.7298 * BOHR_A],
    ['0.7298 e*a0', 'dipoleEA', 0.7298 * BOHR_A],
    ['6.19e-30 C*m', 'dipoleEA', 6.19e-30 / (E_C * 1e-10)],
    ['6.19e-30 C m', 'dipoleEA', 6.19e-30 / (E_C * 1e-10)],
    ['0.39 e*angstrom', 'dipoleEA', 0.39],
    ['0.039 e nm', 'dipoleEA', 0.39],
    ['39 e·pm', 'dipoleEA', 0.39],
    ['2*(1 + 0.5) D', 'dipoleEA', 3 * DEBYE_E_A],
    ['-1 D', 'dipoleEA', -DEBYE_E_A],
    ['1 D + 0.1 e*angstrom', 'dipoleEA', DEBYE_E_A + 0.1],
    ['300', 'temperatureK', 300],
    ['300 K', 'temperatureK', 300],
    ['25 degC', 'temperatureK', 298.15],
    ['25 °C', 'temperatureK', 298.15],
    ['-10 degC', 'temperatureK', 263.15],
    ['77 degF', 'temperatureK', 298.15],
    ['12 angstrom', 'lengthA', 12],
    ['12 A', 'lengthA', 12],
    ['12 Å', 'lengthA', 12],
    ['1.2 nm', 'lengthA', 12],
    ['1200 pm', 'lengthA', 12],
    ['1e-9 m', 'lengthA', 10],
    ['2 bohr', 'lengthA', 2 * BOHR_A],
    ['2 a.u.', 'lengthA', 2 * BOHR_A],
    ['1.45 angstrom^3', 'volumeA3', 1.45],
    ['1.45 A^3', 'volumeA3', 1.45],
    ['0.00145 nm^3', 'volumeA3', 1.45],
    ['9.8 a.u.', 'volumeA3', 9.8 * BOHR_A ** 3],
    ['9.8 bohr^3', 'volumeA3', 9.8 * BOHR_A ** 3],
    ['1 kcal/mol', 'energyKJPerMol', 4.184],
    ['5 kJ/mol', 'energyKJPerMol', 5],
    ['5000 J/mol', 'energyKJPerMol', 5],
    ['100 meV', 'energyKJPerMol', 9.648533212331],
    ['0.1 eV', 'energyKJPerMol', 9.648533212331],
    ['1 hartree', 'energyKJPerMol', 2625.4996394799],
    ['1 a.u.', 'energyKJPerMol', 2625.4996394799],
    ['1.5', 'number', 1.5],
    ['1.5d-3', 'number', 0.0015],
    ['  -2.e3 ', 'number', -2000],
    ['.5', 'number', 0.5],
  ])('%s as %s is %d', (text, dimension, expected) => {
    const result = readQuantity(text, dimension);
    expect(result).toMatchObject({ ok: true });
    if (result.ok) expect(Math.abs(result.value / expected - 1)).toBeLessThan(1e-9);
  });

  test('without a unit is taken in the unit beside it, with one in its own', () => {
    expect(readQuantity('2', 'dipoleEA', DEBYE_E_A)).toEqual({ ok: true, value: 2 * DEBYE_E_A });
    const own = readQuantity('2 e*angstrom', 'dipoleEA', DEBYE_E_A);
    expect(own.ok && own.value).toBeCloseTo(2, 12);
  });

  test.each<[string, Dimension, 'syntax' | 'unit']>([
    ['1.855 K', 'dipoleEA', 'unit'],
    ['300 D', 'temperatureK', 'unit'],
    ['1 angstrom^2', 'volumeA3', 'unit'],
    ['1 D + 1 K', 'dipoleEA', 'unit'],
    ['1 parsec', 'lengthA', 'unit'],
    ['1 a.u.', 'temperatureK', 'unit'],
    ['pi', 'lengthA', 'unit'],
    ['e^2', 'lengthA', 'unit'],
    ['i', 'lengthA', 'unit'],
    ['Infinity', 'lengthA', 'unit'],
    ['NaN', 'lengthA', 'unit'],
    ['1e999', 'lengthA', 'syntax'],
    ['1/0 nm', 'lengthA', 'syntax'],
    ['', 'lengthA', 'syntax'],
    ['(1 nm', 'lengthA', 'syntax'],
    ['1 nm)', 'lengthA', 'syntax'],
    ['1 +', 'lengthA', 'syntax'],
    ['1 , 2', 'lengthA', 'syntax'],
    ['1 nm; 2 nm', 'lengthA', 'syntax'],
    ['x = 1', 'lengthA', 'syntax'],
    ['"1 nm"', 'lengthA', 'syntax'],
    ['1 D', 'number', 'syntax'],
    ['2*3', 'number', 'syntax'],
    ['0x10', 'number', 'syntax'],
  ])('%s as %s is refused: %s', (text, dimension, kind) => {
    expect(readQuantity(text, dimension)).toMatchObject({ ok: false, kind });
  });

  test.each([
    'sqrt(4) nm',
    'import("fs")',
    'evaluate("1")',
    'constructor',
    '__proto__',
    'toString()',
    'hasOwnProperty',
    'createUnit("x")',
    'parse(1)',
    'random() nm',
    'zeros(1000000)',
    'range(1,100000000)',
    'factorial(170)',
    'cos.constructor("return 1")()',
    'f(x)=x',
    '[1,2,3]',
    '{a:1}',
    '1:1e9',
    'pwDebye',
    '3!',
    '()',
    '* 2',
  ])('%s never reaches an evaluator', (text) => {
    for (const dimension of ['lengthA', 'dipoleEA', 'temperatureK', 'energyKJPerMol', 'volumeA3'] as const) {
      expect(readQuantity(text, dimension).ok).toBe(false);
    }
  });

  test('is bounded in length, nesting and exponents', () => {
    expect(readQuantity(`${'0'.repeat(79)}1`, 'number')).toEqual({ ok: true, value: 1 });
    expect(readQuantity(`${'0'.repeat(80)}1`, 'number').ok).toBe(false);
    expect(readQuantity(`${'('.repeat(8)}1 nm${')'.repeat(8)}`, 'lengthA').ok).toBe(true);
    expect(readQuantity(`${'('.repeat(9)}1 nm${')'.repeat(9)}`, 'lengthA').ok).toBe(false);
    expect(readQuantity(`${'-'.repeat(70)}1 nm`, 'lengthA').ok).toBe(false);
    expect(readQuantity(`1 nm${'*1'.repeat(19)}`, 'lengthA').ok).toBe(true);
    expect(readQuantity(`1 nm${'*1'.repeat(20)}`, 'lengthA').ok).toBe(false);
    expect(readQuantity('2^12 nm', 'lengthA')).toMatchObject({ ok: true });
    expect(readQuantity('2^13 nm', 'lengthA')).toMatchObject({ ok: false, kind: 'syntax' });
    expect(readQuantity('9^9^9 nm', 'lengthA').ok).toBe(false);
    expect(readQuantity('2^(1 nm)', 'lengthA').ok).toBe(false);
    expect(readQuantity('2^-3 nm', 'lengthA')).toMatchObject({ ok: true, value: expect.closeTo(1.25, 12) });
  });

  test('takes no more than milliseconds for the worst that is let in', () => {
    const worst = [
      '1 nm^12/nm^11'.repeat(6),
      `${'(1+'.repeat(8)}1${')'.repeat(8)} nm`,
      '9^12^12 nm',
      'm m m m m m m m m m m m',
    ];
    for (const text of worst) {
      readQuantity(text, 'lengthA');
      const start = performance.now();
      for (let k = 0; k < 20; k++) readQuantity(text, 'lengthA');
      expect((performance.now() - start) / 20).toBeLessThan(5);
    }
  });
});

describe('units', () => {
  test('of energy are those of one kJ/mol', () => {
    const kT = 2.4789571;
    const sizes = ENERGY_UNITS.map((unit) => energyUnitsPerKJPerMol(unit, kT));
    // 1/4.184; 1e6/F; 1e3/(h c N_A); 1e3/2625.49964; 1/kT
    const expected = [1, 0.2390057361, 10.364269656, 83.593472, 0.3808798848, 1 / kT];
    for (const [k, size] of sizes.entries()) expect(Math.abs(size / expected[k]! - 1)).toBeLessThan(1e-8);
  });

  test.each([
    ['D', DEBYE_E_A],
    ['debye', DEBYE_E_A],
    ['e*angstrom', 1],
    ['e Å', 1],
    ['e·angstrom', 1],
    ['a.u.', BOHR_A],
    ['e*bohr', BOHR_A],
    ['C*m', 1 / (E_C * 1e-10)],
    ['c m', 1 / (E_C * 1e-10)],
  ])('of a dipole: %s', (name, size) => {
    expect(dipoleUnitEA(name)! / size).toBeCloseTo(1, 9);
  });

  test.each(['', 'kJ', 'K', 'constructor', 'D*m', 'nm'])('of a dipole: %j is none', (name) => {
    expect(dipoleUnitEA(name)).toBeUndefined();
  });
});

describe('media', () => {
  test('are found by every name in any case, with blanks or underscores for hyphens', () => {
    for (const medium of MEDIA) {
      for (const name of [medium.name, ...medium.otherNames]) {
        expect(findMedium(name)).toBe(medium);
        expect(findMedium(` ${name.toUpperCase().replaceAll('-', '_')} `)).toBe(medium);
        expect(findMedium(name.replaceAll('-', '  '))).toBe(medium);
      }
    }
  });

  test('have names that are all different and permittivities from 1 up, only that of vacuum 1', () => {
    const names = MEDIA.flatMap(({ name, otherNames }) => [name, ...otherNames]);
    expect(new Set(names).size).toBe(names.length);
    for (const { name, relativePermittivity, temperatureK } of MEDIA) {
      expect(relativePermittivity === 1).toBe(name === 'vacuum');
      expect(relativePermittivity).toBeGreaterThanOrEqual(1);
      expect(relativePermittivity).toBeLessThan(200);
      expect(temperatureK === null).toBe(name === 'vacuum');
    }
  });

  test.each(['', 'constructor', '__proto__', 'toString', 'watr', '80.1'])('%j is none', (name) => {
    expect(findMedium(name)).toBeUndefined();
  });
});
