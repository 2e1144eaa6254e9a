import { describe, expect, test } from 'vitest';
import { type Cell, createCell, imageResult, minimumImage } from '../../server/src/model/cell';
import { NeighbourBuffer } from '../../server/src/model/neighbour-buffer';
import { PointGrid } from '../../server/src/model/point-grid';
import { add, dot, randomDirection, scaled, seeded, type Vector } from '../property/build-frame';

/** The geometry of periodic cells against a search over every image. */

type Flags = readonly [boolean, boolean, boolean];

/** Cell vectors that lie well apart, so that the nearest image is within four of the rounded one. */
interface Lattice {
  readonly compact: readonly Vector[];
  /** The same lattice by skewed vectors, in the order of the file. */
  readonly written: readonly Vector[];
  readonly periodic: Flags;
  readonly cell: Cell;
}

const FLAGS: readonly Flags[] = [
  [true, true, true],
  [true, true, true],
  [true, true, false],
  [false, true, true],
  [true, false, true],
  [true, false, false],
  [false, true, false],
  [false, false, true],
];

function determinant([a, b, c]: readonly Vector[]): number {
  return (
    a![0] * (b![1] * c![2] - b![2] * c![1]) -
    a![1] * (b![0] * c![2] - b![2] * c![0]) +
    a![2] * (b![0] * c![1] - b![1] * c![0])
  );
}

/** The same lattice by vectors at angles near 90°: whole multiples of each are taken from the others. */
function nearlySquare(vectors: readonly Vector[]): Vector[] {
  const v = [...vectors];
  for (let round = 0; round < 20; round++) {
    for (const [i, j] of [
      [0, 1],
      [0, 2],
      [1, 2],
      [1, 0],
      [2, 0],
      [2, 1],
    ] as const) {
      v[i] = add(v[i]!, v[j]!, -Math.round(dot(v[i]!, v[j]!) / dot(v[j]!, v[j]!)));
    }
  }
  return v;
}

/** A random lattice; `shape` 0: like a cube, 1: like a needle or a plate. Its written vectors are skewed by whole multiples. */
function randomLattice(random: () => number, shape: number, skew: number, smallest = 3): Lattice {
  for (;;) {
    const lengths = [0, 1, 2].map(() => smallest * (1 + (shape === 0 ? 2 : 40) * random() ** 2));
    const compact = nearlySquare(lengths.map((length) => scaled(randomDirection(random), length)));
    const periodic = FLAGS[Math.floor(FLAGS.length * random())]!;
    const unit = Math.abs(determinant(compact)) / compact.reduce((product, v) => product * Math.hypot(...v), 1);
    const shortestA = Math.min(...compact.map((v) => Math.hypot(...v)));
    if (unit < 0.5 || shortestA < 0.8 * smallest) continue;
    const written = compact.map((v) => v);
    const directions = [0, 1, 2].filter((k) => periodic[k]);
    for (let step = 0; step < skew && directions.length > 1; step++) {
      const k = directions[Math.floor(directions.length * random())]!;
      const other = directions[Math.floor(directions.length * random())]!;
      if (k !== other) written[k] = add(written[k]!, written[other]!, Math.floor(5 * random()) - 2);
    }
    const cell = createCell(written.flat(), periodic);
    if (typeof cell === 'string') throw new Error(cell);
    return { compact, written, periodic, cell };
  }
}

/** Coordinates of a vector along the compact periodic vectors (least squares where fewer than three are periodic). */
function fractions({ compact, periodic }: Lattice, d: Vector): number[] {
  const basis = compact.map((v, k) => (periodic[k] ? v : null));
  const rows = basis.filter((v) => v !== null);
  // Gram matrix solved by Gauss–Jordan elimination: at most 3 × 3 and well conditioned.
  const table = rows.map((a) => [...rows.map((b) => dot(a, b)), dot(a, d)]);
  for (let k = 0; k < rows.length; k++) {
    const pivot = table[k]![k]!;
    table[k] = table[k]!.map((value) => value / pivot);
    for (let i = 0; i < rows.length; i++) {
      if (i === k) continue;
      const factor = table[i]![k]!;
      table[i] = table[i]!.map((value, j) => value - factor * table[k]![j]!);
    }
  }
  let next = 0;
  return basis.map((v) => (v === null ? 0 : table[next++]![rows.length]!));
}

/** Lengths of all differences within ±4 of the rounded one (9³ images), as [length, vector]. */
function images(lattice: Lattice, d: Vector): Vector[] {
  const start = fractions(lattice, d).map((f) => -Math.round(f));
  const range = (k: number) => (lattice.periodic[k] ? [-4, -3, -2, -1, 0, 1, 2, 3, 4] : [0]);
  const found: Vector[] = [];
  for (const i of range(0)) {
    for (const j of range(1)) {
      for (const k of range(2)) {
        const [a, b, c] = lattice.compact as [Vector, Vector, Vector];
        found.push(add(add(add(d, a, start[0]! + i), b, start[1]! + j), c, start[2]! + k));
      }
    }
  }
  return found;
}

function shortest(vectors: readonly Vector[]): number {
  return vectors.reduce((least, v) => Math.min(least, Math.hypot(...v)), Number.POSITIVE_INFINITY);
}

describe('the minimum image', () => {
  const out = imageResult();
  const kinds = [
    ['nearly cubic cells as they are', 0, 0],
    ['nearly cubic cells, skewed', 0, 4],
    ['needles and plates as they are', 1, 0],
    ['needles and plates, skewed', 1, 4],
  ] as const;

  test.each(kinds)('is the shortest of all in 500 cells: %s', (_, shape, skew) => {
    const random = seeded(101 + 10 * shape + skew);
    for (let round = 0; round < 500; round++) {
      const lattice = randomLattice(random, shape, skew);
      const { written, periodic, cell } = lattice;
      for (let k = 0; k < 4; k++) {
        const d = written.reduce<Vector>((sum, v) => add(sum, v, 2 * random() - 1), scaled(randomDirection(random), 2));
        minimumImage(cell, ...d, out);
        const got = Array.from(out.vectorA) as unknown as Vector;
        expect(Math.abs(Math.hypot(...got) - shortest(images(lattice, d)))).toBeLessThan(1e-9);
        const [n1, n2, n3] = Array.from(out.image) as [number, number, number];
        const [a, b, c] = written as [Vector, Vector, Vector];
        const shifted = add(add(add(d, a, n1), b, n2), c, n3);
        expect(Math.hypot(...add(shifted, got, -1))).toBeLessThan(1e-9);
        for (const [axis, n] of [n1, n2, n3].entries()) if (!periodic[axis]) expect(n).toBe(0);
      }
    }
  });

  test('keeps the written difference where it is as short as any', () => {
    const cell = createCell([10, 0, 0, 0, 10, 0, 0, 0, 10], [true, true, true]) as Cell;
    const kept: Vector[] = [
      [5, 0, 0],
      [-5, 0, 0],
      [5, -5, 5],
      [0, 0, 0],
      [1, 2, -3],
    ];
    for (const d of kept) {
      minimumImage(cell, ...d, out);
      expect(Array.from(out.vectorA)).toEqual([...d]);
      expect(Array.from(out.image)).toEqual([0, 0, 0]);
    }
  });

  test('of a difference and of its opposite are opposites in length', () => {
    const random = seeded(7);
    for (let round = 0; round < 300; round++) {
      const { cell } = randomLattice(random, 1, 4);
      const d = scaled(randomDirection(random), 200 * random());
      minimumImage(cell, ...d, out);
      const there = Math.hypot(...out.vectorA);
      minimumImage(cell, -d[0], -d[1], -d[2], out);
      expect(Math.hypot(...out.vectorA)).toBeCloseTo(there, 9);
    }
  });
});

describe('a cell', () => {
  test.each([
    ['without volume', [10, 0, 0, 0, 10, 0, 10, 10, 0], [true, true, true]],
    ['with a vector of no length', [10, 0, 0, 0, 0, 0, 0, 0, 10], [true, true, true]],
    ['with a vector below 1 A', [10, 0, 0, 0, 10, 0, 0, 0, 0.9], [true, true, true]],
    ['with a number that is not finite', [10, 0, 0, 0, Number.NaN, 0, 0, 0, 10], [true, true, true]],
    ['with two parallel periodic vectors', [10, 0, 0, 20, 0, 0, 0, 0, 10], [true, true, false]],
    ['that is thin though its vectors are long', [10, 0, 0, 9.9, 0.5, 0, 0, 0, 10], [true, true, true]],
  ] as const)('%s is refused with a reason', (_, vectors, periodic) => {
    expect(createCell(vectors, periodic)).toEqual(expect.any(String));
  });

  test('may have anything in the directions that are not periodic', () => {
    const cell = createCell([10, 0, 0, 0, 0, 0, Number.NaN, 0, 0], [true, false, false]);
    expect(cell).not.toEqual(expect.any(String));
    const out = imageResult();
    minimumImage(cell as Cell, 9, 40, -70, out);
    expect(Array.from(out.vectorA)).toEqual([-1, 40, -70]);
  });
});

describe('the grid of points', () => {
  const buffer = new NeighbourBuffer();

  function gathered(grid: PointGrid, i: number, radius: number, onlyAfter: boolean): Map<number, number> {
    grid.gather(i, radius, onlyAfter, buffer);
    const found = new Map<number, number>();
    for (let k = 0; k < buffer.count; k++) {
      const j = buffer.index[k]!;
      expect(found.has(j), 'each neighbour once').toBe(false);
      found.set(j, Math.hypot(...buffer.vectorA.subarray(3 * k, 3 * k + 3)));
    }
    return found;
  }

  function compare(points: readonly Vector[], radius: number, lattice: Lattice | null, random: () => number): void {
    const flat = Float64Array.from(points.flat());
    const grid = new PointGrid(flat, null, radius, lattice?.cell ?? null);
    expect(grid.tooDense).toBe(false);
    const smaller = radius * random();
    for (const [i, from] of points.entries()) {
      for (const [reach, onlyAfter] of [
        [radius, false],
        [smaller, true],
      ] as const) {
        const found = gathered(grid, i, reach, onlyAfter);
        for (const [j, to] of points.entries()) {
          if (onlyAfter ? j <= i : j === i) continue;
          const d = add(to, from, -1);
          const distance = lattice === null ? Math.hypot(...d) : shortest(images(lattice, d));
          if (Math.abs(distance - reach) < 1e-9) continue;
          if (distance < reach) expect(Math.abs((found.get(j) ?? Number.NaN) - distance)).toBeLessThan(1e-9);
          else expect(found.has(j)).toBe(false);
        }
      }
    }
  }

  test('finds what a search over all pairs finds, in the open', () => {
    const random = seeded(55);
    for (let round = 0; round < 40; round++) {
      const size = 1 + 30 * random();
      const flatness = round % 4;
      const points = Array.from({ length: 2 + Math.floor(80 * random()) }, (): Vector => {
        const p = [0, 1, 2].map((a) => (a < flatness ? 3 : size * (random() - 0.5)));
        return p as unknown as Vector;
      });
      compare(points, 0.5 + 8 * random(), null, random);
    }
  });

  test.each([
    ['nearly cubic cells', 0, 4, 3],
    ['needles and plates', 1, 4, 3],
    ['cells smaller than the radius', 0, 2, 1.6],
  ] as const)(
    'finds what a search over all images finds: %s, periodic in one to three directions',
    (_, shape, skew, smallest) => {
      const random = seeded(77 + shape + smallest);
      for (let round = 0; round < 25; round++) {
        const lattice = randomLattice(random, shape, skew, smallest);
        const points = Array.from({ length: 2 + Math.floor(20 * random()) }, () =>
          lattice.written.reduce<Vector>((sum, v) => add(sum, v, 3 * random() - 1), [0, 0, 0]),
        );
        compare(points, 1 + 6 * random(), lattice, random);
      }
    },
  );

  test('leaves out points without a place, and looks among its members alone', () => {
    const points = Float64Array.of(0, 0, 0, 1, 0, 0, Number.NaN, 0, 0, 0, 1, 0, 0, 0, 1);
    const all = new PointGrid(points, null, 3, null);
    expect([...gathered(all, 0, 3, false).keys()].sort()).toEqual([1, 3, 4]);
    expect(gathered(all, 2, 3, false).size).toBe(0);
    const some = new PointGrid(points, Int32Array.of(1, 4), 3, null);
    expect([...gathered(some, 0, 3, false).keys()].sort()).toEqual([1, 4]);
  });

  test('says so where the points are too dense to tell neighbours apart', () => {
    const points = new Float64Array(3 * 60_000).map(() => 1e-3);
    expect(new PointGrid(points, null, 3, null).tooDense).toBe(true);
  });
});
