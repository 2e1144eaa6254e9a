import { multiply, pinv } from 'mathjs';
import { describe, expect, test } from 'vitest';
import { extendedDipoleEnergy } from '../../server/src/physics/finite-dipole';
import { fitCharges } from '../../server/src/physics/fitted-charges';
import * as law from '../../server/src/physics/multipole-energies';
import { eigen3 } from '../../server/src/physics/symmetric3';
import { add, dot, randomDirection, scaled, seeded, type Vector } from '../property/build-frame';

/** The laws of the physics folder one by one, each against a calculation that shares nothing with it. */

type Charge = readonly [chargeE: number, at: Vector];

function coulomb(first: readonly Charge[], second: readonly Charge[]): number {
  let sum = 0;
  for (const [q1, r1] of first) for (const [q2, r2] of second) sum += (q1 * q2) / Math.hypot(...add(r2, r1, -1));
  return sum;
}

/** A dipole as two charges `h` apart. */
function tinyDipole(m: Vector, at: Vector, h: number): Charge[] {
  const size = Math.hypot(...m);
  const half = scaled(m, h / (2 * size));
  return [
    [size / h, add(at, half)],
    [-size / h, add(at, half, -1)],
  ];
}

/** Three unit vectors at right angles and the traceless tensor Σ λ_k e_k e_k as charges λ_k/(3h²) at ±h e_k. */
interface Quadrupole {
  readonly axes: readonly Vector[];
  readonly lambda: readonly number[];
}

function tinyQuadrupole({ axes, lambda }: Quadrupole, at: Vector, h: number): Charge[] {
  return axes.flatMap((axis, k) => [1, -1].map((sign): Charge => [lambda[k]! / (3 * h * h), add(at, axis, sign * h)]));
}

function cross(a: Vector, b: Vector): Vector {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

function randomQuadrupole(random: () => number): Quadrupole {
  const a = randomDirection(random);
  const other = cross(a, randomDirection(random));
  const b = scaled(other, 1 / Math.hypot(...other));
  const [l1, l2] = [2 * random() - 1, 2 * random() - 1];
  return { axes: [a, b, cross(a, b)], lambda: [l1, l2, -l1 - l2] };
}

function apply({ axes, lambda }: Quadrupole, v: Vector): Vector {
  return axes.reduce<Vector>((sum, axis, k) => add(sum, axis, lambda[k]! * dot(axis, v)), [0, 0, 0]);
}

/** Σ_ab Θ₁_ab Θ₂_ab. */
function doubleDot(first: Quadrupole, second: Quadrupole): number {
  return first.axes.reduce((sum, axis, k) => sum + first.lambda[k]! * dot(axis, apply(second, axis)), 0);
}

/** The limit of a sum over tiny multipoles, errors of order h² removed (Richardson). */
function limit(energy: (h: number) => number): number {
  return (4 * energy(0.05) - energy(0.1)) / 3;
}

describe('each law is the limit of a direct sum over point charges', () => {
  const random = seeded(17);
  const cases = Array.from({ length: 40 }, () => {
    const u = randomDirection(random);
    const r = 4 + 4 * random();
    return {
      u,
      r,
      at: scaled(u, r),
      q: [2 * random() - 1, 2 * random() - 1] as const,
      m: [scaled(randomDirection(random), 0.2 + random()), scaled(randomDirection(random), 0.2 + random())] as const,
      t: [randomQuadrupole(random), randomQuadrupole(random)] as const,
    };
  });
  const O: Vector = [0, 0, 0];
  const near = (actual: number, expected: number, r: number, power: number) =>
    expect(Math.abs(actual - expected)).toBeLessThan(2e-5 / r ** power);

  test('charge–charge', () => {
    for (const { r, at, q } of cases) {
      near(law.chargeCharge(q[0], q[1], r), coulomb([[q[0], O]], [[q[1], at]]), r, 1);
    }
  });

  test('charge–dipole, either way round', () => {
    for (const { u, r, at, q, m } of cases) {
      const first = limit((h) => coulomb([[q[0], O]], tinyDipole(m[1], at, h)));
      near(law.chargeDipole(q[0], 0, 0, dot(m[1], u), r), first, r, 2);
      const second = limit((h) => coulomb(tinyDipole(m[0], O, h), [[q[1], at]]));
      near(law.chargeDipole(0, dot(m[0], u), q[1], 0, r), second, r, 2);
      near(law.chargeDipole(q[0], dot(m[0], u), q[1], dot(m[1], u), r), first + second, r, 2);
    }
  });

  test('dipole–dipole', () => {
    for (const { u, r, at, m } of cases) {
      const direct = limit((h) => coulomb(tinyDipole(m[0], O, h), tinyDipole(m[1], at, h)));
      near(law.dipoleDipole(dot(m[0], m[1]), dot(m[0], u), dot(m[1], u), r), direct, r, 3);
    }
  });

  test('charge–quadrupole, either way round', () => {
    for (const { u, r, at, q, t } of cases) {
      const direct = limit(
        (h) => coulomb([[q[0], O]], tinyQuadrupole(t[1], at, h)) + coulomb(tinyQuadrupole(t[0], O, h), [[q[1], at]]),
      );
      near(law.chargeQuadrupole(q[0], dot(u, apply(t[0], u)), q[1], dot(u, apply(t[1], u)), r), direct, r, 3);
    }
  });

  test('dipole–quadrupole, either way round', () => {
    for (const { u, r, at, m, t } of cases) {
      const [t1u, t2u] = [apply(t[0], u), apply(t[1], u)];
      const direct = limit(
        (h) =>
          coulomb(tinyDipole(m[0], O, h), tinyQuadrupole(t[1], at, h)) +
          coulomb(tinyQuadrupole(t[0], O, h), tinyDipole(m[1], at, h)),
      );
      const energy = law.dipoleQuadrupole(
        dot(m[0], u),
        dot(t1u, u),
        dot(t1u, m[1]),
        dot(m[1], u),
        dot(t2u, u),
        dot(t2u, m[0]),
        r,
      );
      near(energy, direct, r, 4);
    }
  });

  test('quadrupole–quadrupole', () => {
    for (const { u, r, at, t } of cases) {
      const [t1u, t2u] = [apply(t[0], u), apply(t[1], u)];
      const direct = limit((h) => coulomb(tinyQuadrupole(t[0], O, h), tinyQuadrupole(t[1], at, h)));
      const energy = law.quadrupoleQuadrupole(dot(t1u, u), dot(t2u, u), dot(t1u, t2u), doubleDot(t[0], t[1]), r);
      near(energy, direct, r, 4.5);
    }
  });
});

interface Fit {
  readonly fits: boolean;
  readonly charges: readonly number[];
}

function fitted(sites: readonly Vector[], start: readonly number[], net: number, dipole: Vector, centre: Vector): Fit {
  const charges = Float64Array.from(start);
  const fits = fitCharges(sites.length, Float64Array.from(sites.flat()), charges, net, [...dipole], [...centre]);
  return { fits, charges: Array.from(charges) };
}

function dipoleOf(sites: readonly Vector[], charges: readonly number[], centre: Vector): Vector {
  return sites.reduce<Vector>((sum, site, i) => add(sum, add(site, centre, -1), charges[i]!), [0, 0, 0]);
}

describe('fitted charges', () => {
  const random = seeded(23);
  const site = (): Vector => scaled(randomDirection(random), 0.5 + 2 * random());

  test('have the net charge and the dipole asked for, by the change of least norm (pseudo-inverse)', () => {
    for (let round = 0; round < 200; round++) {
      // A tetrahedron among them keeps the sites from lying in a plane.
      const corners: Vector[] = [
        [1, 1, 1],
        [1, -1, -1],
        [-1, 1, -1],
        [-1, -1, 1],
      ];
      const sites = [...corners, ...Array.from({ length: Math.floor(8 * random()) }, site)];
      const start = sites.map(() => 2 * random() - 1);
      const [net, dipole, centre] = [Math.round(4 * random() - 2), site(), site()];
      const { fits, charges } = fitted(sites, start, net, dipole, centre);
      expect(fits).toBe(true);
      expect(Math.abs(charges.reduce((sum, q) => sum + q, 0) - net)).toBeLessThan(1e-12);
      const got = dipoleOf(sites, charges, centre);
      for (const a of [0, 1, 2] as const) expect(Math.abs(got[a] - dipole[a])).toBeLessThan(1e-10);
      const conditions = [sites.map(() => 1), ...[0, 1, 2].map((a) => sites.map((r) => r[a as 0] - centre[a as 0]))];
      const before = dipoleOf(sites, start, centre);
      const missing = [net - start.reduce((sum, q) => sum + q, 0), ...dipole.map((d, a) => d - before[a as 0])];
      const change = multiply(pinv(conditions), missing) as unknown as number[];
      for (const [i, q] of charges.entries()) expect(Math.abs(q - start[i]! - change[i]!)).toBeLessThan(1e-9);
    }
  });

  test('stay as they are where they have charge and dipole already', () => {
    const sites: Vector[] = [site(), site(), site(), site(), site()];
    const start = [0.4, -0.3, 0.2, -0.5, 0.7];
    const { fits, charges } = fitted(sites, start, 0.5, dipoleOf(sites, start, [1, 2, 3]), [1, 2, 3]);
    expect(fits).toBe(true);
    for (const [i, q] of charges.entries()) expect(q).toBeCloseTo(start[i]!, 13);
  });

  const flat: Vector[] = [
    [0, 0, 0],
    [0.76, 0.59, 0],
    [-0.76, 0.59, 0],
  ];
  const line: Vector[] = [
    [0, 0, 0],
    [0, 0, 1.2],
  ];
  const impossible: [string, readonly Vector[], Vector, number][] = [
    ['a dipole out of the plane of all atoms', flat, [0, 0.1, 0.3], 0],
    ['a dipole off the axis of two atoms', line, [0.1, 0, 0.3], 0],
    ['any dipole on one atom', [[0, 0, 0]], [0, 0, 0.2], 1],
    ['any dipole on no atom', [], [0, 0, 0.2], 0],
  ];
  test.each(impossible)('are impossible for %s, and nothing is changed then', (_, sites, dipole, net) => {
    const start = sites.map((_site, i) => 0.1 * i);
    expect(fitted(sites, start, net, dipole, [0, 0, 0])).toEqual({ fits: false, charges: start });
  });

  test('exist for a dipole in the plane, on the axis, and for a bare charge on one atom', () => {
    expect(fitted(flat, [0, 0, 0], 0, [0, 0.39, 0], [0, 0.066, 0]).fits).toBe(true);
    expect(fitted(line, [0, 0], 1, [0, 0, 0.2], [0, 0, 0.5])).toEqual({
      fits: true,
      charges: [expect.closeTo(0.41666666666666663, 12), expect.closeTo(0.5833333333333334, 12)],
    });
    expect(fitted([[4, 5, 6]], [0], -1, [0, 0, 0], [4, 5, 6])).toEqual({ fits: true, charges: [-1] });
  });

  test('miss no more than 2 % or 0.02 D of the dipole where the atoms are flat but for rounding', () => {
    for (let round = 0; round < 300; round++) {
      const rounding = () => 10 ** (4 * random() - 5) * (random() - 0.5);
      const sites = Array.from({ length: 6 }, (): Vector => [2 * random(), 2 * random(), rounding()]);
      const dipole: Vector = [random(), random(), 0.05 * (random() - 0.5)];
      const { fits, charges } = fitted(sites, [0, 0, 0, 0, 0, 0], 0, dipole, [0, 0, 0]);
      if (!fits) continue;
      const off = Math.hypot(...add(dipoleOf(sites, charges, [0, 0, 0]), dipole, -1));
      expect(off).toBeLessThan(Math.max(0.02 * Math.hypot(...dipole), 0.02 * 0.2082) * 1.001);
      for (const q of charges) expect(Math.abs(q)).toBeLessThan(5);
    }
  });

  test('turn with the fragment', () => {
    const turned = (v: Vector): Vector => [v[1], v[2], v[0]];
    const [plain, other] = [
      fitted(flat, [0, 0, 0], 0, [0.1, 0.3, 0], [0, 0, 0]),
      fitted(flat.map(turned), [0, 0, 0], 0, turned([0.1, 0.3, 0]), [0, 0, 0]),
    ];
    for (const [i, q] of plain.charges.entries()) expect(other.charges[i]).toBeCloseTo(q, 12);
  });
});

describe('the finite dipole', () => {
  const random = seeded(31);

  /** Straight from the words: two charges m/a, a apart, their midpoint moved along the dipole by 0 or a quarter of a either way. */
  function nine(
    sides: readonly { chargeE: number; dipoleEA: Vector; extentA: number }[],
    separation: Vector,
  ): number[] {
    const [first, second] = sides.map(({ chargeE, dipoleEA, extentA }, k) =>
      [0, 0.25, -0.25].map((shift): Charge[] => {
        const origin: Vector = k === 0 ? [0, 0, 0] : separation;
        const size = Math.hypot(...dipoleEA);
        const u = scaled(dipoleEA, 1 / size);
        return [
          [chargeE, origin],
          [size / extentA, add(origin, u, (shift + 0.5) * extentA)],
          [-size / extentA, add(origin, u, (shift - 0.5) * extentA)],
        ];
      }),
    ) as [Charge[][], Charge[][]];
    return first.flatMap((one) => second.map((other) => coulomb(one, other)));
  }

  test('is the one of nine combinations farthest from the point energy', () => {
    for (let round = 0; round < 200; round++) {
      const sides = [0, 1].map(() => ({
        chargeE: Math.round(2 * random() - 1),
        dipoleEA: scaled(randomDirection(random), 0.1 + random()),
        extentA: 0.3 + 2 * random(),
      }));
      const separation = scaled(randomDirection(random), 6 + 3 * random());
      const pointEnergy = 0.02 * (random() - 0.5);
      const energies = nine(sides, separation);
      const farthest = energies.reduce((a, b) => (Math.abs(b - pointEnergy) > Math.abs(a - pointEnergy) ? b : a));
      const energy = extendedDipoleEnergy(sides[0]!, sides[1]!, separation, pointEnergy);
      expect(Math.abs(energy - farthest)).toBeLessThan(1e-13);
    }
  });

  test('of no extent stays a point: a point pair has the point energy, a point beside a rod the rod in its field', () => {
    const m: Vector = [0.2, 0.3, -0.1];
    const at: Vector = [0, 4, 3];
    const u = scaled(at, 0.2);
    const exact =
      law.chargeCharge(1, -1, 5) +
      law.chargeDipole(1, dot(m, u), -1, dot(m, u), 5) +
      law.dipoleDipole(dot(m, m), dot(m, u), dot(m, u), 5);
    const bare = { chargeE: 1, dipoleEA: m, extentA: 0 } as const;
    const other = { chargeE: -1, dipoleEA: m, extentA: 0 } as const;
    expect(extendedDipoleEnergy(bare, other, at, exact)).toBeCloseTo(exact, 14);
    const rod = { chargeE: 0, dipoleEA: [0, 0, 0.4], extentA: 0.01 } as const;
    const direct = coulomb([[1, [0, 0, 0]], ...tinyDipole(m, [0, 0, 0], 1e-3)], tinyDipole([0, 0, 0.4], at, 0.01));
    expect(Math.abs(extendedDipoleEnergy(bare, rod, at, direct) / direct - 1)).toBeLessThan(3e-3);
  });

  test('of no dipole is its charge alone', () => {
    const ion = { chargeE: 2, dipoleEA: [0, 0, 0], extentA: 1.5 } as const;
    expect(extendedDipoleEnergy(ion, { ...ion, chargeE: -1 }, [0, 0, 7], -2 / 7)).toBeCloseTo(-2 / 7, 14);
  });
});

describe('eigenvalues of a symmetric matrix', () => {
  const random = seeded(41);
  const check = (packed: readonly number[]) => {
    const { values, vectors } = eigen3(packed);
    const scale = Math.max(...packed.map(Math.abs), 1e-300);
    const at = [0, 1, 2, 1, 3, 4, 2, 4, 5];
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        let rebuilt = 0;
        let product = 0;
        for (let k = 0; k < 3; k++) {
          rebuilt += values[k]! * vectors[3 * k + i]! * vectors[3 * k + j]!;
          product += vectors[3 * i + k]! * vectors[3 * j + k]!;
        }
        expect(Math.abs(rebuilt - packed[at[3 * i + j]!]!)).toBeLessThan(1e-13 * scale);
        expect(Math.abs(product - (i === j ? 1 : 0))).toBeLessThan(1e-13);
      }
    }
  };

  test('rebuild it, with vectors at right angles, for 500 random matrices of any size', () => {
    for (let round = 0; round < 500; round++) {
      const scale = 10 ** (20 * random() - 10);
      check(Array.from({ length: 6 }, () => scale * (2 * random() - 1)));
    }
  });

  test.each([
    ['diagonal', [3, 0, 0, 2, 0, 1]],
    ['all equal', [2, 0, 0, 2, 0, 2]],
    ['twofold', [2, 1, 1, 2, 1, 2]],
    ['of rank one', [1, 2, 3, 4, 6, 9]],
    ['zero', [0, 0, 0, 0, 0, 0]],
    ['nearly diagonal', [1, 1e-12, 0, 1, 1e-9, 1]],
    ['widely spread', [1e8, 1, 1, 1, 1e-4, 1e-8]],
  ])('rebuild it where it is %s', (_, packed) => check(packed));
});
