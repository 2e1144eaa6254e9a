import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import type { Pair } from '../../server/src/analysis/pair';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { moveApart } from '../../server/src/features/rewrite/move-fragment';
import { turnTowardStrongest } from '../../server/src/features/rewrite/turn-fragment';
import { norm, rotated, rotationAbout, scaledBy, type Vector } from '../../server/src/features/rewrite/vectors';
import { analyse } from '../support/analyse';
import { edited } from '../support/edits';

/** Random pairs and clusters of small molecules, turned and moved; each result is read and analysed afresh. */

const REQUEST: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: true, estimates: true }),
};
type Atom = readonly [symbol: string, place: Vector, charge: number];

const WATER: readonly Atom[] = [
  ['O', [0, 0, 0.1173], -0.8],
  ['H', [0, 0.7572, -0.4692], 0.4],
  ['H', [0, -0.7572, -0.4692], 0.4],
];
const FORMALDEHYDE: readonly Atom[] = [
  ['C', [0, 0, 0], 0.3],
  ['O', [0, 0, 1.205], -0.4],
  ['H', [0.94, 0, -0.587], 0.05],
  ['H', [-0.94, 0, -0.587], 0.05],
];
const FLUORIDE: readonly Atom[] = [
  ['F', [0, 0, 0], -0.4],
  ['H', [0, 0, 0.917], 0.4],
];
const CATION: readonly Atom[] = [['Na', [0, 0, 0], 1]];

const direction = fc
  .tuple(fc.double({ min: -1, max: 1, noNaN: true }), fc.double({ min: 0, max: 2 * Math.PI, noNaN: true }))
  .map(([z, phi]): Vector => [Math.sqrt(1 - z * z) * Math.cos(phi), Math.sqrt(1 - z * z) * Math.sin(phi), z]);
const molecule = fc.record({
  kind: fc.constantFrom(WATER, FORMALDEHYDE, FLUORIDE, CATION),
  axis: direction,
  angle: fc.double({ min: 0, max: Math.PI, noNaN: true }),
});

/** How a dipole is known: by what is published, by charges, or by vectors in the file. */
const source = fc.constantFrom('library', 'charges', 'vectors');
type Placed = { kind: readonly Atom[]; axis: Vector; angle: number; at: Vector };

function text(molecules: readonly Placed[], from: 'library' | 'charges' | 'vectors', decimals: number): string {
  let next = 1;
  const lists = molecules.map(({ kind }) => {
    const first = next;
    next += kind.length;
    return kind.length === 1 ? String(first) : `${first}-${next - 1}`;
  });
  const charges = molecules.map(({ kind }) => (kind === CATION ? 1 : 'nan'));
  const keys = [
    ...(from === 'charges'
      ? ['Properties=species:S:1:pos:R:3:charge:R:1']
      : [`fragment_charges="${charges.join(' ')}"`]),
    `fragment_atoms="${lists.join(' ')}"`,
    ...(from === 'vectors'
      ? [
          `fragment_dipoles="${molecules
            .map((m) =>
              dipoleOf(m)
                .map((value) => value.toFixed(4))
                .join(' '),
            )
            .join(' ')}"`,
        ]
      : []),
  ];
  const lines = molecules.flatMap(({ kind, axis, angle, at }) =>
    kind.map(([symbol, place, charge]) => {
      const turned = rotated(rotationAbout(axis, angle), place);
      const numbers = turned.map((value, a) => (value + at[a as 0]).toFixed(decimals).padStart(decimals + 6));
      return [symbol.padEnd(2), ...numbers, ...(from === 'charges' ? [charge.toFixed(2)] : [])].join(' ');
    }),
  );
  return [String(lines.length), keys.join(' '), ...lines, ''].join('\n');
}

/** Something like its dipole, D. */
function dipoleOf({ kind, axis, angle }: Placed): Vector {
  const sum = kind.reduce(
    (total, [, place, charge]): Vector => [
      total[0] + charge * place[0],
      total[1] + charge * place[1],
      total[2] + charge * place[2],
    ],
    [0, 0, 0] as Vector,
  );
  return kind === CATION ? [0, 0, 0] : scaledBy(rotated(rotationAbout(axis, angle), sum), 4.8);
}

/** Distances between all atoms of the lines from one to before another. */
function distances(all: string, from: number, to: number): number[] {
  const places = all
    .split('\n')
    .slice(from, to)
    .map((line) => line.trim().split(/\s+/).slice(1, 4).map(Number) as unknown as Vector);
  return places.flatMap((a, i) => places.slice(i + 1).map((b) => norm([a[0] - b[0], a[1] - b[1], a[2] - b[2]])));
}

const energyOf = (pair: Pair) =>
  Number.isFinite(pair.referenceKJPerMol) ? pair.referenceKJPerMol : pair.energies.pointDipole;

describe('a turned fragment', () => {
  const pairs = fc.record({
    first: molecule,
    second: molecule,
    toward: direction,
    distance: fc.double({ min: 2.6, max: 9, noNaN: true }),
    from: source,
    decimals: fc.integer({ min: 3, max: 6 }),
  });

  it('keeps its shape and its centre, and lowers the energy to what was announced; all other lines stay', () => {
    let turns = 0;
    fc.assert(
      fc.property(pairs, ({ first, second, toward, distance, from, decimals }) => {
        const molecules = [
          { ...first, at: [0, 0, 0] as Vector },
          { ...second, at: scaledBy(toward, distance) },
        ];
        const before = text(molecules, from, decimals);
        const { tree, frames, findings } = analyse(before, 'xyz', REQUEST);
        const turn = turnTowardStrongest(tree, frames[0]!, 1);
        if (turn === null) return;
        turns++;
        const after = edited(before, turn.edits());
        const again = analyse(after, 'xyz', REQUEST);
        const begin = 2 + first.kind.length;
        expect(after.split('\n').slice(2, begin)).toEqual(before.split('\n').slice(2, begin));
        const rounding = 2 * Math.sqrt(3) * 0.5 * 10 ** -decimals + 1e-9;
        const [old, now] = [before, after].map((all) => distances(all, begin, begin + second.kind.length));
        for (const [k, value] of old!.entries()) expect(Math.abs(value - now![k]!)).toBeLessThanOrEqual(rounding);
        expect(energyOf(frames[0] && analyse(before, 'xyz', REQUEST).pairs[0]![0]!)).toBe(turn.beforeKJPerMol);
        const energy = energyOf(again.pairs[0]![0]!);
        expect(energy).toBeCloseTo(turn.afterKJPerMol, 9);
        expect(energy).toBeLessThanOrEqual(turn.beforeKJPerMol);
        const errors = (list: typeof findings) => list.filter(({ severity }) => severity === 'error').length;
        expect(errors(again.findings)).toBeLessThanOrEqual(errors(findings));
        const centre = ({ moments }: (typeof frames)[number]) => Array.from(moments.centreA.subarray(3, 6));
        for (const [a, value] of centre(again.frames[0]!).entries()) {
          expect(Math.abs(value - centre(frames[0]!)[a]!)).toBeLessThanOrEqual(10 ** -decimals);
        }
      }),
      { numRuns: 400, seed: 7 },
    );
    expect(turns).toBeGreaterThan(150);
  });
});

describe('a moved fragment', () => {
  const clusters = fc.record({
    first: molecule,
    second: molecule,
    third: molecule,
    toward: direction,
    distance: fc.double({ min: 0, max: 2, noNaN: true }),
    beside: direction,
    decimals: fc.integer({ min: 3, max: 6 }),
    from: source,
  });

  it('keeps its shape exactly, touches nothing any more, and leaves all other lines as they are', () => {
    let moves = 0;
    fc.assert(
      fc.property(clusters, ({ first, second, third, toward, distance, beside, decimals, from }) => {
        const molecules = [
          { ...first, at: [0, 0, 0] as Vector },
          { ...second, at: scaledBy(toward, distance) },
          { ...third, at: scaledBy(beside, 4.5) },
        ];
        const before = text(molecules, from, decimals);
        const { tree, frames, pairs } = analyse(before, 'xyz', REQUEST);
        if (pairs[0]!.find(({ first: f, second: g }) => f === 0 && g === 1)?.contact !== 'clash') return;
        const move = moveApart(tree, frames[0]!, 0, 1);
        if (move === null) return;
        moves++;
        const after = edited(before, move.edits());
        const { starts } = frames[0]!.model.fragments;
        const [begin, end] = [2 + starts[move.fragment]!, 2 + starts[move.fragment + 1]!];
        const others = (all: string) => all.split('\n').filter((_, line) => line < begin || line >= end);
        expect(others(after)).toEqual(others(before));
        const [old, now] = [before, after].map((all) => distances(all, begin, end));
        for (const [k, value] of old!.entries()) expect(value).toBeCloseTo(now![k]!, 12);
        const again = analyse(after, 'xyz', REQUEST);
        const own = again.pairs[0]!.filter((pair) => pair.first === move.fragment || pair.second === move.fragment);
        expect(own.length).toBeGreaterThan(0);
        for (const pair of own) expect(pair.contactRatio).toBeGreaterThanOrEqual(1);
      }),
      { numRuns: 400, seed: 11 },
    );
    expect(moves).toBeGreaterThan(150);
  });
});
