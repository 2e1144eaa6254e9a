/**
 * One version of a text, immutable: its UTF-16 code units mirrored as one byte each, so that a byte offset is a UTF-16 offset
 * and scanners never touch a string. Code units above 0x7F become 0x80; where one matters (names, messages) the string is cut.
 */
export interface Snapshot {
  /** One byte a code unit, followed by {@link PADDING} line feeds so that scanners may look ahead. */
  readonly bytes: Uint8Array;
  /** Number of UTF-16 code units. */
  readonly length: number;
  /** The text between two offsets. */
  slice(start: number, end: number): string;
}

/** Bytes past the end that may be read; all are line feeds. */
export const PADDING = 32;

const LINE_FEED = 10;
const NOT_ASCII = 0x80;

class TextSnapshot implements Snapshot {
  readonly bytes: Uint8Array;
  readonly length: number;
  readonly #text: string;

  constructor(text: string) {
    this.#text = text;
    this.length = text.length;
    this.bytes = mirror(text);
  }

  slice(start: number, end: number): string {
    return this.#text.slice(start, end);
  }
}

/** Text held as ASCII bytes alone: a file read from disk never becomes a string as a whole. */
class AsciiSnapshot implements Snapshot {
  readonly bytes: Uint8Array;
  readonly length: number;
  readonly #decoder = new TextDecoder('latin1');

  constructor(bytes: Uint8Array, length: number) {
    this.bytes = bytes;
    this.length = length;
  }

  slice(start: number, end: number): string {
    return this.#decoder.decode(this.bytes.subarray(Math.max(0, start), Math.min(end, this.length)));
  }
}

function mirror(text: string): Uint8Array {
  const length = text.length;
  const bytes = new Uint8Array(length + PADDING);
  const { written } = new TextEncoder().encodeInto(text, bytes.subarray(0, length));
  // Pure ASCII encodes to one byte a unit and cannot fill the room early; anything else is mirrored unit by unit.
  if (written !== length || !isAscii(bytes, length)) {
    for (let i = 0; i < length; i++) {
      const unit = text.charCodeAt(i);
      bytes[i] = Math.min(unit, NOT_ASCII);
    }
  }
  bytes.fill(LINE_FEED, length);
  return bytes;
}

function isAscii(bytes: Uint8Array, length: number): boolean {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let i = 0;
  let seen = 0;
  for (; i + 8 <= length; i += 8) seen |= view.getInt32(i) | view.getInt32(i + 4);
  if ((seen & 0x80808080) !== 0) return false;
  for (; i < length; i++) if (bytes[i]! >= NOT_ASCII) return false;
  return true;
}

/** A snapshot of a string. */
export function snapshotOf(text: string): Snapshot {
  return new TextSnapshot(text);
}

/**
 * A snapshot of a file's bytes: UTF-8 (a byte order mark is dropped, invalid sequences become U+FFFD) or UTF-16 with a mark.
 * Never throws. ASCII is copied once and never made into a string.
 */
export function snapshotOfBytes(file: Uint8Array): Snapshot {
  if (file[0] === 0xff && file[1] === 0xfe) return snapshotOf(new TextDecoder('utf-16le').decode(file));
  if (file[0] === 0xfe && file[1] === 0xff) return snapshotOf(new TextDecoder('utf-16be').decode(file));
  if (isAscii(file, file.length)) {
    const bytes = new Uint8Array(file.length + PADDING);
    bytes.set(file);
    bytes.fill(LINE_FEED, file.length);
    return new AsciiSnapshot(bytes, file.length);
  }
  return snapshotOf(new TextDecoder('utf-8').decode(file));
}
