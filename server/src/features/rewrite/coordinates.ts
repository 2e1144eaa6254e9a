import type { TextEdit } from '../../base/finding';
import type { Span } from '../../base/span';
import { ATOM_COLUMNS } from '../../formats/pdb/fields';
import type { AtomField, CoordinateTree, FrameTree } from '../../formats/tree';

const AXES = ['x', 'y', 'z'] as const satisfies readonly AtomField[];
/** Decimals of the fixed columns (each `%8.3f`), and the least and most that are written elsewhere. */
const PDB_DECIMALS = 3;
const FEWEST_DECIMALS = 3;
const MOST_DECIMALS = 10;
const BLANK = 32;

/** The decimals that coordinates of some atoms are to be written with: as many as the file gives any of them. */
export function decimalsOf(file: CoordinateTree, frame: FrameTree, atoms: Iterable<number>): number {
  if (file.language === 'pdb') return PDB_DECIMALS;
  let most = FEWEST_DECIMALS;
  for (const atom of atoms) {
    for (const axis of AXES) {
      const { start, end } = frame.fieldSpan(atom, axis);
      most = Math.max(most, decimalsIn(file.text.slice(start, end)));
    }
  }
  return Math.min(most, MOST_DECIMALS);
}

/** How many decimals a number is given to. */
function decimalsIn(text: string): number {
  const [, fraction = '', exponent = '0'] = /^[+-]?\d*\.?(\d*)(?:[eEdD]([+-]?\d+))?$/.exec(text) ?? [];
  return text.includes('.') ? Math.max(0, fraction.length - Number(exponent)) : 0;
}

/** A number with so many decimals; never a zero with a sign. */
export function fixed(value: number, decimals: number): string {
  const text = value.toFixed(decimals);
  return Number(text) === 0 ? text.replace('-', '') : text;
}

/**
 * The edits that move atoms, each number at the right end of the columns it has: fields that stay the same are left alone, and a longer
 * number takes the blanks before it but for one. `null` where a number does not fit into fixed columns.
 *
 * @param shiftA what is added to x y z of each atom, in the order of `atoms`
 */
export function coordinateEdits(
  file: CoordinateTree,
  frame: FrameTree,
  atoms: ArrayLike<number>,
  shiftA: ArrayLike<number>,
  decimals: number,
): TextEdit[] | null {
  const edits: TextEdit[] = [];
  for (let k = 0; k < atoms.length; k++) {
    const atom = atoms[k]!;
    for (const [axis, field] of AXES.entries()) {
      const value = frame.atoms.positionA[3 * atom + axis]! + shiftA[3 * k + axis]!;
      const span = frame.fieldSpan(atom, field);
      const text = fixed(value, decimals);
      if (Number(text) === frame.atoms.positionA[3 * atom + axis]) continue;
      const edit = file.language === 'pdb' ? inColumns(file, frame, atom, field, text) : rightAligned(file, span, text);
      if (edit === null) return null;
      edits.push(edit);
    }
  }
  return edits;
}

function inColumns(
  file: CoordinateTree,
  frame: FrameTree,
  atom: number,
  field: (typeof AXES)[number],
  text: string,
): TextEdit | null {
  const [from, to] = ATOM_COLUMNS[field];
  const start = file.lines.starts[frame.atoms.line[atom]!]!;
  if (text.length > to - from || start + to > file.lines.end(frame.atoms.line[atom]!)) return null;
  return { start: start + from, end: start + to, text: text.padStart(to - from) };
}

/** A number in place of another, ending where that ends as far as the blanks before it allow. */
function rightAligned({ text: source }: CoordinateTree, { start, end }: Span, text: string): TextEdit {
  let from = start;
  const wanted = text.length - (end - start);
  while (start - from < wanted && source.bytes[from - 1] === BLANK && source.bytes[from - 2] === BLANK) from--;
  return { start: from, end, text: text.padStart(end - from) };
}
