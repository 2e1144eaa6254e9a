import { describe, expect, test } from 'vitest';
import type { Finding } from '../../server/src/base/finding';
import { parse } from '../../server/src/formats/parse';
import { type AtomField, AtomFlag, type FrameTree } from '../../server/src/formats/tree';
import { snapshotOf } from '../../server/src/text/snapshot';
import { analyse } from '../support/analyse';
import { pdbRecord as atom, type PdbFields as Fields } from '../support/pdb-lines';

/** Every line ends with a line feed. */
const text = (...lines: string[]) => lines.map((line) => `${line}\n`).join('');
const frames = (content: string) => parse(snapshotOf(content), 'pdb').frames;
const only = (content: string): FrameTree => {
  const [frame, ...more] = frames(content);
  expect(more).toEqual([]);
  return frame!;
};

// A line with every field: serial 7–11, name 13–16, alternate location 17, residue 18–21, chain 22, number 23–26, insertion 27,
// x 31–38, y 39–46, z 47–54, occupancy 55–60, B 61–66, element 77–78, charge 79–80.
const FULL = 'HETATM    7 ZN  AZN1 B  42C    -11.500   2.250 100.125  0.75 12.50          ZN2+';

const found = (content: string) =>
  analyse(content, 'pdb').findings.map(({ code, start, end }) => [code, content.slice(start, end)]);
const residuesOf = (content: string) =>
  only(content).residues!.map(({ chain, name, number, insertion, atoms }) => [
    `${chain}:${name}:${number}${insertion}`,
    atoms.length,
  ]);

describe('fixed columns', () => {
  test('the two ways to write a full line agree', () => {
    const same = atom({
      record: 'HETATM',
      serial: '7',
      name: 'ZN',
      alt: 'A',
      residue: 'ZN1',
      chain: 'B',
      number: '42',
      insertion: 'C',
      x: -11.5,
      y: 2.25,
      z: 100.125,
      occupancy: '0.75',
      b: '12.50',
      element: 'ZN',
      charge: '2+',
    });
    expect(same).toBe(FULL);
  });

  test.each(['\n', '\r\n', '\r', ''])('every field of a line that ends with %j', (end) => {
    const frame = only(FULL + end);
    const { element, positionA, formalE } = frame.atoms;
    expect([element[0], ...positionA, formalE![0]]).toEqual([30, -11.5, 2.25, 100.125, 2]);
    expect(frame.residues![0]).toMatchObject({
      chain: 'B',
      name: 'ZN1',
      number: 42,
      insertion: 'C',
      atomNames: ['ZN'],
    });
  });

  test.each([
    ['line', FULL],
    ['element', 'ZN'],
    ['x', '-11.500'],
    ['y', '2.250'],
    ['z', '100.125'],
    ['charge', '2+'],
  ] as [AtomField, string][])('the field %s has its exact place', (field, expected) => {
    for (const end of ['\n', '\r\n', '  \r']) {
      const content = `REMARK   1 first${end}${FULL}${end}`;
      const span = only(content).fieldSpan(0, field);
      expect(content.slice(span.start, span.end)).toBe(expected);
    }
  });

  test.each([
    ['numbers that touch', '-100.123-200.456-300.789', [-100.123, -200.456, -300.789]],
    ['large numbers that touch', '1000.1232000.4563000.789', [1000.123, 2000.456, 3000.789]],
    ['few decimals', '     1.5       2     3.  ', [1.5, 2, 3]],
    ['an exponent', '  1.5E01  1.5D01  1.5e-1', [15, 15, 0.15]],
  ])('%s', (_, columns, expected) => {
    const content = text(`${FULL.slice(0, 30)}${columns.padEnd(24).slice(0, 24)}${FULL.slice(54)}`);
    expect(Array.from(only(content).atoms.positionA)).toEqual(expected);
  });

  test('a line may end after z', () => {
    const content = text(atom({ name: ' O', residue: 'HOH', x: 1 }).slice(0, 54));
    const { element, positionA, formalE } = only(content).atoms;
    expect([element[0], ...positionA, formalE![0]]).toEqual([8, 1, 0, 0, Number.NaN]);
  });
});

describe('records', () => {
  const a = atom({});
  test.each([
    [
      'HET, HETNAM and HETSYN are no atoms',
      text('HET    ZN1  B  42       1', 'HETNAM     ZN1 ZINC ION', 'HETSYN     ZN1 ZN', a),
    ],
    [
      'HEADER, ANISOU, SIGATM, TITLE, MASTER are no atoms',
      text('HEADER    X', 'TITLE     ATOM', a, 'ANISOU    1 HE', 'SIGATM    1', 'MASTER'),
    ],
    ['records in small letters are no atoms', text('atom      1', a, 'hetatm    2')],
    ['lines shorter than a record name are passed over', text('', 'A', 'AT', a, 'EN', 'X')],
    ['CR alone parts lines', text('REMARK   1', a, 'END').replaceAll('\n', '\r')],
  ])('%s', (_, content) => {
    expect(only(content).atoms.count).toBe(1);
    expect(found(content)).toEqual([]);
  });

  test.each([
    [
      'MODEL and ENDMDL',
      text('MODEL        1', a, 'ENDMDL', 'MODEL        2', a, a.replace('UNK', 'UNL'), 'ENDMDL', 'END'),
      [1, 2],
    ],
    ['MODEL alone', text('MODEL        1', a, 'MODEL        2', a), [1, 1]],
    ['END alone', text(a, 'END', a, 'END'), [1, 1]],
    ['models without atoms', text('MODEL        1', 'ENDMDL', 'MODEL        2', a, 'ENDMDL'), [1]],
    ['atoms after the last ENDMDL', text('MODEL        1', a, 'ENDMDL', a), [1, 1]],
  ])('%s part models', (_, content, counts) => {
    expect(frames(content).map((frame) => frame.atoms.count)).toEqual(counts);
  });
});

describe('elements', () => {
  const { ghost, unknownElement, deuterium } = AtomFlag;
  test.each([
    ['written, right-justified', ' O  ', 'HOH', ' O', 8, 0],
    ['written, left-justified', ' O  ', 'HOH', 'O ', 8, 0],
    ['written in small letters', 'ZN  ', 'ZN', 'zn', 30, 0],
    ['written, against the name', ' CA ', 'ALA', ' N', 7, 0],
    ['written D', ' D1 ', 'DOD', ' D', 1, deuterium],
    ['written X', ' X  ', 'UNK', ' X', 0, ghost],
    ['written wrongly', ' CA ', 'ALA', 'QQ', 0, unknownElement],
    ['from a name in column 14', ' CA ', 'ALA', '  ', 6, 0],
    ['from a name in column 13', 'CA  ', ' CA', '  ', 20, 0],
    ['from a long hydrogen name', 'HE21', 'GLN', '  ', 1, 0],
    ['from a long hydrogen name of a ligand', "HO5'", 'LIG', '  ', 1, 0],
    ['from a hydrogen name with its number first', '1HB ', 'ALA', '  ', 1, 0],
    ['from mercury', 'HG  ', 'HG', '  ', 80, 0],
    ['from iron', 'FE  ', 'HEM', '  ', 26, 0],
    ['from chlorine', 'CL1 ', 'LIG', '  ', 17, 0],
    ['from selenium in a polymer', 'SE  ', 'MSE', '  ', 34, 0],
    ['from a left-justified name in an amino acid', 'CB  ', 'ALA', '  ', 6, 0],
    ['from deuterium', ' D1 ', 'DOD', '  ', 1, deuterium],
    ['from nothing', ' 1  ', 'UNK', '  ', 0, unknownElement],
    ['beside the line number of an old file', ' CA ', 'ALA', ' 1', 6, 0],
    ['beside a larger line number of an old file', ' N  ', 'ALA', '11', 7, 0],
  ])('%s', (_, name, residue, element, z, flags) => {
    const { atoms } = only(text(atom({}), atom({ name, residue, element, number: '2', x: 9 })));
    expect([atoms.element[1], atoms.flags[1]]).toEqual([z, flags]);
  });

  test.each([
    ['2+', 2],
    ['+2', 2],
    ['1-', -1],
    ['-1', -1],
    ['+ ', 1],
    [' -', -1],
    ['  ', Number.NaN],
    ['70', Number.NaN],
  ])('formal charge %j', (charge, value) => {
    expect(only(text(atom({ charge }))).atoms.formalE![0]).toBe(value);
  });
});

describe('residues', () => {
  const water = (number: string, f: Fields = {}) =>
    [' O', ' H1', ' H2'].map((name, k) =>
      atom({ name, residue: 'HOH', number, element: name.slice(1, 2), y: k, ...f }),
    );
  test.each([
    [
      'insertion codes',
      [atom({ number: '52' }), atom({ number: '52', insertion: 'A' })],
      [
        ['A:UNK:52', 1],
        ['A:UNK:52A', 1],
      ],
    ],
    ['negative numbers', [atom({ number: '-5' })], [['A:UNK:-5', 1]]],
    [
      'hybrid-36 capitals',
      [atom({ number: '9999' }), atom({ number: 'A000' }), atom({ number: 'A001' })],
      [
        ['A:UNK:9999', 1],
        ['A:UNK:10000', 1],
        ['A:UNK:10001', 1],
      ],
    ],
    [
      'hybrid-36 small letters',
      [atom({ number: 'ZZZZ' }), atom({ number: 'a000' })],
      [
        ['A:UNK:1223055', 1],
        ['A:UNK:1223056', 1],
      ],
    ],
    [
      'wrapped numbers',
      [...water('1'), ...water('2'), ...water('1')],
      [
        ['A:HOH:1', 3],
        ['A:HOH:2', 3],
        ['A:HOH:1', 3],
      ],
    ],
    [
      'starred numbers',
      [...water('****'), ...water('****')],
      [
        ['A:HOH:NaN', 3],
        ['A:HOH:NaN', 3],
      ],
    ],
    ['a blank chain', [atom({ chain: ' ' })], [[':UNK:1', 1]]],
    ['a name of four letters', [atom({ residue: 'TIP3' })], [['A:TIP3:1', 1]]],
    [
      'atoms of one residue apart in the file',
      [atom({ name: 'N' }), atom({ number: '2' }), atom({ name: 'O' })],
      [
        ['A:UNK:1', 2],
        ['A:UNK:2', 1],
      ],
    ],
  ] as [string, string[], [string, number][]][])('%s', (_, lines, expected) => {
    expect(residuesOf(text(...lines))).toEqual(expected);
  });

  test('chain segments end at TER and where the chain changes', () => {
    const content = text(atom({}), 'TER', atom({ number: '2' }), atom({ number: '3', chain: 'B' }));
    expect(only(content).residues!.map((residue) => residue.segment)).toEqual([0, 1, 2]);
  });

  const alt = (name: string, letter: string, occupancy: string, f: Fields = {}) =>
    atom({ name, alt: letter, occupancy, x: letter === 'B' ? 1 : 0, ...f });
  test.each([
    [
      'the highest total occupancy of a residue',
      [alt('N1', 'A', '0.60'), alt('N1', 'B', '0.40'), alt('N2', 'A', '0.10'), alt('N2', 'B', '0.60')],
      'B',
    ],
    ['the first of equal ones', [alt('N1', 'A', '0.50'), alt('N1', 'B', '0.50')], 'A'],
    [
      'the one with more atoms where sums say so',
      [alt('N1', 'A', '0.50'), alt('N1', 'B', '0.50'), alt('N2', 'B', '0.50')],
      'B',
    ],
    [
      'one of two residue names at one place',
      [alt('N1', 'A', '0.30', { residue: 'SER' }), alt('N1', 'B', '0.70', { residue: 'THR' })],
      'B',
    ],
    ['one although an occupancy is blank', [alt('N1', 'A', ''), alt('N1', 'B', '0.10')], 'B'],
  ])('alternate locations: %s', (_, lines, letter) => {
    const frame = only(text(atom({ name: 'C0', x: 5 }), ...lines));
    const kept = lines.filter((line) => line[16] === letter).length;
    expect(frame.atoms.count).toBe(1 + kept);
    expect(Array.from(frame.atoms.positionA).filter((_, i) => i % 3 === 0)).toEqual([
      5,
      ...Array.from({ length: kept }, () => (letter === 'B' ? 1 : 0)),
    ]);
  });

  test('TER ends a segment although the atom behind it is a location that is left out', () => {
    const content = text(
      atom({ name: 'C0', number: '1' }),
      'TER',
      alt('N1', 'A', '0.10', { number: '2' }),
      alt('N1', 'B', '0.90', { number: '2' }),
    );
    expect(only(content).residues!.map(({ number, segment }) => [number, segment])).toEqual([
      [1, 0],
      [2, 1],
    ]);
  });

  test('left-out locations are said once, at the letter of the first', () => {
    const content = text(
      alt('N1', 'A', '0.60'),
      alt('N1', 'B', '0.40'),
      alt('N1', 'A', '0.60', { number: '2', y: 5 }),
      alt('N1', 'B', '0.40', { number: '2', y: 5 }),
    );
    expect(found(content)).toEqual([['alternate-locations', 'B']]);
    const [{ start }] = analyse(content, 'pdb').findings as [Finding];
    expect(start).toBe(content.indexOf('\n') + 1 + 16);
  });
});
