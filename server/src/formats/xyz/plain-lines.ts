import type { LineIndex } from '../../text/lines';
import { scanPlainDecimal } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { AtomBuilder } from '../atom-builder';
import { symbolNumber } from '../species';
import { ColumnOp, type ColumnPlan, PLAIN_COLUMNS } from './columns';

const BLANK = 32;
const LF = 10;
const CR = 13;

/**
 * Reads atom lines that hold an element symbol, plain decimals, and words that nobody asks for: nearly all lines of a large file. What
 * is anything else is left to the reader of any line, whose results these are to the last bit.
 */
export class PlainLineReader {
  readonly #bytes: Uint8Array;
  readonly #view: DataView;
  readonly #starts: Uint32Array;
  readonly #ops: Uint8Array;
  readonly #atoms: AtomBuilder;
  /** Whether the columns are symbol, x, y, z and no more; whether they are all of the plain kinds. */
  readonly #isBare: boolean;
  readonly #isPlain: boolean;

  constructor(text: Snapshot, lines: LineIndex, plan: ColumnPlan, atoms: AtomBuilder) {
    const { bytes } = text;
    this.#bytes = bytes;
    this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    this.#starts = lines.starts;
    this.#ops = plan.ops;
    this.#atoms = atoms;
    this.#isBare = plan.ops.join() === PLAIN_COLUMNS.ops.join();
    this.#isPlain = !plan.ops.includes(ColumnOp.group) && !plan.ops.includes(ColumnOp.atomicNumber);
  }

  /** Reads lines from `line` to before `to` as far as they are plain, and returns the first that is left. */
  read(line: number, to: number): number {
    if (this.#isBare) return this.#readBareLines(line, to);
    if (!this.#isPlain) return line;
    const atoms = this.#atoms;
    let next = line;
    for (; next < to; next++) {
      atoms.reserve();
      const z = this.#readColumns(this.#starts[next]!);
      if (z === 0) break;
      atoms.element[atoms.count] = z;
      atoms.line[atoms.count] = next;
      atoms.count++;
    }
    return next;
  }

  /** Reads lines of symbol, x, y and z; one loop without calls that depend on the columns. */
  #readBareLines(line: number, to: number): number {
    const bytes = this.#bytes;
    const view = this.#view;
    const starts = this.#starts;
    const atoms = this.#atoms;
    let next = line;
    for (; next < to; next++) {
      atoms.reserve();
      const { positionA, count } = atoms;
      let at = skipSpaces(bytes, starts[next]!);
      const z = symbolAt(bytes, at);
      if (z === 0) break;
      at = scanPlainDecimal(bytes, view, at + 2, positionA, 3 * count);
      if (at >= 0) at = scanPlainDecimal(bytes, view, at, positionA, 3 * count + 1);
      if (at >= 0) at = scanPlainDecimal(bytes, view, at, positionA, 3 * count + 2);
      if (at < 0 || !isEndOfLine(bytes, at)) break;
      atoms.element[count] = z;
      atoms.line[count] = next;
      atoms.count = count + 1;
    }
    return next;
  }

  /** Reads a line by its columns into the atom that comes next; returns its atomic number, or 0 where the line is not plain. */
  #readColumns(start: number): number {
    const bytes = this.#bytes;
    const view = this.#view;
    const { positionA, chargeE, dipoleEA, count } = this.#atoms;
    let z = 0;
    let at = start;
    for (const op of this.#ops) {
      if (op === ColumnOp.species) {
        at = skipSpaces(bytes, at);
        z = symbolAt(bytes, at);
        if (z === 0) return 0;
        at += bytes[at + 1] === BLANK ? 1 : 2;
      } else if (op === ColumnOp.skip) {
        at = skipSpaces(bytes, at);
        const word = at;
        while (bytes[at]! > BLANK) at++;
        if (at === word || (bytes[at] !== BLANK && !isEndOfLine(bytes, at))) return 0;
      } else if (op === ColumnOp.charge) {
        at = scanPlainDecimal(bytes, view, at, chargeE!, count);
      } else if (op >= ColumnOp.dipoleX) {
        at = scanPlainDecimal(bytes, view, at, dipoleEA!, 3 * count + op - ColumnOp.dipoleX);
      } else {
        at = scanPlainDecimal(bytes, view, at, positionA, 3 * count + op - ColumnOp.x);
      }
      if (at < 0) return 0;
    }
    return isEndOfLine(bytes, at) ? z : 0;
  }
}

function skipSpaces(bytes: Uint8Array, start: number): number {
  let at = start;
  while (bytes[at] === BLANK) at++;
  return at;
}

/** Atomic number by a symbol of one or two letters and a blank, or 0. */
function symbolAt(bytes: Uint8Array, at: number): number {
  const second = bytes[at + 1]!;
  if (second !== BLANK && bytes[at + 2] !== BLANK) return 0;
  return symbolNumber(bytes[at]!, second);
}

function isEndOfLine(bytes: Uint8Array, start: number): boolean {
  const unit = bytes[skipSpaces(bytes, start)];
  return unit === LF || unit === CR;
}
