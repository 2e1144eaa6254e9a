import { describe, expect, test } from 'vitest';
import { FileAnalysis } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { parse } from '../../server/src/formats/parse';
import { snapshotOf } from '../../server/src/text/snapshot';
import { analyse } from '../property/build-frame';

/** Which atoms form one molecule by their distances: the check list of the physics sheet, geometries of textbooks (from memory). */

type Row = readonly [symbol: string, x: number, y: number, z: number];

const xyz = (rows: readonly Row[], comment = '') =>
  [rows.length, comment, ...rows.map((r) => r.join(' ')), ''].join('\n');

function fragmentsOf(rows: readonly Row[], comment = ''): number[] {
  return Array.from(analyse(xyz(rows, comment)).frame.model.fragments.ofAtom);
}

const polar = (r: number, degrees: number): [number, number] => [
  r * Math.cos((degrees * Math.PI) / 180),
  r * Math.sin((degrees * Math.PI) / 180),
];

function water(x: number, turn = 0, bond = 0.958): Row[] {
  const [ax, ay] = polar(bond, turn + 52.2);
  const [bx, by] = polar(bond, turn - 52.2);
  return [
    ['O', x, 0, 0],
    ['H', x + ax, ay, 0],
    ['H', x + bx, by, 0],
  ];
}

describe('one molecule', () => {
  const n2o4 = (): Row[] => {
    const [x, y] = polar(1.19, 112.6);
    return [
      ['N', -0.878, 0, 0],
      ['N', 0.878, 0, 0],
      ['O', 0.878 - x, y, 0],
      ['O', 0.878 - x, -y, 0],
      ['O', -0.878 + x, y, 0],
      ['O', -0.878 + x, -y, 0],
    ];
  };
  // FOOF: O–O 1.217, O–F 1.575, angle 109.5°, dihedral 87.5°.
  const foof = (): Row[] => {
    const [x, y] = polar(1.575, 109.5);
    const [cy, cz] = polar(y, 87.5);
    return [
      ['O', 0, 0, 0],
      ['O', 1.217, 0, 0],
      ['F', x, y, 0],
      ['F', 1.217 - x, cy, cz],
    ];
  };
  const zundel: Row[] = [
    ['H', 0, 0, 0],
    ['O', 1.2, 0, 0],
    ['O', -1.2, 0, 0],
    ['H', 1.7, 0.82, 0],
    ['H', 1.7, -0.82, 0],
    ['H', -1.7, 0, 0.82],
    ['H', -1.7, 0, -0.82],
  ];
  test.each<[string, Row[]]>([
    [
      'F2',
      [
        ['F', 0, 0, 0],
        ['F', 1.412, 0, 0],
      ],
    ],
    [
      'H2',
      [
        ['H', 0, 0, 0],
        ['H', 0.741, 0, 0],
      ],
    ],
    ['N2O4', n2o4()],
    ['FOOF', foof()],
    [
      'I3-',
      [
        ['I', 0, 0, 0],
        ['I', 2.92, 0, 0],
        ['I', -2.92, 0, 0],
      ],
    ],
    [
      'asymmetric I3-',
      [
        ['I', 0, 0, 0],
        ['I', 2.83, 0, 0],
        ['I', -3.03, 0, 0],
      ],
    ],
    ['Zundel H5O2+', zundel],
    [
      'FHF-',
      [
        ['F', -1.145, 0, 0],
        ['H', 0, 0, 0],
        ['F', 1.145, 0, 0],
      ],
    ],
    ['D2O', water(0).map(([symbol, x, y, z]) => [symbol === 'H' ? 'D' : symbol, x, y, z])],
    [
      'Zn(NH3) without hydrogens, 2.0 Å',
      [
        ['Zn', 0, 0, 0],
        ['N', 2.0, 0, 0],
      ],
    ],
  ])('%s', (_, rows) => {
    expect(new Set(fragmentsOf(rows))).toEqual(new Set([0]));
  });

  test('of a proton moved in H5O2+ while the longer side is within 10 % of the shorter', () => {
    // O–O 2.4 Å: 1.145 and 1.255 differ by 9.6 %, 1.14 and 1.26 by 10.5 %; the longest O–H bond is 1.37 Å.
    const at = (x: number): Row[] =>
      zundel.map(([symbol, ...r], k): Row => (k === 0 ? ['H', x, 0, 0] : [symbol, ...r]));
    expect(new Set(fragmentsOf(at(0.055))).size).toBe(1);
    expect(new Set(fragmentsOf(at(0.06))).size).toBe(2);
  });
});

describe('two molecules', () => {
  test.each<[string, Row[], number]>([
    ['Na+ and water', [['Na', -2.3, 0, 0], ...water(0)], 1],
    [
      'Na and Cl',
      [
        ['Na', 0, 0, 0],
        ['Cl', 2.361, 0, 0],
      ],
      1,
    ],
    [
      'Ca and O at 1.82 Å',
      [
        ['Ca', 0, 0, 0],
        ['O', 1.82, 0, 0],
      ],
      1,
    ],
    [
      'two zinc atoms',
      [
        ['Zn', 0, 0, 0],
        ['Zn', 2.4, 0, 0],
      ],
      1,
    ],
    [
      'a halogen bond N···I of 2.7 Å',
      [
        ['N', 0, 0, 0],
        ['I', 2.7, 0, 0],
        ['I', 5.45, 0, 0],
      ],
      1,
    ],
    ['a water dimer, H···O 1.95', [...water(0, 52.2), ...water(0.958 + 1.95)], 3],
    ['a short hydrogen bond, O–H 1.0 and H···O 1.35', [...water(0, 52.2, 1.0), ...water(2.35)], 3],
    [
      'two hydrogen molecules 1.6 Å apart',
      [
        ['H', 0, 0, 0],
        ['H', 0.741, 0, 0],
        ['H', 2.341, 0, 0],
        ['H', 3.082, 0, 0],
      ],
      2,
    ],
  ])('%s', (_, rows, size) => {
    expect(fragmentsOf(rows)).toEqual(rows.map((_row, k) => (k < size ? 0 : 1)));
  });

  test('a hydrogen keeps its nearest neighbour alone', () => {
    // C–H 1.09 with a second H 1.0 Å away: only C–H and the other's own bond stand.
    const rows: Row[] = [
      ['C', 0, 0, 0],
      ['H', 0.95, 0, 0],
      ['H', 1.95, 0, 0],
      ['C', 2.9, 0, 0],
    ];
    expect(fragmentsOf(rows)).toEqual([0, 0, 1, 1]);
  });
});

describe('limits of a bond', () => {
  // c(C) 0.76, c(O) 0.66, c(N) 0.71, c(Fe) 1.32 (low spin).
  test.each([
    ['C', 'C', 0.76 + 0.76 + 0.4],
    ['C', 'O', 0.76 + 0.66 + 0.4],
    ['N', 'N', 0.71 + 0.71 + 0.4],
    ['Fe', 'N', 1.32 + 0.71 + 0.3],
    ['C', 'H', 0.76 + 0.31 + 0.4],
  ])('%s–%s is %d Å', (a, b, limit) => {
    const apart = (d: number) =>
      fragmentsOf([
        [a, 0, 0, 0],
        [b, d, 0, 0],
      ]);
    expect(apart(limit - 1e-6)).toEqual([0, 0]);
    expect(apart(limit + 1e-6)).toEqual([0, 1]);
  });
});

describe('ghosts', () => {
  test('join the fragment of the nearest atom within 1 Å, whatever their order in the file', () => {
    const rows: Row[] = [['X', 0.15, 0, 0], ...water(0), ...water(4), ['Bq', 4.15, 0, 0]];
    expect(fragmentsOf(rows)).toEqual([0, 0, 0, 0, 1, 1, 1, 1]);
  });

  test('beyond 1 Å from every atom belong to no fragment, and never join two', () => {
    expect(
      fragmentsOf([
        ['Ar', 0, 0, 0],
        ['X', 1.01, 0, 0],
      ]),
    ).toEqual([0, -1]);
    expect(
      fragmentsOf([
        ['Ar', 0, 0, 0],
        ['X', 0.9, 0, 0],
        ['Ar', 3.6, 0, 0],
      ]),
    ).toEqual([0, 0, 1]);
    expect(
      fragmentsOf([
        ['He', 0, 0, 0],
        ['Gh', 0.8, 0, 0],
        ['He', 1.5, 0, 0],
      ]),
    ).toEqual([0, 1, 1]);
  });

  test('have no mass: the mass centre is that of the atoms', () => {
    const { moments } = analyse(
      xyz([
        ['Ar', 0, 0, 0],
        ['X', 0.9, 0, 0],
      ]),
    ).frame;
    expect(Array.from(moments.centreA)).toEqual([0, 0, 0]);
    expect(moments.extentA[0]).toBe(0);
  });
});

test('an atom with a ghost beside it is still a single atom: extent 0, dipole 0, a basis for its pairs', () => {
  const { frame, records } = analyse(
    xyz([
      ['Ar', 0, 0, 0],
      ['X', 0.9, 0, 0],
      ['Ar', 6, 0, 0],
    ]),
  );
  expect(frame.moments.extentA[0]).toBe(0);
  expect(frame.moments.dipoleSource).toEqual(['atom', 'atom']);
  expect(frame.moments.dipoleNormEA[0]).toBe(0);
  expect(records[0]).toMatchObject({ regime: 'far', advice: 'accept' });
});

test('heavy water has its own masses: the centre of HDO lies nearer to D', () => {
  const rows = water(0).map(([symbol, x, y, z], k): Row => [k === 1 ? 'D' : symbol, x, y, z]);
  const { moments, model } = analyse(xyz(rows)).frame;
  const [d, h, o] = [2.014101777844, 1.008, 15.999];
  expect(moments.centreA[1]).toBeCloseTo(((d - h) * rows[1]![2]) / (d + h + o), 6);
  expect(model.formulas).toEqual(['DHO']);
});

describe('later frames', () => {
  const declared =
    'fragment_atoms="1,4 2-3" fragment_names="first second" kind_dipole_sizes="He2:1.2" kind_axes="He2:He>He"';
  const he = (z: number): Row[] => [
    ['He', 0, 0, z],
    ['Ne', 4, 0, z],
    ['Ne', 8, 0, z],
    ['He', 12, 0, z],
  ];
  const frames = (...parts: string[]) => new FileAnalysis(parse(snapshotOf(parts.join('')), 'xyz'), DEFAULT_REQUEST);

  test('inherit fragments, names and kinds of the first where the elements are the same', () => {
    const { model, moments } = frames(xyz(he(0), declared), xyz(he(1))).frame(1);
    expect(Array.from(model.fragments.ofAtom)).toEqual([0, 1, 1, 0]);
    expect(model.names).toEqual(['first', 'second']);
    expect(moments.dipoleNormEA[0]).toBeCloseTo(1.2 * 0.2081943, 6);
  });

  test('inherit them whichever frame is looked at first', () => {
    const file = frames(xyz(he(0), declared), xyz(he(1)), xyz(he(2)));
    expect([...file.frame(2).model.names]).toEqual(['first', 'second']);
    expect([...file.frame(0).model.names]).toEqual(['first', 'second']);
    expect([...file.frame(1).model.names]).toEqual(['first', 'second']);
  });

  test('inherit a fragment column with its words', () => {
    const rows = ['Ar 0 0 0 host', 'Ar 4 0 0 guest', 'Ar 8 0 0 host'];
    const first = ['3', 'Properties=species:S:1:pos:R:3:fragment:S:1', ...rows, ''].join('\n');
    const plain = xyz([
      ['Ar', 0, 0, 1],
      ['Ar', 4, 0, 1],
      ['Ar', 8, 0, 1],
    ]);
    const { model } = frames(first, plain).frame(1);
    expect(Array.from(model.fragments.ofAtom)).toEqual([0, 1, 0]);
    expect(model.names).toEqual(['host', 'guest']);
  });

  test('stand alone where they say something themselves, or their elements differ', () => {
    const own = frames(xyz(he(0), declared), xyz(he(1), 'fragment_atoms="1-2 3-4"')).frame(1).model;
    expect(Array.from(own.fragments.ofAtom)).toEqual([0, 0, 1, 1]);
    const other = he(1).map(([symbol, ...r], k): Row => [k === 0 ? 'Ar' : symbol, ...r]);
    const stranger = frames(xyz(he(0), declared), xyz(other)).frame(1).model;
    expect(Array.from(stranger.fragments.ofAtom)).toEqual([0, 1, 2, 3]);
    expect(stranger.names).toEqual(['Ar', 'Ne', 'Ne', 'He']);
  });

  test('do not inherit charges and dipoles of the first', () => {
    const text = 'fragment_atoms="1 2 3 4" fragment_charges="1 0 0 -1" fragment_dipoles="1 0 0 0 0 0 0 0 0 0 0 0"';
    const { moments } = frames(xyz(he(0), text), xyz(he(1))).frame(1);
    expect(Array.from(moments.chargeE)).toEqual([0, 0, 0, 0]);
    expect(Array.from(moments.dipoleNormEA)).toEqual([0, 0, 0, 0]);
  });
});
