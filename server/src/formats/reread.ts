import type { Finding } from '../base/finding';
import type { Span } from '../base/span';
import type { IndexedText, Splice } from '../text/splice';
import type { AtomReading, CoordinateTree, FrameTree } from './tree';

/** An atom whose numbers differ from those of the table. */
export interface AtomChange {
  /** Index in the frame. */
  readonly atom: number;
  readonly reading: AtomReading;
}

/** What an edit changed in a file of one frame. */
export interface Reread {
  /** The file as it reads now, but for the table of atoms, which holds what it held: the changes are to be written into it. */
  readonly tree: CoordinateTree;
  readonly changes: readonly AtomChange[];
  readonly linesRead: number;
}

/** An edit of more lines is read afresh. */
const MOST_LINES = 2000;

/**
 * Reads a file of one frame again after an edit: only the lines that it touched, where they are atom lines before and after, with
 * nothing but numbers changed and nothing to be said of them. Returns `null` wherever the edit may mean more than that; the file is then
 * to be parsed.
 *
 * @param text the text after the edit
 * @param splices what was replaced, in offsets of the old text
 */
export function reread(old: CoordinateTree, text: IndexedText, splices: readonly Splice[]): Reread | null {
  const [frame, ...others] = old.frames;
  if (frame === undefined || others.length > 0 || old.lines.count !== text.lines.count) return null;
  const firstMoved = splices.find(({ start, end, text: by }) => by.length !== end - start)?.start;
  if (firstMoved !== undefined && marks(old, frame).some((span) => span.end > firstMoved)) return null;
  const touched = touchedLines(old, text, splices);
  if (touched === null) return null;
  const now = frame.inText(text.snapshot, text.lines);
  const changes: AtomChange[] = [];
  for (const line of touched) {
    const atom = atomAtLine(frame, line);
    if (atom < 0) return null;
    const before = frame.readAtom(atom);
    const reading = now.readAtom(atom);
    if (before === null || reading === null || before.rest !== reading.rest) return null;
    if (!areSameNumbers(before, reading)) changes.push({ atom, reading });
  }
  const problems = shiftedFindings(old.problems, splices);
  if (problems === null) return null;
  const tree = { ...old, text: text.snapshot, lines: text.lines, frames: [now], problems };
  return { tree, changes, linesRead: 2 * touched.length };
}

/** Places in the text that are kept in the tree besides its problems. */
function marks(tree: CoordinateTree, frame: FrameTree): Span[] {
  const remarks = tree.remarks.flatMap(({ selectorSpan, entries }) => [
    selectorSpan,
    ...entries.map((entry) => entry.value),
  ]);
  return [...remarks, ...frame.entries.map((entry) => entry.value), ...(frame.cell === null ? [] : [frame.cell.span])];
}

/** The lines that splices touch, ascending; `null` where they are many, or a splice leaves another number of lines behind. */
function touchedLines({ lines }: CoordinateTree, { lines: now }: IndexedText, splices: readonly Splice[]) {
  const touched: number[] = [];
  let shift = 0;
  for (const { start, end, text } of splices) {
    const first = lines.lineAt(start);
    const last = lines.lineAt(end);
    if (now.lineAt(start + shift) !== first || now.lineAt(start + shift + text.length) !== last) return null;
    shift += text.length - (end - start);
    if (last - first + touched.length > MOST_LINES) return null;
    for (let line = Math.max(first, (touched[touched.length - 1] ?? -1) + 1); line <= last; line++) touched.push(line);
  }
  return touched;
}

/** Index of the atom on a line, or −1. Lines of atoms ascend. */
export function atomAtLine({ atoms }: FrameTree, line: number): number {
  let low = 0;
  let high = atoms.count - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    if (atoms.line[middle]! < line) low = middle + 1;
    else if (atoms.line[middle]! > line) high = middle - 1;
    else return middle;
  }
  return -1;
}

function areSameNumbers(a: AtomReading, b: AtomReading): boolean {
  const numbers = ({ positionA, chargeE, dipoleEA }: AtomReading) => [...positionA, chargeE, ...(dipoleEA ?? [])];
  const others = numbers(b);
  return numbers(a).every((value, k) => Object.is(value, others[k]));
}

/** Findings moved to where their places are after an edit; `null` where one speaks of a place that was edited. */
function shiftedFindings(findings: readonly Finding[], splices: readonly Splice[]): readonly Finding[] | null {
  if (findings.length === 0) return findings;
  let isClear = true;
  const shifted = <T extends Span>(span: T): T => {
    let by = 0;
    for (const { start, end, text } of splices) {
      if (span.end < start) break;
      if (span.start <= end) isClear = false;
      by += text.length - (end - start);
    }
    return by === 0 ? span : { ...span, start: span.start + by, end: span.end + by };
  };
  const moved = findings.map((entry) => ({
    ...shifted(entry),
    related: entry.related.map(shifted),
    ...(entry.fix === undefined ? {} : { fix: { ...entry.fix, edits: entry.fix.edits.map(shifted) } }),
  }));
  return isClear ? moved : null;
}
