import type { Snapshot } from './snapshot';

/** A place as people and editors name it; both counted from 0, columns in UTF-16 code units. */
export interface Position {
  readonly line: number;
  readonly column: number;
}

/** Where the lines of a text are. Lines end with LF, CR LF or a lone CR. */
export interface LineIndex {
  readonly count: number;
  /** Offset of the first unit of each line, and one more entry: the length of the text. */
  readonly starts: Uint32Array;
  /** Offset just past the last unit of a line, without its line end. */
  end(line: number): number;
  /** The line that holds an offset (clamped into the text). */
  lineAt(offset: number): number;
  positionAt(offset: number): Position;
}

const LF = 10;
const CR = 13;

class Lines implements LineIndex {
  readonly count: number;
  readonly starts: Uint32Array;
  readonly #bytes: Uint8Array;

  constructor(bytes: Uint8Array, starts: Uint32Array) {
    this.#bytes = bytes;
    this.starts = starts;
    this.count = starts.length - 1;
  }

  end(line: number): number {
    const start = this.starts[line]!;
    let end = this.starts[line + 1]!;
    if (end > start && this.#bytes[end - 1] === LF) end--;
    if (end > start && this.#bytes[end - 1] === CR) end--;
    return end;
  }

  lineAt(offset: number): number {
    let low = 0;
    let high = this.count - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.starts[middle]! <= offset) low = middle;
      else high = middle - 1;
    }
    return low;
  }

  positionAt(offset: number): Position {
    const line = this.lineAt(offset);
    return { line, column: Math.max(0, Math.min(offset, this.end(line)) - this.starts[line]!) };
  }
}

/**
 * Indexes the lines of a snapshot in one pass. A text that ends with a line end has no further, empty line after it; an empty
 * text has one empty line.
 */
export function indexLines(snapshot: Snapshot): LineIndex {
  const { bytes, length } = snapshot;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let starts = new Uint32Array(Math.max(16, (length >> 5) + 2));
  let count = 0;
  let i = 0;
  let start = 0;
  while (i < length) {
    // Four units at a time where all are above CR; the padding allows looking past the end.
    const four = view.getInt32(i, true);
    const low = (four - 0x0e0e0e0e) & ~four & 0x80808080;
    if (low === 0) {
      i += 4;
      continue;
    }
    i += (31 - Math.clz32(low & -low)) >> 3;
    if (i >= length) break;
    const unit = bytes[i++]!;
    if (unit !== LF && unit !== CR) continue;
    if (unit === CR && bytes[i] === LF && i < length) i++;
    if (count + 2 >= starts.length) starts = grown(starts);
    starts[count++] = start;
    start = i;
  }
  if (start < length || count === 0) starts[count++] = start;
  starts[count] = length;
  const isTight = starts.length < (count + 1) * 1.5;
  return new Lines(bytes, isTight ? starts.subarray(0, count + 1) : starts.slice(0, count + 1));
}

function grown(array: Uint32Array<ArrayBuffer>): Uint32Array<ArrayBuffer> {
  const larger = new Uint32Array(array.length * 2);
  larger.set(array);
  return larger;
}

/** An index from line starts that are known already: one for each line, and the length of the text. */
export function linesFrom(snapshot: Snapshot, starts: Uint32Array): LineIndex {
  return new Lines(snapshot.bytes, starts);
}
