import { describe, expect, it } from 'vitest';
import { COULOMB_KJ_A_PER_MOL } from '../../server/src/physics/constants';
import { inducedDipoles, type PolarizableFrame } from '../../server/src/physics/induced-dipoles';
import { debyeAverage, debyeEnergy, type PolarizableSite } from '../../server/src/physics/induction-pair';
import { largestEigenvalue } from '../../server/src/physics/largest-eigenvalue';
import { conjugateGradients, solveDense } from '../../server/src/physics/linear-solve';
import { tholeCharge, tholeDipole } from '../../server/src/physics/thole-damping';

/** Scattered numbers in [0, 1), the same on every run. */
function scattered(seed: number): () => number {
  let state = seed;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
}

const site = (chargeE: number, dipoleEA: readonly number[], polarizabilityA3: number): PolarizableSite => ({
  chargeE,
  dipoleEA,
  polarizabilityA3,
});

interface Points {
  readonly positionsA: number[][];
  readonly chargesE: number[];
  readonly dipolesEA: number[][];
  readonly alphas: number[];
}

/** All pairs of the points. */
function frameOf(points: Points, permittivity = 1, tholeWidth?: number): PolarizableFrame {
  const first: number[] = [];
  const second: number[] = [];
  const offsets: number[] = [];
  for (let i = 0; i < points.alphas.length; i++) {
    for (let j = i + 1; j < points.alphas.length; j++) {
      first.push(i);
      second.push(j);
      for (let a = 0; a < 3; a++) offsets.push(points.positionsA[j]![a]! - points.positionsA[i]![a]!);
    }
  }
  return {
    chargesE: Float64Array.from(points.chargesE),
    dipolesEA: Float64Array.from(points.dipolesEA.flat()),
    polarizabilitiesA3: Float64Array.from(points.alphas),
    first: Uint32Array.from(first),
    second: Uint32Array.from(second),
    offsetsA: Float64Array.from(offsets),
    permittivity,
    ...(tholeWidth === undefined ? {} : { tholeWidth }),
  };
}

function cluster(count: number, spacingA: number, seed = 7): Points {
  const next = scattered(seed);
  const positionsA: number[][] = [];
  const side = Math.ceil(Math.cbrt(count));
  for (let i = 0; i < count; i++) {
    const cell = [i % side, Math.floor(i / side) % side, Math.floor(i / side / side)];
    positionsA.push(cell.map((c) => spacingA * (c + 0.3 * (next() - 0.5))));
  }
  const vector = () => [next() - 0.5, next() - 0.5, next() - 0.5].map((v) => 0.8 * v);
  return {
    positionsA,
    chargesE: positionsA.map((_, i) => (i % 5 === 0 ? (i % 2) * 2 - 1 : 0)),
    dipolesEA: positionsA.map(vector),
    alphas: positionsA.map(() => 1 + next()),
  };
}

function solved(frame: PolarizableFrame) {
  const result = inducedDipoles(frame);
  if (!result.ok) throw new Error(result.reason);
  return result;
}

const ROTATION = [
  [0.36, 0.48, -0.8],
  [-0.8, 0.6, 0],
  [0.48, 0.64, 0.6],
];
const turned = (v: readonly number[]) => ROTATION.map((row) => row[0]! * v[0]! + row[1]! * v[1]! + row[2]! * v[2]!);

describe('Thole damping', () => {
  it('tends to 1 far away and to x and x²/2 close by', () => {
    expect(tholeCharge(50)).toBeCloseTo(1, 14);
    expect(tholeDipole(Number.POSITIVE_INFINITY)).toBe(1);
    expect(tholeCharge(1e-8)).toBeCloseTo(1e-8, 15);
    expect(tholeDipole(1e-3) / 5e-7).toBeCloseTo(1, 2);
  });
  it('is the charge within R of the smeared density', () => {
    // λ₃ = ∫₀ᵘ 4π s² (3a/4π) e^(−a s³) ds, by the midpoint rule.
    const [a, u, n] = [0.39, 1.3, 20000];
    let sum = 0;
    for (let i = 0; i < n; i++) {
      const s = ((i + 0.5) * u) / n;
      sum += (3 * a * s * s * Math.exp(-a * s ** 3) * u) / n;
    }
    expect(tholeCharge(a * u ** 3)).toBeCloseTo(sum, 8);
  });
  it('λ₅ = λ₃ − (R/3) dλ₃/dR, as the gradient of the damped field asks', () => {
    const [x, h] = [0.8, 1e-6];
    const slope = (tholeCharge(x + h) - tholeCharge(x - h)) / (2 * h);
    // x ∝ R³: R dx/dR = 3x.
    expect(tholeDipole(x)).toBeCloseTo(tholeCharge(x) - x * slope, 9);
  });
});

describe('Debye induction of a pair', () => {
  const one = site(0.3, [0.2, -0.1, 0.4], 1.5);
  const two = site(-1, [0.05, 0.3, -0.2], 2.4);
  const offset = [3, -1, 2.5];
  it('is the numerical field squared, by finite differences of the potential', () => {
    const potential = (s: PolarizableSite, r: readonly number[]) => {
      const d = Math.hypot(r[0]!, r[1]!, r[2]!);
      const along = s.dipoleEA[0]! * r[0]! + s.dipoleEA[1]! * r[1]! + s.dipoleEA[2]! * r[2]!;
      return s.chargeE / d + along / d ** 3;
    };
    const square = (s: PolarizableSite, r: readonly number[]) => {
      let sum = 0;
      for (let a = 0; a < 3; a++) {
        const [up, down] = [[...r], [...r]];
        up[a]! += 1e-5;
        down[a]! -= 1e-5;
        sum += ((potential(s, up) - potential(s, down)) / 2e-5) ** 2;
      }
      return sum;
    };
    const back = offset.map((v) => -v);
    const expected = -0.5 * 2.4 * square(one, offset) - 0.5 * 1.5 * square(two, back);
    expect(debyeEnergy(one, two, offset, Number.POSITIVE_INFINITY) / expected).toBeCloseTo(1, 7);
  });
  it('stays under exchange, rotation and mirror, and damping only weakens it', () => {
    const energy = debyeEnergy(one, two, offset);
    expect(
      debyeEnergy(
        two,
        one,
        offset.map((v) => -v),
      ),
    ).toBeCloseTo(energy, 14);
    const turnedSite = (s: PolarizableSite) => site(s.chargeE, turned(Array.from(s.dipoleEA)), s.polarizabilityA3);
    expect(debyeEnergy(turnedSite(one), turnedSite(two), turned(offset))).toBeCloseTo(energy, 14);
    expect(energy).toBeLessThan(0);
    expect(debyeEnergy(one, two, offset, Number.POSITIVE_INFINITY)).toBeLessThan(energy);
  });
  it.each([
    ['dipole', site(0, [0, 0.4, 0], 0), 6],
    ['charge', site(1, [0, 0, 0], 0), 4],
  ] as const)('of a %s falls as R^-%d', (_, source, power) => {
    const at = (r: number) => debyeEnergy(source, site(0, [0, 0, 0], 2), [r, r / 2, -r / 3]);
    expect(Math.log2(at(10) / at(20))).toBeCloseTo(power, 10);
  });
  it('averages over orientations to the average formula', () => {
    // Directions of the dipole over an octahedron: exact for a quadratic form.
    let sum = 0;
    for (const [x, y, z] of [
      [0.5, 0, 0],
      [0, 0.5, 0],
      [0, 0, 0.5],
    ]) {
      sum += debyeEnergy(site(0, [x!, y!, z!], 0), site(0, [0, 0, 0], 2), [1, 4, 2], Number.POSITIVE_INFINITY) / 3;
    }
    expect(sum).toBeCloseTo(debyeAverage(0, 0.5, 0, 0, 0, 2, Math.sqrt(21)), 14);
  });
  it('gives no number for coincident centres or a negative polarizability', () => {
    expect(debyeEnergy(one, two, [0, 0, 0])).toBeNaN();
    expect(debyeEnergy(one, site(0, [0, 0, 0], -1), offset)).toBeNaN();
    expect(debyeEnergy(one, site(0, [0, 0, 0], Number.NaN), offset)).toBeNaN();
    expect(debyeAverage(0, 1, -1, 0, 1, 1, 3)).toBeNaN();
    expect(debyeAverage(0, 1, 1, 0, 1, 1, 0)).toBeNaN();
  });
});

describe('induced dipoles of a frame', () => {
  it('of one pair of which one partner is polarizable: the Debye energy, no more', () => {
    const points: Points = {
      positionsA: [
        [0, 0, 0],
        [1, 2, 3],
      ],
      chargesE: [1, 0],
      dipolesEA: [
        [0.3, 0, 0.1],
        [0, 0, 0],
      ],
      alphas: [0, 2],
    };
    const result = solved(frameOf(points));
    const pair = debyeEnergy(site(1, [0.3, 0, 0.1], 0), site(0, [0, 0, 0], 2), [1, 2, 3]);
    expect(result.energyKJPerMol / (COULOMB_KJ_A_PER_MOL * pair)).toBeCloseTo(1, 12);
    expect(Math.abs(result.nonAdditiveKJPerMol)).toBeLessThan(1e-9);
    expect(result.largestEigenvalue).toBeCloseTo(0, 12);
  });
  it('of a charge at two points in line: the closed solution', () => {
    // α = 1 and 2 at 4 and 8 A from a charge: μ₁ = α₁(E₁ + 2μ₂/d³), μ₂ = α₂(E₂ + 2μ₁/d³).
    const points: Points = {
      positionsA: [
        [0, 0, 0],
        [4, 0, 0],
        [8, 0, 0],
      ],
      chargesE: [1, 0, 0],
      dipolesEA: [
        [0, 0, 0],
        [0, 0, 0],
        [0, 0, 0],
      ],
      alphas: [0, 1, 2],
    };
    const { inducedEA, energyKJPerMol } = solved(frameOf(points, 1, Number.POSITIVE_INFINITY));
    const [e1, e2, t] = [1 / 16, 1 / 64, 2 / 64];
    const mu1 = (e1 + 2 * t * e2) / (1 - 2 * t * t);
    const mu2 = 2 * (e2 + t * mu1);
    expect(inducedEA[3]).toBeCloseTo(mu1, 13);
    expect(inducedEA[6]).toBeCloseTo(mu2, 13);
    expect(energyKJPerMol).toBeCloseTo(-0.5 * COULOMB_KJ_A_PER_MOL * (mu1 * e1 + mu2 * e2), 10);
  });
  it('satisfies its own equations to 1e-10 and agrees with a dense solution', () => {
    const points = cluster(20, 3.2);
    const frame = frameOf(points);
    const result = solved(frame);
    expect(result.remainder).toBeLessThan(1e-10);
    // Each induced dipole by itself as a unit source: the columns of T from the program's own permanent-dipole fields.
    const n = 3 * points.alphas.length;
    const matrix = new Float64Array(n * n);
    const right = new Float64Array(n);
    for (let i = 0; i < points.alphas.length; i++) {
      for (let a = 0; a < 3; a++) matrix[(3 * i + a) * n + 3 * i + a] = 1 / points.alphas[i]!;
    }
    for (let i = 0; i < points.alphas.length; i++) {
      for (let j = 0; j < points.alphas.length; j++) {
        if (i === j) continue;
        const r = [0, 1, 2].map((a) => points.positionsA[i]![a]! - points.positionsA[j]![a]!);
        const d = Math.hypot(r[0]!, r[1]!, r[2]!);
        const x = (0.39 * d ** 3) / Math.sqrt(points.alphas[i]! * points.alphas[j]!);
        const [l3, l5] = [1 - Math.exp(-x), 1 - (1 + x) * Math.exp(-x)];
        for (let a = 0; a < 3; a++) {
          right[3 * i + a]! += (l3 * points.chargesE[j]! * r[a]!) / d ** 3;
          for (let b = 0; b < 3; b++) {
            const tensor = (3 * l5 * r[a]! * r[b]!) / d ** 5 - (a === b ? l3 / d ** 3 : 0);
            matrix[(3 * i + a) * n + 3 * j + b] = -tensor;
            right[3 * i + a]! += tensor * points.dipolesEA[j]![b]!;
          }
        }
      }
    }
    expect(solveDense(n, matrix, right)).toBe(true);
    for (let i = 0; i < n; i++) expect(result.inducedEA[i]).toBeCloseTo(right[i]!, 10);
  });
  it('does not change when the frame is rotated, moved or its points renumbered, down to rounding', () => {
    const points = cluster(15, 3.3);
    const energy = solved(frameOf(points)).energyKJPerMol;
    const rotated = {
      ...points,
      positionsA: points.positionsA.map((p) => turned(p).map((v) => v + 5)),
      dipolesEA: points.dipolesEA.map(turned),
    };
    expect(solved(frameOf(rotated)).energyKJPerMol / energy).toBeCloseTo(1, 11);
    const order = points.alphas.map((_, i) => (7 * i + 3) % 15);
    const renumbered: Points = {
      positionsA: order.map((i) => points.positionsA[i]!),
      chargesE: order.map((i) => points.chargesE[i]!),
      dipolesEA: order.map((i) => points.dipolesEA[i]!),
      alphas: order.map((i) => points.alphas[i]!),
    };
    expect(solved(frameOf(renumbered)).energyKJPerMol / energy).toBeCloseTo(1, 11);
  });
  it('scales as 1/ε_r² when the induced dipoles are small, and is never positive', () => {
    const points = { ...cluster(8, 6), alphas: new Array<number>(8).fill(1e-4) };
    const [one, four] = [solved(frameOf(points)), solved(frameOf(points, 4))];
    expect(one.energyKJPerMol / four.energyKJPerMol).toBeCloseTo(16, 3);
    expect(one.energyKJPerMol).toBeLessThan(0);
    expect(one.energyKJPerMol / one.directKJPerMol).toBeCloseTo(1, 3);
  });
  it('gives an eigenvalue between 0 and 1 for a damped cluster, larger the closer it is packed', () => {
    const loose = solved(frameOf(cluster(12, 4)));
    const dense = solved(frameOf(cluster(12, 3)));
    expect(loose.largestEigenvalue).toBeGreaterThan(0);
    expect(dense.largestEigenvalue).toBeGreaterThan(loose.largestEigenvalue);
    expect(dense.largestEigenvalue).toBeLessThan(1);
  });
  it('reports what the sum of pairs misses: two equal charges either side of a point cancel there', () => {
    const points: Points = {
      positionsA: [
        [-3, 0, 0],
        [0, 0, 0],
        [3, 0, 0],
      ],
      chargesE: [1, 0, 1],
      dipolesEA: [
        [0, 0, 0],
        [0, 0, 0],
        [0, 0, 0],
      ],
      alphas: [0, 2, 0],
    };
    const result = solved(frameOf(points));
    expect(result.energyKJPerMol).toBeCloseTo(0, 12);
    expect(result.pairSumKJPerMol).toBeCloseTo((-COULOMB_KJ_A_PER_MOL * 2) / 81, 10);
    expect(result.nonAdditiveKJPerMol).toBeCloseTo(-result.pairSumKJPerMol, 10);
  });
  it('refuses the polarization catastrophe: 4α₁α₂ > R⁶ of an undamped pair, exactly at the bound', () => {
    const pair = (distanceA: number, width?: number) =>
      inducedDipoles(
        frameOf(
          {
            positionsA: [
              [0, 0, 0],
              [distanceA, 0, 0],
            ],
            chargesE: [0, 0],
            dipolesEA: [
              [0, 0.1, 0],
              [0, 0, 0],
            ],
            alphas: [2, 3],
          },
          1,
          width,
        ),
      );
    const bound = 24 ** (1 / 6);
    const below = pair(bound * 0.999, Number.POSITIVE_INFINITY);
    expect(below.ok).toBe(false);
    expect(below.ok ? '' : below.reason).toMatch(/grow without end/);
    expect(pair(bound * 1.001, Number.POSITIVE_INFINITY).ok).toBe(true);
    // Thole's damping keeps any pair finite.
    expect(pair(bound * 0.5).ok).toBe(true);
  });
  it('refuses a dense undamped crowd that no pair of its own would give away', () => {
    const crowd = { ...cluster(64, 2.2), alphas: new Array<number>(64).fill(2.2) };
    const result = inducedDipoles(frameOf(crowd, 1, Number.POSITIVE_INFINITY));
    expect(result.ok).toBe(false);
  });
  it.each<[string, (frame: PolarizableFrame) => PolarizableFrame, RegExp]>([
    ['a negative polarizability', (f) => ({ ...f, polarizabilitiesA3: Float64Array.of(1, -1) }), /negative/],
    [
      'a polarizability that is no number',
      (f) => ({ ...f, polarizabilitiesA3: Float64Array.of(1, Number.NaN) }),
      /number/,
    ],
    ['coincident points', (f) => ({ ...f, offsetsA: new Float64Array(3) }), /coincide/],
    ['an infinite charge', (f) => ({ ...f, chargesE: Float64Array.of(0, Number.POSITIVE_INFINITY) }), /number/],
    ['a permittivity of 0', (f) => ({ ...f, permittivity: 0 }), /permittivity/],
    ['a width of 0', (f) => ({ ...f, tholeWidth: 0 }), /width/],
    ['lists of different lengths', (f) => ({ ...f, chargesE: new Float64Array(3) }), /length/],
    ['pairs of different lengths', (f) => ({ ...f, second: new Uint32Array(2) }), /length/],
    ['a pair of a point that is not there', (f) => ({ ...f, second: Uint32Array.of(7) }), /not there/],
  ])('refuses %s', (_, change, message) => {
    const frame = frameOf({
      positionsA: [
        [0, 0, 0],
        [3, 0, 0],
      ],
      chargesE: [1, 0],
      dipolesEA: [
        [0, 0, 0],
        [0, 0, 0],
      ],
      alphas: [1, 1],
    });
    const result = inducedDipoles(change(frame));
    expect(result.ok ? 'no refusal' : result.reason).toMatch(message);
  });
  it('has nothing to say of an empty frame and of one without pairs', () => {
    const empty = solved(frameOf({ positionsA: [], chargesE: [], dipolesEA: [], alphas: [] }));
    expect(empty.energyKJPerMol).toBeCloseTo(0, 15);
    const lone = solved(frameOf({ positionsA: [[0, 0, 0]], chargesE: [1], dipolesEA: [[1, 0, 0]], alphas: [2] }));
    expect(Array.from(lone.inducedEA)).toEqual([0, 0, 0]);
  });
});

describe('solvers', () => {
  it('elimination gives back a known solution and refuses a singular matrix', () => {
    const right = Float64Array.of(5, 11);
    expect(solveDense(2, Float64Array.of(1, 2, 3, 4), right)).toBe(true);
    expect(Array.from(right)).toEqual([expect.closeTo(1, 13), expect.closeTo(2, 13)]);
    expect(solveDense(2, Float64Array.of(1, 2, 2, 4), Float64Array.of(1, 1))).toBe(false);
    expect(solveDense(1, Float64Array.of(Number.NaN), Float64Array.of(1))).toBe(false);
  });
  it('conjugate gradients notice a matrix that is not positive', () => {
    const apply = (from: Float64Array, out: Float64Array) => {
      out[0] = from[0]!;
      out[1] = -from[1]!;
    };
    expect(conjugateGradients(apply, Float64Array.of(1, 2), new Float64Array(2), 1e-12, 50)).toBe('not positive');
  });
  it('Lanczos finds the largest eigenvalue, also where it is doubled or the least in size', () => {
    const diagonal = [3, -9, 3, 1, 0.5, -2, 2.9];
    const apply = (from: Float64Array, out: Float64Array) => {
      for (let i = 0; i < diagonal.length; i++) out[i] = diagonal[i]! * from[i]!;
    };
    expect(largestEigenvalue(7, apply)).toBeCloseTo(3, 4);
    expect(largestEigenvalue(0, apply)).toBe(0);
  });
});
