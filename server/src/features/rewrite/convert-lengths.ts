import type { TextEdit } from '../../base/finding';
import { AtomFlag, type CoordinateTree, type FrameTree } from '../../formats/tree';
import { coordinateEdits, decimalsOf, fixed } from './coordinates';

const FEWEST_DECIMALS = 6;
/** The text of a larger frame is not replaced by one edit for each number. */
const MOST_ATOMS = 100000;
const FIELDS = ['x', 'y', 'z'] as const;
const TAB = 9;
const BLANK = 32;

/** Largest numbers that the fixed columns hold, Å. */
const PDB_LARGEST_A = 9999.9994;
const PDB_LEAST_A = -999.9994;

/**
 * All coordinates of a frame times a factor. Numbers in columns stay in columns: where those are too narrow, each line grows by the same.
 * The edits are made when they are asked for; `null` where a number does not fit into fixed columns, one cannot be read, or a cell in the
 * same doubtful unit stands beside them.
 */
export function lengthConversion(
  file: CoordinateTree,
  frame: FrameTree,
  factor: number,
): (() => readonly TextEdit[]) | null {
  const { atoms } = frame;
  if (frame.cell !== null || atoms.count > MOST_ATOMS) return null;
  if (atoms.flags.some((flags) => flags & AtomFlag.noPosition)) return null;
  const fits = (value: number) => value * factor < PDB_LARGEST_A && value * factor > PDB_LEAST_A;
  if (file.language === 'pdb' && !atoms.positionA.every(fits)) return null;
  return () => converted(file, frame, factor);
}

function converted(file: CoordinateTree, frame: FrameTree, factor: number): TextEdit[] {
  const { atoms } = frame;
  const all = Int32Array.from({ length: atoms.count }, (_, i) => i);
  if (file.language === 'pdb') {
    const shifts = atoms.positionA.map((value) => value * factor - value);
    return coordinateEdits(file, frame, all, shifts, decimalsOf(file, frame, [])) ?? [];
  }
  const decimals = Math.max(FEWEST_DECIMALS, decimalsOf(file, frame, all));
  return FIELDS.flatMap((field, axis) => {
    const column = Array.from(all, (atom) => ({
      ...frame.fieldSpan(atom, field),
      text: fixed(atoms.positionA[3 * atom + axis]! * factor, decimals),
    }));
    return inOneColumn(file, frame, column);
  }).sort((a, b) => a.start - b.start);
}

/** New numbers of one column: all of one width where the old ones ended at one place in their lines, else each in its own place. */
function inOneColumn({ text, lines }: CoordinateTree, { atoms }: FrameTree, column: readonly TextEdit[]): TextEdit[] {
  const ends = new Set(column.map(({ end }, atom) => end - lines.starts[atoms.line[atom]!]!));
  const hasTabs = column.some(({ start }) => text.bytes[start - 1] === TAB);
  if (ends.size > 1 || hasTabs) return [...column];
  const width = Math.max(...column.map(({ text: piece }) => piece.length));
  // Blanks before a narrower old number make part of the width.
  const starts = column.map(({ start, end }) => {
    let from = start;
    while (end - from < width && text.bytes[from - 1] === BLANK && text.bytes[from - 2] === BLANK) from--;
    return from;
  });
  const narrowest = column.reduce((least, { end }, k) => Math.min(least, end - starts[k]!), width);
  return column.map(({ end, text: piece }, k) => {
    const start = starts[k]!;
    return { start, end, text: piece.padStart(end - start + width - narrowest) };
  });
}
