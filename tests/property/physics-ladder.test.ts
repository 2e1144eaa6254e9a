import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Centre } from '../../server/src/analysis/settings';
import {
  add,
  analyse,
  dot,
  FAR_CUTOFF,
  type Fragment,
  frameText,
  K_KJ_A,
  known,
  pairOf,
  point,
  randomDirection,
  randomFragment,
  scaled,
  seeded,
  shifted,
  type Vector,
} from './build-frame';

/** Multipole terms against the Coulomb sum they expand, finite dipoles against point dipoles, and moments about other centres. */

const RUNS = { seed: 11, numRuns: 60 };
const ORIGIN: Vector = [0, 0, 0];

function forSeeds(check: (random: () => number) => void): void {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 2 ** 31 }), (seed) => check(seeded(seed))),
    RUNS,
  );
}

/** What the terms leave of the Coulomb sum at a separation of the centres along a direction: after dipoles, after quadrupoles. */
function remainder(first: Fragment, second: Fragment, by: Vector): [number, number] {
  const { energyKJPerMol: energy } = pairOf(first, shifted(second, by));
  const dipoles = known(energy.coulomb) - known(energy.pointDipole);
  const quadrupoles =
    known(energy.chargeQuadrupole) + known(energy.dipoleQuadrupole) + known(energy.quadrupoleQuadrupole);
  return [dipoles, dipoles - quadrupoles];
}

/** The vector that takes the second mass centre from the first by `r` along `u`, where both fragments stand as built. */
function separation(first: Fragment, second: Fragment, u: Vector, r: number): Vector {
  const { moments } = analyse(frameText([first, shifted(second, [50, 0, 0])])).frame;
  const centre = (f: number) => Array.from(moments.centreA.subarray(3 * f, 3 * f + 3)) as unknown as Vector;
  return add(add(scaled(u, r), centre(0)), add(centre(1), [-50, 0, 0]), -1);
}

describe('what the multipoles leave of the Coulomb sum', () => {
  const kinds = [
    ['two neutral fragments', 0, 0, 16, 32],
    ['a cation and a neutral fragment', 1, 0, 8, 16],
    ['a neutral fragment and an anion', 0, -1, 8, 16],
    ['two ions', 1, -2, 8, 16],
  ] as const;
  test.each(kinds)(
    'of %s (%d, %d) falls %d-fold after the dipoles and %d-fold after the quadrupoles each time R doubles',
    (_, q1, q2, afterDipoles, afterQuadrupoles) => {
      let compared = 0;
      forSeeds((random) => {
        const [first, second] = [randomFragment(random, q1), randomFragment(random, q2)];
        const u = randomDirection(random);
        // The ratio tends to the power with corrections of order 1/R: two doublings, extrapolated.
        const at = [40, 80, 160].map((r) => remainder(first, second, separation(first, second, u, r)));
        for (const [k, factor] of [
          [0, afterDipoles],
          [1, afterQuadrupoles],
        ] as const) {
          const [a, b, c] = at.map((both) => both[k]) as [number, number, number];
          // a = A/R^n + B/R^(n+1): subtracting what the next power would leave exposes the leading one.
          const leading1 = 2 * factor * b - a;
          const leading2 = 2 * factor * c - b;
          // A coefficient near zero says nothing about its power.
          if (Math.abs(leading2) < (0.05 * K_KJ_A) / 80 ** Math.log2(factor)) continue;
          compared++;
          expect(leading1 / leading2 / factor).toBeGreaterThan(0.9);
          expect(leading1 / leading2 / factor).toBeLessThan(1.1);
        }
      });
      expect(compared).toBeGreaterThan(RUNS.numRuns);
    },
  );

  test('is nothing for two single atoms, and the terms are exact for point moments', () => {
    const pair = pairOf(
      { sites: [{ symbol: 'Na', at: ORIGIN, chargeE: 0.9 }] },
      { sites: [{ symbol: 'Cl', at: [3, 1, 2], chargeE: -0.8 }] },
    );
    expect(known(pair.energyKJPerMol.coulomb)).toBeCloseTo((-K_KJ_A * 0.72) / Math.sqrt(14), 9);
    expect(pair.energyKJPerMol.pointDipole).toBeCloseTo(known(pair.energyKJPerMol.coulomb), 9);
    expect(pair.energyKJPerMol.dipoleDipole).toBe(0);
    expect(Math.abs(known(pair.energyKJPerMol.quadrupoleQuadrupole))).toBe(0);
  });

  test('does not depend on the centre in use as a Coulomb sum, though each term does', () => {
    forSeeds((random) => {
      const first = randomFragment(random, 1);
      const second = shifted(randomFragment(random, 0), scaled(randomDirection(random), 9));
      const sums = (['mass', 'geometry', 'nuclear-charge'] as Centre[]).map((centre) =>
        known(pairOf(first, second, { centre }).energyKJPerMol.coulomb),
      );
      for (const sum of sums) expect(Math.abs(sum - sums[0]!)).toBeLessThan(1e-9);
    });
  });
});

test('Coulomb sums and dipoles are additive: a fragment of two is the sum of its parts', () => {
  forSeeds((random) => {
    const parts = [randomFragment(random, 0), shifted(randomFragment(random, 0), [2.5, 0, 0])] as const;
    const union: Fragment = { sites: [...parts[0].sites, ...parts[1].sites] };
    const other = shifted(randomFragment(random, 1), [4, 12, -7]);
    const whole = known(pairOf(union, other).energyKJPerMol.coulomb);
    const separate = parts.map((part) => known(pairOf(part, other).energyKJPerMol.coulomb));
    expect(Math.abs(whole - separate[0]! - separate[1]!)).toBeLessThan(1e-9);
    const dipole = (fragment: Fragment) => Array.from(analyse(frameText([fragment])).frame.moments.dipoleEA);
    const [a, b, sum] = [dipole(parts[0]), dipole(parts[1]), dipole(union)];
    for (const k of [0, 1, 2]) expect(Math.abs(sum[k]! - a[k]! - b[k]!)).toBeLessThan(1e-12);
  });
});

/** Two opposite charges of moment `size` along `u`, `length` apart about `middle`; equal atoms, so the centre is the middle. */
function rod(middle: Vector, u: Vector, length: number, size = 0.4): Fragment {
  const half = scaled(u, length / 2);
  return {
    sites: [
      { symbol: 'F', at: add(middle, half), chargeE: size / length },
      { symbol: 'F', at: add(middle, half, -1), chargeE: -size / length },
    ],
  };
}

describe('a finite two-charge dipole', () => {
  const R = 5;
  const ratio = (first: Fragment, second: Fragment) => {
    const { coulomb, pointDipole } = pairOf(first, second).energyKJPerMol;
    return known(coulomb) / known(pointDipole);
  };
  const lengths = [2, 1, 0.5, 0.1];

  test.each(lengths)('of %d A head to tail is 1/(1 - x^2) of the point dipole', (length) => {
    const x = length / R;
    const measured = ratio(rod(ORIGIN, [1, 0, 0], length), rod([R, 0, 0], [1, 0, 0], length));
    expect(measured).toBeCloseTo(1 / (1 - x * x), 9);
  });

  test.each(lengths)('of %d A side by side is (2/x^2)(1 - 1/sqrt(1 + x^2)) of the point dipole', (length) => {
    const x = length / R;
    const measured = ratio(rod(ORIGIN, [0, 0, 1], length), rod([R, 0, 0], [0, 0, -1], length));
    expect(measured).toBeCloseTo((2 / (x * x)) * (1 - 1 / Math.sqrt(1 + x * x)), 9);
  });

  test.each(lengths)('of %d A in a T has no energy at all', (length) => {
    const pair = pairOf(rod(ORIGIN, [1, 0, 0], length), rod([R, 0, 0], [0, 1, 0], length));
    expect(Math.abs(known(pair.energyKJPerMol.coulomb))).toBeLessThan(1e-10);
    expect(Math.abs(known(pair.energyKJPerMol.pointDipole))).toBeLessThan(1e-10);
    expect(pair.arrangement).toBe('T-shaped');
  });

  test.each(lengths)('of %d A beside an ion on its line is 1/(1 - x^2/4) of the point dipole', (length) => {
    const x = length / R;
    const ion: Fragment = { sites: [{ symbol: 'Na', at: ORIGIN, chargeE: 1 }] };
    expect(ratio(ion, rod([R, 0, 0], [1, 0, 0], length))).toBeCloseTo(1 / (1 - (x * x) / 4), 9);
  });

  test('shrunk at the same moment tends to the point dipole with the square of its length', () => {
    forSeeds((random) => {
      const [u1, u2] = [randomDirection(random), randomDirection(random)];
      const at = scaled(randomDirection(random), R);
      const off = (length: number) => {
        const { coulomb, pointDipole } = pairOf(rod(ORIGIN, u1, length), rod(at, u2, length)).energyKJPerMol;
        return known(coulomb) - known(pointDipole);
      };
      const [long, short] = [off(0.2), off(0.1)];
      if (Math.abs(short) < 1e-4) return;
      expect(Math.abs(long / short / 4 - 1)).toBeLessThan(0.05);
    });
  });

  test('tends to it only with its length where R is measured to another point than the middle of its charges', () => {
    // Masses apart from the middle of the charges: an H and an F carry them, so the centre lies near the F.
    const lopsided = (middle: Vector, length: number): Fragment => ({
      sites: [
        { symbol: 'H', at: add(middle, [length / 2, 0, 0]), chargeE: 0.4 / length },
        { symbol: 'F', at: add(middle, [-length / 2, 0, 0]), chargeE: -0.4 / length },
      ],
    });
    const off = (length: number) => ratio(lopsided(ORIGIN, length), rod([R, 0, 0], [1, 0, 0], length)) - 1;
    expect(off(0.02) / off(0.01)).toBeCloseTo(2, 1);
  });

  test('scaled as a whole with all distances keeps its energies times 1/s at the same charges', () => {
    forSeeds((random) => {
      const s = 0.7 + random();
      const [first, second] = [randomFragment(random, 0), randomFragment(random, -1)];
      const at = scaled(randomDirection(random), 7);
      const grow = (fragment: Fragment, by: Vector): Fragment => ({
        sites: fragment.sites.map((site) => ({ ...site, at: scaled(add(site.at, by), s) })),
      });
      const before = pairOf(first, shifted(second, at));
      const after = pairOf(grow(first, ORIGIN), grow(second, at));
      const keys = Object.keys(before.energyKJPerMol) as (keyof typeof before.energyKJPerMol)[];
      for (const key of keys) {
        const energy = before.energyKJPerMol[key];
        if (energy === null) expect(after.energyKJPerMol[key]).toBeNull();
        else expect(Math.abs(known(after.energyKJPerMol[key]) - energy / s), key).toBeLessThan(1e-8);
      }
      expect(Math.abs(known(after.distanceA) - s * known(before.distanceA))).toBeLessThan(1e-10);
    });
  });
});

/** Packed xx xy xz yy yz zz of ½(3(ab + ba)/2·2 …): the traceless form of a symmetric product of two vectors, 3(ab + ba)/2 − a·b. */
function tracelessProduct(a: Vector, b: Vector): number[] {
  const packed: number[] = [];
  for (const i of [0, 1, 2] as const) {
    for (let j = i; j < 3; j++) {
      packed.push(1.5 * (a[i] * b[j as 0] + b[i] * a[j as 0]) - (i === j ? dot(a, b) : 0));
    }
  }
  return packed;
}

describe('moments about another centre', () => {
  const centres: Centre[] = ['mass', 'geometry', 'nuclear-charge'];
  const momentsOf = (fragment: Fragment, centre: Centre) => {
    const { moments } = analyse(frameText([fragment]), { centre }).frame;
    const vector = (array: Float64Array) => Array.from(array) as unknown as Vector;
    return {
      at: vector(moments.centreA),
      dipole: vector(moments.dipoleEA),
      theta: Array.from(moments.quadrupoleEA2),
      charge: moments.chargeE[0]!,
    };
  };

  test.each([0, 1, -2])('of a fragment of charge %d shift by the exact origin formulas', (charge) => {
    forSeeds((random) => {
      const fragment = shifted(randomFragment(random, charge), scaled(randomDirection(random), 30));
      const all = centres.map((centre) => momentsOf(fragment, centre));
      const [from] = all;
      for (const to of all) {
        // d = O' − O: μ' = μ − Qd; Θ' = Θ − (traceless product of μ and d) + ½Q(3dd − d²).
        const d = add(to.at, from!.at, -1);
        const dipole = add(from!.dipole, d, -from!.charge);
        for (const k of [0, 1, 2] as const) expect(Math.abs(to.dipole[k] - dipole[k])).toBeLessThan(1e-11);
        const linear = tracelessProduct(from!.dipole, d);
        const square = tracelessProduct(d, d);
        for (const k of [0, 1, 2, 3, 4, 5]) {
          const expected = from!.theta[k]! - linear[k]! + 0.5 * from!.charge * square[k]!;
          expect(Math.abs(to.theta[k]! - expected)).toBeLessThan(1e-10);
        }
        expect(Math.abs(to.theta[0]! + to.theta[3]! + to.theta[5]!)).toBeLessThan(1e-12);
      }
    });
  });

  test('are the three centres by their definitions', () => {
    const fragment: Fragment = {
      sites: [
        { symbol: 'H', at: [0, 0, 0], chargeE: 0 },
        { symbol: 'Cl', at: [1.3, 0, 0], chargeE: 0 },
      ],
    };
    const x = centres.map((centre) => momentsOf(fragment, centre).at[0]);
    expect(x[0]).toBeCloseTo((1.3 * 35.45) / (35.45 + 1.008), 12);
    expect(x[1]).toBeCloseTo(0.65, 12);
    expect(x[2]).toBeCloseTo((1.3 * 17) / 18, 12);
  });

  test('leave an annotated dipole of an ion as it is written, about whichever centre is in use', () => {
    for (const centre of centres) {
      const { moments } = analyse(frameText([{ ...randomFragment(seeded(3), 1), dipoleEA: [0.1, 0.2, 0.3] }]), {
        centre,
        ...FAR_CUTOFF,
      }).frame;
      expect(Array.from(moments.dipoleEA)).toEqual([0.1, 0.2, 0.3]);
    }
  });
});

test('a charge-free point atom meets every law of a point: no extent, no quadrupole, exact terms', () => {
  const pair = pairOf(point(ORIGIN, [0.2, 0.1, 0]), point([0, 0, 8], [0, 0.3, 0.1], 1));
  expect(pair.basis).toBe('extent');
  expect(pair.errorKJPerMol).toBeCloseTo(0, 12);
  expect(pair.regime).toBe('far');
  expect(pair.energyKJPerMol.dipoleQuadrupole).toBeCloseTo(0, 15);
});
