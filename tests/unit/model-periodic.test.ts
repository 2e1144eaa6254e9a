import { describe, expect, test } from 'vitest';
import type { PairRecord } from '../../server/src/features/records';
import {
  add,
  analyse,
  type Fragment,
  frameText,
  known,
  moved,
  randomDirection,
  randomRotation,
  scaled,
  seeded,
  type Vector,
} from '../property/build-frame';

/** Fragments and pairs of periodic frames, against frames in the open that hold the same atoms. */

const WATER: Fragment = {
  sites: [
    { symbol: 'O', at: [0, 0, 0], chargeE: -0.8 },
    { symbol: 'H', at: [0.757, 0.586, 0], chargeE: 0.4 },
    { symbol: 'H', at: [-0.757, 0.586, 0], chargeE: 0.4 },
  ],
};

const CELLS: readonly (readonly [string, readonly [Vector, Vector, Vector]])[] = [
  [
    'a cube',
    [
      [12, 0, 0],
      [0, 12, 0],
      [0, 0, 12],
    ],
  ],
  [
    'a triclinic cell',
    [
      [13, 0, 0],
      [6, 11, 0],
      [-5, 4, 12],
    ],
  ],
  [
    'a strongly skewed cell',
    [
      [12, 0, 0],
      [35, 12, 0],
      [-23, 25, 12],
    ],
  ],
];

function lattice(vectors: readonly Vector[], pbc = 'T T T'): string {
  return `Lattice="${vectors.flat().join(' ')}" pbc="${pbc}"`;
}

/** Waters at random places, 3.5 Å apart at least, in the open. */
function waters(count: number, vectors: readonly Vector[], random: () => number): Fragment[] {
  const placed: { at: Vector; fragment: Fragment }[] = [];
  while (placed.length < count) {
    const at = vectors.reduce<Vector>((sum, v) => add(sum, v, random()), [0, 0, 0]);
    const turn = randomRotation(random);
    placed.push({ at, fragment: moved(WATER, (v) => add(turn(v), at)) });
  }
  return placed.map(({ fragment }) => fragment);
}

/** Each atom moved by its own whole cell vectors. */
function scattered(fragment: Fragment, vectors: readonly Vector[], flags: readonly boolean[], random: () => number) {
  return moved(fragment, (at) =>
    vectors.reduce<Vector>((sum, v, k) => add(sum, v, flags[k] ? Math.floor(5 * random()) - 2 : 0), at),
  );
}

describe('a fragment cut by the boundary', () => {
  const flagSets = [
    [true, true, true],
    [true, false, true],
    [false, true, false],
  ] as const;

  test.each(CELLS)('of %s is made whole, starting from its first atom as written', (_, vectors) => {
    const random = seeded(9);
    for (const flags of flagSets) {
      for (let round = 0; round < 30; round++) {
        const chain: Fragment = {
          sites: ['C', 'C', 'C', 'O', 'N'].map((symbol, k) => ({
            symbol,
            at: [1.4 * k, 0.4 * (k % 2), 0.1 * k] as const,
            chargeE: 0.1 * (k - 2),
          })),
        };
        const turn = randomRotation(random);
        const whole = moved(chain, (v) => add(turn(v), scaled(randomDirection(random), 0)));
        const cut = scattered(whole, vectors, flags, random);
        const keys = lattice(vectors, flags.map((flag) => (flag ? 'T' : 'F')).join(' '));
        const { frame } = analyse(frameText([cut], keys));
        const open = analyse(frameText([whole])).frame;
        const by = add(cut.sites[0]!.at, whole.sites[0]!.at, -1);
        for (let k = 0; k < 15; k++) {
          expect(Math.abs(frame.model.positionA[k]! - open.model.positionA[k]! - by[k % 3]!)).toBeLessThan(1e-9);
        }
        for (const a of [0, 1, 2]) {
          expect(Math.abs(frame.moments.centreA[a]! - open.moments.centreA[a]! - by[a]!)).toBeLessThan(1e-9);
          expect(Math.abs(frame.moments.dipoleEA[a]! - open.moments.dipoleEA[a]!)).toBeLessThan(1e-9);
        }
      }
    }
  });

  test('is made whole without bonds too: each member beside the nearest placed one', () => {
    const salt: Fragment = {
      sites: [
        { symbol: 'Na', at: [11.5, 1, 1], chargeE: 1 },
        { symbol: 'Cl', at: [1.9, 1, 1], chargeE: -1 },
        { symbol: 'Na', at: [4.7, 1, 1], chargeE: 1 },
      ],
    };
    const { frame } = analyse(frameText([salt], lattice(CELLS[0]![1])));
    const x = [0, 3, 6].map((k) => frame.model.positionA[k]!);
    for (const [k, expected] of [11.5, 13.9, 16.7].entries()) expect(x[k]).toBeCloseTo(expected, 12);
  });
});

describe('a fragment without an end', () => {
  const chain = (places: readonly number[], length: number, others = ['Ar 1 6 6']) => {
    const atoms = places.map((x, k) => `C ${x} ${k % 2 === 0 ? 0 : 0.4} 0`);
    const all = [...atoms, ...others];
    return [`${all.length}`, `Lattice="${length} 0 0 0 20 0 0 0 20" pbc="T T T"`, ...all, ''].join('\n');
  };

  test('of eight bonded atoms a cell has no moments and no pairs', () => {
    const { frame, records } = analyse(chain([0, 1.25, 2.5, 3.75, 5, 6.25, 7.5, 8.75], 10));
    expect(frame.model.fragments.count).toBe(2);
    expect(Array.from(frame.model.endless)).toEqual([1, 0]);
    expect(records).toEqual([]);
  });

  test('of eight bonded atoms in a cell twice as long has an end', () => {
    const { frame, records } = analyse(chain([0, 1.25, 2.5, 3.75, 5, 6.25, 7.5, 8.75], 20));
    expect(Array.from(frame.model.endless)).toEqual([0, 0]);
    expect(records).toHaveLength(1);
  });

  test('of two bonded atoms a cell, each bonded to the other on both sides', () => {
    const { frame } = analyse(chain([0, 1.25], 2.5, []));
    expect(Array.from(frame.model.endless)).toEqual([1]);
  });

  test('of one atom a cell, bonded to its own image', () => {
    const { frame } = analyse(chain([0], 1.4, []));
    expect(Array.from(frame.model.endless)).toEqual([1]);
  });

  test('graphene by its cell of two atoms', () => {
    const text = '2\nLattice="2.46 0 0 -1.23 2.1304 0 0 0 20" pbc="T T F"\nC 0 0 0\nC 0 1.4203 0\n';
    expect(Array.from(analyse(text).frame.model.endless)).toEqual([1]);
  });
});

/** A record as it would stand in another frame: without numbers of atoms, fragments and images. */
function comparable({ closest, image: _image, first: _first, second: _second, ...rest }: PairRecord) {
  return { ...rest, closest: { distanceA: closest.distanceA, contactRatio: closest.contactRatio } };
}

function roundedNumbers(value: unknown): unknown {
  return JSON.parse(JSON.stringify(value), (_key, item: unknown) =>
    typeof item === 'number' ? Number(item.toFixed(6)) : item,
  );
}

describe('the pairs of a periodic frame', () => {
  const random = seeded(21);
  test.each(CELLS)('of %s are those of a cluster of explicit images', (_, vectors) => {
    const count = 4;
    for (const flags of [
      [true, true, true],
      [true, true, false],
    ] as const) {
      const inside = waters(count, vectors, random);
      const pbc = flags.map((flag) => (flag ? 'T' : 'F')).join(' ');
      const cut = inside.map((fragment) => scattered(fragment, vectors, flags, random));
      const settings = { cutoffA: 4.5 };
      const { frame, records } = analyse(frameText(cut, lattice(vectors, pbc)), settings);
      // Made whole from its first atom as written, each water is the one inside moved by whole vectors; the cluster takes these.
      const { positionA } = frame.model;
      const whole = cut.map((fragment, f) => ({
        sites: fragment.sites.map((site, k) => ({
          ...site,
          at: Array.from(positionA.subarray(9 * f + 3 * k, 9 * f + 3 * k + 3)) as unknown as Vector,
        })),
      }));
      const centre = (f: number) => Array.from(frame.moments.centreA.subarray(3 * f, 3 * f + 3)) as unknown as Vector;
      const range = (k: number) => (flags[k] ? Array.from({ length: 25 }, (_n, i) => i - 12) : [0]);
      const shifts = range(0).flatMap((i) => range(1).flatMap((j) => range(2).map((k) => [i, j, k] as const)));
      const vectorOf = (n: readonly number[]) => vectors.reduce<Vector>((sum, v, k) => add(sum, v, n[k]!), [0, 0, 0]);
      const offsets = shifts.map(vectorOf);
      let listed = 0;
      for (let f = 0; f < count; f++) {
        for (let g = f + 1; g < count; g++) {
          const d = add(centre(g), centre(f), -1);
          let best = 0;
          let least = Number.POSITIVE_INFINITY;
          for (const [k, offset] of offsets.entries()) {
            const length = Math.hypot(...add(d, offset));
            if (length < least) [best, least] = [k, length];
          }
          const second = moved(whole[g]!, (at) => add(at, offsets[best]!));
          const expected = analyse(frameText([whole[f]!, second]), settings).records;
          const actual = records.filter((pair) => pair.first === f + 1 && pair.second === g + 1);
          expect(actual).toHaveLength(expected.length);
          if (expected.length === 0) continue;
          listed++;
          expect(actual[0]!.image).toEqual([...shifts[best]!]);
          expect(known(actual[0]!.distanceA)).toBeCloseTo(least, 9);
          expect(roundedNumbers(comparable(actual[0]!))).toEqual(roundedNumbers(comparable(expected[0]!)));
        }
      }
      expect(records).toHaveLength(listed);
    }
  });

  test('do not depend on which images the file gives', () => {
    const vectors = CELLS[1]![1];
    const inside = waters(5, vectors, random);
    const keys = lattice(vectors);
    const before = analyse(frameText(inside, keys), { cutoffA: 5 }).records.map(comparable);
    for (let round = 0; round < 5; round++) {
      const elsewhere = inside.map((fragment) => scattered(fragment, vectors, [true, true, true], random));
      const after = analyse(frameText(elsewhere, keys), { cutoffA: 5 }).records.map(comparable);
      expect(roundedNumbers(after)).toEqual(roundedNumbers(before));
    }
  });
});
