import { describe, expect, test } from 'vitest';
import { parse } from '../../server/src/formats/parse';
import { arePlain, codeOfPlain, NameCodes } from '../../server/src/formats/pdb/name-codes';
import { ResidueKeys } from '../../server/src/formats/pdb/residue-keys';
import type { FrameTree, Language } from '../../server/src/formats/tree';
import { snapshotOf } from '../../server/src/text/snapshot';
import { scanFourDigits, scanWholePart } from '../../server/src/text/whole-part';
import { type PdbFields, pdbRecord } from '../support/pdb-lines';

// Lines as programs write them are read in words of four bytes; what is unusual goes another way and must give the same.

const frameOf = (lines: readonly string[], language: Language): FrameTree =>
  parse(snapshotOf(`${lines.join('\n')}\n`), language).frames[0]!;
const wordOf = (text: string) => new DataView(new TextEncoder().encode(text).buffer).getInt32(0, true);

describe('four characters', () => {
  test.each([
    ['   0', 0],
    ['   7', 14],
    ['  42', 84],
    ['1234', 2468],
    ['9999', 19998],
    ['0000', 0],
    ['  -0', 1],
    [' -12', 25],
    ['-999', 1999],
  ])('%j is a whole part', (four, expected) => {
    expect(scanWholePart(wordOf(four))).toBe(expected);
  });

  test.each([
    '    ',
    '   -',
    '-  1',
    '- 12',
    '--12',
    ' 1 2',
    '12  ',
    '1-23',
    '  +1',
    '  :1',
    '  /1',
    '\t  1',
    '  p1',
    ' \x801',
    'A  1',
  ])('%j is no whole part', (four) => {
    expect(scanWholePart(wordOf(four.padStart(4)))).toBe(-1);
  });

  test('four digits are a number, and digits only', () => {
    for (const four of ['0000', '0001', '1234', '9999']) expect(scanFourDigits(wordOf(four))).toBe(Number(four));
    for (const four of [' 123', '12.3', '123\n', ':123', '/123']) expect(scanFourDigits(wordOf(four))).toBe(-1);
  });
});

describe('PDB coordinates past the first line', () => {
  const positionOf = (columns: string) => {
    const line = pdbRecord({ name: ' B  ', number: '2' });
    const lines = [pdbRecord({}), `${line.slice(0, 30)}${columns}   0.000   0.000${line.slice(54)}`];
    return frameOf(lines, 'pdb').atoms.positionA[3];
  };
  test.each([
    ['  -0.000', -0],
    ['  -0.001', -0.001],
    ['-999.999', -999.999],
    ['9999.999', 9999.999],
    ['   0.100', 0.1],
    ['    .500', 0.5],
    ['   -.500', -0.5],
    ['  +1.500', 1.5],
    ['   1.50 ', 1.5],
    ['  1.2345', 1.2345],
    [' 1.5E01 ', 15],
    ['       3', 3],
    ['  - 1.00', Number.NaN],
    ['   1.00:', Number.NaN],
  ])('%j', (columns, expected) => {
    expect(positionOf(columns)).toBe(expected);
  });
});

describe('PDB residues by words', () => {
  const residuesOf = (...atoms: (PdbFields | string)[]) =>
    frameOf(
      atoms.map((atom) => (typeof atom === 'string' ? atom : pdbRecord(atom))),
      'pdb',
    ).residues!.map(({ atoms: members }) => members);

  test('a name ends the residue wherever it stands in its columns', () => {
    expect(residuesOf({ name: ' N  ' }, { name: 'CA  ' }, { name: ' CA ' })).toEqual([[0, 1], [2]]);
  });

  test('atoms apart in the file are one residue until a name comes again', () => {
    const apart = [
      { name: ' N' },
      { name: ' X', number: '2' },
      { name: ' C' },
      { name: ' Y', number: '2' },
      { name: ' N' },
    ];
    expect(residuesOf(...apart)).toEqual([[0, 2], [1, 3], [4]]);
  });

  test('a residue of more atoms than are compared one by one ends at a name of its beginning', () => {
    const many = Array.from({ length: 40 }, (_, k) => ({ name: `C${k}` }));
    const [first, second] = residuesOf(...many, { name: 'C1' });
    expect([first!.length, second]).toEqual([40, [40]]);
  });

  test('numbers that wrap in a file of many residues', () => {
    const atoms = Array.from({ length: 600 }, (_, k) => ({
      name: k % 2 === 0 ? ' O' : ' H',
      number: `${(k >> 1) % 200}`,
    }));
    const residues = residuesOf(...atoms);
    expect(residues).toEqual(Array.from({ length: 300 }, (_, r) => [2 * r, 2 * r + 1]));
  });

  test('lines short, and beyond ASCII, have residues of their own', () => {
    const beyond = pdbRecord({ residue: 'é' });
    expect(residuesOf(beyond, 'ATOM', {}, beyond.replace('HE ', 'B  '), 'ATOM')).toEqual([[0, 3], [1], [2], [4]]);
  });

  test('where a conformer is left out, residues are those of the atoms that stay', () => {
    const atoms = [
      { name: ' N', alt: 'A', occupancy: '0.40' },
      { name: ' N', alt: 'B', occupancy: '0.60' },
      { name: ' C' },
      { name: ' N', number: '2' },
    ];
    expect(residuesOf(...atoms)).toEqual([[0, 1], [2]]);
  });

  test('fields and atom names are read from the lines of the residue', () => {
    const lines = [
      pdbRecord({ name: ' N' }),
      pdbRecord({ chain: 'B', number: 'A000', insertion: 'C' }),
      'TER',
      pdbRecord({ name: ' O' }),
    ];
    const read = frameOf(lines, 'pdb').residues!.map(({ chain, name, number, insertion, segment, atomNames }) => {
      return [chain, name, number, insertion, segment, atomNames];
    });
    expect(read).toEqual([
      ['A', 'UNK', 1, '', 0, ['N', 'O']],
      ['B', 'UNK', 10000, 'C', 1, ['HE']],
    ]);
  });
});

describe('codes and keys', () => {
  test('texts have the same code where they are the same', () => {
    const codes = new NameCodes();
    for (const four of ['CA  ', ' CA ', '  CA']) expect(codeOfPlain(wordOf(four))).toBe(codes.ofText('CA'));
    expect(codeOfPlain(wordOf('    '))).toBe(codes.ofText(''));
    const texts = ['', 'A', 'AB', 'A B', 'ABCD', 'ABCDE', 'é', 'ABCDF', '\x01'];
    expect(new Set([...texts, ...texts].map((text) => codes.ofText(text))).size).toBe(texts.length);
  });

  test('plain is ASCII from the blank on', () => {
    for (const four of ['    ', 'AZ09', '~\x7f~~']) expect(arePlain(wordOf(four))).toBe(true);
    for (const four of ['\tABC', 'ABC\x1f', '\x00   ']) expect(arePlain(wordOf(four))).toBe(false);
    expect(arePlain(0x41418041)).toBe(false);
  });

  test('a table of keys keeps the last residue of each while it grows', () => {
    const keys = new ResidueKeys();
    for (const round of [0, 1000]) for (let k = 0; k < 500; k++) keys.set(k, -k, k << 24, round + k);
    expect(Array.from({ length: 500 }, (_, k) => keys.find(k, -k, k << 24))).toEqual(
      Array.from({ length: 500 }, (_, k) => 1000 + k),
    );
    expect(keys.find(1, 1, 1)).toBe(-1);
  });
});

describe('XYZ lines of declared columns', () => {
  const comment = 'Properties=species:S:1:tag:S:1:pos:R:3:charge:R:1:forces:R:3:dipoles:R:3';
  const rest = '0.1 0.2 0.3 1.5 2.5 -3.5';
  test.each([
    ['plain numbers', `O a 1.5 -2.25 0.0 -0.8 ${rest}`],
    ['unusual ones', `O a 1.5e0 -225D-2 0 -.8 0.1 nan x 15e-1 +2.5 -3.5`],
    ['other blanks', `\tO\ta  1.50000 -2.25 0.0\t-0.80 ${rest}  `],
    ['a word of digits', `O 12.5 1.5 -2.25 0. -0.8 ${rest}`],
  ])('%s', (_, line) => {
    const { element, positionA, chargeE, dipoleEA } = frameOf(['2', comment, line, line], 'xyz').atoms;
    const values = [...element, ...positionA, ...chargeE!, ...dipoleEA!];
    expect(values).toEqual([8, 8, 1.5, -2.25, 0, 1.5, -2.25, 0, -0.8, -0.8, 1.5, 2.5, -3.5, 1.5, 2.5, -3.5]);
  });

  test('a line with a field too few is no plain one', () => {
    const { chargeE, dipoleEA } = frameOf(
      ['2', comment, `O a 1.5 0.0 0.0 0.5 ${rest}`, 'H b 1.5 0.0 0.0 0.5 0.1 0.2'],
      'xyz',
    ).atoms;
    expect([...chargeE!, ...dipoleEA!]).toEqual([0.5, 0.5, 1.5, 2.5, -3.5, Number.NaN, Number.NaN, Number.NaN]);
  });
});
