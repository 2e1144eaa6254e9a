import type { Span } from '../base/span';
import { type LineIndex, linesFrom } from './lines';
import { type Snapshot, splicedSnapshot } from './snapshot';

/** A piece of a text replaced by another. */
export interface Splice extends Span {
  readonly text: string;
}

/** A text with its lines. */
export interface IndexedText {
  readonly snapshot: Snapshot;
  readonly lines: LineIndex;
}

/**
 * The text after some pieces of it (ascending, disjoint, in offsets of the old text) are replaced. Only the lines that a replacement
 * touches are looked at; the rest is copied.
 */
export function splicedText({ snapshot, lines }: IndexedText, splices: readonly Splice[]): IndexedText {
  const after = splicedSnapshot(snapshot, splices);
  const old = lines.starts;
  const pieces: {
    readonly starts: ArrayLike<number>;
    readonly from: number;
    readonly to: number;
    readonly shift: number;
  }[] = [];
  let nextLine = 0;
  let shift = 0;
  for (const { firstLine, endLine, growth } of touchedLines(lines, splices)) {
    pieces.push({ starts: old, from: nextLine, to: firstLine, shift });
    const begin = old[firstLine]! + shift;
    shift += growth;
    const within = lineStartsWithin(after, begin, old[endLine]! + shift);
    pieces.push({ starts: within, from: 0, to: within.length, shift: 0 });
    nextLine = endLine;
  }
  pieces.push({ starts: old, from: nextLine, to: lines.count, shift });
  const starts = new Uint32Array(pieces.reduce((sum, { from, to }) => sum + to - from, 1));
  let count = 0;
  for (const piece of pieces) {
    for (let line = piece.from; line < piece.to; line++) starts[count++] = piece.starts[line]! + piece.shift;
  }
  // An empty text has one line.
  if (count === 0) return { snapshot: after, lines: linesFrom(after, Uint32Array.of(0, after.length)) };
  starts[count] = after.length;
  return { snapshot: after, lines: linesFrom(after, starts) };
}

/** Runs of old lines that splices touch, and by how much each run grows. */
interface TouchedLines {
  readonly firstLine: number;
  readonly endLine: number;
  readonly growth: number;
}

function touchedLines(lines: LineIndex, splices: readonly Splice[]): TouchedLines[] {
  const runs: { firstLine: number; endLine: number; growth: number }[] = [];
  for (const { start, end, text } of splices) {
    // A line end may be put together out of a CR before the place and an LF behind it.
    const firstLine = lines.lineAt(Math.max(0, start - 1));
    const endLine = Math.min(lines.count, lines.lineAt(end) + 1);
    const growth = text.length - (end - start);
    const last = runs[runs.length - 1];
    if (last !== undefined && firstLine <= last.endLine) {
      last.endLine = Math.max(last.endLine, endLine);
      last.growth += growth;
    } else runs.push({ firstLine, endLine, growth });
  }
  return runs;
}

const LF = 10;
const CR = 13;

/** Starts of the lines of a piece that begins with one. */
function lineStartsWithin({ bytes, length }: Snapshot, from: number, to: number): number[] {
  const starts: number[] = [];
  let start = from;
  for (let i = from; i < to; i++) {
    const unit = bytes[i]!;
    if (unit !== LF && unit !== CR) continue;
    if (unit === CR && bytes[i + 1] === LF && i + 1 < length) i++;
    starts.push(start);
    start = i + 1;
  }
  if (start < to) starts.push(start);
  return starts;
}

/** The one piece in which two texts differ; all of it where they are not ASCII, and `null` where they are the same. */
export function differenceOf(old: Snapshot, now: Snapshot): Splice | null {
  if (!old.isAscii || !now.isAscii) return { start: 0, end: old.length, text: now.slice(0, now.length) };
  const most = Math.min(old.length, now.length);
  let same = 0;
  while (same < most && old.bytes[same] === now.bytes[same]) same++;
  let tail = 0;
  while (tail < most - same && old.bytes[old.length - 1 - tail] === now.bytes[now.length - 1 - tail]) tail++;
  if (same === old.length && same === now.length) return null;
  return { start: same, end: old.length - tail, text: now.slice(same, now.length - tail) };
}
