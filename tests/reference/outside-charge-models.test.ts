import { describe, expect, it } from 'vitest';
import { type Atom, known, read, xyz } from './data/outside-program';

/**
 * Water models: the dipole that each paper prints, from its geometry and charges through a charge column (parameters and dipoles
 * from memory, and each dipole agrees with its parameters). Where the negative charge stands on a site of its own, that site is a
 * ghost: it has no mass, no contact and no bond of its own.
 */
interface WaterModel {
  readonly source: string;
  readonly bondA: number;
  readonly angleDeg: number;
  readonly chargeE: number;
  /** Distance of the negative charge from O along the bisector; 0: on O. */
  readonly siteA: number;
  readonly dipoleD: number;
}

const MODELS: [name: string, model: WaterModel][] = [
  ['SPC', { source: 'Berendsen 1981', bondA: 1, angleDeg: 109.47, chargeE: 0.41, siteA: 0, dipoleD: 2.27 }],
  ['SPC/E', { source: 'Berendsen 1987', bondA: 1, angleDeg: 109.47, chargeE: 0.4238, siteA: 0, dipoleD: 2.35 }],
  ['TIP3P', { source: 'Jorgensen 1983', bondA: 0.9572, angleDeg: 104.52, chargeE: 0.417, siteA: 0, dipoleD: 2.35 }],
  ['TIP4P', { source: 'Jorgensen 1983', bondA: 0.9572, angleDeg: 104.52, chargeE: 0.52, siteA: 0.15, dipoleD: 2.18 }],
  [
    'TIP4P/2005',
    { source: 'Abascal, Vega 2005', bondA: 0.9572, angleDeg: 104.52, chargeE: 0.5564, siteA: 0.1546, dipoleD: 2.305 },
  ],
  [
    'TIP4P-Ew',
    { source: 'Horn 2004', bondA: 0.9572, angleDeg: 104.52, chargeE: 0.52422, siteA: 0.125, dipoleD: 2.321 },
  ],
  [
    'TIP4P/Ice',
    { source: 'Abascal 2005', bondA: 0.9572, angleDeg: 104.52, chargeE: 0.5897, siteA: 0.1577, dipoleD: 2.426 },
  ],
];

/** The model with O at the origin and its hydrogens towards +x. */
function water({ bondA, angleDeg, chargeE, siteA }: WaterModel, shift = 0): Atom[] {
  const half = (angleDeg * Math.PI) / 360;
  const [x, y] = [bondA * Math.cos(half), bondA * Math.sin(half)];
  return [
    ['O', shift, 0, 0, siteA === 0 ? -2 * chargeE : 0],
    ['H', shift + x, y, 0, chargeE],
    ['H', shift + x, -y, 0, chargeE],
    ...(siteA === 0 ? [] : [['X', shift + siteA, 0, 0, -2 * chargeE] as const]),
  ];
}

describe.each(MODELS)('%s', (_, model) => {
  const one = read(xyz(water(model)));
  const [fragment] = one.fragments;

  it(`has the dipole that ${model.source} prints, ${model.dipoleD} D`, () => {
    // Published to two or three decimals.
    expect(Math.abs(known(fragment!.dipoleNormD) - model.dipoleD)).toBeLessThan(0.0051);
  });

  it('is one neutral fragment of all its sites, with the dipole from its charges', () => {
    expect(one.fragments).toHaveLength(1);
    expect(fragment!.atoms).toHaveLength(model.siteA === 0 ? 3 : 4);
    expect(fragment!.chargeE).toBeCloseTo(0, 12);
    expect(fragment!.dipoleSource).toBe('charges');
  });

  it('has a dipole from O towards H, from negative to positive', () => {
    const [x, y, z] = fragment!.dipoleD!;
    expect(x).toBeCloseTo(known(fragment!.dipoleNormD), 12);
    expect(Math.hypot(y!, z!)).toBeLessThan(1e-12);
  });

  it('has its mass centre 0.06–0.07 A from O: the charge site weighs nothing', () => {
    const half = (model.angleDeg * Math.PI) / 360;
    const expected = (2 * 1.008 * model.bondA * Math.cos(half)) / (15.999 + 2 * 1.008);
    expect(fragment!.centreA![0]).toBeCloseTo(expected, 12);
  });

  it('beside another of its kind, 6 A away, the Coulomb sum is that of the sites', () => {
    const atoms = [...water(model), ...water(model, 6)];
    const { pairs, fragments } = read(xyz(atoms));
    expect(fragments).toHaveLength(2);
    const size = atoms.length / 2;
    let sum = 0;
    for (const a of atoms.slice(0, size)) {
      for (const b of atoms.slice(size)) sum += (a[4]! * b[4]!) / Math.hypot(a[1] - b[1], a[2] - b[2], a[3] - b[3]);
    }
    expect(known(pairs[0]!.energyKJPerMol.coulomb) / (1389.35457550233 * sum)).toBeCloseTo(1, 9);
    expect(pairs[0]!.arrangement).toBe('head-to-tail');
    expect(pairs[0]!.basis).toBe('charges');
    expect(pairs[0]!.closest.atoms!.every((atom) => atoms[atom - 1]![0] !== 'X')).toBe(true);
  });
});

it('TIP5P (Mahoney, Jorgensen 2000): 2.29 D from two lone-pair sites 0.7 A from O', () => {
  const half = (104.52 * Math.PI) / 360;
  const lone = (109.47 * Math.PI) / 360;
  const [x, y] = [0.9572 * Math.cos(half), 0.9572 * Math.sin(half)];
  const { fragments } = read(
    xyz([
      ['O', 0, 0, 0, 0],
      ['H', x, y, 0, 0.241],
      ['H', x, -y, 0, 0.241],
      ['X', -0.7 * Math.cos(lone), 0, 0.7 * Math.sin(lone), -0.241],
      ['X', -0.7 * Math.cos(lone), 0, -0.7 * Math.sin(lone), -0.241],
    ]),
  );
  expect(fragments).toHaveLength(1);
  expect(Math.abs(known(fragments[0]!.dipoleNormD) - 2.29)).toBeLessThan(0.005);
});
