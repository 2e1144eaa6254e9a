import { describe, expect, test } from 'vitest';
import {
  add,
  analyse,
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
} from '../property/build-frame';

/** `validBeyondA` against the regime of the same two rigid fragments at other separations. */

interface Line {
  readonly validBeyondA: number;
  readonly startA: number;
  /** Whether the point dipole holds with the centres `r` apart on the same line. */
  holds(r: number): boolean;
}

function lineOf(first: Fragment, second: Fragment, keys = ''): Line {
  const { frame, records } = analyse(frameText([first, second], keys), FAR_CUTOFF);
  const [record] = records;
  const { moments } = frame;
  const centre = (f: number) => Array.from(moments.centreA.subarray(3 * f, 3 * f + 3)) as unknown as Vector;
  const apart = add(centre(1), centre(0), -1);
  const distance = Math.hypot(...apart);
  const [a1, a2] = [moments.extentA[0]!, moments.extentA[1]!];
  return {
    validBeyondA: known(record!.validBeyondA),
    startA: record!.basis === 'extent' ? a1 + a2 : Math.max(a1, a2, 1),
    holds: (r) => {
      const text = frameText([first, shifted(second, scaled(apart, r / distance - 1))], keys);
      return analyse(text, FAR_CUTOFF).pairs[0]!.regime === 'far';
    },
  };
}

/** Checks both sides of the limit and everything beyond; tells how often the point dipole comes and goes inside. */
function checkLine({ validBeyondA: limit, startA, holds }: Line): number {
  expect(limit).toBeGreaterThanOrEqual(startA * (1 - 1e-12));
  const isStart = Math.abs(limit - startA) < 1e-9;
  expect(holds(limit * (1 + 1e-6)), `just beyond ${limit}`).toBe(true);
  if (!isStart) expect(holds(limit * (1 - 1e-6)), `just inside ${limit}`).toBe(false);
  for (let r = limit * 1.001; r < 150; r *= 1.013) expect(holds(r), `at ${r}, beyond ${limit}`).toBe(true);
  let changes = 0;
  let before = false;
  if (!isStart) {
    for (let r = limit * (1 - 1e-6); r > startA * 1.0001; r /= 1.01) {
      const now = holds(r);
      if (now !== before) changes++;
      before = now;
    }
  }
  return changes;
}

describe('the limit beyond which the point dipole holds', () => {
  const random = seeded(404);
  const place = (fragment: Fragment) => shifted(fragment, scaled(randomDirection(random), 7 + 3 * random()));

  test('is met from both sides for charges, in 60 random pairs of neutral fragments and ions', () => {
    let crossing = 0;
    for (let round = 0; round < 60; round++) {
      const net = () => [0, 0, 1, -1][Math.floor(4 * random())]!;
      crossing += checkLine(lineOf(randomFragment(random, net()), place(randomFragment(random, net())))) > 0 ? 1 : 0;
    }
    // Among these are pairs whose error crosses the bound more than once.
    expect(crossing).toBeGreaterThan(1);
  });

  test('is met from both sides for fitted charges and for two-charge dipoles', () => {
    for (let round = 0; round < 40; round++) {
      const make = (): Fragment => ({
        sites: randomFragment(random, 0).sites.map(({ symbol, at }) => ({ symbol, at })),
        dipoleEA: scaled(randomDirection(random), 0.2 + 0.5 * random()),
        chargeE: [0, 0, 1][Math.floor(3 * random())]!,
      });
      checkLine(lineOf(make(), place(make())));
    }
  });

  test('is met from both sides in a medium and in the cold', () => {
    for (let round = 0; round < 20; round++) {
      const pair = [randomFragment(random, 0), place(randomFragment(random, 1))] as const;
      checkLine(lineOf(...pair, 'relative_permittivity=20'));
      checkLine(lineOf(...pair, 'temperature=40'));
    }
  });

  test('of side-by-side rods 4 Å long at a strong dipole is where 1 - E_point/E_ref reaches the tolerance', () => {
    // E_ref/E_point = (2/x²)(1 − 1/√(1 + x²)); error/|E_ref| = 0.2 there: the ratio is 1/1.2.
    const rod = (x: number, sign: number): Fragment => ({
      sites: [1, -1].map((end) => ({ symbol: 'F', at: [x, 2 * end, 0] as const, chargeE: sign * end })),
    });
    const limit = known(pairOf(rod(0, 1), rod(6, -1)).validBeyondA);
    const x = 4 / limit;
    expect((2 / (x * x)) * (1 - 1 / Math.sqrt(1 + x * x))).toBeCloseTo(1 / 1.2, 8);
  });

  test('is the start of the search where it holds throughout: 1 Å for points, the larger extent, or their sum', () => {
    expect(pairOf(point([0, 0, 0], [0.01, 0, 0]), point([5, 0, 0], [0, 0.01, 0])).validBeyondA).toBeCloseTo(0, 12);
    const bare = (x: number): Fragment => ({ sites: [{ symbol: 'Ar', at: [x, 0, 0], chargeE: 0.5 }] });
    expect(pairOf(bare(0), bare(5)).validBeyondA).toBe(1);
    const weak = (x: number): Fragment => ({
      sites: [
        { symbol: 'F', at: [x, 0, 1.3], chargeE: 0.001 },
        { symbol: 'F', at: [x, 0, -1.3], chargeE: -0.001 },
      ],
    });
    expect(pairOf(weak(0), weak(5)).validBeyondA).toBeCloseTo(1.3, 12);
    const across = (x: number): Fragment => ({
      sites: weak(x).sites.map(({ symbol, at }) => ({ symbol, at })),
      dipoleEA: [0, 0.005, 0],
    });
    expect(pairOf(across(0), across(5)).validBeyondA).toBeCloseTo(2.6, 12);
  });

  test('is null where nothing tells how the charge is spread', () => {
    const nitrogen = (x: number): Fragment => ({
      sites: [
        { symbol: 'N', at: [x, 0, 0.55] },
        { symbol: 'N', at: [x, 0, -0.55] },
      ],
      dipoleEA: [0, 0, 0],
    });
    expect(pairOf(nitrogen(0), nitrogen(5)).validBeyondA).toBeNull();
  });
});

/** Half the distance of the inner charges, Å. */
const H_A = 0.05;

/**
 * A cation and a linear anion whose charge and dipole energies cancel at R0, with a quadrupole energy of 0.4 kJ/mol > 0.1 kT there and
 * no octupole: charges at ±h and ±3h. The reference passes through zero so steeply that the point dipole fails within a few
 * thousandths of an Å of R0 and holds on both sides; two uncharged atoms beside it set the extent, 1.2 Å.
 */
function cancelling(r0: number): [Fragment, Fragment] {
  const theta = (0.4 * r0 ** 3) / K_KJ_A;
  // Sums over ±h and ±3h: charge −1, first moment −r0, second theta, third 0.
  const outer = (1 + theta / H_A ** 2) / 8;
  const odd = r0 / (24 * H_A);
  const at = (z: number, chargeE: number) => ({ symbol: 'F', at: [0, 0, 6 + z] as const, chargeE });
  return [
    { sites: [{ symbol: 'Na', at: [0, 0, 0], chargeE: 1 }] },
    {
      sites: [
        at(H_A, (-1 - outer - 27 * odd) / 2),
        at(-H_A, (-1 - outer + 27 * odd) / 2),
        at(3 * H_A, (outer + odd) / 2),
        at(-3 * H_A, (outer - odd) / 2),
        { symbol: 'F', at: [1.2, 0, 6], chargeE: 0 },
        { symbol: 'F', at: [-1.2, 0, 6], chargeE: 0 },
      ],
    },
  ];
}

describe('a narrow gap in which the point dipole fails', () => {
  const places = Array.from({ length: 60 }, (_, k) => 1.24 + 0.01 * k);

  test('is built as meant: the reference is zero at R0 and the error there 0.4 kJ/mol', () => {
    const [cation, anion] = cancelling(1.5);
    const { referenceKJPerMol, errorKJPerMol, regime } = pairOf(cation, shifted(anion, [0, 0, 1.5 - 6]));
    expect(Math.abs(known(referenceKJPerMol))).toBeLessThan(0.6);
    expect(known(errorKJPerMol)).toBeGreaterThan(0.3);
    expect(known(errorKJPerMol)).toBeLessThan(0.6);
    expect(regime).not.toBe('far');
  });

  test.each(places)('at %d Å is seen between two steps of the search', (r0) => {
    const line = lineOf(...cancelling(r0));
    expect(line.holds(r0)).toBe(false);
    expect(line.validBeyondA).toBeGreaterThan(r0);
    expect(line.validBeyondA).toBeLessThan(r0 + 0.02);
    checkLine(line);
  });

  test('within the last step before the start of the search is seen too', () => {
    for (const r0 of [1.206, 1.208, 1.21, 1.213, 1.216]) {
      const line = lineOf(...cancelling(r0));
      expect(line.holds(r0)).toBe(false);
      expect(line.holds(1.2001)).toBe(true);
      expect(line.validBeyondA, `a gap at ${r0}`).toBeGreaterThan(r0);
    }
  });

  test('is seen beyond 64 Å too: at 67 K, 67 Å from an ion, beside a zwitterion of 0.0815 e and 6.18 e·Å', () => {
    // Moments about the middle: 0.0815 e, 6.18 e·Å, −12.7 e·Å² (Σqz²), no third; sites at ±1.3 and ±3.9 Å.
    const h = 1.3;
    const [charge, first, second] = [0.08154, 6.1766, -12.7297];
    const outer = (second / h ** 2 - charge) / 8;
    const odd = -first / (24 * h);
    const site = (z: number, chargeE: number) => ({ symbol: 'F', at: [0, 0, 100 + z] as const, chargeE });
    const molecule: Fragment = {
      sites: [
        site(h, (charge - outer - 27 * odd) / 2),
        site(-h, (charge - outer + 27 * odd) / 2),
        site(3 * h, (outer + odd) / 2),
        site(-3 * h, (outer - odd) / 2),
      ],
    };
    const ion: Fragment = { sites: [{ symbol: 'Na', at: [0, 0, 0], chargeE: 1 }] };
    const line = lineOf(ion, molecule, 'temperature=67');
    expect([64, 67, 96].map((r) => line.holds(r))).toEqual([true, false, true]);
    expect(line.validBeyondA).toBeGreaterThan(67);
  });
});
