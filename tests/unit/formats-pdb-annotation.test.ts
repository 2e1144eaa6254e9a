import { describe, expect, test } from 'vitest';
import { FileFindings } from '../../server/src/analysis/findings';
import { FileAnalysis } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Finding } from '../../server/src/base/finding';
import { parse } from '../../server/src/formats/parse';
import type { FrameTree } from '../../server/src/formats/tree';
import { DEBYE_E_A } from '../../server/src/physics/constants';
import { snapshotOf } from '../../server/src/text/snapshot';
import { analyse } from '../support/analyse';
import { pdbRecord as atom } from '../support/pdb-lines';

/** Every line ends with a line feed. */
const text = (...lines: string[]) => lines.map((line) => `${line}\n`).join('');
const frames = (content: string) => parse(snapshotOf(content), 'pdb').frames;
const only = (content: string): FrameTree => {
  const [frame, ...more] = frames(content);
  expect(more).toEqual([]);
  return frame!;
};

const found = (content: string) =>
  analyse(content, 'pdb').findings.map(({ code, start, end }) => [code, content.slice(start, end)]);
const fragmentSizes = (content: string) => {
  const { fragments } = analyse(content, 'pdb').frames[0]!.model;
  return Array.from({ length: fragments.count }, (_, f) => fragments.starts[f + 1]! - fragments.starts[f]!);
};

describe('fragments', () => {
  const chain = (residue: string, number: string, name: string, serial: string, x: number) =>
    atom({ residue, number, name, serial, x, element: name.trim()[0]! });
  const two = [
    chain('AAA', '1', ' C1', '10', 0),
    chain('BBB', '2', ' C2', '20', 9),
    chain('CCC', '3', ' C3', '30', 18),
  ];
  const link = (from: string, to: string) =>
    `LINK        ${from}               ${to}                 1555   1555  1.50`;
  test.each([
    ['a residue each', [], [1, 1, 1]],
    ['CONECT joins', ['CONECT   10   20'], [2, 1]],
    ['CONECT with four partners joins', ['CONECT   10   20   30   20   30'], [3]],
    ['CONECT without blanks joins', ['CONECT    1    2'], [1, 1, 1]],
    ['CONECT to an unknown serial joins nothing', ['CONECT   10   99'], [1, 1, 1]],
    ['CONECT to itself joins nothing', ['CONECT   10   10'], [1, 1, 1]],
    ['LINK joins', [link(' C1  AAA A   1 ', ' C3  CCC A   3 ')], [2, 1]],
    ['LINK to an unknown atom joins nothing', [link(' C9  AAA A   1 ', ' C3  CCC A   3 ')], [1, 1, 1]],
  ])('%s', (_, records, sizes) => {
    expect(fragmentSizes(text(...two, ...records))).toEqual(sizes);
  });

  test.each([
    ['hybrid-36', 'A0000', 'A0001'],
    ['six digits cut to five', '99999', '00000'],
  ])('serials: %s', (_, first, second) => {
    const content = text(
      atom({ serial: first, number: '1' }),
      atom({ serial: second, number: '2', x: 9 }),
      `CONECT${first}${second}`,
    );
    expect(fragmentSizes(content)).toEqual([2]);
  });

  test.each([
    ['starred', '*****', '*****'],
    ['given twice', '    1', '    1'],
  ])('serials %s name no atom', (_, first, second) => {
    const content = text(
      atom({ serial: first, number: '1' }),
      atom({ serial: second, number: '2', x: 9 }),
      atom({ serial: '3', number: '3', x: 18 }),
      `CONECT${first}    3`,
    );
    expect(fragmentSizes(content)).toEqual([1, 1, 1]);
  });

  test('the polymer backbone does not join, and its neighbours are bonded', () => {
    const content = text(
      atom({ residue: 'GLY', number: '1', name: ' C', element: 'C', serial: '1' }),
      atom({ residue: 'GLY', number: '2', name: ' N', element: 'N', serial: '2', x: 1.33 }),
      'CONECT    1    2',
    );
    const file = parse(snapshotOf(content), 'pdb');
    const frame = new FileAnalysis(file, DEFAULT_REQUEST).frame(0);
    expect(Array.from(new FileFindings(file).pairsOfFrame(frame), (pair) => pair.contact)).toEqual(['bonded']);
  });
});

describe('CRYST1', () => {
  const cryst = (a: string, b: string, c: string, angles = '  90.00  90.00  90.00') =>
    `CRYST1${a.padStart(9)}${b.padStart(9)}${c.padStart(9)}${angles} P 1           1`;
  const used = 'REMARK  99 periodic=true';
  test.each([
    ['is not used by itself', [cryst('30.000', '40.000', '50.000')], null],
    ['is used with periodic=true', [used, cryst('30.000', '40.000', '50.000')], [30, 0, 0, 0, 40, 0, 0, 0, 50]],
    ['of 1×1×1 is no cell', [used, cryst('1.000', '1.000', '1.000')], null],
  ])('%s', (_, records, vectors) => {
    const content = text(...records, atom({}));
    const { cell } = analyse(content, 'pdb').frames[0]!.model;
    expect(cell === null ? null : Array.from(cell.vectorsA)).toEqual(vectors);
    expect(found(content)).toEqual([]);
  });

  test('of a hexagonal cell has 120° between a and b', () => {
    const cell = only(text(cryst('30.000', '30.000', '50.000', '  90.00  90.00 120.00'), atom({}))).cell!;
    const expected = [30, 0, 0, -15, 15 * Math.sqrt(3), 0, 0, 0, 50];
    for (const [i, value] of cell.vectorsA.entries()) expect(value).toBeCloseTo(expected[i]!, 10);
  });

  test.each([
    ['number-unreadable', '30.000   40.000      abc  90.00  90.00  90.00', cryst('30.000', '40.000', 'abc')],
    ['cell-unusable', '0.000    0.000    0.000  90.00  90.00  90.00', cryst('0.000', '0.000', '0.000')],
    [
      'cell-unusable',
      '30.000   40.000   50.000   0.00  90.00  90.00',
      cryst('30.000', '40.000', '50.000', '   0.00  90.00  90.00'),
    ],
    [
      'cell-unusable',
      '30.000   40.000   50.000  10.00  10.00 170.00',
      cryst('30.000', '40.000', '50.000', '  10.00  10.00 170.00'),
    ],
  ])('%s at %j', (code, under, record) => {
    expect(found(text(used, record, atom({})))).toEqual([[code, under]]);
  });
});

describe('annotation', () => {
  const ligand = atom({ record: 'HETATM', residue: 'LIG', number: '401', x: 20 });
  const waters = ['1', '2'].flatMap((number, k) =>
    [' O', ' H1', ' H2'].map((name, i) =>
      atom({ residue: 'HOH', number, name, element: name[1]!, x: 9 * k, y: 0.6 * i, z: i === 2 ? 0.7 : 0 }),
    ),
  );
  const notesOf = (...remarks: string[]) => analyse(text(...remarks, ...waters, ligand), 'pdb').frames[0]!.model.notes;
  test('several lines for one fragment add up', () => {
    const note = notesOf(
      'REMARK  99 fragment=A:LIG:401 charge=-1',
      'REMARK  99 fragment=A:LIG:401 name=donor polarizability=2.5',
    )[2]!;
    expect([note.chargeE, note.name, note.polarizabilityA3]).toEqual([-1, 'donor', 2.5]);
  });

  test.each([
    ['number over name', ['*:HOH:* charge=1', '*:*:2 charge=2'], [1, 2, null]],
    ['number over name, in the other order', ['*:*:2 charge=2', '*:HOH:* charge=1'], [1, 2, null]],
    ['name over chain', ['A:*:* charge=1', '*:LIG:* charge=2'], [1, 1, 2]],
    ['key by key', ['A:HOH:2 name=w', '*:HOH:* charge=1'], [1, 1, null]],
    ['the earlier of equals', ['*:HOH:* charge=1', 'A:*:1 name=x', 'A:*:1 charge=4'], [4, 1, null]],
  ])('the more exact selector wins: %s', (_, selectors, charges) => {
    const notes = notesOf(...selectors.map((selector) => `REMARK  99 fragment=${selector}`));
    expect(notes.map((note) => note.chargeE)).toEqual(charges);
  });

  test('a dipole, a size along an axis, and their unit', () => {
    const notes = notesOf(
      'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1,H2',
      'REMARK  99 fragment=A:LIG:401 dipole="1.2 -0.4 3.1" dipole_unit=e*angstrom',
    );
    expect(notes[0]!.dipoleSizeEA).toBeCloseTo(1.855 * DEBYE_E_A, 12);
    expect([notes[0]!.axis!.before, notes[1]!.axis!.after]).toEqual([[0], [4, 5]]);
    expect(notes[2]!.dipoleEA).toEqual([1.2, -0.4, 3.1]);
  });

  test.each([
    ['occupancy', { occupancy: '-0.50' }],
    ['bfactor', { b: '-0.50' }],
    ['61-66', { b: '-0.50' }],
  ])('charge_column=%s', (column, fields) => {
    expect(Array.from(only(text(`REMARK  99 charge_column=${column}`, atom(fields))).atoms.chargeE!)).toEqual([-0.5]);
  });

  test.each([
    'REMARK   5 fragment=A:LIG:401 charge=1',
    'REMARK 100 fragment=A:LIG:401 charge=1',
    'REMARK  99 foreign=1',
  ])('%j is no annotation', (remark) => {
    expect(parse(snapshotOf(text(remark, ligand)), 'pdb').remarks).toEqual([]);
    expect(notesOf(remark)[2]!.chargeE).toBe(null);
  });

  const he = atom({ x: 30 });
  /** The numbers stand one column too far right. */
  const shifted = `${he.slice(0, 30)} ${he.slice(30)}`.replace('A   1', 'A   2');
  test.each([
    ['selector-unmatched', 'A:LIG:7', text('REMARK  99 fragment=A:LIG:7 charge=1', he)],
    ['value-invalid', 'A:LIG', text('REMARK  99 fragment=A:LIG charge=1', he)],
    ['value-invalid', '1-6', text('REMARK  99 charge_column=1-6', he)],
    [
      'key-repeated',
      'charge',
      text('REMARK  99 fragment=A:UNK:1 charge=0', 'REMARK  99 fragment=A:UNK:1 charge=1', he),
    ],
    ['key-repeated', 'charge', text('REMARK  99 fragment=A:UNK:1 charge=0 charge=1', he)],
    ['array-length', '"1 2"', text('REMARK  99 fragment=A:UNK:1 dipole="1 2"', he)],
    ['unit-unknown', 'x', text('REMARK  99 fragment=A:UNK:1 dipole_unit=x', he)],
    ['key-misspelt', 'polarisability', text('REMARK  99 fragment=A:UNK:1 polarisability=1', he)],
    ['number-unreadable', '1.0.0', text(he, atom({ number: '2' }).replace('   0.000', '   1.0.0'))],
    ['element-unknown', 'QQ', text(he, atom({ number: '2', element: 'QQ' }))],
    ['element-unknown', '11', text(he, atom({ number: '2', name: ' 11', element: '  ' }))],
    ['columns-off', shifted.slice(30, 54), text(he, shifted)],
    ['field-missing', he.slice(0, 38), text(he, he.slice(0, 38))],
    ['field-missing', 'HETATM', text(he, 'HETATM')],
    ['field-missing', 'ATOM', text(he, 'ATOM')],
    ['number-unreadable', 'x', text('REMARK  99 charge_column=bfactor', atom({ b: 'x' }))],
  ])('%s at %j', (code, under, content) => {
    for (const end of ['\n', '\r\n', '\r']) expect(found(content.replaceAll('\n', end))).toEqual([[code, under]]);
  });

  test('a key given on two lines names both', () => {
    const content = text('REMARK  99 fragment=A:UNK:1 charge=0', 'REMARK  99 fragment=A:UNK:1 charge=1', he);
    const [entry] = analyse(content, 'pdb').findings as [Finding];
    expect(entry.message).toMatch(/line 1 and again on line 2/);
    expect(entry.related.map(({ start }) => start)).toEqual([content.indexOf('charge')]);
    expect(entry.start).toBe(content.lastIndexOf('charge'));
  });
});
