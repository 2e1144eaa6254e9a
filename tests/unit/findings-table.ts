import type { FindingCode } from '../../server/src/base/catalogue';
import type { Language } from '../../server/src/formats/tree';

/** A small file with one thing wrong: exactly these findings, as `code: text under the span`. */
export interface FindingCase {
  readonly fact: string;
  readonly text: string;
  readonly language?: Language;
  readonly periodic?: boolean;
  readonly expected: readonly string[];
  /** Codes that must appear, where others may stand beside them. */
  readonly atLeast?: readonly FindingCode[];
}

const WATER = ['O 0 0 0', 'H 0.757 0.586 0', 'H -0.757 0.586 0'];
/** A second water 8 Å away: no contact, and far in every sense. */
const FAR_WATER = ['O 0 0 8', 'H 0.757 0.586 8', 'H -0.757 0.586 8'];
const KINDS = 'kind_dipole_sizes="H2O:1.855" kind_axes="H2O:O>H"';

const xyz = (comment: string, ...atoms: string[]) => `${[atoms.length, comment, ...atoms].join('\n')}\n`;
const waters = (comment: string) => xyz(`${KINDS} ${comment}`, ...WATER, ...FAR_WATER);

/** One ATOM or HETATM line in the columns of the format. */
export function pdbAtom(
  serial: number,
  name: string,
  residue: string,
  number: number,
  position: readonly [number, number, number],
  element: string,
  extra: { chain?: string; altLoc?: string; occupancy?: number; charge?: string } = {},
): string {
  const [x, y, z] = position.map((value) => value.toFixed(3).padStart(8));
  const field = name.length === 4 ? name : ` ${name}`.padEnd(4);
  return (
    `ATOM  ${String(serial).padStart(5)} ${field}${extra.altLoc ?? ' '}${residue.padStart(3)} ${extra.chain ?? 'A'}` +
    `${String(number).padStart(4)}    ${x}${y}${z}${(extra.occupancy ?? 1).toFixed(2).padStart(6)}  0.00          ` +
    `${element.padStart(2)}${extra.charge ?? '  '}`
  );
}

const pdbWater = (number: number, z: number) => [
  pdbAtom(3 * number, 'O', 'HOH', number, [0, 0, z], 'O'),
  pdbAtom(3 * number + 1, 'H1', 'HOH', number, [0.757, 0.586, z], 'H'),
  pdbAtom(3 * number + 2, 'H2', 'HOH', number, [-0.757, 0.586, z], 'H'),
];
const HOH = 'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1,H2';
const pdb = (...lines: string[]) => `${lines.join('\n')}\n`;

/** A formaldehyde-like molecule with charges of 1.989 D along −z, and its annotated dipole given as text. */
const withDipole = (dipole: string, unit = 'D') =>
  xyz(
    `Properties=species:S:1:pos:R:3:charge:R:1 fragment_dipoles="${dipole}" dipole_unit=${unit}`,
    'C 0 0 0 0.2',
    'O 0 0 1.2 -0.3',
    'H 0.94 0 -0.54 0.05',
    'H -0.94 0 -0.54 0.05',
  );

export const FINDING_CASES: readonly FindingCase[] = [
  { fact: 'an empty file holds no frame', text: '', expected: ['no-frame: '] },
  { fact: 'a text without atoms holds no frame', text: 'hello\nworld\n', expected: ['no-frame: hello'] },
  {
    fact: 'NUL bytes are no text',
    text: 'PNG\u0000\u0001\u0002 \u0000\n',
    expected: ['not-text: PNG\u0000\u0001\u0002 \u0000'],
  },
  {
    fact: 'a count too large is said at the count',
    text: waters('').replace(/^6/, '7'),
    expected: ['count-wrong: 7'],
  },
  { fact: 'a count too small is said at the count', text: waters('').replace(/^6/, '4'), expected: ['count-wrong: 4'] },
  {
    fact: 'a count that is no number is said at its line',
    text: waters('').replace(/^6/, 'six'),
    expected: ['count-wrong: six'],
  },
  {
    fact: 'missing count and comment lines are said at the first atom',
    text: `${WATER.join('\n')}\n`,
    expected: ['count-wrong: O 0 0 0'],
  },
  {
    fact: 'a number that cannot be read is underlined alone',
    text: waters('').replace('0.757 0.586 8', '0.757 0.5.6 8'),
    expected: ['number-unreadable: 0.5.6'],
  },
  {
    fact: 'a coordinate past the largest double is no coordinate',
    text: waters('').replace('O 0 0 8', 'O 0 0 1e400'),
    expected: ['number-unreadable: 1e400'],
  },
  {
    fact: 'a line with a field missing is underlined whole',
    text: waters('').replace('H -0.757 0.586 8', 'H -0.757 0.586'),
    expected: ['field-missing: H -0.757 0.586'],
  },
  {
    fact: 'an unknown element is underlined',
    text: waters('').replace('O 0 0 8', 'Ox 0 0 8'),
    expected: ['element-unknown: Ox'],
  },
  {
    fact: 'Properties that describe no atom line are underlined',
    text: xyz('Properties=species:S:1:pos:R:2', ...WATER),
    expected: ['columns-off: species:S:1:pos:R:2'],
  },
  {
    fact: 'a PDB line one column off is said once',
    language: 'pdb',
    text: pdb(HOH, ...pdbWater(1, 0), ...pdbWater(2, 8)).replace(/^(ATOM {6}7.{20})(.*)$/m, '$1 $2'),
    expected: ['columns-off:     0.757   0.586   8.00'],
  },
  {
    fact: 'an array of the wrong length is underlined with what it needs',
    text: waters('fragment_charges="0 0 0"'),
    expected: ['array-length: "0 0 0"'],
  },
  {
    fact: 'a value outside its range is underlined',
    text: waters('relative_permittivity=0.3'),
    expected: ['value-invalid: 0.3'],
  },
  {
    fact: 'an unknown unit is underlined',
    text: waters('dipole_unit=debeye'),
    expected: ['unit-unknown: debeye'],
    atLeast: ['unit-unknown'],
  },
  {
    fact: 'a selector that matches nothing is underlined',
    language: 'pdb',
    text: pdb(HOH, 'REMARK  99 fragment=B:LIG:9 charge=0', ...pdbWater(1, 0), ...pdbWater(2, 8)),
    expected: ['selector-unmatched: B:LIG:9'],
  },
  {
    fact: 'a kind that no fragment has is underlined',
    text: waters('').replace('kind_axes="H2O:O>H"', 'kind_axes="H2O:O>H CH4:C>H"'),
    expected: ['selector-unmatched: CH4'],
  },
  {
    fact: 'a key given twice is underlined the second time',
    text: waters('temperature=300 temperature=310'),
    expected: ['key-repeated: temperature'],
  },
  {
    fact: 'a key given on two REMARK lines of a selector names both lines',
    language: 'pdb',
    text: pdb(HOH, 'REMARK  99 fragment=*:HOH:* dipole_size=2', ...pdbWater(1, 0), ...pdbWater(2, 8)),
    expected: ['key-repeated: dipole_size'],
  },
  {
    fact: 'an atom in two fragments is underlined the second time',
    text: waters('fragment_atoms="1-3 3-6"'),
    expected: ['fragments-overlap: 3-6'],
  },
  {
    fact: 'a cell without volume is underlined',
    text: waters('Lattice="30 0 0 60 0 0 0 0 30"'),
    expected: ['cell-unusable: "30 0 0 60 0 0 0 0 30"'],
  },
  {
    fact: 'two atoms at one point are said at the second',
    text: xyz(KINDS, ...WATER, ...FAR_WATER, 'Ar 9 9 9', 'Ar 9 9 9'),
    expected: ['atoms-coincident: Ar 9 9 9'],
    atLeast: ['atoms-coincident'],
  },
  {
    fact: 'two waters with oxygens 1.3 Å apart clash',
    text: xyz(
      `${KINDS} fragment_atoms="1-3 4-6"`,
      'O 0 0 0',
      'H 0.757 -0.586 0',
      'H -0.757 -0.586 0',
      'O 0 1.3 0',
      'H 0.757 1.886 0',
      'H -0.757 1.886 0',
    ),
    expected: ['clash: O 0 1.3 0'],
  },
  {
    fact: 'thousands of atoms in a point are too dense',
    text: xyz('', ...Array.from({ length: 4000 }, () => 'Ar 0 0 0')),
    expected: ['too-dense: '],
  },
  {
    fact: 'two declared fragments a bond apart are joined',
    text: xyz('fragment_atoms="1-2 3" fragment_dipoles="0 0 0 0 0 0"', ...WATER),
    expected: ['fragments-joined: H -0.757 0.586 0'],
  },
  {
    fact: 'two waters in a hydrogen bond are near, said for each',
    text: xyz(KINDS, 'O 0 0 0', 'H 0.957 0 0', 'H -0.24 0.927 0', 'O 2.8 0 0', 'H 3.386 0.757 0', 'H 3.386 -0.757 0'),
    expected: ['near-field: O', 'near-field: O'],
  },
  {
    fact: 'a pair at the edge is information',
    text: xyz(
      KINDS,
      'O 0 0 0',
      'H 0.757 0.586 0',
      'H -0.757 0.586 0',
      'O 0 3.6 0',
      'H 0.757 4.186 0',
      'H -0.757 4.186 0',
    ),
    expected: ['edge-field: O', 'edge-field: O'],
  },
  {
    fact: 'a dipole in a.u. called D is said',
    text: withDipole('0 0 -0.7825'),
    expected: ['dipole-unit: 0 0 -0.7825'],
  },
  {
    fact: 'a dipole drawn as the chemists do is said',
    text: withDipole('0 0 1.989'),
    expected: ['dipole-reversed: 0 0 1.989'],
  },
  {
    fact: 'a dipole of another orientation is said',
    text: withDipole('1.989 0 0'),
    expected: ['dipole-rotated: 1.989 0 0'],
  },
  {
    fact: 'a dipole half as large again is said',
    text: withDipole('0 0 -3.1'),
    expected: ['dipole-mismatch: 0 0 -3.1'],
  },
  {
    fact: 'a dipole 30 % off is information',
    text: withDipole('0 0 -2.59'),
    expected: ['dipole-deviation: 0 0 -2.59'],
  },
  {
    fact: 'an odd multiplicity for an odd number of electrons is said',
    text: waters('charge=1 multiplicity=1'),
    expected: [],
    atLeast: ['electron-parity'],
  },
  {
    fact: 'charges that miss the total are said',
    text: waters('fragment_charges="0 0" total_charge=1'),
    expected: ['charge-sum: 1'],
  },
  {
    fact: 'the dipole of the frame beside another sum is information',
    text: waters('dipole="0 0 1"'),
    expected: ['dipole-sum: "0 0 1"'],
  },
  {
    fact: 'coordinates in bohr are said once',
    text: xyz(KINDS, 'O 0 0 0', 'H 1.43 1.107 0', 'H -1.43 1.107 0', 'O 0 0 15', 'H 1.43 1.107 15', 'H -1.43 1.107 15'),
    expected: [],
    atLeast: ['unit-bohr'],
  },
  {
    fact: 'coordinates in nanometres are said once',
    text: xyz(
      '',
      'O 0 0 0',
      'H 0.0757 0.0586 0',
      'H -0.0757 0.0586 0',
      'O 0 0 0.8',
      'H 0.0757 0.0586 0.8',
      'H -0.0757 0.0586 0.8',
    ),
    expected: ['unit-nanometre: '],
  },
  {
    fact: 'a residue without a side-chain atom is said',
    language: 'pdb',
    text: pdb(
      pdbAtom(1, 'N', 'ALA', 1, [0, 0, 0], 'N'),
      pdbAtom(2, 'CA', 'ALA', 1, [1.46, 0, 0], 'C'),
      pdbAtom(3, 'C', 'ALA', 1, [2, 1.42, 0], 'C'),
      pdbAtom(4, 'O', 'ALA', 1, [1.25, 2.39, 0], 'O'),
      pdbAtom(5, 'H', 'ALA', 1, [-0.5, -0.87, 0], 'H'),
    ),
    expected: [`atoms-missing: ${pdbAtom(1, 'N', 'ALA', 1, [0, 0, 0], 'N').trimEnd()}`],
  },
  {
    fact: 'waters without hydrogens are said once',
    language: 'pdb',
    text: pdb(
      'REMARK  99 fragment=*:HOH:* dipole_size=1.855',
      pdbAtom(1, 'O', 'HOH', 1, [0, 0, 0], 'O'),
      pdbAtom(2, 'O', 'HOH', 2, [0, 0, 8], 'O'),
    ),
    expected: [`hydrogens-missing: ${pdbAtom(1, 'O', 'HOH', 1, [0, 0, 0], 'O').trimEnd()}`],
  },
  { fact: 'a misspelt key is information', text: waters('temprature=300'), expected: ['key-misspelt: temprature'] },
  {
    fact: 'a list that other readers reject is information',
    text: waters('fragment_charges=[0,0,]'),
    expected: ['value-unportable: [0,0,]'],
  },
  {
    fact: 'a kind without a dipole is information, once a kind',
    text: xyz('', ...WATER, ...FAR_WATER),
    expected: ['dipole-missing: O'],
  },
  {
    fact: 'a size without a direction is information, once a kind',
    text: waters('').replace('kind_axes="H2O:O>H"', ''),
    expected: ['dipole-direction: O'],
  },
  {
    fact: 'a finding misspelt in silence is information',
    text: waters('silence="near-feild"'),
    expected: ['key-misspelt: near-feild'],
  },
  {
    fact: 'the dipole of an ion is told to depend on its centre',
    text: xyz('Properties=species:S:1:pos:R:3:charge:R:1', 'O 0 0 0 -1.2', 'H 0.96 0 0 0.2'),
    expected: ['dipole-origin: O'],
  },
  {
    fact: 'a lone sodium without a charge is information',
    text: xyz(KINDS, ...WATER, 'Na 0 0 8'),
    expected: ['ion-charge-missing: Na'],
  },
  {
    fact: 'alternate locations left out are information',
    language: 'pdb',
    text: pdb(
      HOH,
      ...pdbWater(1, 0),
      pdbAtom(7, 'O', 'HOH', 2, [0, 0, 8], 'O', { altLoc: 'A', occupancy: 0.7 }),
      pdbAtom(8, 'O', 'HOH', 2, [0, 0, 8.3], 'O', { altLoc: 'B', occupancy: 0.3 }),
      pdbAtom(9, 'H1', 'HOH', 2, [0.757, 0.586, 8], 'H'),
      pdbAtom(10, 'H2', 'HOH', 2, [-0.757, 0.586, 8], 'H'),
    ),
    expected: ['alternate-locations: B'],
  },
  {
    fact: 'a cell narrower than twice the cutoff is information',
    text: waters('Lattice="20 0 0 0 20 0 0 0 20"'),
    expected: ['cell-small: "20 0 0 0 20 0 0 0 20"'],
  },
  {
    fact: 'a longer chain without an end is information',
    text: xyz('Lattice="5.68 0 0 0 30 0 0 0 30" pbc="T F F"', 'C 0 0 0', 'C 1.42 0 0', 'C 2.84 0 0', 'C 4.26 0 0'),
    expected: ['fragment-endless: C'],
    atLeast: ['fragment-endless'],
  },
  {
    fact: 'a chain without an end is information',
    text: xyz('Lattice="2.84 0 0 0 30 0 0 0 30" pbc="T F F"', 'C 0 0 0', 'C 1.42 0 0'),
    expected: ['fragment-endless: C'],
    atLeast: ['fragment-endless'],
  },
  {
    fact: 'columns after z of a plain file are a hint',
    text: waters('').replace('O 0 0 8', 'O 0 0 8 0.5 7'),
    expected: ['extra-columns: 0.5 7'],
  },
  {
    fact: 'atoms in no declared fragment are a hint',
    text: waters('fragment_atoms="1-3"'),
    expected: ['atoms-ungrouped: "1-3"'],
  },
];
