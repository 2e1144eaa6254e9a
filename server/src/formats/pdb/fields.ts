import type { Span } from '../../base/span';
import type { LineIndex } from '../../text/lines';
import { scanNumber, skipBlanks, trimEnd } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';

/**
 * Column ranges of ATOM and HETATM records, from 0, end exclusive.
 * Source: wwPDB, Protein Data Bank Contents Guide, format version 3.30 (2012), coordinate section.
 */
export const ATOM_COLUMNS = {
  serial: [6, 11],
  name: [12, 16],
  altLoc: [16, 17],
  residueName: [17, 21],
  chain: [21, 22],
  residueNumber: [22, 26],
  insertion: [26, 27],
  x: [30, 38],
  y: [38, 46],
  z: [46, 54],
  occupancy: [54, 60],
  temperatureFactor: [60, 66],
  element: [76, 78],
  formalCharge: [78, 80],
} as const satisfies Record<string, readonly [number, number]>;

const BLANK = 32;
const NOT_ASCII = 0x80;

export type ColumnRange = readonly [number, number];

/** Reads fixed columns of the lines of a text. */
export class FixedColumns {
  readonly text: Snapshot;
  readonly lines: LineIndex;
  /** The bytes of the text, to be read as words. */
  readonly view: DataView;
  readonly #words = new Map<number, string>();

  constructor(text: Snapshot, lines: LineIndex) {
    this.text = text;
    this.lines = lines;
    this.view = new DataView(text.bytes.buffer, text.bytes.byteOffset, text.bytes.byteLength);
  }

  /** The columns as they stand, shorter where the line ends within them. */
  raw(line: number, range: ColumnRange): string {
    const start = this.lines.starts[line]!;
    const end = Math.min(start + range[1], this.lines.end(line));
    return end <= start + range[0] ? '' : this.text.slice(start + range[0], end);
  }

  trimmed(line: number, range: ColumnRange): string {
    return this.raw(line, range).trim();
  }

  /** What stands in the columns without blanks around it; the columns themselves (as far as the line goes) where all is blank. */
  span(line: number, range: ColumnRange): Span {
    const lineStart = this.lines.starts[line]!;
    const lineEnd = this.lines.end(line);
    const start = Math.min(lineStart + range[0], lineEnd);
    const end = Math.min(lineStart + range[1], lineEnd);
    const first = skipBlanks(this.text.bytes, start, end);
    return first === end ? { start, end } : { start: first, end: trimEnd(this.text.bytes, first, end) };
  }

  /** The number in the columns; NaN where blank or no number. */
  number(line: number, range: ColumnRange): number {
    const { start, end } = this.span(line, range);
    return end > start ? scanNumber(this.text, start, end) : Number.NaN;
  }

  /** What {@link trimmed} gives, of up to four columns; equal words are one string, and nothing is made for one seen before. */
  word(line: number, range: ColumnRange): string {
    const { bytes } = this.text;
    const lineStart = this.lines.starts[line]!;
    if (lineStart + range[1] > this.lines.end(line)) return this.trimmed(line, range);
    let packed = 0;
    for (let k = lineStart + range[0]; k < lineStart + range[1]; k++) {
      const unit = bytes[k]!;
      if (unit < BLANK || unit >= NOT_ASCII) return this.trimmed(line, range);
      packed = (packed << 7) | unit;
    }
    let word = this.#words.get(packed);
    if (word === undefined) {
      word = this.trimmed(line, range);
      this.#words.set(packed, word);
    }
    return word;
  }
}
