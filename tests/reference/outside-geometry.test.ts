import { describe, expect, it } from 'vitest';
import type { PairRecord } from '../../server/src/features/records';
import { type Atom, known, read, xyz } from './data/outside-program';
import { S22_DIMERS } from './data/s22-dimers';

/**
 * Real geometries: what is one molecule, what is two, what touches and what clashes. Bond lengths are those of textbooks and of gas-
 * phase structures (from memory), to the digits written; the cluster geometries of S22 are published.
 */

/** Water whose first hydrogen points along (dx, 0, 0) from an oxygen at (x, 0, 0); its O–H there is `bondA` long. */
function water(x: number, dx: 1 | -1, bondA = 0.96): Atom[] {
  return [
    ['O', x, 0, 0],
    ['H', x + dx * bondA, 0, 0],
    ['H', x - dx * 0.24, 0.93, 0],
  ];
}

/** Water that turns its lone pairs to −x and its hydrogens to +x. */
function waterFacing(x: number): Atom[] {
  return [
    ['O', x, 0, 0],
    ['H', x + 0.587, 0.757, 0],
    ['H', x + 0.587, -0.757, 0],
  ];
}

function ammoniaFacing(x: number): Atom[] {
  return [
    ['N', x, 0, 0],
    ['H', x + 0.38, 0.94, 0],
    ['H', x + 0.38, -0.47, 0.814],
    ['H', x + 0.38, -0.47, -0.814],
  ];
}

describe.each(S22_DIMERS.map((dimer) => [dimer.name, dimer] as const))('%s of the S22 set', (_, dimer) => {
  const { fragments, pairs, findings } = read(xyz(dimer.atoms));
  const numbers = dimer.atoms.map((_atom, i) => i + 1);

  it('is two molecules by its bonds', () => {
    expect(fragments.map(({ atoms }) => atoms)).toEqual([numbers.slice(0, dimer.split), numbers.slice(dimer.split)]);
  });

  it(`has its mass centres ${dimer.centresA} A apart`, () => {
    expect(Math.abs(known(pairs[0]!.distanceA) - dimer.centresA)).toBeLessThan(6e-5);
  });

  it(`has its closest contact between atoms ${dimer.closest.atoms.join(' and ')}`, () => {
    const { closest } = pairs[0]!;
    expect(closest.atoms).toEqual(dimer.closest.atoms);
    expect(Math.abs(known(closest.distanceA) - dimer.closest.distanceA)).toBeLessThan(1e-6);
    expect(Math.abs(known(closest.contactRatio) - dimer.closest.ratio)).toBeLessThan(1e-6);
    expect(known(closest.distanceA)).toBeGreaterThan(dimer.shortestA - 5e-5);
  });

  it(`is ${dimer.closest.ratio < 1 ? 'touching' : 'apart'}, no clash, and draws no error or warning`, () => {
    expect(pairs[0]!.contact).toBe(dimer.closest.ratio < 1 ? 'touching' : 'apart');
    expect(findings.filter((finding) => /^(?:error|warning)/.test(finding))).toEqual([]);
  });
});

describe('bonds that must be seen: one molecule each', () => {
  const molecules: [name: string, atoms: Atom[]][] = [
    [
      'F2 1.412',
      [
        ['F', 0, 0, 0],
        ['F', 1.412, 0, 0],
      ],
    ],
    [
      'H2 0.741',
      [
        ['H', 0, 0, 0],
        ['H', 0.741, 0, 0],
      ],
    ],
    [
      'Cl2 1.988',
      [
        ['Cl', 0, 0, 0],
        ['Cl', 1.988, 0, 0],
      ],
    ],
    [
      'N2O4, N–N 1.782',
      [
        ['N', 0, 0, 0],
        ['N', 1.782, 0, 0],
        ['O', -0.46, 1.1, 0],
        ['O', -0.46, -1.1, 0],
        ['O', 2.242, 1.1, 0],
        ['O', 2.242, -1.1, 0],
      ],
    ],
    [
      'FOOF, O–O 1.217 and O–F 1.575',
      [
        ['O', 0, 0, 0],
        ['O', 1.217, 0, 0],
        ['F', -0.522, 1.486, 0],
        ['F', 1.739, 0.057, 1.485],
      ],
    ],
    [
      'triiodide, I–I 2.92 twice',
      [
        ['I', -2.92, 0, 0],
        ['I', 0, 0, 0],
        ['I', 2.92, 0, 0],
      ],
    ],
    [
      'the Zundel cation, O–H 1.2 twice',
      [
        ['H', 0, 0, 0],
        ['O', -1.2, 0, 0],
        ['O', 1.2, 0, 0],
        ['H', -1.5, 0.9, 0],
        ['H', -1.5, -0.9, 0],
        ['H', 1.5, 0, 0.9],
        ['H', 1.5, 0, -0.9],
      ],
    ],
    [
      'bifluoride, F–H 1.14 twice',
      [
        ['F', -1.14, 0, 0],
        ['H', 0, 0, 0],
        ['F', 1.14, 0, 0],
      ],
    ],
    [
      'B2H6, bridges of 1.33',
      [
        ['B', -0.885, 0, 0],
        ['B', 0.885, 0, 0],
        ['H', 0, 0.993, 0],
        ['H', 0, -0.993, 0],
        ['H', -1.48, 0, 1.03],
        ['H', -1.48, 0, -1.03],
        ['H', 1.48, 0, 1.03],
        ['H', 1.48, 0, -1.03],
      ],
    ],
    [
      'dimethylmercury without hydrogens, Hg–C 2.083',
      [
        ['C', -2.083, 0, 0],
        ['Hg', 0, 0, 0],
        ['C', 2.083, 0, 0],
      ],
    ],
  ];
  it.each(molecules)('%s', (_, atoms) => {
    const { fragments } = read(xyz(atoms));
    expect(fragments.map((fragment) => fragment.atoms.length)).toEqual([atoms.length]);
  });
});

describe('distances that are no bonds: two molecules each', () => {
  const clusters: [name: string, atoms: Atom[], sizes: [number, number]][] = [
    ['Na+ and water, Na–O 2.35', [['Na', 0, 0, 0], ...waterFacing(2.35)], [1, 3]],
    [
      'NaCl, 2.36',
      [
        ['Na', 0, 0, 0],
        ['Cl', 2.36, 0, 0],
      ],
      [1, 1],
    ],
    ['Mg2+ and water, Mg–O 1.95', [['Mg', 0, 0, 0], ...waterFacing(1.95)], [1, 3]],
    ['ammonia and ICl, halogen bond N–I 2.7', [['Cl', -2.37, 0, 0], ['I', 0, 0, 0], ...ammoniaFacing(2.7)], [2, 4]],
    ['water and water, H–O 1.7', [...water(0, 1), ...waterFacing(0.96 + 1.7)], [3, 3]],
    ['water and water, H–O 1.8', [...water(0, 1), ...waterFacing(0.96 + 1.8)], [3, 3]],
    ['water and water, H–O 1.9', [...water(0, 1), ...waterFacing(0.96 + 1.9)], [3, 3]],
    ['water and water, H–O 2.0', [...water(0, 1), ...waterFacing(0.96 + 2)], [3, 3]],
    ['water and ammonia, H–N 1.75', [...water(0, 1), ...ammoniaFacing(0.96 + 1.75)], [3, 4]],
    [
      'HF and HF, H–F 1.8',
      [
        ['F', 0, 0, 0],
        ['H', 0.92, 0, 0],
        ['F', 2.72, 0, 0],
        ['H', 3, 0.88, 0],
      ],
      [2, 2],
    ],
    [
      'two argon atoms, 3.76',
      [
        ['Ar', 0, 0, 0],
        ['Ar', 3.76, 0, 0],
      ],
      [1, 1],
    ],
  ];
  it.each(clusters)('%s', (_, atoms, sizes) => {
    expect(read(xyz(atoms)).fragments.map((fragment) => fragment.atoms.length)).toEqual(sizes);
  });
});

const HYDROXIDE: Atom[] = [
  ['O', 0, 0, 0],
  ['H', -0.3, 0.91, 0],
];

/** Pairs with their declared fragments (atoms of the first) and charges. */
type Close = [name: string, atoms: Atom[], split: number, charges: string];

const REAL: Close[] = [
  [
    'LiF, 1.56',
    [
      ['Li', 0, 0, 0],
      ['F', 1.56, 0, 0],
    ],
    1,
    '1 -1',
  ],
  [
    'LiF, 1.56, without charges',
    [
      ['Li', 0, 0, 0],
      ['F', 1.56, 0, 0],
    ],
    1,
    'nan nan',
  ],
  [
    'NaF, 1.93',
    [
      ['Na', 0, 0, 0],
      ['F', 1.93, 0, 0],
    ],
    1,
    '1 -1',
  ],
  ['Be2+ and water, Be–O 1.65', [['Be', 0, 0, 0], ...waterFacing(1.65)], 1, '2 0'],
  ['Zn2+ and ammonia, Zn–N 2.0', [['Zn', 0, 0, 0], ...ammoniaFacing(2)], 1, '2 0'],
  ['F- and water, H–F 1.37', [['F', 0, 0, 0], ...water(1.37 + 1.07, -1, 1.07)], 1, '-1 0'],
  ['OH- and water, H–O 1.40', [...HYDROXIDE, ...water(1.4 + 1.08, -1, 1.08)], 2, '-1 0'],
  [
    'H3O+ and water, H–O 1.48',
    [['O', 0, 0, 0], ['H', 1.03, 0, 0], ['H', -0.35, 0.92, 0], ['H', -0.35, -0.4, 0.83], ...waterFacing(1.03 + 1.48)],
    4,
    '1 0',
  ],
  [
    'Cl- and HCl, H–Cl 1.57',
    [
      ['Cl', 0, 0, 0],
      ['H', 1.57, 0, 0],
      ['Cl', 2.97, 0, 0],
    ],
    1,
    '-1 0',
  ],
];

describe('real short distances between declared fragments are no clash', () => {
  it.each(REAL)('%s', (_, atoms, split, charges) => {
    const pair = closePair(atoms, split, charges);
    expect(pair.contact).toBe('touching');
    expect(pair.advice).not.toBe('repair');
    expect(pair.findings.filter((finding) => finding.startsWith('error'))).toEqual([]);
  });
});

describe('distances that are a mistake', () => {
  const wrong: Close[] = [
    ['two waters, O–O 1.3', [...waterFacing(0), ...water(-1.3, -1)], 3, '0 0'],
    [
      'two argon atoms, 1.9',
      [
        ['Ar', 0, 0, 0],
        ['Ar', 1.9, 0, 0],
      ],
      1,
      '0 0',
    ],
    ['two waters, H–H 1.0', [...water(0, 1), ...water(2.92, -1)], 3, '0 0'],
    ['two waters, H–O 0.6', [...water(0, 1), ...waterFacing(1.56)], 3, '0 0'],
  ];
  it.each(wrong)('%s clashes, and the advice is to repair', (_, atoms, split, charges) => {
    const pair = closePair(atoms, split, charges);
    expect(pair.contact).toBe('clash');
    expect(pair.advice).toBe('repair');
    expect(pair.findings).toContain('error clash');
  });
});

function closePair(atoms: Atom[], split: number, charges: string): PairRecord & { findings: readonly string[] } {
  const range = (from: number, to: number) => (from === to ? String(from) : `${from}-${to}`);
  const lists = `${range(1, split)} ${range(split + 1, atoms.length)}`;
  const { pairs, findings } = read(xyz(atoms, `fragment_atoms="${lists}" fragment_charges="${charges}"`));
  return { ...pairs[0]!, findings };
}
