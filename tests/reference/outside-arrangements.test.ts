import { describe, expect, it } from 'vitest';
import { known, pairOfPoints, seeded, type Vector } from './data/outside-program';

/**
 * The special arrangements of two dipoles (common practice, no source): angular factor, name, and sign of the energy; the line of
 * centres runs along x.
 */

const FACTOR_KJ_MOL = 60.2214075919769; // 1 D^2/A^3, CODATA 2022

describe('limiting arrangements', () => {
  const table: [name: string, first: Vector, second: Vector, factor: number, phi: number | null][] = [
    ['head-to-tail', [1, 0, 0], [1, 0, 0], 2, null],
    ['head-to-tail', [-1, 0, 0], [-1, 0, 0], 2, null],
    ['antiparallel', [0, 1, 0], [0, -1, 0], 1, 180],
    ['antiparallel', [0, 0, 1], [0, 0, -1], 1, 180],
    ['T-shaped', [1, 0, 0], [0, 1, 0], 0, null],
    ['T-shaped', [-1, 0, 0], [0, 0, 1], 0, null],
    ['T-shaped', [0, 1, 0], [1, 0, 0], 0, null],
    ['crossed', [0, 1, 0], [0, 0, 1], 0, 90],
    ['crossed', [0, 1, 0], [0, 0, -1], 0, -90],
    ['parallel', [0, 1, 0], [0, 1, 0], -1, 0],
    ['head-to-head', [1, 0, 0], [-1, 0, 0], -2, null],
    ['tail-to-tail', [-1, 0, 0], [1, 0, 0], -2, null],
  ];
  it.each(table)('%s: %j and %j have the angular factor %d', (name, first, second, factor, phi) => {
    const pair = pairOfPoints({ dipoleD: first }, { dipoleD: second }, 5);
    expect(pair.angularFactor).toBeCloseTo(factor, 14);
    expect(pair.phiDeg === null ? null : Math.round(pair.phiDeg)).toBe(phi);
    expect(pair.arrangement).toBe(name);
    expect(known(pair.energyKJPerMol.dipoleDipole)).toBeCloseTo((-FACTOR_KJ_MOL * factor) / 125, 10);
  });

  it('parallel dipoles at the magic angle, 54.7356 degrees (3 cos^2 = 1), do not interact', () => {
    const tilted: Vector = [1 / Math.sqrt(3), Math.sqrt(2 / 3), 0];
    const pair = pairOfPoints({ dipoleD: tilted }, { dipoleD: tilted }, 5);
    expect(pair.theta1Deg).toBeCloseTo(54.7356103, 7);
    expect(pair.angularFactor).toBeCloseTo(0, 14);
    expect(pair.arrangement).toBe('skewed');
  });

  it.each([
    [14.9, 'head-to-tail'],
    [15.1, 'skewed'],
    [74.9, 'skewed'],
    [75.1, 'T-shaped'],
  ])('a second dipole turned by %d degrees beside one along the line is %s', (degrees, name) => {
    const turn = (degrees * Math.PI) / 180;
    const second: Vector = [Math.cos(turn), Math.sin(turn), 0];
    expect(pairOfPoints({ dipoleD: [1, 0, 0] }, { dipoleD: second }, 5).arrangement).toBe(name);
  });
});

describe('laws of the angles', () => {
  const random = seeded(20240611);
  const direction = (): Vector => {
    const z = 2 * random() - 1;
    const turn = 2 * Math.PI * random();
    const s = Math.sqrt(1 - z * z);
    return [z, s * Math.cos(turn), s * Math.sin(turn)];
  };
  const pairs = Array.from({ length: 400 }, () => pairOfPoints({ dipoleD: direction() }, { dipoleD: direction() }, 5));
  const radians = (degrees: number | null) => (known(degrees) * Math.PI) / 180;

  it('g = 2 cos t1 cos t2 - sin t1 sin t2 cos phi', () => {
    for (const { theta1Deg, theta2Deg, phiDeg, angularFactor } of pairs) {
      const [t1, t2, phi] = [theta1Deg, theta2Deg, phiDeg].map(radians) as [number, number, number];
      const expected = 2 * Math.cos(t1) * Math.cos(t2) - Math.sin(t1) * Math.sin(t2) * Math.cos(phi);
      expect(angularFactor).toBeCloseTo(expected, 12);
    }
  });

  it('g lies in [-2, 2] and the energy is -k g/R^3', () => {
    for (const { angularFactor, energyKJPerMol } of pairs) {
      expect(Math.abs(known(angularFactor))).toBeLessThanOrEqual(2);
      expect(known(energyKJPerMol.dipoleDipole)).toBeCloseTo((-FACTOR_KJ_MOL * known(angularFactor)) / 125, 10);
    }
  });

  it('over the 144 pairs of the 12 icosahedral directions the mean of g is 0, of g^2 2/3, of g^4 24/25', () => {
    // The vertices of the icosahedron integrate a sphere exactly up to degree 5 (a spherical 5-design).
    const golden = (1 + Math.sqrt(5)) / 2;
    const length = Math.hypot(1, golden);
    const vertices = [1, -1].flatMap((a) =>
      [golden, -golden].flatMap((b): Vector[] => [
        [0, a / length, b / length],
        [a / length, b / length, 0],
        [b / length, 0, a / length],
      ]),
    );
    const factors = vertices.flatMap((first) =>
      vertices.map((second) => known(pairOfPoints({ dipoleD: first }, { dipoleD: second }, 5).angularFactor)),
    );
    const mean = (power: number) => factors.reduce((sum, g) => sum + g ** power, 0) / factors.length;
    expect(mean(1)).toBeCloseTo(0, 13);
    expect(mean(2)).toBeCloseTo(2 / 3, 13);
    expect(mean(4)).toBeCloseTo(24 / 25, 13);
  });
});
