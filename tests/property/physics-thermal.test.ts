import { describe, expect, test } from 'vitest';
import type { PairRecord } from '../../server/src/features/records';
import { K_KJ_A, known, pairOf, point, seeded } from './build-frame';

/** The Boltzmann average of a pair that turns freely, through the program: two point atoms with declared moments. */

const R_KJ = 8.31446261815324e-3;
const K = K_KJ_A;

/** Charge 0: two neutral dipoles; else an ion beside a dipole. */
function thermal(chargeE: number, temperatureK: number, sizeEA = 0.4, rA = 4): PairRecord['thermal'] {
  const first = point([0, 0, 0], chargeE === 0 ? [sizeEA, 0, 0] : [0, 0, 0], chargeE);
  return pairOf(first, point([0, rA, 0], [0, 0, sizeEA]), { temperatureK }).thermal;
}

const lockedKJ = (chargeE: number, sizeEA = 0.4, rA = 4) =>
  chargeE === 0 ? (2 * K * sizeEA ** 2) / rA ** 3 : (K * Math.abs(chargeE) * sizeEA) / rA ** 2;

const KINDS = [
  ['two dipoles', 0],
  ['a dipole beside a cation', 1],
  ['a dipole beside an anion', -2],
] as const;

/** x, ⟨U⟩/kT, ln Z of the physics sheet. */
const TABLE = [
  [0.1, -0.006660454281, 0.003331779418],
  [0.5, -0.162925551164, 0.082385993271],
  [1, -0.612878959678, 0.3192373493],
  [2, -2.048324765854, 1.154894943736],
  [5, -7.770380912951, 5.178960431033],
  [10, -17.905379733798, 13.68082659135],
  [50, -97.985994563885, 90.397855155945],
] as const;

describe('two freely turning dipoles', () => {
  test.each(TABLE)('at a coupling of %d have <U> = %d kT and ln Z = %d', (coupling, average, logZ) => {
    const temperatureK = 298.15;
    const kT = R_KJ * temperatureK;
    const sizeEA = Math.sqrt((coupling * kT * 4 ** 3) / K);
    const result = thermal(0, temperatureK, sizeEA);
    expect(known(result.coupling) / coupling).toBeCloseTo(1, 9);
    expect(known(result.averageKJPerMol) / kT / average).toBeCloseTo(1, 8);
    expect(-known(result.freeEnergyKJPerMol) / kT / logZ).toBeCloseTo(1, 8);
    expect(known(result.alignment)).toBeCloseTo(-average / (2 * coupling), 8);
  });

  test('follow -bU = 2x^2/3 - 14x^4/225 + 326x^6/33075 and -bF = x^2/3 - 7x^4/450 + 163x^6/99225 while x is small', () => {
    for (const x of [0.01, 0.05, 0.1, 0.2]) {
      const kT = R_KJ * 300;
      const result = thermal(0, 300, Math.sqrt((x * kT * 64) / K));
      const y = known(result.coupling) ** 2;
      const next = y ** 4;
      const u = (2 / 3) * y - (14 / 225) * y ** 2 + (326 / 33075) * y ** 3;
      const f = y / 3 - (7 / 450) * y ** 2 + (163 / 99225) * y ** 3;
      expect(Math.abs(-known(result.averageKJPerMol) / kT - u)).toBeLessThan(0.01 * next + 1e-14);
      expect(Math.abs(-known(result.freeEnergyKJPerMol) / kT - f)).toBeLessThan(0.01 * next + 1e-14);
    }
  });

  test('have Keesom beside them 8.8 % too large at x = 1 and 30 % at x = 2', () => {
    for (const [x, excess] of [
      [1, 8.8],
      [2, 30],
    ] as const) {
      const result = thermal(0, 300, Math.sqrt((x * R_KJ * 300 * 64) / K));
      const over = 100 * (known(result.leadingKJPerMol) / known(result.averageKJPerMol) - 1);
      expect(Math.abs(over - excess)).toBeLessThan(0.25);
    }
  });

  test('lose 2 kT to libration when they are nearly locked, a dipole beside an ion 1 kT', () => {
    for (const [charge, share] of [
      [0, 2],
      [1, 1],
    ] as const) {
      const temperatureK = 4;
      const { averageKJPerMol } = thermal(charge, temperatureK);
      const loss = (known(averageKJPerMol) + lockedKJ(charge)) / (R_KJ * temperatureK);
      expect(Math.abs(loss - share)).toBeLessThan(0.03);
    }
  });
});

describe.each(KINDS)('%s', (_, charge) => {
  const temperatures = Array.from({ length: 61 }, (_step, k) => 0.5 * 10 ** (k / 12));

  test('keep -locked <= U <= F <= 0 at every temperature from 0.5 K to 50,000 K', () => {
    for (const temperatureK of temperatures) {
      const { averageKJPerMol, freeEnergyKJPerMol, alignment } = thermal(charge, temperatureK);
      const [u, f] = [known(averageKJPerMol), known(freeEnergyKJPerMol)];
      expect(u).toBeGreaterThanOrEqual(-lockedKJ(charge) * (1 + 1e-9));
      expect(u).toBeLessThanOrEqual(f);
      expect(f).toBeLessThanOrEqual(0);
      expect(known(alignment)).toBeGreaterThan(0);
      expect(known(alignment)).toBeLessThan(1);
      expect(Math.abs(known(alignment) + u / lockedKJ(charge))).toBeLessThan(1e-8);
    }
  });

  test('keep U = F - T dF/dT', () => {
    for (const temperatureK of temperatures) {
      const h = 1e-3 * temperatureK;
      const f = (t: number) => known(thermal(charge, t).freeEnergyKJPerMol);
      // Five-point derivative: error of order h^4.
      const slope =
        (8 * (f(temperatureK + h) - f(temperatureK - h)) - (f(temperatureK + 2 * h) - f(temperatureK - 2 * h))) /
        (12 * h);
      const expected = f(temperatureK) - temperatureK * slope;
      const u = known(thermal(charge, temperatureK).averageKJPerMol);
      expect(Math.abs(u - expected)).toBeLessThan(1e-8 * Math.abs(u) + 1e-8 * R_KJ * temperatureK);
    }
  });

  test('lose strength steadily with temperature, and all of it as T grows without bound', () => {
    const averages = temperatures.map((t) => known(thermal(charge, t).averageKJPerMol));
    for (const [k, value] of averages.entries()) if (k > 0) expect(value).toBeGreaterThan(averages[k - 1]!);
    const hot = [1e6, 1e8, 1e10].map((t) => known(thermal(charge, t).averageKJPerMol));
    for (const [k, value] of hot.entries()) {
      expect(value).toBeLessThan(0);
      expect(Math.abs(value)).toBeLessThan(10 / 100 ** k);
      if (k > 0) expect(value / hot[k - 1]!).toBeCloseTo(0.01, 4);
    }
  });

  test('join smoothly where the way of computing changes', () => {
    const at = (x: number) => {
      const scale =
        charge === 0 ? Math.sqrt((x * R_KJ * 300 * 64) / K) : (x * R_KJ * 300 * 16) / (K * Math.abs(charge));
      const { averageKJPerMol, freeEnergyKJPerMol } = thermal(charge, 300, scale);
      return [known(averageKJPerMol), known(freeEnergyKJPerMol)] as const;
    };
    for (const edge of [0.02, 0.5, 60]) {
      const [below, above] = [at(edge * (1 - 1e-7)), at(edge * (1 + 1e-7))];
      for (const k of [0, 1] as const) expect(Math.abs(above[k] / below[k] - 1)).toBeLessThan(1e-6);
    }
  });

  test('stay finite at couplings of thousands', () => {
    const { averageKJPerMol, freeEnergyKJPerMol, alignment } = thermal(charge, 0.01);
    expect(known(averageKJPerMol) / -lockedKJ(charge)).toBeCloseTo(1, 4);
    expect(known(freeEnergyKJPerMol) / -lockedKJ(charge)).toBeCloseTo(1, 2);
    expect(known(alignment)).toBeLessThanOrEqual(1);
  });

  test('do not care which way the dipoles point', () => {
    const random = seeded(5);
    const turned = () => {
      const z = 2 * random() - 1;
      const s = Math.sqrt(1 - z * z);
      return [0.4 * z, 0.4 * s * Math.cos(9 * random()), 0] as const;
    };
    const sizes = Array.from({ length: 20 }, () => {
      const [x, y] = turned();
      const rest = Math.sqrt(Math.max(0, 0.16 - x * x - y * y));
      const first = point([0, 0, 0], charge === 0 ? [x, rest, y] : [0, 0, 0], charge);
      return known(pairOf(first, point([0, 4, 0], [y, x, rest])).thermal.averageKJPerMol);
    });
    for (const value of sizes) expect(Math.abs(value / sizes[0]! - 1)).toBeLessThan(1e-9);
  });
});

test('the alignment names the motion: free below 0.10, hindered to 0.50, locked beyond', () => {
  for (const temperatureK of [20, 60, 100, 200, 400, 800, 2000, 5000, 20000]) {
    const { alignment, motion } = thermal(0, temperatureK);
    const share = known(alignment);
    expect(motion).toBe(share < 0.1 ? 'free' : share <= 0.5 ? 'hindered' : 'locked');
  }
});

test('two ions have no thermal average', () => {
  const pair = pairOf(point([0, 0, 0], [0.1, 0, 0], 1), point([6, 0, 0], [0, 0.2, 0], -1));
  expect(new Set(Object.values(pair.thermal))).toEqual(new Set([null]));
});

test("the ion's own dipole is left out beside a neutral dipole, and charges up to 0.1 e make no ion", () => {
  const neutral = point([0, 0, 6], [0.3, 0, 0]);
  const plain = pairOf(point([0, 0, 0], [0, 0, 0], 0.11), neutral).thermal;
  expect(pairOf(point([0, 0, 0], [0, 0.5, 0], 0.11), neutral).thermal).toEqual(plain);
  expect(known(plain.coupling)).toBeCloseTo((K * 0.11 * 0.3) / (36 * R_KJ * 298.15), 9);
  const almost = pairOf(point([0, 0, 0], [0, 0.5, 0], 0.09), neutral).thermal;
  expect(known(almost.coupling)).toBeCloseTo((K * 0.5 * 0.3) / (216 * R_KJ * 298.15), 9);
});
