import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { PairRecord } from '../../server/src/features/records';
import {
  add,
  analyse,
  dot,
  FAR_CUTOFF,
  type Fragment,
  frameText,
  K_KJ_A,
  known,
  moved,
  pairOf,
  point,
  randomDirection,
  randomFragment,
  randomRotation,
  scaled,
  seeded,
  shifted,
  type Vector,
} from './build-frame';

/** What must stay the same when a pair is moved, turned, mirrored, exchanged or renumbered, and how energies scale. */

const RUNS = { seed: 20240607, numRuns: 150 };

/** Two random fragments 6–14 Å apart: neutral or ionic; charges, charges with another dipole, or dipoles alone. */
function randomPair(seed: number): [Fragment, Fragment] {
  const random = seeded(seed);
  const make = (): Fragment => {
    const base = randomFragment(random, [0, 0, 0, 1, -1][Math.floor(5 * random())]!);
    const kind = Math.floor(3 * random());
    if (kind === 0) return base;
    return { ...base, dipoleEA: scaled(randomDirection(random), 0.1 + 0.6 * random()) };
  };
  let [first, second] = [make(), make()];
  if (random() < 0.25) {
    const bare = ({ sites, ...rest }: Fragment): Fragment => ({
      ...rest,
      sites: sites.map(({ symbol, at }) => ({ symbol, at })),
      dipoleEA: scaled(randomDirection(random), 0.3),
    });
    [first, second] = [bare(first), bare(second)];
  }
  return [first, shifted(second, scaled(randomDirection(random), 6 + 8 * random()))];
}

function close(actual: number | null, expected: number | null, name: string, part = 1e-8, floor = 1e-8): void {
  if (actual === null || expected === null) {
    expect(actual, name).toBe(expected);
    return;
  }
  expect(Math.abs(actual - expected), `${name}: ${actual} for ${expected}`).toBeLessThanOrEqual(
    Math.max(floor, part * Math.abs(expected)),
  );
}

/** Everything of a pair that no rigid motion may change. */
function sameScalars(actual: PairRecord, expected: PairRecord): void {
  for (const key of ['distanceA', 'angularFactor', 'referenceKJPerMol', 'errorKJPerMol'] as const) {
    close(actual[key], expected[key], key);
  }
  close(actual.validBeyondA, expected.validBeyondA, 'validBeyondA', 1e-6);
  for (const key of Object.keys(expected.energyKJPerMol) as (keyof PairRecord['energyKJPerMol'])[]) {
    close(actual.energyKJPerMol[key], expected.energyKJPerMol[key], key);
  }
  for (const key of ['coupling', 'averageKJPerMol', 'freeEnergyKJPerMol', 'leadingKJPerMol', 'alignment'] as const) {
    close(actual.thermal[key], expected.thermal[key], key);
  }
  close(actual.closest.distanceA, expected.closest.distanceA, 'closest');
  close(actual.closest.contactRatio, expected.closest.contactRatio, 'contactRatio');
  for (const key of ['contact', 'regime', 'basis', 'advice', 'arrangement'] as const) {
    expect(actual[key], key).toBe(expected[key]);
  }
}

function sameAngles(actual: PairRecord, expected: PairRecord, phiSign = 1): void {
  close(actual.theta1Deg, expected.theta1Deg, 'theta1', 0, 1e-6);
  close(actual.theta2Deg, expected.theta2Deg, 'theta2', 0, 1e-6);
  close(actual.phiDeg, expected.phiDeg === null ? null : phiSign * expected.phiDeg, 'phi', 0, 1e-5);
}

function forPairs(check: (first: Fragment, second: Fragment, random: () => number) => void): void {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 2 ** 31 }), (seed) => {
      const [first, second] = randomPair(seed);
      check(first, second, seeded(seed + 1));
    }),
    RUNS,
  );
}

describe('a pair as a whole', () => {
  test('keeps every number when it is translated', () => {
    forPairs((first, second, random) => {
      const by = scaled(randomDirection(random), 100 * random());
      const [before, after] = [pairOf(first, second), pairOf(shifted(first, by), shifted(second, by))];
      sameScalars(after, before);
      sameAngles(after, before);
    });
  });

  test('keeps every number when it is rotated', () => {
    forPairs((first, second, random) => {
      const turn = randomRotation(random);
      const [before, after] = [pairOf(first, second), pairOf(moved(first, turn, turn), moved(second, turn, turn))];
      sameScalars(after, before);
      sameAngles(after, before);
    });
  });

  test('changes only the sign of phi in a mirror', () => {
    forPairs((first, second, random) => {
      const normal = randomDirection(random);
      const mirror = (v: Vector) => add(v, normal, -2 * dot(normal, v));
      const [before, after] = [
        pairOf(first, second),
        pairOf(moved(first, mirror, mirror), moved(second, mirror, mirror)),
      ];
      sameScalars(after, before);
      sameAngles(after, before, -1);
    });
  });

  test('turns theta into 180 - theta of the other when its fragments are exchanged; phi and energies stay', () => {
    forPairs((first, second) => {
      const [before, after] = [pairOf(first, second), pairOf(second, first)];
      const { arrangement, ...exchanged } = after;
      sameScalars({ ...exchanged, arrangement: before.arrangement }, before);
      expect(arrangement === 'skewed').toBe(before.arrangement === 'skewed');
      close(after.theta1Deg, before.theta2Deg === null ? null : 180 - before.theta2Deg, 'theta1', 0, 1e-6);
      close(after.theta2Deg, before.theta1Deg === null ? null : 180 - before.theta1Deg, 'theta2', 0, 1e-6);
      close(after.phiDeg, before.phiDeg, 'phi', 0, 1e-5);
    });
  });

  test('keeps every number when the atoms within its fragments are permuted', () => {
    forPairs((first, second, random) => {
      const shuffle = (fragment: Fragment): Fragment => ({
        ...fragment,
        sites: fragment.sites
          .map((site) => ({ site, key: random() }))
          .sort((a, b) => a.key - b.key)
          .map(({ site }) => site),
      });
      const [before, after] = [pairOf(first, second), pairOf(shuffle(first), shuffle(second))];
      sameScalars(after, before);
      sameAngles(after, before);
    });
  });

  test('keeps its energies when the fragments of a frame of four are permuted', () => {
    forPairs((first, second, random) => {
      const frame = [
        first,
        second,
        shifted(randomFragment(random, 0), [20, 0, 0]),
        shifted(randomFragment(random, 1), [0, -20, 0]),
      ].map((fragment) => ({
        ...fragment,
        sites: fragment.sites.map((site) => ({ ...site, chargeE: site.chargeE ?? 0.1 })),
      }));
      const order = [2, 0, 3, 1];
      const before = analyse(frameText(frame), FAR_CUTOFF).records;
      const after = analyse(frameText(order.map((f) => frame[f]!)), FAR_CUTOFF).records;
      expect(after).toHaveLength(6);
      for (const record of after) {
        const ends = [order[record.first - 1]! + 1, order[record.second - 1]! + 1];
        const old = before.find((pair) => ends.includes(pair.first) && ends.includes(pair.second))!;
        sameScalars({ ...record, arrangement: old.arrangement }, old);
      }
    });
  });
});

const ORIGIN: Vector = [0, 0, 0];

function forDipoles(check: (m1: Vector, m2: Vector, at: Vector, random: () => number) => void): void {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 2 ** 31 }), (seed) => {
      const random = seeded(seed);
      const dipole = () => scaled(randomDirection(random), 0.05 + random());
      check(dipole(), dipole(), scaled(randomDirection(random), 3 + 9 * random()), random);
    }),
    RUNS,
  );
}

const dipoleEnergy = (m1: Vector, m2: Vector, at: Vector) =>
  known(pairOf(point(ORIGIN, m1), point(at, m2)).energyKJPerMol.dipoleDipole);

describe('the dipole–dipole energy', () => {
  test('changes sign with either dipole, and stays when both do or when R does', () => {
    forDipoles((m1, m2, at) => {
      const energy = dipoleEnergy(m1, m2, at);
      close(dipoleEnergy(scaled(m1, -1), m2, at), -energy, 'first');
      close(dipoleEnergy(m1, scaled(m2, -1), at), -energy, 'second');
      close(dipoleEnergy(scaled(m1, -1), scaled(m2, -1), at), energy, 'both');
      close(dipoleEnergy(m1, m2, scaled(at, -1)), energy, 'line');
    });
  });

  test('is linear in each dipole', () => {
    forDipoles((m1, m2, at, random) => {
      const other = scaled(randomDirection(random), random());
      const sum = 1.7 * dipoleEnergy(m1, m2, at) - 0.4 * dipoleEnergy(other, m2, at);
      close(dipoleEnergy(add(scaled(m1, 1.7), other, -0.4), m2, at), sum, 'sum');
    });
  });

  test('is k(m1 m2)(sin sin cos phi - 2 cos cos)/R^3 of the angles shown', () => {
    forDipoles((m1, m2, at) => {
      const record = pairOf(point(ORIGIN, m1), point(at, m2));
      const [t1, t2, phi] = [record.theta1Deg, record.theta2Deg, record.phiDeg].map(
        (degrees) => (known(degrees) * Math.PI) / 180,
      ) as [number, number, number];
      const factor = 2 * Math.cos(t1) * Math.cos(t2) - Math.sin(t1) * Math.sin(t2) * Math.cos(phi);
      close(record.angularFactor, factor, 'g', 1e-12, 1e-12);
      const size = (K_KJ_A * Math.hypot(...m1) * Math.hypot(...m2)) / Math.hypot(...at) ** 3;
      close(record.energyKJPerMol.dipoleDipole, -size * factor, 'energy', 1e-9, 1e-9 * size);
    });
  });

  test('averages to zero over all orientations, its square to 2/3 of the locked energy squared', () => {
    // The six directions of the axes integrate polynomials of degree 3 on the sphere exactly.
    const axes = [0, 1, 2].flatMap((k) =>
      [1, -1].map((sign) => [0, 1, 2].map((a) => (a === k ? sign : 0)) as unknown as Vector),
    );
    const at: Vector = [2, 3, 4.5];
    const locked = K_KJ_A / Math.hypot(...at) ** 3;
    const energies = axes.flatMap((m1) => axes.map((m2) => dipoleEnergy(m1, m2, at)));
    const mean = (power: number) => energies.reduce((sum, energy) => sum + energy ** power, 0) / energies.length;
    close(mean(1), 0, 'mean', 0, 1e-12);
    close(mean(2), (2 / 3) * locked ** 2, 'square', 1e-9);
    const oneTurning = axes
      .map((m1) => dipoleEnergy(m1, [0.3, -0.2, 0.6], at))
      .reduce((sum, energy) => sum + energy, 0);
    close(oneTurning, 0, 'one', 0, 1e-12);
  });

  test('averages to -2 cos cos over the dihedral angle', () => {
    const [t1, t2] = [0.7, 2.1];
    const turns = Array.from({ length: 8 }, (_, k) => (k * Math.PI) / 4);
    const m1: Vector = [Math.cos(t1), Math.sin(t1), 0];
    const sum = turns.reduce(
      (total, phi) =>
        total + dipoleEnergy(m1, [Math.cos(t2), Math.sin(t2) * Math.cos(phi), Math.sin(t2) * Math.sin(phi)], [5, 0, 0]),
      0,
    );
    close(sum / 8, (-2 * K_KJ_A * Math.cos(t1) * Math.cos(t2)) / 125, 'mean', 1e-9);
  });
});

describe('scaling', () => {
  test('charge–charge goes with 1/R, charge–dipole with 1/R^2, dipole–dipole with 1/R^3', () => {
    forDipoles((m1, m2, at, random) => {
      const s = 1 + 3 * random();
      const near = pairOf(point(ORIGIN, m1, 1), point(at, m2, -2)).energyKJPerMol;
      const far = pairOf(point(ORIGIN, m1, 1), point(scaled(at, s), m2, -2)).energyKJPerMol;
      close(far.chargeCharge, known(near.chargeCharge) / s, 'charge–charge', 1e-12);
      close(far.chargeDipole, known(near.chargeDipole) / s ** 2, 'charge–dipole', 1e-9, 1e-10);
      close(far.dipoleDipole, known(near.dipoleDipole) / s ** 3, 'dipole–dipole', 1e-9, 1e-10);
    });
  });

  test('every fixed energy goes with 1/eps_r', () => {
    forPairs((first, second, random) => {
      const permittivity = 1 + 79 * random();
      const vacuum = pairOf(first, second).energyKJPerMol;
      const medium = pairOf(first, second, {}, `relative_permittivity=${permittivity}`).energyKJPerMol;
      for (const key of Object.keys(vacuum) as (keyof typeof vacuum)[]) {
        const energy = vacuum[key];
        close(medium[key], energy === null ? null : energy / permittivity, key, 1e-9, 1e-10);
      }
    });
  });

  test('the thermal average goes with R^-6 and eps_r^-2 at weak coupling; beside an ion with R^-4 and eps_r^-2', () => {
    const thermal = (charge: number, r: number, permittivity = 1) =>
      pairOf(
        point(ORIGIN, [0, 0.05, 0], charge),
        point([r, 0, 0], [0, 0, 0.05]),
        {},
        `relative_permittivity=${permittivity}`,
      ).thermal;
    for (const [charge, power, r] of [
      [0, 6, 15],
      [0.5, 4, 200],
    ] as const) {
      const near = thermal(charge, r);
      expect(known(near.coupling)).toBeLessThan(2e-3);
      for (const key of ['averageKJPerMol', 'freeEnergyKJPerMol', 'leadingKJPerMol'] as const) {
        const value = known(near[key]);
        expect(value).toBeLessThan(0);
        close(thermal(charge, 3 * r)[key], value / 3 ** power, `${key} in R`, 1e-6, 0);
        close(thermal(charge, r, 5)[key], value / 25, `${key} in permittivity`, 1e-6, 0);
      }
      close(known(near.averageKJPerMol), 2 * known(near.freeEnergyKJPerMol), 'U = 2F', 1e-6, 0);
      close(near.averageKJPerMol, near.leadingKJPerMol, 'leading', 1e-6, 0);
    }
  });
});
