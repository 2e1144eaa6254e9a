import type { FindingCase } from '../unit/findings-table';
import { pdbAtom } from '../unit/findings-table';

/** Further files with one thing wrong, for what the remedies must cope with: PDB columns, tabs, columns of numbers, several frames. */

const KINDS = 'kind_dipole_sizes="H2O:1.855" kind_axes="H2O:O>H"';
const xyz = (comment: string, ...atoms: string[]) => `${[atoms.length, comment, ...atoms].join('\n')}\n`;
const water = (z: number) => [`O 0 0 ${z}`, `H 0.757 0.586 ${z}`, `H -0.757 0.586 ${z}`];
const pdbWater = (number: number, x: number, z: number) => [
  pdbAtom(3 * number, 'O', 'HOH', number, [x, 0, z], 'O'),
  pdbAtom(3 * number + 1, 'H1', 'HOH', number, [x + 0.757, 0.586, z], 'H'),
  pdbAtom(3 * number + 2, 'H2', 'HOH', number, [x - 0.757, 0.586, z], 'H'),
];
const HOH = 'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1,H2';
const pdb = (...lines: string[]) => `${lines.join('\n')}\n`;
const formaldehyde = (x: number) => [`C ${x} 0 0`, `O ${x} 0 1.2`, `H ${x + 0.94} 0 -0.54`, `H ${x - 0.94} 0 -0.54`];
const clash = [
  'O\t0.000\t0.000\t0.000',
  'H\t0.757\t-0.586\t0.000',
  'H\t-0.757\t-0.586\t0.000',
  'O\t0.000\t1.300\t0.000',
  'H\t0.757\t1.886\t0.000',
  'H\t-0.757\t1.886\t0.000',
];

const texts: readonly (readonly [fact: string, text: string, language?: 'pdb'])[] = [
  ['a clash among tabs', xyz(`${KINDS} fragment_atoms="1-3 4-6"`, ...clash)],
  ['a clash in PDB columns', pdb(HOH, ...pdbWater(1, 0, 0), ...pdbWater(2, 0.3, 1.1)), 'pdb'],
  ['centres at one place', xyz('fragment_atoms="1 2" fragment_charges="0 0"', 'Ar 1 2 3', 'Ar 1 2 3')],
  ['kinds known to the library, in a file that gives no dipole', xyz('made by hand', ...water(0), ...formaldehyde(9))],
  [
    'an ion without a charge among charges that are given',
    xyz(`${KINDS} fragment_charges="0 nan"`, ...water(0), 'Cl 0 0 8'),
  ],
  [
    'an ion without a charge in a PDB file',
    pdb(HOH, ...pdbWater(1, 0, 0), pdbAtom(9, 'NA', 'NA', 2, [0, 0, 8], 'NA')),
    'pdb',
  ],
  [
    'a size without an axis in a PDB file',
    pdb(HOH.replace(/ axis.*/, ''), ...pdbWater(1, 0, 0), ...pdbWater(2, 0, 8)),
    'pdb',
  ],
  [
    'a dipole turned round in a PDB file',
    pdb('REMARK  99 fragment=A:HOH:1 dipole="0 -1.85 0"', HOH, ...pdbWater(1, 0, 0), ...pdbWater(2, 0, 8)),
    'pdb',
  ],
  ['an axis turned round', xyz('kind_dipole_sizes="H2O:1.855" kind_axes="H2O:H>O"', ...water(0), ...water(8))],
  [
    'a dipole of another orientation beside one that is right',
    xyz('fragment_dipoles="1.85 0 0 0 1.85 0"', ...water(0), ...water(8)),
  ],
  [
    'a dipole of another orientation in a PDB file',
    pdb(
      'REMARK  99 fragment=A:HOH:1 dipole="1.85 0 0"',
      'REMARK  99 fragment=A:HOH:2 dipole="0 1.85 0"',
      ...pdbWater(1, 0, 0),
      ...pdbWater(2, 0, 8),
    ),
    'pdb',
  ],
  ['all dipoles in another unit', xyz('fragment_dipoles="0 0.7278 0 0 0.7278 0"', ...water(0), ...water(8))],
  ['one dipole of two in another unit', xyz('fragment_dipoles="0 0.7278 0 0 1.85 0"', ...water(0), ...water(8))],
  [
    'dipoles of a PDB file in another unit',
    pdb('REMARK  99 fragment=*:HOH:* dipole_size=0.7278 axis=O>H1,H2', ...pdbWater(1, 0, 0), ...pdbWater(2, 0, 8)),
    'pdb',
  ],
  [
    'columns of numbers in bohr',
    xyz(
      KINDS,
      'O      0.000000   0.000000   0.000000',
      'H      1.430000   1.107000   0.000000',
      'H     -1.430000   1.107000   0.000000',
      'O      0.000000   0.000000  15.000000',
      'H      1.430000   1.107000  15.000000',
      'H     -1.430000   1.107000  15.000000',
    ),
  ],
  [
    'a column that could be charges',
    xyz(
      KINDS,
      ...water(0).map((line, k) => `${line} ${k === 0 ? -0.8 : 0.4}`),
      ...water(8).map((line, k) => `${line} ${k === 0 ? -0.8 : 0.4}`),
    ),
  ],
  [
    'three further columns of forces',
    xyz(KINDS, ...[...water(0), ...water(8)].map((line, k) => `${line} 0.1 ${k} up`)),
  ],
  ['a number with a decimal comma', xyz(KINDS, ...water(0), 'O 0 0 8', 'H 0,757 0.586 8', 'H -0.757 0.586 8')],
  ['a blank line among atoms', `6\n${KINDS}\n${[...water(0), '', ...water(8)].join('\n')}\n`],
  ['an arrow of another form', xyz('kind_dipole_sizes="H2O:1.855" kind_axes="H2O:O->H"', ...water(0), ...water(8))],
  [
    'a selector that is nearly right',
    pdb(HOH.replace('HOH', 'HHO'), ...pdbWater(1, 0, 0), ...pdbWater(2, 0, 8)),
    'pdb',
  ],
  [
    'a molecule that nothing but an estimate gives a dipole',
    xyz(
      'fragment_dipoles="nan nan nan 0 1.85 0"',
      'O     -1.0586     4.8049     0.3015',
      'C      0.3638     4.8014     0.3102',
      'C      0.8783     4.2586     1.6300',
      'F      2.2371     4.2648     1.6196',
      'H     -1.3365     5.1598    -0.5612',
      'H      0.7249     5.8230     0.1538',
      'H      0.7250     4.1854    -0.5197',
      'H      0.5342     3.2332     1.7961',
      'H      0.5319     4.8688     2.4697',
      ...water(12),
    ),
  ],
  ['an empty comment line', xyz('', ...water(0), 'Na 0 0 8')],
  ['a comment with a quote that is not closed', xyz('it is "far', ...water(0), ...water(8))],
  [
    'the second of two frames wrong',
    xyz(`${KINDS}`, ...water(0), ...water(8)) + xyz(`${KINDS} fragment_charges="0 0 0"`, ...water(0), ...water(8)),
  ],
  [
    'charges that the file gives, and another total',
    xyz(`${KINDS} fragment_charges="1 0" total_charge=0`, ...water(0), ...water(8)),
  ],
];

export const REMEDY_CASES = texts.map(
  ([fact, text, language]): FindingCase => ({
    fact,
    text,
    language: language ?? 'xyz',
    expected: [],
  }),
);
