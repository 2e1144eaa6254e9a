import { mat3, vec3 } from 'gl-matrix';
import { add, cross, dot, eigs, inv, matrix, multiply, norm, subtract } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { createCell, imageResult, minimumImage } from '../../server/src/model/cell';
import { gaussLegendre } from '../../server/src/physics/gauss-legendre';
import { eigen3 } from '../../server/src/physics/symmetric3';
import { known, pairOfPoints, seeded, type Vector } from './data/outside-program';

/** Vectors, matrices and quadrature beside general libraries (gl-matrix, mathjs) and printed tables. */

const random = seeded(7);
const vector = (size: number): [number, number, number] => [
  size * (2 * random() - 1),
  size * (2 * random() - 1),
  size * (2 * random() - 1),
];
const DEGREES = 180 / Math.PI;

describe('angles of a pair beside gl-matrix', () => {
  // gl-matrix keeps single precision unless it is given plain arrays.
  const u: [number, number, number] = [1, 0, 0];
  const cases = Array.from({ length: 200 }, () => {
    const [first, second] = [vector(3), vector(3)];
    return { first, second, pair: pairOfPoints({ dipoleD: first }, { dipoleD: second }, 6) };
  });

  it('theta is the angle between dipole and line of centres', () => {
    for (const { first, second, pair } of cases) {
      expect(known(pair.theta1Deg)).toBeCloseTo(vec3.angle(first, u) * DEGREES, 9);
      expect(known(pair.theta2Deg)).toBeCloseTo(vec3.angle(second, u) * DEGREES, 9);
    }
  });

  it('phi is the turn about the line of centres from the first plane to the second', () => {
    const acrossLine = (v: Vector): [number, number, number] => [0, v[1], v[2]];
    for (const { first, second, pair } of cases) {
      const [p1, p2] = [acrossLine(first), acrossLine(second)];
      const turn = vec3.dot(u, vec3.cross([0, 0, 0], p1, p2));
      expect(known(pair.phiDeg)).toBeCloseTo(Math.sign(turn) * vec3.angle(p1, p2) * DEGREES, 6);
    }
  });

  it('the angular factor is 3 (m1.u)(m2.u) - m1.m2 of the unit vectors', () => {
    for (const { first, second, pair } of cases) {
      const m1 = vec3.normalize([0, 0, 0], first);
      const m2 = vec3.normalize([0, 0, 0], second);
      const factor = 3 * vec3.dot(m1, u) * vec3.dot(m2, u) - vec3.dot(m1, m2);
      expect(known(pair.angularFactor)).toBeCloseTo(factor, 13);
    }
  });

  it('a common turn by a rotation matrix leaves the angular factor of turned points as it was', () => {
    const turn = mat3.fromRotation(mat3.create(), 0.7);
    for (const { first, second, pair } of cases.slice(0, 20)) {
      // A turn about the line of centres: y and z of both dipoles by one angle.
      const turned = (v: Vector): Vector => [v[0], turn[0] * v[1] - turn[1] * v[2], turn[1] * v[1] + turn[0] * v[2]];
      const again = pairOfPoints({ dipoleD: turned(first) }, { dipoleD: turned(second) }, 6);
      expect(known(again.angularFactor)).toBeCloseTo(known(pair.angularFactor), 6);
      expect(known(again.phiDeg)).toBeCloseTo(known(pair.phiDeg), 4);
    }
  });
});

describe('the dipole–dipole energy beside mathjs', () => {
  it('is m1.T.m2 with T = (1 - 3uu)/R^3', () => {
    for (let k = 0; k < 100; k++) {
      const [first, second] = [vector(3), vector(3)];
      const distanceA = 3 + 5 * random();
      const tensor = subtract(
        matrix([
          [1, 0, 0],
          [0, 1, 0],
          [0, 0, 1],
        ]),
        matrix([
          [3, 0, 0],
          [0, 0, 0],
          [0, 0, 0],
        ]),
      );
      const energy = (60.22140759197693 * Number(dot(first, multiply(tensor, second)))) / distanceA ** 3;
      const pair = pairOfPoints({ dipoleD: first }, { dipoleD: second }, distanceA);
      expect(Math.abs(known(pair.energyKJPerMol.dipoleDipole) - energy)).toBeLessThan(1e-9);
    }
  });
});

describe('eigenvalues of symmetric 3x3 matrices beside mathjs', () => {
  const packed: [name: string, matrix: number[]][] = [
    ['diagonal', [3, 0, 0, -1, 0, 2]],
    ['the dipole tensor along z, (1, 1, -2)', [1, 0, 0, 1, 0, -2]],
    ['the dipole tensor along (1, 1, 1)/sqrt 3', [0, -1, -1, 0, -1, 0]],
    ['large beside small', [1e6, 1, 2, 1e-3, 3e-3, -4e-3]],
    ...Array.from({ length: 40 }, (_, k): [string, number[]] => [`random ${k + 1}`, [...vector(2), ...vector(2)]]),
  ];
  it.each(packed)('%s', (_, [xx, xy, xz, yy, yz, zz]) => {
    const full = [
      [xx!, xy!, xz!],
      [xy!, yy!, yz!],
      [xz!, yz!, zz!],
    ];
    const size = Math.max(...full.flat().map(Math.abs));
    const expected = (eigs(full).values as number[]).map(Number).sort((a, b) => a - b);
    const { values, vectors } = eigen3([xx!, xy!, xz!, yy!, yz!, zz!]);
    expect([...values].sort((a, b) => a - b).every((value, k) => Math.abs(value - expected[k]!) < 1e-11 * size)).toBe(
      true,
    );
    for (let k = 0; k < 3; k++) {
      const v = [...vectors.subarray(3 * k, 3 * k + 3)];
      expect(Number(norm(v))).toBeCloseTo(1, 12);
      const residue = subtract(multiply(full, v), multiply(values[k]!, v) as number[]);
      expect(Number(norm(residue))).toBeLessThan(1e-11 * size);
    }
  });
});

describe('Gauss–Legendre quadrature', () => {
  // Abramowitz, Stegun, Handbook of Mathematical Functions (1964), table 25.4: abscissae and weights on [-1, 1].
  it.each([
    [2, 0.577350269189626, 1],
    [3, 0.774596669241483, 0.555555555555556],
    [3, 0, 0.888888888888889],
    [4, 0.861136311594053, 0.347854845137454],
    [4, 0.339981043584856, 0.652145154862546],
    [5, 0.906179845938664, 0.236926885056189],
    [5, 0.538469310105683, 0.478628670499366],
    [8, 0.960289856497536, 0.101228536290376],
    [10, 0.973906528517172, 0.066671344308688],
    [10, 0.148874338981631, 0.295524224714753],
  ])('of %d points has the node %d with weight %d', (count, node, weight) => {
    const { nodes, weights } = gaussLegendre(count);
    for (const sign of [1, -1]) {
      const k = nodes.findIndex((x) => Math.abs(2 * x - 1 - sign * node) < 1e-14);
      expect(k).toBeGreaterThanOrEqual(0);
      expect(Math.abs(2 * weights[k]! - weight)).toBeLessThan(2e-15);
    }
  });

  it.each([1, 2, 5, 16, 64, 200])('of %d points integrates every power up to 2n - 1 on [0, 1] exactly', (count) => {
    const { nodes, weights } = gaussLegendre(count);
    for (let power = 0; power < 2 * count; power++) {
      const sum = nodes.reduce((total, x, k) => total + weights[k]! * x ** power, 0);
      expect(Math.abs(sum * (power + 1) - 1)).toBeLessThan(1e-12);
    }
  });

  it.each([1, 2, 5])('of %d points is off for the power 2n', (count) => {
    const { nodes, weights } = gaussLegendre(count);
    const sum = nodes.reduce((total, x, k) => total + weights[k]! * x ** (2 * count), 0);
    expect(Math.abs(sum * (2 * count + 1) - 1)).toBeGreaterThan(1e-6);
  });

  it('has ascending nodes in (0, 1) and positive weights', () => {
    const { nodes, weights } = gaussLegendre(64);
    expect([...nodes].every((x, k) => x > (k === 0 ? 0 : nodes[k - 1]!) && x < 1)).toBe(true);
    expect([...weights].every((weight) => weight > 0)).toBe(true);
  });
});

describe('cells beside mathjs', () => {
  const cells: [name: string, rows: [number, number, number][]][] = [
    [
      'a box',
      [
        [10, 0, 0],
        [0, 11, 0],
        [0, 0, 12],
      ],
    ],
    [
      'a skewed cell',
      [
        [12.6, 0, 0],
        [1.1, 12.4, 0],
        [-0.7, 0.8, 12.25],
      ],
    ],
    [
      'a hexagonal cell',
      [
        [9, 0, 0],
        [-4.5, 7.794228634059948, 0],
        [0, 0, 14],
      ],
    ],
    [
      'a flat rhombus of 20 degrees',
      [
        [10, 0, 0],
        [9.396926207859083, 3.420201433256687, 0],
        [0, 0, 9],
      ],
    ],
    [
      'a left-handed cell',
      [
        [0, 8, 1],
        [9, 0, 0],
        [2, 1, 10],
      ],
    ],
  ];
  describe.each(cells)('%s', (_, rows) => {
    const cell = createCell(rows.flat(), [true, true, true]);
    if (typeof cell === 'string') throw new Error(cell);

    it('has a reduced basis of the same volume', () => {
      const volume = (b: number[][]) => Math.abs(Number(dot(b[0]!, cross(b[1]!, b[2]!) as number[])));
      const reduced = [0, 1, 2].map((k) => [...cell.reducedA.subarray(3 * k, 3 * k + 3)]);
      expect(volume(reduced) / volume(rows)).toBeCloseTo(1, 12);
    });

    it('has the inverse of its reduced basis', () => {
      const reduced = [0, 1, 2].map((k) => [...cell.reducedA.subarray(3 * k, 3 * k + 3)]);
      const expected = (inv(reduced) as number[][]).flat();
      expect(expected.every((value, k) => Math.abs(value - cell.inverse[k]!) < 1e-13)).toBe(true);
    });

    it('finds the shortest of 1331 images of a difference', () => {
      const out = imageResult();
      for (let k = 0; k < 60; k++) {
        const d = vector(15);
        let shortest = Number.POSITIVE_INFINITY;
        for (let a = -5; a <= 5; a++) {
          for (let b = -5; b <= 5; b++) {
            for (let c = -5; c <= 5; c++) {
              const shift = multiply([a, b, c], rows) as unknown as number[];
              shortest = Math.min(shortest, Number(norm(add(d, shift))));
            }
          }
        }
        minimumImage(cell, ...d, out);
        expect(Math.abs(Math.hypot(...out.vectorA) - shortest)).toBeLessThan(1e-12 * 15);
        const shifted = add(d, multiply([...out.image], rows) as unknown as number[]);
        expect(Number(norm(subtract(shifted, [...out.vectorA])))).toBeLessThan(1e-12 * 15);
      }
    });
  });
});
