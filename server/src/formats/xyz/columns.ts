import type { Snapshot } from '../../text/snapshot';
import type { Entry } from '../annotation/entries';
import { valueText } from '../annotation/lists';

/** What one blank-separated field of an atom line is. */
export const ColumnOp = {
  skip: 0,
  species: 1,
  atomicNumber: 2,
  x: 3,
  y: 4,
  z: 5,
  charge: 6,
  group: 7,
  dipoleX: 8,
  dipoleY: 9,
  dipoleZ: 10,
} as const;

/** How the fields of an atom line are read. */
export interface ColumnPlan {
  /** A {@link ColumnOp} for each field. */
  readonly ops: Uint8Array;
  /** Whether the plan was read from a `Properties` key. */
  readonly declared: boolean;
  readonly hasCharge: boolean;
  readonly hasGroup: boolean;
  readonly hasDipole: boolean;
}

/** Symbol, x, y, z: a plain XYZ line. */
export const PLAIN_COLUMNS: ColumnPlan = {
  ops: Uint8Array.of(ColumnOp.species, ColumnOp.x, ColumnOp.y, ColumnOp.z),
  declared: false,
  hasCharge: false,
  hasGroup: false,
  hasDipole: false,
};

const CHARGE_NAMES = new Set(['charge', 'charges', 'initial_charges']);
const MOST_COLUMNS = 1000;

/** Reads a `Properties` value (`name:type:count` triplets joined by colons), or says why it does not describe atom lines. */
export function readProperties(snapshot: Snapshot, entry: Entry): ColumnPlan | string {
  const parts = valueText(snapshot, entry).trim().split(':');
  if (parts.length < 3 || parts.length % 3 !== 0) {
    return 'Properties must be name:type:count triplets joined by colons.';
  }
  const ops: number[] = [];
  const seen = { species: false, pos: false, charge: false, group: false, dipole: false };
  for (let i = 0; i < parts.length; i += 3) {
    const [name, type, width] = [parts[i]!, parts[i + 1]!, Number(parts[i + 2])];
    if (!/^[SRIL]$/.test(type)) return `Properties gives "${name}" the type "${type}"; the types are S, R, I and L.`;
    if (!Number.isInteger(width) || width < 1 || width > MOST_COLUMNS) {
      return `Properties gives "${name}" no whole number of columns.`;
    }
    const numeric = type === 'R' || type === 'I';
    if (name === 'species' && width === 1 && type === 'S' && !seen.species) {
      seen.species = true;
      ops.push(ColumnOp.species);
    } else if (name === 'Z' && width === 1 && type === 'I' && !parts.includes('species')) {
      seen.species = true;
      ops.push(ColumnOp.atomicNumber);
    } else if (name === 'pos' && width === 3 && numeric && !seen.pos) {
      seen.pos = true;
      ops.push(ColumnOp.x, ColumnOp.y, ColumnOp.z);
    } else if (CHARGE_NAMES.has(name) && width === 1 && numeric && !seen.charge) {
      seen.charge = true;
      ops.push(ColumnOp.charge);
    } else if (name === 'fragment' && width === 1 && (type === 'I' || type === 'S') && !seen.group) {
      seen.group = true;
      ops.push(ColumnOp.group);
    } else if (name === 'dipoles' && width === 3 && type === 'R' && !seen.dipole) {
      seen.dipole = true;
      ops.push(ColumnOp.dipoleX, ColumnOp.dipoleY, ColumnOp.dipoleZ);
    } else {
      for (let k = 0; k < width; k++) ops.push(ColumnOp.skip);
    }
    if (ops.length > MOST_COLUMNS) return 'Properties declares more than a thousand columns.';
  }
  if (!seen.species) return 'Properties names neither species:S:1 nor Z:I:1.';
  if (!seen.pos) return 'Properties names no pos:R:3.';
  return {
    ops: Uint8Array.from(ops),
    declared: true,
    hasCharge: seen.charge,
    hasGroup: seen.group,
    hasDipole: seen.dipole,
  };
}
