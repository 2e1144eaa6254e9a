import { describe, expect, test } from 'vitest';
import {
  add,
  analyse,
  type Fragment,
  frameText,
  randomDirection,
  scaled,
  seeded,
  type Vector,
} from '../property/build-frame';

/** Which pairs belong to the list, against a search over all pairs and images. */

const BOX_A = 90;

/** Small fragments, long chains (extent up to 20 Å) and ions at random places. */
function crowd(random: () => number): Fragment[] {
  return Array.from({ length: 25 }, () => {
    const at: Vector = [BOX_A * random(), BOX_A * random(), BOX_A * random()];
    const u = randomDirection(random);
    const length = [1, 2, 4, 30][Math.floor(4 * random())]!;
    const chargeE = [0, 0, 0.1, 0.11, 1, -1][Math.floor(6 * random())]!;
    return {
      chargeE,
      dipoleEA: [0, 0, 0.1],
      sites: Array.from({ length }, (_, k) => ({ symbol: 'C', at: add(at, scaled(u, 1.4 * k)) })),
    };
  });
}

describe('the list of pairs', () => {
  test.each([
    ['in the open', '', 12, false],
    ['in the open with a short cutoff', '', 3, false],
    ['in a periodic box', `Lattice="${BOX_A} 0 0 0 ${BOX_A} 0 0 0 ${BOX_A}"`, 12, true],
    ['in a periodic box with a long cutoff', `Lattice="${BOX_A} 0 0 0 ${BOX_A} 0 0 0 ${BOX_A}"`, 25, true],
  ] as const)(
    'holds R - a1 - a2 <= cutoff, three times that for two ions, and every contact: %s',
    (_, keys, cutoffA, periodic) => {
      for (let seed = 1; seed <= 12; seed++) {
        const fragments = crowd(seeded(seed));
        const { frame, pairs } = analyse(frameText(fragments, keys), { cutoffA });
        const records = pairs.map((pair) => ({
          first: pair.first + 1,
          second: pair.second + 1,
          contact: pair.contact,
        }));
        const { centreA, extentA } = frame.moments;
        const fold = (x: number) => (periodic ? x - BOX_A * Math.round(x / BOX_A) : x);
        const expected: string[] = [];
        for (let f = 0; f < fragments.length; f++) {
          for (let g = f + 1; g < fragments.length; g++) {
            const d = [0, 1, 2].map((a) => fold(centreA[3 * g + a]! - centreA[3 * f + a]!));
            const ions = Math.abs(fragments[f]!.chargeE!) > 0.1 && Math.abs(fragments[g]!.chargeE!) > 0.1;
            if (Math.hypot(...d) - extentA[f]! - extentA[g]! <= (ions ? 3 : 1) * cutoffA)
              expected.push(`${f + 1}-${g + 1}`);
          }
        }
        const listed = records.map(({ first, second }) => `${first}-${second}`);
        expect(listed.filter((pair) => !expected.includes(pair))).toEqual(
          records
            .filter(({ first, second, contact }) => contact !== 'apart' && !expected.includes(`${first}-${second}`))
            .map(({ first, second }) => `${first}-${second}`),
        );
        expect(expected.filter((pair) => !listed.includes(pair))).toEqual([]);
        const order = records.map(({ first, second }) => 100 * first + second);
        expect(order).toEqual([...order].sort((a, b) => a - b));
      }
    },
  );

  test('has contacts at any cutoff', () => {
    const two = (x: number): Fragment[] => [0, x].map((at) => ({ sites: [{ symbol: 'Ar', at: [at, 0, 0] }] }));
    expect(analyse(frameText(two(3.7)), { cutoffA: 0.01 }).records.map(({ contact }) => contact)).toEqual(['touching']);
    expect(analyse(frameText(two(3.8)), { cutoffA: 0.01 }).records).toEqual([]);
    expect(analyse(frameText(two(12)), {}).records).toHaveLength(1);
    expect(analyse(frameText(two(12.001)), {}).records).toEqual([]);
  });
});

test('without a basis the distance rule alone decides, even where the clouds overlap', () => {
  // H2 side by side 2.3 Å apart with dipoles declared zero: ratio 0.96, R > 3(a1 + a2) = 2.22.
  const hydrogen = (x: number): Fragment => ({
    dipoleEA: [0, 0, 0],
    sites: [
      { symbol: 'H', at: [x, 0.37, 0] },
      { symbol: 'H', at: [x, -0.37, 0] },
    ],
  });
  const [pair] = analyse(frameText([hydrogen(0), hydrogen(2.3)])).records;
  expect(pair).toMatchObject({ contact: 'touching', basis: 'none', advice: 'accept' });
});
