import { FileFindings } from '../../../server/src/analysis/findings';
import { FileAnalysis, type FrameAnalysis } from '../../../server/src/analysis/frame-analysis';
import { type AnalysisSettings, DEFAULT_SETTINGS } from '../../../server/src/analysis/settings';
import { type FragmentRecord, fragmentRecord, type PairRecord, pairRecord } from '../../../server/src/features/records';
import { parse } from '../../../server/src/formats/parse';
import type { CoordinateTree, Language } from '../../../server/src/formats/tree';
import { snapshotOf } from '../../../server/src/text/snapshot';

/** What the program makes of one text: the way from characters to pairs that every command takes. */

export interface Reading {
  readonly file: CoordinateTree;
  readonly frame: FrameAnalysis;
  readonly fragments: readonly FragmentRecord[];
  readonly pairs: readonly PairRecord[];
  /** Severity and code of every finding. */
  readonly findings: readonly string[];
}

/** Reads a text and analyses its first frame. */
export function read(text: string, settings: Partial<AnalysisSettings> = {}, language: Language = 'xyz'): Reading {
  const file = parse(snapshotOf(text), language);
  const request = { settings: { ...DEFAULT_SETTINGS, ...settings }, forced: {}, periodic: false, knowledge: null };
  const frame = new FileAnalysis(file, request).frame(0);
  const found = new FileFindings(file);
  const pairs = [...found.pairsOfFrame(frame)].map((pair) => pairRecord(frame.system, pair));
  const { names } = frame.model;
  const fragments = names.map((name, f) => fragmentRecord(frame, f, () => ({ name, label: null })));
  const findings = found.list().map(({ severity, code }) => `${severity} ${code}`);
  return { file, frame, fragments, pairs, findings };
}

export type Vector = readonly [x: number, y: number, z: number];
export type Atom = readonly [symbol: string, x: number, y: number, z: number, charge?: number];

/** Extended XYZ text of atoms, with a charge column where the first atom has a charge. */
export function xyz(atoms: readonly Atom[], keys = ''): string {
  const hasCharge = atoms[0]?.[4] !== undefined;
  const properties = `Properties=species:S:1:pos:R:3${hasCharge ? ':charge:R:1' : ''}`;
  return [String(atoms.length), `${properties} ${keys}`.trim(), ...atoms.map((atom) => atom.join(' ')), ''].join('\n');
}

/** One of two points on the x axis: an atom that carries a charge (e) and a dipole (D). */
export interface Point {
  readonly chargeE?: number;
  readonly dipoleD?: Vector;
}

/** The pair of two points a distance apart: single atoms with declared moments, which have no extent. */
export function pairOfPoints(
  first: Point,
  second: Point,
  distanceA: number,
  settings: Partial<AnalysisSettings> = {},
): PairRecord {
  const charges = [first, second].map((point) => point.chargeE ?? 0).join(' ');
  const dipoles = [first, second].map((point) => (point.dipoleD ?? [0, 0, 0]).join(' ')).join(' ');
  const keys = `fragment_atoms="1 2" fragment_charges="${charges}" fragment_dipoles="${dipoles}" dipole_unit=D`;
  const text = xyz(
    [
      ['He', 0, 0, 0],
      ['He', distanceA, 0, 0],
    ],
    keys,
  );
  const [pair] = read(text, settings).pairs;
  if (pair === undefined) throw new Error('The two points are no pair of the list.');
  return pair;
}

/** A number that the program must know. */
export function known(value: number | null): number {
  if (value === null) throw new Error('The program knows no such number.');
  return value;
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
