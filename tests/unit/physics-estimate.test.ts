import { describe, expect, it } from 'vitest';
import { DEBYE_E_A } from '../../server/src/physics/constants';
import { type DipoleEstimate, estimateDipole } from '../../server/src/physics/dipole-estimate';
import { EEQ_MOST_ATOMS, eeqCharges } from '../../server/src/physics/eeq-charges';
import { erf } from '../../server/src/physics/error-function';
import { type Geometry, geometryOf, massCentre } from '../reference/data/geometry';

/** Geometries from experiment or near it, as the published test charges and the first study used. */
const WATER = 'O 0 0 0; H 0.7569503 0.5858823 0; H -0.7569503 0.5858823 0';
const NAMES = {
  water: WATER,
  'hydrogen fluoride': 'H 0 0 0; F 0.9168 0 0',
  ammonia: 'N 0 0 0; H 0.9377 0 -0.3816; H -0.46885 0.812072 -0.3816; H -0.46885 -0.812072 -0.3816',
  'carbon monoxide': 'C 0 0 0; O 1.128 0 0',
  ethene: 'C 0 0 0.6695; C 0 0 -0.6695; H 0 0.9289 1.2321; H 0 -0.9289 1.2321; H 0 0.9289 -1.2321; H 0 -0.9289 -1.2321',
} as const;

const ORIGIN = [0, 0, 0] as const;

function estimate(geometry: Geometry, netChargeE = 0, centreA: readonly [number, number, number] = ORIGIN) {
  return estimateDipole(geometry.count, geometry.elements, geometry.positionsA, netChargeE, centreA);
}

function accepted(result: DipoleEstimate) {
  if (!result.ok) throw new Error(result.reason);
  return result;
}

const refusal = (result: DipoleEstimate) => (result.ok ? 'no refusal' : result.reason);
const sum = (values: Float64Array) => values.reduce((total, value) => total + value, 0);
const norm = (v: readonly number[]) => Math.hypot(v[0]!, v[1]!, v[2]!);

function charges(atoms: string, netChargeE = 0) {
  const { count, elements, positionsA } = geometryOf(atoms);
  const chargesE = new Float64Array(count);
  expect(eeqCharges(count, elements, positionsA, netChargeE, chargesE)).toBeNull();
  const dipole = [0, 1, 2].map((a) => chargesE.reduce((total, q, i) => total + q * positionsA[3 * i + a]!, 0));
  return { chargesE, dipoleD: norm(dipole) / DEBYE_E_A };
}

describe('error function', () => {
  it.each([
    [0, 0],
    [0.1, 0.1124629160182849],
    [0.5, 0.5204998778130465],
    [1, 0.8427007929497149],
    [2, 0.9953222650189527],
    [3, 0.9999779095030014],
    [5, 0.9999999999984626],
    [7, 1],
  ])('erf(%d)', (x, value) => {
    expect(Math.abs(erf(x) - value)).toBeLessThan(1e-15);
    expect(Math.abs(erf(-x) + value)).toBeLessThan(1e-15);
  });
});

describe('EEQ charges', () => {
  it('of water, as the published program has them: q(O) -0.5978, 1.684 D', () => {
    const { chargesE, dipoleD } = charges(WATER);
    expect(chargesE[0]).toBeCloseTo(-0.5978, 2);
    expect(dipoleD).toBeCloseTo(1.684, 2);
  });
  it.each([
    ['hydrogen fluoride', 1.092],
    ['ammonia', 1.507],
  ] as const)('of %s: %d D', (name, dipole) => {
    expect(Math.abs(charges(NAMES[name]).dipoleD - dipole)).toBeLessThan(0.02);
  });
  it('sum to the net charge to rounding, whatever it is', () => {
    for (const charge of [-2, -0.97, 0, 1, 3]) expect(sum(charges(WATER, charge).chargesE)).toBeCloseTo(charge, 12);
  });
  it('are alike for alike atoms', () => {
    const { chargesE } = charges(NAMES.ethene);
    expect(chargesE[0]).toBeCloseTo(chargesE[1]!, 12);
    for (const i of [3, 4, 5]) expect(chargesE[i]).toBeCloseTo(chargesE[2]!, 12);
  });
  it('by conjugate gradients are those by elimination', () => {
    // 67 and 66 waters: 201 atoms go one way, 198 the other; the 67th is 10⁵ Å off and changes nothing but the way.
    const lattice = (count: number) =>
      Array.from({ length: count }, (_, i) => {
        const [x, y, z] =
          i === 66 ? [1e5, 0, 0] : [3.1 * (i % 4), 3.1 * (Math.floor(i / 4) % 4), 3.1 * Math.floor(i / 16)];
        return `O ${x} ${y} ${z}; H ${x + 0.757} ${y + 0.586} ${z}; H ${x - 0.757} ${y + 0.586} ${z}`;
      }).join('; ');
    const [dense, iterative] = [charges(lattice(66)).chargesE, charges(lattice(67)).chargesE];
    expect(sum(iterative)).toBeCloseTo(0, 10);
    let worst = 0;
    for (let i = 0; i < dense.length; i++) worst = Math.max(worst, Math.abs(dense[i]! - iterative[i]!));
    expect(worst).toBeLessThan(1e-3);
  });
});

describe('dipole estimate', () => {
  const turn = (geometry: Geometry, shift: readonly number[] = [0, 0, 0]): Geometry => {
    const rows = [
      [0.36, 0.48, -0.8],
      [-0.8, 0.6, 0],
      [0.48, 0.64, 0.6],
    ];
    const positionsA = new Float64Array(geometry.positionsA.length);
    for (let i = 0; i < geometry.count; i++) {
      for (let a = 0; a < 3; a++) {
        let value = shift[a]!;
        for (let b = 0; b < 3; b++) value += rows[a]![b]! * geometry.positionsA[3 * i + b]!;
        positionsA[3 * i + a] = value;
      }
    }
    return { ...geometry, positionsA };
  };

  it('points from negative to positive: in water towards the hydrogens', () => {
    const { dipoleEA } = accepted(estimate(geometryOf(WATER)));
    expect(dipoleEA[1] / DEBYE_E_A).toBeGreaterThan(1.4);
    expect(Math.abs(dipoleEA[0])).toBeLessThan(1e-12);
    expect(dipoleEA[2]).toBe(0);
  });
  it('turns with the molecule and does not care where it is, nor how its atoms are numbered', () => {
    const plain = geometryOf('C 0 0 0; O 1.21 0 0; H -0.55 0.94 0; F -0.65 -1.1 0.05');
    const one = accepted(estimate(plain)).dipoleEA;
    const two = accepted(estimate(turn(plain, [5, -7, 2]))).dipoleEA;
    const expected = turn({ count: 1, elements: Uint8Array.of(6), positionsA: Float64Array.from(one) }).positionsA;
    for (const a of [0, 1, 2] as const) expect(two[a]).toBeCloseTo(expected[a]!, 12);
    const shuffled = geometryOf('F -0.65 -1.1 0.05; H -0.55 0.94 0; C 0 0 0; O 1.21 0 0');
    const three = accepted(estimate(shuffled)).dipoleEA;
    for (const a of [0, 1, 2] as const) expect(three[a]).toBeCloseTo(one[a], 12);
  });
  it('of an ion moves with the centre by Q times the shift', () => {
    const ammonium = geometryOf('N 0 0 0; H 0.6 0.6 0.6; H -0.6 -0.6 0.6; H -0.6 0.6 -0.6; H 0.6 -0.6 -0.6');
    const about = accepted(estimate(ammonium, 1));
    expect(norm(about.dipoleEA)).toBeLessThan(1e-10);
    expect(about.moleculeClass).toBe('ion');
    expect(about.doubt).toBeNull();
    const moved = accepted(estimate(ammonium, 1, [1, 2, 3])).dipoleEA;
    expect(moved[0]).toBeCloseTo(-1, 10);
    expect(moved[1]).toBeCloseTo(-2, 10);
    expect(moved[2]).toBeCloseTo(-3, 10);
    expect(sum(about.chargesE)).toBeCloseTo(1, 12);
  });
  it.each([
    ['ethene', 0],
    ['carbon monoxide', null],
  ] as const)('says what it is worth: %s', (name, size) => {
    const geometry = geometryOf(NAMES[name]);
    const result = accepted(estimate(geometry, 0, massCentre(geometry)));
    if (size === null) expect(result.doubt).toMatch(/multiple bond/);
    else {
      expect(norm(result.dipoleEA)).toBeCloseTo(size, 10);
      expect(result.doubt).toBeNull();
      expect(result.moleculeClass).toBe('hydrocarbon');
    }
  });

  it.each([
    ['N2O', 'N 0 0 0; N 1.13 0 0; O 2.32 0 0', 0, /chain of nitrogens/],
    ['ozone', 'O 0 0 0; O 1.27 0 0; O 1.92 1.09 0', 0, /[Oo]zone/],
    ['nitrosyl chloride', 'N 0 0 0; O 1.13 0 0; Cl -0.75 1.82 0', 0, /nitrosyl/],
    ['ketene', 'C 0 0 0; C 1.31 0 0; O 2.47 0 0; H -0.52 0.94 0; H -0.52 -0.94 0', 0, /ketene/],
    [
      'ammonia borane',
      'N 0 0 0; B 1.66 0 0; H -0.35 0.95 0; H -0.35 -0.475 0.823; H -0.35 -0.475 -0.823; H 1.97 -1.17 0; H 1.97 0.585 -1.013; H 1.97 0.585 1.013',
      0,
      /boron|dative/,
    ],
    ['two waters in one fragment', `${WATER}; O 0 4 0; H 0.757 4.586 0; H -0.757 4.586 0`, 0, /pieces/],
    ['iodine trichloride', 'I 0 0 0; Cl 2.3 0 0; Cl -2.4 0.2 0; Cl 0 2.3 0', 0, /halogen/],
  ])('doubts %s', (_, atoms, charge, reason) => {
    expect(accepted(estimate(geometryOf(atoms), charge)).doubt).toMatch(reason);
  });

  it.each([
    ['a lone atom', 'O 0 0 0', 0, /lone atom/],
    ['a radical', 'O 0 0 0; H 0.97 0 0', 0, /odd number/],
    ['a metal', 'Zn 0 0 0; Cl 2.1 0 0; Cl -2.1 0 0', 0, /metals.*Zn/],
    ['a noble gas', 'Ar 0 0 0; Ar 3.8 0 0', 0, /Ar/],
    ['an element beyond the table', 'At 0 0 0; H 1.7 0 0', 0, /At/],
    ['half a charge', WATER, 0.5, /whole number/],
    ['a charge that is no number', WATER, Number.NaN, /whole number/],
    ['atoms at one point', 'O 0 0 0; H 0.96 0 0; H 0.96 0 0', 0, /one point/],
    ['a position that is no number', 'O 0 0 0; H 0.96 0 NaN; H -0.3 0.9 0', 0, /not a number/],
    ['a carbene', 'C 0 0 0; F 1.3 0 0; F -0.32 1.26 0', 0, /carbene/],
    ['ethane without its hydrogens', 'C 0 0 0; C 1.53 0 0', 0, /hydrogens/],
    ['propane without its hydrogens', 'C 0 0 0; C 1.53 0 0; C 2.04 1.44 0; O 3.4 1.4 0; O 1 2.4 0', 0, /hydrogens/],
  ])('refuses %s', (_, atoms, charge, reason) => {
    expect(refusal(estimate(geometryOf(atoms), charge))).toMatch(reason);
  });
  it('refuses more atoms than it can hold and a centre that is none', () => {
    const count = EEQ_MOST_ATOMS + 1;
    const result = estimateDipole(count, new Uint8Array(count).fill(1), new Float64Array(3 * count), 0, ORIGIN);
    expect(refusal(result)).toMatch(/too many/);
    expect(refusal(estimate(geometryOf(WATER), 0, [0, Number.NaN, 0]))).toMatch(/centre/);
  });

  it('gives every molecule of a scattered crowd a finite dipole or a sentence', () => {
    let state = 11;
    const next = () => {
      state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
      return state / 2 ** 32;
    };
    const symbols = ['H', 'C', 'N', 'O', 'F', 'S', 'P', 'Cl', 'Br', 'Li', 'B', 'Si'];
    for (let round = 0; round < 300; round++) {
      const count = 2 + Math.floor(10 * next());
      const atoms = Array.from(
        { length: count },
        () => `${symbols[Math.floor(symbols.length * next())]} ${4 * next()} ${4 * next()} ${4 * next()}`,
      ).join('; ');
      const result = estimate(geometryOf(atoms));
      if (result.ok) {
        expect(norm(result.dipoleEA), atoms).toBeLessThan(20 * count * DEBYE_E_A);
        expect(Math.abs(sum(result.chargesE))).toBeLessThan(1e-9);
      } else expect(result.reason).toMatch(/^[A-Z].*\.$/);
    }
  });

  it('takes milliseconds for a hundred atoms', () => {
    const chain = Array.from({ length: 33 }, (_, i) => {
      const [x, y] = [1.27 * i, 0.44 * (i % 2)];
      const side = i % 2 === 0 ? -0.6 : 0.6;
      return `C ${x} ${y} 0; H ${x} ${y + side} 0.89; H ${x} ${y + side} -0.89`;
    });
    const geometry = geometryOf(`H -0.9 0.6 0; ${chain.join('; ')}; O ${1.27 * 33} 0.44 0; H ${1.27 * 33 + 0.8} 0 0`);
    accepted(estimate(geometry));
    const start = performance.now();
    for (let i = 0; i < 5; i++) accepted(estimate(geometry));
    expect((performance.now() - start) / 5).toBeLessThan(500);
  });
});
