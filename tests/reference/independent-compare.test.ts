import { describe, expect, test } from 'vitest';
import { differences, type ProgramFrame } from './independent/compare.js';
import { MOLECULES, scatter, seeded, writeXyz } from './independent/invent.js';
import { independentFrames } from './independent.js';

/** The comparison itself: it accepts what is equal and notices every single change. */

const { water, hydroxide, fluoroChloroMethane } = MOLECULES;
const placed = scatter([water, fluoroChloroMethane, hydroxide], 4, seeded(3));
const keys = 'fragment_polarizabilities="1.45 4.2 2.1"';
const expected = independentFrames(writeXyz(placed, { charges: true, fragments: true, keys }), 'xyz');
const printed = (): ProgramFrame[] => JSON.parse(JSON.stringify(expected));

type Json = { [key: string]: Json } | Json[] | number | string | null;

/** Paths of all leaves, `doubts` left out: they are not printed. */
function leaves(value: Json, path: string[] = []): string[][] {
  if (value === null || typeof value !== 'object') return [path];
  return Object.entries(value).flatMap(([key, inner]) => (key === 'doubts' ? [] : leaves(inner, [...path, key])));
}

function change(frames: ProgramFrame[], path: string[], by: (value: Json) => Json): void {
  let holder = frames as unknown as { [key: string]: Json };
  for (const key of path.slice(0, -1)) holder = holder[key] as { [key: string]: Json };
  const last = path[path.length - 1];
  holder[last] = by(holder[last]);
}

function another(value: Json): Json {
  if (typeof value === 'number') return value === 0 ? 1e-3 : value * 1.01;
  return value === null ? 0 : `${value}!`;
}

describe('the comparison', () => {
  test('what is equal differs nowhere', () => {
    expect(differences(printed(), expected)).toEqual([]);
  });

  test('every leaf of the output, changed by itself, is noticed', () => {
    const unnoticed = leaves(JSON.parse(JSON.stringify(expected))).filter((path) => {
      const frames = printed();
      change(frames, path, another);
      return differences(frames, expected).length === 0;
    });
    expect(unnoticed).toEqual([]);
  });

  test('two parts in a million are noticed, half a part is not', () => {
    const path = ['0', 'pairs', '0', 'energyKJPerMol', 'coulomb'];
    for (const [part, count] of [
      [2e-6, 1],
      [0.5e-6, 0],
    ]) {
      const frames = printed();
      change(frames, path, (value) => (value as number) * (1 + part));
      expect(differences(frames, expected)).toHaveLength(count);
    }
  });

  test('a missing pair, an extra pair, a missing frame', () => {
    const fewer = printed();
    const pair = fewer[0].pairs.pop()!;
    expect(differences(fewer, expected)).toHaveLength(1);
    const more = printed();
    more[0].pairs.push({ ...pair, first: 3, second: 4 });
    expect(differences(more, expected)).toHaveLength(1);
    expect(differences([], expected)).toHaveLength(1);
  });

  test('a whole turn of φ is no difference', () => {
    const frames = printed();
    change(frames, ['0', 'pairs', '0', 'phiDeg'], (value) => (value as number) + 360);
    expect(differences(frames, expected)).toEqual([]);
  });
});
