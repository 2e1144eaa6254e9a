import { describe, expect, it } from 'vitest';
import { dipoleDipoleAverage, ionDipoleAverage, motionOf } from '../../server/src/physics/thermal-average';

/**
 * Boltzmann averages against published limits and numbers had elsewhere: by three-dimensional quadrature (Gauss–Legendre in both
 * polar angles, trapezoid in the third), and by 30-digit adaptive quadrature of the one-dimensional form.
 */

function expectRelative(value: number, expected: number, tolerance: number): void {
  expect(Math.abs(value / expected - 1)).toBeLessThanOrEqual(tolerance);
}

/** Printed to ten significant digits, with the last of them uncertain. */
const TEN_DIGITS = 1e-9;
/** Printed to fifteen. */
const FIFTEEN_DIGITS = 2e-13;

describe('two dipoles: mean energy and ln Z', () => {
  it.each([
    // x, -<U>/kT, ln Z: 120 x 120 points of Gauss–Legendre by 256 of the trapezoid rule.
    [0.01, 6.666604445e-5, 3.333317778e-5],
    [0.05, 0.001666277932, 0.0008332361368],
    [0.1, 0.006660454284, 0.003331779418],
    [0.25, 0.04142599234, 0.02077296736],
    [0.5, 0.1629255512, 0.08238599327],
    [1, 0.6128789597, 0.3192373493],
    [2, 2.048324766, 1.154894944],
    [3, 3.827622698, 2.314513042],
    [5, 7.770380913, 5.178960431],
    [8, 13.86645044, 10.15231543],
  ])('at x = %d as three-dimensional quadrature gives them', (x, meanEnergy, logZ) => {
    const average = dipoleDipoleAverage(x);
    expectRelative(-average.averageKT, meanEnergy, TEN_DIGITS);
    expectRelative(-average.freeEnergyKT, logZ, TEN_DIGITS);
  });

  it.each([
    [0.01, 6.66660444543007e-5, 3.33331777794205e-5],
    [0.05, 0.00166627793171888, 0.000833236136770667],
    [0.1, 0.00666045428422673, 0.00333177941843265],
    [0.25, 0.0414259923423024, 0.0207729673560809],
    [3, 3.82762269791135, 2.31451304181932],
    [8, 13.8664504403942, 10.1523154262118],
    [50, 97.9859945638846, 90.3978551559448],
    [500, 997.998660398975, 985.780360793492],
  ])('at x = %d as 30-digit quadrature gives them', (x, meanEnergy, logZ) => {
    const average = dipoleDipoleAverage(x);
    expectRelative(-average.averageKT, meanEnergy, FIFTEEN_DIGITS);
    expectRelative(-average.freeEnergyKT, logZ, FIFTEEN_DIGITS);
  });
});

describe('two dipoles: series and limits', () => {
  /** Coefficients of x², x⁴, x⁶ of ln Z from the moments of g: 2/3, 24/25, 464/245; that of x⁸ bounds the rest. */
  const [C2, C4, C6, C8] = [1 / 3, -7 / 450, 163 / 99225, -0.000207911312673217] as const;

  it('the coefficients are the cumulants of the moments 2/3, 24/25 and 464/245 of the angular factor', () => {
    const [m2, m4, m6] = [2 / 3, 24 / 25, 464 / 245] as const;
    expect(m2 / 2).toBeCloseTo(C2, 15);
    expect((m4 - 3 * m2 ** 2) / 24).toBeCloseTo(C4, 15);
    expect((m6 - 15 * m4 * m2 + 30 * m2 ** 3) / 720).toBeCloseTo(C6, 15);
  });

  it.each([0.02, 0.05, 0.1, 0.2, 0.4, 0.499, 0.501, 0.6])('at x = %d the series holds to its x^8 term', (x) => {
    const average = dipoleDipoleAverage(x);
    const logZ = C2 * x ** 2 + C4 * x ** 4 + C6 * x ** 6;
    const energy = 2 * C2 * x ** 2 + 4 * C4 * x ** 4 + 6 * C6 * x ** 6;
    expect(Math.abs(-average.freeEnergyKT - logZ - C8 * x ** 8)).toBeLessThan(0.15 * -C8 * x ** 8 + 1e-15 * logZ);
    expect(Math.abs(-average.averageKT - energy - 8 * C8 * x ** 8)).toBeLessThan(1.2 * -C8 * x ** 8 + 1e-14 * energy);
  });

  it.each([1e-8, 1e-6, 1e-4])("at x = %d <U> is Keesom's -2/3 x^2 kT and F half of it (Keesom 1921)", (x) => {
    const average = dipoleDipoleAverage(x);
    expectRelative(average.averageKT, (-2 / 3) * x * x, x * x + 1e-12);
    expectRelative(average.freeEnergyKT, (-1 / 3) * x * x, x * x + 1e-12);
    expectRelative(average.leadingKT, (-2 / 3) * x * x, 1e-15);
  });

  it.each([1e2, 5e2, 1e4, 1e6, 1e9])(
    'at x = %d the pair is locked: <U> is 2 kT above -2x kT, F above it by ln 6x^2',
    (x) => {
      // Four harmonic degrees of freedom of kT/2 each (equipartition).
      const average = dipoleDipoleAverage(x);
      expect(Math.abs(average.averageKT + 2 * x - 2)).toBeLessThan(1 / x + 1e-15 * x);
      expect(Math.abs(average.freeEnergyKT + 2 * x - Math.log(6 * x * x))).toBeLessThan(1 / x + 1e-15 * x);
    },
  );

  const GRID = Array.from({ length: 221 }, (_, i) => 10 ** (-8 + i * 0.05));

  it('<U>, F and the alignment change monotonically from a coupling of 1e-8 to 1e3', () => {
    const averages = GRID.map(dipoleDipoleAverage);
    for (let i = 1; i < averages.length; i++) {
      expect(averages[i]!.averageKT).toBeLessThan(averages[i - 1]!.averageKT);
      expect(averages[i]!.freeEnergyKT).toBeLessThan(averages[i - 1]!.freeEnergyKT);
      expect(averages[i]!.alignment).toBeGreaterThan(averages[i - 1]!.alignment);
    }
  });

  it("-2x kT < <U> < F < 0 at every coupling (Jensen's inequality)", () => {
    for (const x of GRID) {
      const { averageKT, freeEnergyKT, alignment } = dipoleDipoleAverage(x);
      expect(averageKT).toBeGreaterThan(-2 * x);
      expect(averageKT).toBeLessThan(freeEnergyKT);
      expect(freeEnergyKT).toBeLessThan(0);
      expect(alignment).toBeGreaterThan(0);
      expect(alignment).toBeLessThan(1);
    }
  });

  it.each([0.4, 0.5, 2, 59.9, 60.1, 300])('at x = %d <U> is the slope of F: U = x dF/dx', (x) => {
    const h = 1e-4 * x;
    const f = (at: number) => dipoleDipoleAverage(at).freeEnergyKT;
    const slope = (8 * (f(x + h) - f(x - h)) - (f(x + 2 * h) - f(x - 2 * h))) / (12 * h);
    expectRelative(dipoleDipoleAverage(x).averageKT, x * slope, 1e-9);
  });

  it('without coupling everything is 0', () => {
    expect(dipoleDipoleAverage(0)).toEqual({ averageKT: 0, freeEnergyKT: 0, leadingKT: 0, alignment: 0 });
  });

  it.each([
    [1, 8.8],
    [2, 30],
  ])('at x = %d the leading term overshoots by %d %%', (x, percent) => {
    const { leadingKT, averageKT } = dipoleDipoleAverage(x);
    expect(Math.abs(100 * (leadingKT / averageKT - 1) - percent)).toBeLessThan(percent < 10 ? 0.05 : 0.5);
  });
});

describe('an ion and a dipole (Langevin 1905)', () => {
  it.each([
    // y, Langevin function, ln(sinh y / y); 30-digit arithmetic.
    [0.1, 0.0333111322539896, 0.00166611146358046],
    [0.5, 0.163953413738653, 0.0413248546129181],
    [1, 0.313035285499331, 0.161439361571196],
    [2, 0.537314720727548, 0.595220192054223],
    [5, 0.800090803982019, 2.69736950604558],
    [10, 0.900000004122307, 7.00426772438486],
    [50, 0.98, 45.3948298140119],
  ])('at y = %d the alignment is the Langevin function', (y, langevin, logZ) => {
    const average = ionDipoleAverage(y);
    expectRelative(average.alignment, langevin, FIFTEEN_DIGITS);
    expectRelative(average.averageKT, -y * langevin, FIFTEEN_DIGITS);
    expectRelative(average.freeEnergyKT, -logZ, FIFTEEN_DIGITS);
  });

  it.each([1e-8, 1e-5, 1e-3])('at y = %d <U> is -1/3 y^2 kT and F half of it', (y) => {
    const average = ionDipoleAverage(y);
    expectRelative(average.averageKT, (-1 / 3) * y * y, y * y + 1e-12);
    expectRelative(average.freeEnergyKT, (-1 / 6) * y * y, y * y + 1e-12);
    expectRelative(average.leadingKT, (-1 / 3) * y * y, 1e-15);
  });

  it.each([50, 700, 1e4, 1e8])('at y = %d the dipole is locked: <U> is -(y - 1) kT', (y) => {
    const average = ionDipoleAverage(y);
    expectRelative(average.averageKT, 1 - y, 1e-15);
    expectRelative(average.freeEnergyKT, Math.log(2 * y) - y, 1e-15);
    expect(average.alignment).toBeLessThan(1);
  });

  it('nothing jumps where the series hands over', () => {
    const ys = Array.from({ length: 41 }, (_, i) => 0.0195 + i * 2.5e-5);
    for (const y of ys) {
      const exact = y / 3 - y ** 3 / 45 + (2 * y ** 5) / 945 - y ** 7 / 4725;
      expectRelative(ionDipoleAverage(y).alignment, exact, 1e-11);
    }
  });
});

describe('motion by alignment (thresholds: common practice, no source)', () => {
  it.each([
    [0, 'free'],
    [0.0999, 'free'],
    [0.1, 'hindered'],
    [0.5, 'hindered'],
    [0.5001, 'locked'],
    [0.99, 'locked'],
  ] as const)('an alignment of %d is %s', (alignment, motion) => {
    expect(motionOf(alignment)).toBe(motion);
  });
});
