import type { Span } from '../base/span';

/**
 * One version of a text, immutable: its UTF-16 code units mirrored as one byte each, so that a byte offset is a UTF-16 offset
 * and scanners never touch a string. Code units above 0x7F become 0x80; where one matters (names, messages) the string is cut.
 */
export interface Snapshot {
  /** One byte a code unit, followed by {@link PADDING} line feeds so that scanners may look ahead. */
  readonly bytes: Uint8Array;
  /** Number of UTF-16 code units. */
  readonly length: number;
  /** Whether every unit is ASCII, so that the bytes tell all. */
  readonly isAscii: boolean;
  /** The text between two offsets. */
  slice(start: number, end: number): string;
}

/** Bytes past the end that may be read; all are line feeds. */
export const PADDING = 32;

const LINE_FEED = 10;
/** Pieces up to this long are put together without the decoder, whose call costs more. */
const SHORT = 12;
const NOT_ASCII = 0x80;

class TextSnapshot implements Snapshot {
  readonly bytes: Uint8Array;
  readonly length: number;
  readonly isAscii: boolean;
  readonly #text: string;

  constructor(text: string, { bytes, isAscii }: Mirror) {
    this.#text = text;
    this.length = text.length;
    this.bytes = bytes;
    this.isAscii = isAscii;
  }

  slice(start: number, end: number): string {
    return this.#text.slice(start, end);
  }
}

/** Text held as ASCII bytes alone: a file read from disk never becomes a string as a whole. */
class AsciiSnapshot implements Snapshot {
  readonly isAscii = true;
  readonly bytes: Uint8Array;
  readonly length: number;
  readonly #decoder = new TextDecoder('latin1');

  constructor(bytes: Uint8Array, length: number) {
    this.bytes = bytes;
    this.length = length;
  }

  slice(start: number, end: number): string {
    if (end - start <= SHORT) {
      let text = '';
      for (let i = Math.max(0, start); i < Math.min(end, this.length); i++) text += String.fromCharCode(this.bytes[i]!);
      return text;
    }
    return this.#decoder.decode(this.bytes.subarray(Math.max(0, start), Math.min(end, this.length)));
  }
}

interface Mirror {
  readonly bytes: Uint8Array;
  readonly isAscii: boolean;
}

function isAsciiText(text: string): boolean {
  for (let i = 0; i < text.length; i++) if (text.charCodeAt(i) >= NOT_ASCII) return false;
  return true;
}

function mirror(text: string): Mirror {
  const length = text.length;
  const bytes = new Uint8Array(length + PADDING);
  const { read } = new TextEncoder().encodeInto(text, bytes.subarray(0, length));
  // Only ASCII encodes to one byte a unit and so fits as a whole; anything else is mirrored unit by unit.
  if (read !== length) {
    for (let i = 0; i < length; i++) {
      const unit = text.charCodeAt(i);
      bytes[i] = Math.min(unit, NOT_ASCII);
    }
  }
  bytes.fill(LINE_FEED, length);
  return { bytes, isAscii: read === length };
}

/** Whether all bytes are ASCII; reads past `length` into padding of ASCII. */
function isPaddedAscii(bytes: Uint8Array<ArrayBuffer>, length: number): boolean {
  const words = new Int32Array(bytes.buffer, 0, bytes.length >> 2);
  const last = Math.ceil(length / 4);
  let seen = 0;
  for (let i = 0; i < last; i += 4) seen |= words[i]! | words[i + 1]! | words[i + 2]! | words[i + 3]!;
  return (seen & 0x80808080) === 0;
}

/** A snapshot of a string. */
export function snapshotOf(text: string): Snapshot {
  return new TextSnapshot(text, mirror(text));
}

/** The snapshot after some pieces (ascending, disjoint) are replaced: what stays is copied, not read again. */
export function splicedSnapshot(old: Snapshot, splices: readonly (Span & { readonly text: string })[]): Snapshot {
  const growth = splices.reduce((sum, { start, end, text }) => sum + text.length - (end - start), 0);
  const length = old.length + growth;
  const bytes = new Uint8Array(length + PADDING);
  const pieces: string[] = [];
  // As long as the bytes tell all, no string is made of them.
  const isAscii = old.isAscii && splices.every(({ text }) => isAsciiText(text));
  let from = 0;
  let at = 0;
  const keep = (to: number) => {
    bytes.set(old.bytes.subarray(from, to), at);
    at += to - from;
    if (!isAscii) pieces.push(old.slice(from, to));
  };
  for (const { start, end, text } of splices) {
    keep(start);
    bytes.set(mirror(text).bytes.subarray(0, text.length), at);
    at += text.length;
    pieces.push(text);
    from = end;
  }
  keep(old.length);
  bytes.fill(LINE_FEED, length);
  return isAscii ? new AsciiSnapshot(bytes, length) : new TextSnapshot(pieces.join(''), { bytes, isAscii });
}

/**
 * A snapshot of a file's bytes: UTF-8 (a byte order mark is dropped, invalid sequences become U+FFFD) or UTF-16 with a mark.
 * Never throws. ASCII is copied once and never made into a string.
 */
export function snapshotOfBytes(file: Uint8Array): Snapshot {
  if (file[0] === 0xff && file[1] === 0xfe) return snapshotOf(new TextDecoder('utf-16le').decode(file));
  if (file[0] === 0xfe && file[1] === 0xff) return snapshotOf(new TextDecoder('utf-16be').decode(file));
  const bytes = new Uint8Array(file.length + PADDING);
  bytes.set(file);
  bytes.fill(LINE_FEED, file.length);
  if (isPaddedAscii(bytes, file.length)) return new AsciiSnapshot(bytes, file.length);
  return snapshotOf(new TextDecoder('utf-8').decode(file));
}
