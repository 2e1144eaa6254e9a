import { describe, expect, it } from 'vitest';
import { DEBYE_E_A } from '../../server/src/physics/constants';
import { ESTIMATE_ERRORS, estimateDipole } from '../../server/src/physics/dipole-estimate';
import type { MoleculeClass } from '../../server/src/physics/estimate-trust';
import { geometryOf, massCentre } from './data/geometry';
import { IONS } from './data/ions';
import { MOLECULES } from './data/molecules';
import { markdownTable, printIfAsked } from './markdown';

/**
 * The dipole estimate against published dipoles, on every molecule of the data files. What it is worth is read from the molecules that
 * were held out of the fit, and from those with a published size.
 */

/** Below this the direction means nothing, D. */
const DIRECTION_D = 0.5;

interface Comparison {
  readonly name: string;
  readonly kind: MoleculeClass;
  readonly doubt: string | null;
  readonly published: boolean;
  readonly heldOut: boolean;
  readonly sizeD: number;
  readonly sizeErrorD: number;
  /** Of the EEQ charges' own dipole. */
  readonly eeqErrorD: number;
  readonly angleDeg: number | null;
  readonly eeqAngleDeg: number | null;
}

const norm = (v: readonly number[]) => Math.hypot(v[0]!, v[1]!, v[2]!);

function angleDeg(u: readonly number[], v: readonly number[]): number {
  const cosine = (u[0]! * v[0]! + u[1]! * v[1]! + u[2]! * v[2]!) / (norm(u) * norm(v));
  return (Math.acos(Math.max(-1, Math.min(1, cosine))) * 180) / Math.PI;
}

function compare(
  name: string,
  atoms: string,
  chargeE: number,
  dipoleD: readonly number[],
  published: boolean,
  heldOut: boolean,
): Comparison | null {
  const geometry = geometryOf(atoms);
  const centre = massCentre(geometry);
  const result = estimateDipole(geometry.count, geometry.elements, geometry.positionsA, chargeE, centre);
  if (!result.ok) return null;
  const own = result.dipoleEA.map((value) => value / DEBYE_E_A);
  const eeq = [0, 1, 2].map((a) => {
    let sum = 0;
    for (let i = 0; i < geometry.count; i++) {
      sum += (result.chargesE[i]! * (geometry.positionsA[3 * i + a]! - centre[a]!)) / DEBYE_E_A;
    }
    return sum;
  });
  const sizeD = norm(dipoleD);
  const directed = sizeD > DIRECTION_D;
  return {
    name,
    kind: result.moleculeClass,
    doubt: result.doubt,
    published,
    heldOut,
    sizeD,
    sizeErrorD: Math.abs(norm(own) - sizeD),
    eeqErrorD: Math.abs(norm(eeq) - sizeD),
    angleDeg: directed ? angleDeg(own, dipoleD) : null,
    eeqAngleDeg: directed ? angleDeg(eeq, dipoleD) : null,
  };
}

const all = [
  ...MOLECULES.map((row) => compare(row.name, row.atoms, 0, row.dipoleD, row.published, row.heldOut)),
  ...IONS.map((row) => compare(row.name, row.atoms, row.chargeE, row.dipoleD, false, row.heldOut)),
].filter((entry) => entry !== null);
const sure = all.filter((entry) => entry.doubt === null);
const neutral = sure.filter((entry) => entry.kind !== 'ion' && entry.sizeD > 0);

const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
const sizes = (list: readonly Comparison[]) => mean(list.map((entry) => entry.sizeErrorD));
const angles = (list: readonly Comparison[]) => list.flatMap((entry) => entry.angleDeg ?? []);
/** Those whose symmetry leaves the direction free: neither estimate is along the dipole to rounding, nor against it. */
const free = (list: readonly Comparison[]) =>
  list.filter(({ angleDeg: own, eeqAngleDeg: eeq }) =>
    [own, eeq].some((angle) => angle !== null && angle > 0.3 && angle < 179.7),
  );
const worst = (list: readonly Comparison[]) => list.reduce((a, b) => (b.sizeErrorD > a.sizeErrorD ? b : a));

function row(title: string, list: readonly Comparison[]): string[] {
  const turned = angles(list);
  const eeqTurned = list.flatMap((entry) => entry.eeqAngleDeg ?? []);
  const far = worst(list);
  return [
    title,
    `${list.length}`,
    sizes(list).toFixed(2),
    turned.length === 0 ? '–' : mean(turned).toFixed(0),
    free(list).length === 0 ? '–' : `${mean(angles(free(list))).toFixed(0)} (${free(list).length})`,
    `${far.name} ${far.sizeErrorD.toFixed(2)}`,
    `${mean(list.map((entry) => entry.eeqErrorD)).toFixed(2)}`,
    eeqTurned.length === 0 ? '–' : mean(eeqTurned).toFixed(0),
  ];
}

const HEAD = [
  'molecules',
  'number',
  'mean error, D',
  'mean angle, °',
  'where it is free (number)',
  'worst, D',
  'EEQ charges, D',
  '°',
];

printIfAsked('Dipole estimates', () =>
  markdownTable(HEAD, [
    ...(Object.keys(ESTIMATE_ERRORS) as MoleculeClass[]).flatMap((kind) => {
      const list = sure.filter((entry) => entry.kind === kind);
      return list.length === 0 ? [] : [row(kind, list)];
    }),
    row('all neutral', neutral),
    row(
      'with published size',
      neutral.filter((entry) => entry.published),
    ),
    row(
      'held out of the fit',
      neutral.filter((entry) => entry.heldOut),
    ),
    row(
      'doubted',
      all.filter((entry) => entry.doubt !== null),
    ),
  ]),
);

describe('dipoles from geometry alone', () => {
  it('has enough molecules to say so', () => {
    expect(neutral.length).toBeGreaterThan(100);
    expect(neutral.filter((entry) => entry.published).length).toBeGreaterThan(50);
    expect(neutral.filter((entry) => entry.heldOut).length).toBeGreaterThan(25);
  });

  it.each([
    ['all neutral molecules', neutral, 0.25, 5],
    ['those with a published size', neutral.filter((entry) => entry.published), 0.3, 5],
    ['those held out of the fit', neutral.filter((entry) => entry.heldOut), 0.33, 9],
  ] as const)('%s: mean error of size and direction', (_, list, sizeD, degrees) => {
    expect(sizes(list)).toBeLessThan(sizeD);
    expect(mean(angles(list))).toBeLessThan(degrees);
  });

  it.each(Object.entries(ESTIMATE_ERRORS))(
    '%s: no worse than the program says of the class',
    (kind, [sizeD, degrees]) => {
      const list = sure.filter((entry) => entry.kind === kind);
      expect(list.length).toBeGreaterThan(1);
      expect(sizes(list)).toBeLessThanOrEqual(sizeD);
      const turned = angles(free(list));
      expect(turned.length === 0).toBe(degrees === null);
      if (degrees !== null) expect(mean(turned)).toBeLessThanOrEqual(degrees);
    },
  );

  it('does better than the EEQ charges on the whole', () => {
    expect(sizes(neutral)).toBeLessThan(0.6 * mean(neutral.map((entry) => entry.eeqErrorD)));
  });

  it('doubts the kinds that come out wrong', () => {
    const doubted = new Set(all.filter((entry) => entry.doubt !== null).map((entry) => entry.name));
    for (const name of ['carbon monoxide', 'CS', 'SiO', 'nitrous oxide', 'ozone', 'ClNO', 'ketene']) {
      expect(doubted, name).toContain(name);
    }
  });
});
