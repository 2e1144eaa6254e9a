import { describe, expect, it } from 'vitest';
import { parse } from '../../server/src/formats/parse';
import { decodeHybrid36 } from '../../server/src/formats/pdb/hybrid36';
import { snapshotOf } from '../../server/src/text/snapshot';
import { read } from './data/outside-program';

/**
 * PDB: facts of the format. Columns: wwPDB, PDB Contents Guide, format version 3.30 (2012). Hybrid-36: R. W. Grosse-Kunstleve, the
 * reference implementation in cctbx (2007) and its vectors.
 */

interface Fields {
  readonly record?: string;
  readonly serial?: string;
  /** Columns 13–16, four characters. */
  readonly name?: string;
  readonly altLoc?: string;
  readonly residue?: string;
  readonly chain?: string;
  readonly number?: string;
  readonly insertion?: string;
  readonly xyz?: readonly [string, string, string];
  readonly occupancy?: string;
  readonly bFactor?: string;
  readonly element?: string;
  readonly charge?: string;
}

/** An ATOM or HETATM line of 80 columns. */
function atom(fields: Fields): string {
  const { record = 'ATOM', serial = '1', name = ' CA ', altLoc = '', residue = 'ALA', chain = 'A' } = fields;
  const { number = '1', insertion = '', xyz = ['0.000', '0.000', '0.000'], occupancy = '1.00' } = fields;
  const { bFactor = '0.00', element = '', charge = '' } = fields;
  const line = [
    record.padEnd(6),
    serial.padStart(5),
    ' ',
    name,
    altLoc.padEnd(1),
    residue.padStart(3),
    ' ',
    chain,
    number.padStart(4),
    insertion.padEnd(4),
    ...xyz.map((value) => value.padStart(8)),
    occupancy.padStart(6),
    bFactor.padStart(6),
    ' '.repeat(10),
    element.padStart(2),
    charge.padEnd(2),
  ].join('');
  expect(line).toHaveLength(80);
  return line;
}

const pdb = (...lines: string[]) => parse(snapshotOf(`${lines.join('\n')}\nEND\n`), 'pdb');

describe('hybrid-36', () => {
  it.each([
    ['9999', 9999],
    ['A000', 10000],
    ['A009', 10009],
    ['A00A', 10010],
    ['A00Z', 10035],
    ['A010', 10036],
    ['A0ZZ', 11295],
    ['A100', 11296],
    ['AZZZ', 56655],
    ['B000', 56656],
    ['ZZZZ', 1223055],
    ['a000', 1223056],
    ['a00z', 1223091],
    ['zzzz', 2436111],
    ['-999', -999],
    [' -78', -78],
    ['   0', 0],
    ['    ', 0],
  ])('the residue number "%s" is %d', (field, number) => {
    expect(decodeHybrid36(field, 4)).toBe(number);
  });

  it.each([
    ['99999', 99999],
    ['A0000', 100000],
    ['A000A', 100010],
    ['A000Z', 100035],
    ['A0010', 100036],
    ['A00ZZ', 101295],
    ['AZZZZ', 1779615],
    ['B0000', 1779616],
    ['C0000', 3459232],
    ['ZZZZZ', 43770015],
    ['a0000', 43770016],
    ['a0010', 43770052],
    ['zzzzz', 87440031],
    ['-9999', -9999],
    ['    0', 0],
    ['     ', 0],
  ])('the serial "%s" is %d', (field, number) => {
    expect(decodeHybrid36(field, 5)).toBe(number);
  });

  it.each([
    ['', 4],
    [' abc', 4],
    ['abc-', 4],
    ['A=BC', 4],
    ['40a0', 4],
    ['40A0', 4],
    ['Ab00', 4],
    ['****', 4],
    ['', 5],
    [' abcd', 5],
    ['ABCD-', 5],
    ['a=bcd', 5],
    ['410b0', 5],
    ['410B0', 5],
    ['*****', 5],
  ])('"%s" of width %d is none', (field, width) => {
    expect(decodeHybrid36(field, width)).toBeNaN();
  });

  it('serials and residue numbers past their columns are read in a file', () => {
    const file = pdb(
      atom({ serial: 'A0000', number: 'A000', element: 'C' }),
      atom({ serial: '*****', number: '9999' }),
    );
    expect(file.frames[0]!.residues!.map(({ number }) => number)).toEqual([10000, 9999]);
    expect(file.problems).toEqual([]);
  });
});

describe('the element', () => {
  it.each([
    [' C', 6],
    ['CA', 20],
    [' H', 1],
    ['HG', 80],
    ['ZN', 30],
    ['Se', 34],
    [' D', 1],
  ])('"%s", right-justified in columns 77–78, is number %d whatever the name', (element, z) => {
    expect(pdb(atom({ element })).frames[0]!.atoms.element[0]).toBe(z);
  });

  it.each([
    ['ATOM', ' CA ', 'ALA', 6, 'the alpha carbon'],
    ['HETATM', 'CA  ', 'CA', 20, 'calcium'],
    ['ATOM', ' CD ', 'GLU', 6, 'the delta carbon'],
    ['HETATM', 'CD  ', 'CD', 48, 'cadmium'],
    ['ATOM', ' HG ', 'SER', 1, 'the gamma hydrogen'],
    ['ATOM', 'HG11', 'VAL', 1, 'a hydrogen name of four characters'],
    ['HETATM', 'HG  ', 'HG', 80, 'mercury'],
    ['ATOM', '1HB ', 'ALA', 1, 'a hydrogen named as before 2008'],
    ['HETATM', 'FE  ', 'HEM', 26, 'haem iron'],
    ['HETATM', ' NA ', 'HEM', 7, 'a haem nitrogen'],
    ['HETATM', 'NA  ', 'NA', 11, 'sodium'],
    ['HETATM', 'CL  ', 'CL', 17, 'chloride'],
    ['ATOM', ' OXT', 'ALA', 8, 'the terminal oxygen'],
    ['ATOM', 'HE21', 'GLN', 1, 'an amide hydrogen'],
  ])('%s "%s" of %s without columns 77–78 is number %d: %s', (record, name, residue, z) => {
    expect(pdb(atom({ record, name, residue })).frames[0]!.atoms.element[0]).toBe(z);
  });
});

describe('columns', () => {
  it.each([
    ['1-', -1],
    ['2+', 2],
    ['1+', 1],
    ['3-', -3],
    ['  ', Number.NaN],
  ])('the formal charge "%s" in columns 79–80 is %d', (charge, expected) => {
    const { atoms } = pdb(atom({ element: 'ZN', charge })).frames[0]!;
    expect(Object.is(atoms.formalE![0], expected)).toBe(true);
  });

  it('formal charges sum to the charge of a residue', () => {
    const text = [
      atom({ residue: 'ASP', name: ' OD1', element: 'O' }),
      atom({ residue: 'ASP', name: ' OD2', element: 'O', charge: '1-', xyz: ['2.200', '0.000', '0.000'] }),
      atom({
        record: 'HETATM',
        residue: 'ZN',
        name: 'ZN  ',
        number: '2',
        element: 'ZN',
        charge: '2+',
        xyz: ['9', '0', '0'],
      }),
    ].join('\n');
    const { fragments } = read(text, {}, 'pdb');
    expect(fragments.map(({ chargeE, chargeSource }) => [chargeE, chargeSource])).toEqual([
      [-1, 'formal'],
      [2, 'formal'],
    ]);
  });

  it.each([
    ['-100.123', '-200.456', '-300.789'],
    ['1000.000', '1234.567', '9999.999'],
    ['-999.999', '9999.999', '-999.999'],
    ['0.001', '-0.001', '12.345'],
  ])('the coordinates %s %s %s are told apart by their columns', (...xyz) => {
    const file = pdb(atom({ xyz, element: 'C' }));
    expect([...file.frames[0]!.atoms.positionA]).toEqual(xyz.map(Number));
    expect(file.problems).toEqual([]);
  });

  it.each([
    ['occupancy', 0.75],
    ['bfactor', 136.16],
    ['55-60', 0.75],
    ['61-66', 136.16],
  ])('occupancy and B factor that touch ("  0.75136.16"): %s is %d', (column, expected) => {
    const line = atom({ occupancy: '0.75', bFactor: '136.16', element: 'C' });
    expect(line.slice(54, 66)).toBe('  0.75136.16');
    const file = pdb(`REMARK  99 charge_column=${column}`, line);
    expect(file.frames[0]!.atoms.chargeE![0]).toBe(expected);
  });

  it.each([
    ['a chain', { chain: 'B' }],
    ['an insertion code', { insertion: 'A' }],
    ['a number', { number: '-1' }],
    ['a residue name', { residue: 'GLY' }],
  ] as const)('%s of its own makes another residue', (_, fields) => {
    const file = pdb(atom({ element: 'C' }), atom({ element: 'C', ...fields }));
    expect(file.frames[0]!.residues).toHaveLength(2);
  });

  it('of two alternate locations the one of higher occupancy is read', () => {
    const file = pdb(
      atom({ altLoc: 'A', occupancy: '0.40', xyz: ['1', '0', '0'], element: 'C' }),
      atom({ altLoc: 'B', occupancy: '0.60', xyz: ['2', '0', '0'], element: 'C' }),
    );
    expect([...file.frames[0]!.atoms.positionA]).toEqual([2, 0, 0]);
  });

  it('MODEL and ENDMDL part the frames, and TER takes no atom', () => {
    const file = pdb(
      'MODEL        1',
      atom({ element: 'C' }),
      'TER       2      ALA A   1',
      'ENDMDL',
      'MODEL        2',
      atom({ element: 'C' }),
      'ENDMDL',
    );
    expect(file.frames.map(({ atoms }) => atoms.count)).toEqual([1, 1]);
  });

  it('CONECT names up to four partners in columns 12–31, and a repeated one is no second bond', () => {
    const carbons = ['1', '2', '3', '4', '5'].map((serial) =>
      atom({ record: 'HETATM', serial, name: ` C${serial} `, residue: 'LIG', element: 'C' }),
    );
    const file = pdb(...carbons, 'CONECT    1    2    3    4    5', 'CONECT    1    2');
    const { bonds } = file.frames[0]!;
    const pairs = new Set(Array.from({ length: bonds.length / 2 }, (_, k) => `${bonds[2 * k]}-${bonds[2 * k + 1]}`));
    expect([...pairs].sort()).toEqual(['0-1', '0-2', '0-3', '0-4']);
  });
});

describe('CRYST1', () => {
  const cellLine = (lengths: number[], angles: number[]) =>
    `CRYST1${lengths.map((value) => value.toFixed(3).padStart(9)).join('')}${angles
      .map((value) => value.toFixed(2).padStart(7))
      .join('')} P 1           1`.padEnd(80);

  const cells: [name: string, lengths: number[], angles: number[]][] = [
    ['tetragonal', [79.1, 79.1, 37.9], [90, 90, 90]],
    ['monoclinic', [63.15, 83.59, 53.8], [90, 99.34, 90]],
    ['hexagonal', [61.2, 61.2, 110.2], [90, 90, 120]],
    ['rhombohedral', [50, 50, 50], [65, 65, 65]],
    ['triclinic', [27.28, 31.98, 34.29], [88.53, 108.57, 111.89]],
    ['columns that touch', [1234.567, 2345.678, 3456.789], [90, 90, 90]],
  ];
  it.each(cells)('%s: a along x, b in the xy plane, lengths, angles and volume as written', (_, lengths, angles) => {
    const { cell } = pdb(cellLine(lengths, angles), atom({ element: 'C' })).frames[0]!;
    const [a, b, c] = [0, 1, 2].map((k) => [...cell!.vectorsA.subarray(3 * k, 3 * k + 3)]) as [
      number[],
      number[],
      number[],
    ];
    const dot = (v: number[], w: number[]) => v.reduce((sum, value, k) => sum + value * w[k]!, 0);
    const angle = (v: number[], w: number[]) =>
      (Math.acos(dot(v, w) / Math.sqrt(dot(v, v) * dot(w, w))) * 180) / Math.PI;
    expect([a[1], a[2], b[2]]).toEqual([0, 0, 0]);
    for (const [k, v] of [a, b, c].entries()) expect(Math.sqrt(dot(v, v))).toBeCloseTo(lengths[k]!, 9);
    expect(angle(b, c)).toBeCloseTo(angles[0]!, 9);
    expect(angle(a, c)).toBeCloseTo(angles[1]!, 9);
    expect(angle(a, b)).toBeCloseTo(angles[2]!, 9);
    const [x, y, z] = angles.map((degrees) => Math.cos((degrees * Math.PI) / 180)) as [number, number, number];
    const volume = lengths[0]! * lengths[1]! * lengths[2]! * Math.sqrt(1 - x * x - y * y - z * z + 2 * x * y * z);
    expect((a[0]! * b[1]! * c[2]!) / volume).toBeCloseTo(1, 12);
  });

  it('1 x 1 x 1 with right angles stands for no crystal', () => {
    expect(pdb(cellLine([1, 1, 1], [90, 90, 90]), atom({ element: 'C' })).frames[0]!.cell).toBeNull();
  });
});
