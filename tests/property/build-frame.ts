import { FileAnalysis, type FrameAnalysis, pairsOf } from '../../server/src/analysis/frame-analysis';
import type { Pair } from '../../server/src/analysis/pair';
import { type AnalysisSettings, DEFAULT_REQUEST, DEFAULT_SETTINGS } from '../../server/src/analysis/settings';
import { type PairRecord, pairRecord } from '../../server/src/features/records';
import { parse } from '../../server/src/formats/parse';
import type { Language } from '../../server/src/formats/tree';
import { snapshotOf } from '../../server/src/text/snapshot';

/** Frames built as text, so that every number takes the way through the program that a user's file takes. */

export type Vector = readonly [x: number, y: number, z: number];

export interface Site {
  readonly symbol: string;
  readonly at: Vector;
  readonly chargeE?: number;
}

/** A declared fragment; what is left out is not written. */
export interface Fragment {
  readonly sites: readonly Site[];
  readonly chargeE?: number;
  readonly dipoleEA?: Vector;
  readonly sizeEA?: number;
}

export interface Reading {
  readonly frame: FrameAnalysis;
  readonly pairs: readonly Pair[];
  readonly records: readonly PairRecord[];
}

/** Extended XYZ of declared fragments (fragment column), with a charge column where any site has a charge. */
export function frameText(fragments: readonly Fragment[], keys = ''): string {
  const rows = fragments.flatMap(({ sites }, f) => sites.map((site) => ({ site, f })));
  const hasCharges = rows.some(({ site }) => site.chargeE !== undefined);
  const properties = `species:S:1:pos:R:3${hasCharges ? ':charge:R:1' : ''}:fragment:I:1`;
  const list = (key: string, items: (readonly (number | undefined)[])[]) =>
    items.flat().some((value) => value !== undefined)
      ? [`${key}="${items.flatMap((item) => item.map((value) => value ?? 'nan')).join(' ')}"`]
      : [];
  const unknown: (number | undefined)[] = [undefined, undefined, undefined];
  const comment = [
    `Properties=${properties}`,
    ...list(
      'fragment_charges',
      fragments.map(({ chargeE }) => [chargeE]),
    ),
    ...list(
      'fragment_dipoles',
      fragments.map(({ dipoleEA }) => dipoleEA ?? unknown),
    ),
    ...list(
      'fragment_dipole_sizes',
      fragments.map(({ sizeEA }) => [sizeEA]),
    ),
    'dipole_unit=e*angstrom',
    keys,
  ];
  const lines = rows.map(({ site, f }) =>
    [site.symbol, ...site.at, ...(hasCharges ? [site.chargeE ?? 'nan'] : []), f + 1].join(' '),
  );
  return [rows.length, comment.join(' ').trim(), ...lines, ''].join('\n');
}

export function analyse(text: string, settings: Partial<AnalysisSettings> = {}, language: Language = 'xyz'): Reading {
  const tree = parse(snapshotOf(text), language);
  const request = { ...DEFAULT_REQUEST, settings: { ...DEFAULT_SETTINGS, ...settings } };
  const frame = new FileAnalysis(tree, request).frame(0);
  const pairs = [...pairsOf(frame)];
  let records: PairRecord[] | undefined;
  return {
    frame,
    pairs,
    get records() {
      records ??= pairs.map((pair) => pairRecord(frame.system, pair));
      return records;
    },
  };
}

/** A cutoff that lets every pair of a test into the list. */
export const FAR_CUTOFF = { cutoffA: 1e4 } as const;

/** The one pair of two fragments, however far apart. */
export function pairOf(
  first: Fragment,
  second: Fragment,
  settings: Partial<AnalysisSettings> = {},
  keys = '',
): PairRecord {
  const { records } = analyse(frameText([first, second], keys), { ...FAR_CUTOFF, ...settings });
  const [record] = records;
  if (record === undefined || records.length !== 1) throw new Error(`${records.length} pairs, not one`);
  return record;
}

/** A number that the program must know. */
export function known(value: number | null): number {
  if (value === null) throw new Error('The program knows no such number.');
  return value;
}

/** A single atom that carries moments: an exact point. */
export function point(at: Vector, dipoleEA: Vector, chargeE = 0): Fragment {
  return { sites: [{ symbol: 'He', at }], dipoleEA, chargeE };
}

export function moved(fragment: Fragment, place: (at: Vector) => Vector, turn = (dipole: Vector) => dipole): Fragment {
  const { dipoleEA } = fragment;
  return {
    ...fragment,
    sites: fragment.sites.map((site) => ({ ...site, at: place(site.at) })),
    ...(dipoleEA === undefined ? {} : { dipoleEA: turn(dipoleEA) }),
  };
}

export function shifted(fragment: Fragment, by: Vector): Fragment {
  return moved(fragment, (at) => add(at, by));
}

export function add(a: Vector, b: Vector, times = 1): Vector {
  return [a[0] + times * b[0], a[1] + times * b[1], a[2] + times * b[2]];
}

export function scaled(a: Vector, by: number): Vector {
  return [a[0] * by, a[1] * by, a[2] * by];
}

export function dot(a: Vector, b: Vector): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

/** Pseudo-random numbers in [0, 1) from a seed: mulberry32 (common practice, no source). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

export function randomDirection(random: () => number): Vector {
  const z = 2 * random() - 1;
  const turn = 2 * Math.PI * random();
  const s = Math.sqrt(1 - z * z);
  return [s * Math.cos(turn), s * Math.sin(turn), z];
}

/** A random proper rotation (Rodrigues' formula). */
export function randomRotation(random: () => number): (v: Vector) => Vector {
  const axis = randomDirection(random);
  const angle = 2 * Math.PI * random();
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  return (v) => {
    const along = (1 - c) * dot(axis, v);
    return [
      c * v[0] + s * (axis[1] * v[2] - axis[2] * v[1]) + along * axis[0],
      c * v[1] + s * (axis[2] * v[0] - axis[0] * v[2]) + along * axis[1],
      c * v[2] + s * (axis[0] * v[1] - axis[1] * v[0]) + along * axis[2],
    ];
  };
}

/** Two to five random atoms within 1.2 Å of the origin, with charges that add up to the net charge. */
export function randomFragment(random: () => number, netE: number): Fragment {
  const count = 2 + Math.floor(4 * random());
  const sites = Array.from({ length: count }, () => ({
    symbol: ['C', 'N', 'O', 'F', 'S'][Math.floor(5 * random())]!,
    at: scaled(randomDirection(random), 0.4 + 0.8 * random()),
    chargeE: 1.6 * random() - 0.8,
  }));
  const excess = (sites.reduce((sum, { chargeE }) => sum + chargeE, 0) - netE) / count;
  return { sites: sites.map((site) => ({ ...site, chargeE: site.chargeE - excess })) };
}

/** k_e·e²·N_A/Å, kJ·Å/mol: exact SI-2019 e and N_A, CODATA 2022 vacuum permittivity. */
export const K_KJ_A = (1.602176634e-19 ** 2 * 6.02214076e23) / (4 * Math.PI * 8.8541878188e-12 * 1e-10) / 1000;
