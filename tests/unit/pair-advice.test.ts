import { describe, expect, test } from 'vitest';
import type { PairRecord } from '../../server/src/features/records';
import { type Fragment, K_KJ_A, known, pairOf, point, type Site, type Vector } from '../property/build-frame';

/**
 * Every regime, basis and piece of advice, each reached by a small frame whose result is worked out beside it. At 298.15 K kT is
 * 2.479 kJ/mol: an error below 0.1 kT = 0.2479 always holds, 0.5 kT is 1.2395.
 */

const O: Vector = [0, 0, 0];

type Row = readonly [symbol: string, x: number, y: number, z: number, chargeE?: number | undefined];

function atoms(...sites: Row[]): Site[] {
  return sites.map(([symbol, x, y, z, chargeE]) => ({
    symbol,
    at: [x, y, z] as const,
    ...(chargeE === undefined ? {} : { chargeE }),
  }));
}

/** Two F with charges ±size/4, 4 Å apart along y, so extent 2 and centre in the middle. */
function rod(x: number, size: number, sign = 1): Fragment {
  return { sites: atoms(['F', x, 2, 0, (sign * size) / 4], ['F', x, -2, 0, (-sign * size) / 4]) };
}

/** Two antiparallel rods 4 Å apart, whose point energy is −p: the Coulomb sum is −p·2(1 − 1/√2) = −0.5858 p, the error 0.4142 p. */
function rods(p: number, keys = ''): PairRecord {
  const size = Math.sqrt((p * 64) / K_KJ_A);
  return pairOf(rod(0, size), rod(4, size, -1), {}, keys);
}

describe('charges of both, 4 Å apart (F–F 4.0 Å, ratio 1.36: apart)', () => {
  test.each([
    // error 0.207 ≤ 0.1 kT
    [0.5, 'far', 'accept'],
    // error 0.373 between 0.1 and 0.2 kT
    [0.9, 'edge', 'review'],
    // error 0.505 beyond 0.2 kT = 0.496, S = 1.22 ≤ 0.5 kT = 1.2395
    [1.22, 'near', 'review'],
    // S = 1.26 > 0.5 kT
    [1.26, 'near', 'compute'],
    // relative error 0.707: beyond twice the tolerance
    [30, 'near', 'compute'],
  ] as const)('and a point energy of -%d kJ/mol: %s, %s', (p, regime, advice) => {
    const pair = rods(p);
    expect(pair.energyKJPerMol.pointDipole).toBeCloseTo(-p, 9);
    expect(pair.referenceKJPerMol).toBeCloseTo(-2 * p * (1 - Math.SQRT1_2), 9);
    expect(pair.errorKJPerMol).toBeCloseTo(p * (2 * Math.SQRT1_2 - 1), 9);
    expect(pair.relativeError).toBeCloseTo(Math.SQRT1_2, 9);
    expect(pair).toMatchObject({ basis: 'charges', contact: 'apart', regime, advice });
  });

  test('a medium weakens a pair that is apart: 30 kJ/mol in water of 80 leave an error of 0.155, far', () => {
    expect(rods(30, 'relative_permittivity=80')).toMatchObject({ regime: 'far', advice: 'accept' });
  });

  test('a higher temperature does so too: 1.26 at 620 K is below 0.5 kT = 2.58, its error 0.522 above 0.1 kT = 0.516', () => {
    expect(rods(1.26, 'temperature=620')).toMatchObject({ regime: 'edge', advice: 'review' });
  });
});

describe('two He 2.5 Å apart (ratio 0.89: touching), point dipoles head to tail of energy -2K m^2/R^3', () => {
  const pair = (m: number, keys = '') => pairOf(point(O, [m, 0, 0]), point([2.5, 0, 0], [m, 0, 0]), {}, keys);

  test.each([
    // 1.78 < kT: nothing to compute, but the clouds overlap
    [0.1, '', 'review'],
    // 4.00 > kT
    [0.15, '', 'compute'],
    // a bulk permittivity does not screen touching molecules: still 4.00
    [0.15, 'relative_permittivity=80', 'compute'],
    // ... and still 1.78
    [0.1, 'relative_permittivity=80', 'review'],
    // 0.018: no more than touching
    [0.01, '', 'review'],
  ])('of %d e·Å %s: %s', (m, keys, advice) => {
    expect(pair(m, keys)).toMatchObject({ contact: 'touching', basis: 'extent', regime: 'far', advice });
  });

  test('3 Å apart (ratio 1.07) are accepted with the same moments', () => {
    const apart = pairOf(point(O, [0.15, 0, 0]), point([3, 0, 0], [0.15, 0, 0]));
    expect(apart).toMatchObject({ contact: 'apart', regime: 'far', advice: 'accept' });
  });
});

describe('an ion', () => {
  // Na 2.27 + He 1.40 = 3.67 Å: 1.5 times that is 5.505 Å.
  test.each([
    [5.4, 'review'],
    [5.6, 'accept'],
  ] as const)('%d Å from a neutral atom: %s', (x, advice) => {
    const pair = pairOf({ sites: atoms(['Na', 0, 0, 0]), chargeE: 1 }, point([x, 0, 0], O));
    expect(pair).toMatchObject({ contact: 'apart', basis: 'fitted', regime: 'far', advice });
  });

  test('of 0.1 e is none, of 0.11 e is one', () => {
    const at = (chargeE: number) => pairOf({ sites: atoms(['Na', 0, 0, 0]), chargeE }, point([5.4, 0, 0], O)).advice;
    expect([at(0.1), at(0.11), at(-0.1), at(-0.11)]).toEqual(['accept', 'review', 'accept', 'review']);
  });
});

describe('without a basis (two atoms or more, no charges, dipole zero or unknown)', () => {
  const carbonDioxide = (x: number, dipoleEA?: Vector): Fragment => ({
    sites: atoms(['C', x, 0, 0], ['O', x, 1.16, 0], ['O', x, -1.16, 0]),
    ...(dipoleEA === undefined ? {} : { dipoleEA }),
  });
  // 3(a1 + a2) = 6.96 Å
  test.each([
    [6.9, O, O, 'review'],
    [7.0, O, O, 'accept'],
    [7.0, undefined, O, 'review'],
    [7.0, O, undefined, 'review'],
    [11.0, undefined, undefined, 'review'],
  ] as const)('%d Å apart with dipoles %j and %j: %s', (x, first, second, advice) => {
    const pair = pairOf(carbonDioxide(0, first), carbonDioxide(x, second));
    expect(pair).toMatchObject({ basis: 'none', regime: null, referenceKJPerMol: null, errorKJPerMol: null, advice });
    expect(pair.validBeyondA).toBeNull();
    expect(pair.energyKJPerMol.pointDipole === null).toBe(first === undefined || second === undefined);
  });

  test('an ion is looked at again however far', () => {
    const pair = pairOf({ ...carbonDioxide(0, O), chargeE: -1 }, carbonDioxide(11, O));
    expect(pair).toMatchObject({ basis: 'none', regime: null, advice: 'review' });
  });

  test('a size without a direction leaves the fixed arrangement open and gives the average', () => {
    const sized: Fragment = { sites: carbonDioxide(0).sites, sizeEA: 0.4 };
    const pair = pairOf(sized, point([9, 0, 0], [0, 0.4, 0]));
    expect(pair).toMatchObject({ basis: 'none', regime: null, advice: 'review', theta1Deg: null, phiDeg: null });
    expect(pair.energyKJPerMol.dipoleDipole).toBeNull();
    expect(known(pair.thermal.averageKJPerMol)).toBeLessThan(0);
  });
});

describe('the basis', () => {
  const bent = (x: number, charges: readonly (number | undefined)[], dipoleEA?: Vector): Fragment => ({
    sites: atoms(['O', x, 0, 0, charges[0]], ['H', x, 0.76, 0.59, charges[1]], ['H', x, -0.76, 0.59, charges[2]]),
    ...(dipoleEA === undefined ? {} : { dipoleEA }),
  });
  const none = [undefined, undefined, undefined];
  // The column's own dipole: 0.4 · 2 · 0.59 = 0.472 e·Å along z.
  const own = [-0.8, 0.4, 0.4];
  test.each([
    ['charges: both columns and their own dipoles', bent(0, own), bent(8, own), 'charges'],
    ['charges: an annotated dipole within 2 % of the column', bent(0, own, [0, 0, 0.48]), bent(8, own), 'charges'],
    ['fitted: an annotated dipole off by more than 2 %', bent(0, own, [0, 0, 0.482]), bent(8, own), 'fitted'],
    ['fitted: another direction within the plane', bent(0, own, [0, 0.3, 0.3]), bent(8, own), 'fitted'],
    ['fitted: a net charge that is not the column', { ...bent(0, own), chargeE: 1 }, bent(8, own), 'fitted'],
    ['fitted: no columns, dipoles in the plane', bent(0, none, [0, 0, 0.4]), bent(8, none, [0, 0.4, 0]), 'fitted'],
    [
      'extent: no columns, one dipole out of its plane',
      bent(0, none, [0.4, 0, 0]),
      bent(8, none, [0, 0.4, 0]),
      'extent',
    ],
    ['extent: a column, and a dipole out of its plane', bent(0, own, [0.4, 0, 0]), bent(8, own), 'extent'],
    ['none: no columns and a zero dipole', bent(0, none, O), bent(8, none, [0, 0.4, 0]), 'none'],
    ['none: no columns and no dipole', bent(0, none), bent(8, none, [0, 0.4, 0]), 'none'],
    ['charges: a column of zeros', bent(0, [0, 0, 0]), bent(8, own), 'charges'],
    ['extent: a point dipole on an atom', point(O, [0.2, 0, 0]), bent(8, none, [0, 0.4, 0]), 'extent'],
    ['fitted: a bare atom', point(O, O, 1), bent(8, none, [0, 0.4, 0]), 'fitted'],
  ] as const)('%s', (_, first, second, basis) => {
    const pair = pairOf(first, second);
    expect(pair.basis).toBe(basis);
    expect(pair.regime === null).toBe(basis === 'none');
    expect(pair.energyKJPerMol.coulomb === null).toBe(first.sites[0]!.chargeE === undefined);
  });

  test('fitted reaches the Coulomb sum of the smallest change: two charges along z for a dipole along z', () => {
    // Two atoms 1 Å apart along z and a dipole of 0.4: charges ±0.4, in a line with an ion 5 Å from the middle.
    const rodZ: Fragment = { sites: atoms(['F', 0, 0, 0.5], ['F', 0, 0, -0.5]), dipoleEA: [0, 0, 0.4] };
    const pair = pairOf(rodZ, point([0, 0, 5], O, 1));
    expect(pair.basis).toBe('fitted');
    expect(pair.referenceKJPerMol).toBeCloseTo(K_KJ_A * 0.4 * (1 / 4.5 - 1 / 5.5), 9);
  });

  test('extent reaches the worst of the shifted two-charge dipoles: a quarter of the extent towards the ion', () => {
    // Off the axis of its atoms, so no charges fit: ±0.2/1 e, 1 Å apart along x, midpoint at 0.25; the ion at 6 on x.
    const across: Fragment = { sites: atoms(['F', 0, 0, 1], ['F', 0, 0, -1]), dipoleEA: [0.2, 0, 0] };
    const pair = pairOf(across, point([6, 0, 0], O, 1));
    expect(pair.basis).toBe('extent');
    expect(pair.referenceKJPerMol).toBeCloseTo(K_KJ_A * 0.2 * (1 / 5.25 - 1 / 6.25), 9);
    expect(pair.energyKJPerMol.pointDipole).toBeCloseTo((K_KJ_A * 0.2) / 36, 9);
  });

  test.each([
    // K·0.16/27 = 8.2 > 0.5 kT
    [0.4, 'compute'],
    // K·0.0016/27 = 0.08 ≤ 0.5 kT, but near is never accepted without a number
    [0.04, 'review'],
  ] as const)('extent within R <= a1 + a2 is near without a number (dipoles of %d: %s)', (m, advice) => {
    // Extents of 1.6 Å along z, 3 Å apart along x, dipoles along x: F–F 3.0 Å, ratio 1.02.
    const across = (x: number): Fragment => ({
      sites: atoms(['F', x, 0, 1.6], ['F', x, 0, -1.6]),
      dipoleEA: [0, m, 0],
    });
    const pair = pairOf(across(0), across(3));
    expect(pair).toMatchObject({ basis: 'extent', contact: 'apart', regime: 'near', advice });
    expect([pair.referenceKJPerMol, pair.errorKJPerMol, pair.relativeError]).toEqual([null, null, null]);
    expect(known(pair.energyKJPerMol.pointDipole)).toBeCloseTo((K_KJ_A * m * m) / 27, 9);
  });
});

describe('one fragment within the extent of the other', () => {
  // Nine C along y to ±5.6 Å; the neighbour stands 4.4 Å beside its middle (C–He ratio 1.42).
  const long = (charge: number | undefined): Fragment => ({
    sites: Array.from({ length: 9 }, (_, k) => ({
      symbol: 'C',
      at: [0, 1.4 * (k - 4), 0] as const,
      ...(charge === undefined ? {} : { chargeE: k === 4 ? charge : k === 0 ? -charge : 0 }),
    })),
    ...(charge === undefined ? { dipoleEA: [0, 0.5, 0] as const } : {}),
  });
  const beside = (x: number, chargeE: number | undefined): Fragment => ({
    sites: [{ symbol: 'He', at: [x, 0, 0], ...(chargeE === undefined ? {} : { chargeE }) }],
  });

  test.each([
    // K·0.05·0.05·(1/4.4 − 1/7.12) = 0.30 ≤ 0.5 kT; charges of 0.05 e make no ion
    [0.05, 0.05, 'review'],
    // K·0.5·0.05·(1/4.4 − 1/7.12) = 3.0 > 0.5 kT
    [0.5, 0.05, 'compute'],
  ] as const)('has its Coulomb sum alone (charges %d and %d): near, %s', (q, other, advice) => {
    const pair = pairOf(long(q), beside(4.4, other));
    const { coulomb, ...rest } = pair.energyKJPerMol;
    expect(coulomb).toBeCloseTo(K_KJ_A * q * other * (1 / 4.4 - 1 / Math.hypot(4.4, 5.6)), 9);
    expect(new Set(Object.values(rest))).toEqual(new Set([null]));
    expect(new Set(Object.values(pair.thermal))).toEqual(new Set([null]));
    expect(pair).toMatchObject({ regime: 'near', errorKJPerMol: null, relativeError: null, contact: 'apart', advice });
  });

  test.each([
    // C 1.70 + He 1.40 = 3.10 Å
    [4.4, 'apart', 'review'],
    [2.9, 'touching', 'compute'],
  ] as const)('without charges, %d Å beside it (%s): %s', (x, contact, advice) => {
    const pair = pairOf(long(undefined), beside(x, undefined));
    expect(pair).toMatchObject({ regime: 'near', basis: 'none', errorKJPerMol: null, contact, advice });
    expect(new Set(Object.values(pair.energyKJPerMol))).toEqual(new Set([null]));
  });

  test('at its very edge is enclosed a hair inside, and has numbers a hair outside', () => {
    const { pointDipole: inside } = pairOf(long(0.5), beside(5.599, 0.05)).energyKJPerMol;
    const { pointDipole: outside } = pairOf(long(0.5), beside(5.601, 0.05)).energyKJPerMol;
    expect([inside, typeof outside]).toEqual([null, 'number']);
  });
});
