import { readFileSync } from 'node:fs';
import Ajv from 'ajv';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { builtInEntries } from '../../server/src/library/built-in';
import { readLibrary } from '../../server/src/library/user-library';
import { DEBYE_E_A } from '../../server/src/physics/constants';

const base = builtInEntries();
const read = (...molecules: unknown[]) => readLibrary({ molecules }, base);
const entryNamed = (name: string, entries = base) => entries.find((entry) => entry.name === name)!;

const schema = JSON.parse(readFileSync('client/assets/library.schema.json', 'utf8'));
const allows = new Ajv({ strict: true, strictRequired: false }).compile(schema);

describe('a library of a user', () => {
  it.each([
    [1.855, 1.855 * DEBYE_E_A],
    ['1.855', 1.855 * DEBYE_E_A],
    ['1.855 D', 1.855 * DEBYE_E_A],
    ['0.3862 e*angstrom', 0.3862],
    ['6.19e-30 C*m', 6.19e-30 / 1.602176634e-29],
    ['0.73 a.u.', 0.73 * 0.529177210544],
    [{ value: '1.855 D' }, 1.855 * DEBYE_E_A],
  ])('reads the dipole %j', (dipole, dipoleEA) => {
    const { entries, problems } = read({ name: 'water', dipole });
    expect(problems).toEqual([]);
    expect(entryNamed('water', [...entries]).dipoleEA!.value).toBeCloseTo(dipoleEA, 9);
  });

  it('reads polarizabilities and ionization energies with and without units', () => {
    const { entries, problems } = read(
      { name: 'a', smiles: 'CCCCC', polarizability: 9.99, ionizationEnergy: 10.28 },
      { name: 'b', smiles: 'CCCCCCC', polarizability: '67.4 a.u.', ionizationEnergy: '992 kJ/mol' },
      { name: 'c', smiles: 'CCCCCCCC', polarizability: '0.0159 nm^3', ionizationEnergy: '9.8 eV' },
    );
    expect(problems).toEqual([]);
    const values = entries.slice(-3).map((entry) => [entry.polarizabilityA3!.value, entry.ionizationEnergyEV!.value]);
    expect(values[0]![0]).toBeCloseTo(9.99, 10);
    expect(values[0]![1]).toBeCloseTo(10.28, 10);
    expect(values[1]![0]).toBeCloseTo(67.4 * 0.529177210544 ** 3, 6);
    expect(values[1]![1]).toBeCloseTo(992 / 96.48533212, 6);
    expect(values[2]![0]).toBeCloseTo(15.9, 10);
    expect(values[2]![1]).toBeCloseTo(9.8, 10);
  });

  it('overrides by name, by another name and by SMILES, in whatever order its atoms are', () => {
    const { entries, problems } = read(
      { name: 'Water', dipole: 2 },
      { name: 'acetylene', note: 'mine' },
      { smiles: 'N#CC', dipole: null },
      { smiles: 'OCC', dipole: 1.7, axis: { before: [1], after: [2] } },
    );
    expect(problems).toEqual([]);
    expect(entries).toHaveLength(base.length);
    const now = (name: string) => entryNamed(name, [...entries]);
    expect(now('water')).toMatchObject({ fromUser: true, axis: entryNamed('water').axis });
    expect(now('ethyne').note).toBe('mine');
    expect(now('acetonitrile')).toMatchObject({
      dipoleEA: null,
      axis: entryNamed('acetonitrile').axis,
      smiles: 'CC#N',
    });
    expect(now('ethanol')).toMatchObject({ smiles: 'OCC', axis: { before: [0], after: [1] } });
    expect(now('methane').fromUser).toBe(false);
  });

  it('takes an ion and its neutral relative of the same connections for two molecules', () => {
    const { entries, problems } = read({ name: 'hydroxyl radical', smiles: '[OH]', dipole: 1.66 });
    expect(problems).toEqual([]);
    expect(entries).toHaveLength(base.length + 1);
  });

  it('adds equivalent atoms to an axis', () => {
    const { entries } = read({ name: 'water', smiles: 'O', axis: { before: [1], after: [3] } });
    expect(entryNamed('water', [...entries]).axis).toEqual({ before: [0], after: [1, 2] });
  });

  it('writes out the short names of sources', () => {
    const { entries } = readLibrary(
      {
        sources: { own: 'our own measurement' },
        molecules: [
          { name: 'water', dipole: { value: 1.86, source: 'own' }, polarizability: { value: 1.45, source: 'a book' } },
        ],
      },
      base,
    );
    const water = entryNamed('water', [...entries]);
    expect(water.dipoleEA!.source).toBe('our own measurement');
    expect(water.polarizabilityA3!.source).toBe('a book');
  });
});

describe('what cannot be used is told, with its place and the reason', () => {
  const cases: [what: string, molecule: unknown, path: string, message: RegExp][] = [
    ['a negative dipole', { name: 'water', dipole: -1.8 }, '/dipole', /swap "before" and "after"/],
    ['a negative polarizability', { name: 'water', polarizability: -1 }, '/polarizability', /above 0/],
    ['no polarizability', { name: 'water', polarizability: 0 }, '/polarizability', /above 0/],
    ['an ionization energy of 0', { name: 'water', ionizationEnergy: '0 eV' }, '/ionizationEnergy', /above 0/],
    ['an unknown unit', { name: 'water', dipole: '1.8 furlong' }, '/dipole', /"furlong" is no unit/],
    ['a unit of another kind', { name: 'water', dipole: '1.8 eV' }, '/dipole', /unit does not fit/],
    ['a text that is no number', { name: 'water', dipole: 'large' }, '/dipole', /"large" is no/],
    ['a truth value', { name: 'water', dipole: true }, '/dipole', /must be a number/],
    ['a list', { name: 'water', dipole: [0, 0, 1.8] }, '/dipole', /must be a number/],
    ['an infinite number', { name: 'water', dipole: Number.POSITIVE_INFINITY }, '/dipole', /no quantity/],
    ['a quantity without a value', { name: 'water', dipole: { source: 'x' } }, '/dipole/value', /must be a number/],
    ['a number for a source', { name: 'water', dipole: { value: 1, source: 3 } }, '/dipole/source', /must be a text/],
    ['a broken SMILES', { name: 'x', smiles: 'C1CC' }, '/smiles', /character 2 on. Ring 1 is not closed/],
    ['a SMILES of two parts', { name: 'x', smiles: '[Na+].[Cl-]' }, '/smiles', /must be bonded/],
    ['a SMILES with directions', { name: 'x', smiles: 'F/C=C/F' }, '/smiles', /cis and trans/],
    ['a number for a name', { name: 7, smiles: 'C' }, '/name', /must be a text/],
    ['an empty name', { name: ' ', smiles: 'C' }, '/name', /must be a text/],
    ['neither name nor SMILES', { dipole: 1 }, '', /needs a name or a SMILES/],
    ['an unknown name alone', { name: 'unobtainium', dipole: 1 }, '', /"unobtainium" is not in the library/],
    ['a new SMILES alone', { smiles: 'CCCCCCC' }, '', /needs a name/],
    ['the name of another molecule', { name: 'water', smiles: 'C' }, '/smiles', /another molecule, whose SMILES is O/],
    ['an unknown key', { name: 'water', dipol: 1 }, '/dipol', /no such key/],
    ['a text', 'water', '', /must be an object/],
    ['null', null, '', /must be an object/],
    ['an axis of no atoms', { name: 'water', axis: { before: [], after: [2] } }, '/axis/before', /from 1 to 3/],
    ['an atom beyond the last', { name: 'water', axis: { before: [1], after: [4] } }, '/axis/after', /from 1 to 3/],
    ['atom 0', { name: 'water', axis: { before: [0], after: [2] } }, '/axis/before', /from 1 to 3/],
    ['an axis without an end', { name: 'water', axis: { before: [1] } }, '/axis/after', /from 1 to 3/],
    ['an axis between equal atoms', { name: 'nitrogen', axis: { before: [1], after: [2] } }, '/axis', /told apart/],
    ['a text for residue names', { name: 'water', residueNames: 'HOH' }, '/residueNames', /list of texts/],
    ['a number among names', { name: 'water', otherNames: [1] }, '/otherNames/0', /must be a text/],
    ['a list for a note', { name: 'water', note: [] }, '/note', /must be a text/],
  ];

  it.each(cases)('%s', (_, molecule, path, message) => {
    const { entries, problems } = read(molecule);
    expect(problems).toEqual([{ path: `/molecules/0${path}`, message: expect.stringMatching(message) }]);
    expect(problems[0]!.message).toMatch(/\.$/);
    expect(entries).toHaveLength(base.length);
  });

  it('and the known value stays in use', () => {
    const { entries, problems } = read({
      smiles: '[H]O[H]',
      dipole: -2,
      polarizability: 'large',
      ionizationEnergy: [],
      axis: { before: [9], after: [1] },
      residueNames: 7,
      note: 1,
    });
    expect(problems).toHaveLength(6);
    expect(entryNamed('water', [...entries])).toEqual({ ...entryNamed('water'), fromUser: true });
  });

  it('a second entry of the same molecule; the first one counts', () => {
    const { entries, problems } = read({ name: 'water', dipole: 2 }, { smiles: '[H]O[H]', dipole: 3 });
    expect(problems).toEqual([
      { path: '/molecules/1', message: expect.stringMatching('stands at /molecules/0 already') },
    ]);
    expect(entryNamed('water', [...entries]).dipoleEA!.value).toBeCloseTo(2 * DEBYE_E_A, 12);
  });

  it.each([[null], [[]], ['text'], [7], [undefined]])('%j in place of a library', (data) => {
    const result = readLibrary(data, base);
    expect(result.entries).toBe(base);
    expect(result.problems).toEqual([{ path: '', message: 'The library must be an object in braces.' }]);
  });

  it('no list of molecules, and sources that are none', () => {
    expect(readLibrary({ sources: [], molecules: {} }, base).problems.map(({ path }) => path)).toEqual([
      '/sources',
      '/molecules',
    ]);
    expect(readLibrary({ sources: { 'a/b': 3 }, molecules: [] }, base).problems[0]!.path).toBe('/sources/a~1b');
  });

  it('never throws, and no more than a hundred times', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (data) => {
        expect(readLibrary(data, base).problems.length).toBeLessThanOrEqual(100);
        expect(read(data, data).problems.length).toBeLessThanOrEqual(100);
      }),
    );
    expect(read(...new Array(3000).fill(0)).problems).toHaveLength(100);
  });

  it('most of which the schema tells too, before the file is read', () => {
    // Only a reader knows units, SMILES, the library's own names and how many atoms a molecule has.
    const beyondSchema = new Set([
      'an ionization energy of 0',
      'an unknown unit',
      'a unit of another kind',
      'a text that is no number',
      'a broken SMILES',
      'a SMILES of two parts',
      'a SMILES with directions',
      'an unknown name alone',
      'a new SMILES alone',
      'the name of another molecule',
      'an atom beyond the last',
      'an axis between equal atoms',
    ]);
    for (const [what, molecule] of cases) {
      expect(allows({ molecules: [molecule] }), what).toBe(beyondSchema.has(what));
    }
  });
});

describe('the schema', () => {
  it('is a JSON Schema of draft 07 that explains every key', () => {
    expect(schema.$schema).toBe('http://json-schema.org/draft-07/schema#');
    for (const [key, property] of Object.entries<Record<string, unknown>>(schema.definitions.molecule.properties)) {
      expect(property, key).toMatchObject({ title: expect.any(String), description: expect.stringMatching(/\.$/) });
    }
  });

  it('allows the library that comes with the program, which reads without a problem', () => {
    const builtIn = JSON.parse(readFileSync('server/src/library/entries.json', 'utf8'));
    expect(allows(builtIn), JSON.stringify(allows.errors)).toBe(true);
    expect(readLibrary(builtIn, []).problems).toEqual([]);
  });

  it('allows its own examples', () => {
    for (const [key, property] of Object.entries<{ examples?: unknown[] }>(schema.definitions.molecule.properties)) {
      for (const example of property.examples ?? []) {
        expect(allows({ molecules: [{ name: 'x', [key]: example }] }), `${key}: ${JSON.stringify(example)}`).toBe(true);
      }
    }
  });
});
