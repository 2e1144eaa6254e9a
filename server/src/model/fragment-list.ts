import type { FindingCollector, FindingDetail } from '../base/finding';
import type { Span } from '../base/span';
import type { Entry } from '../formats/annotation/entries';
import { listGroups } from '../formats/annotation/lists';
import type { FrameTree } from '../formats/tree';
import { scanCount } from '../text/numbers';
import type { Snapshot } from '../text/snapshot';

const COMMA = 44;
const DASH = 45;
const BLANK = 32;

/**
 * Reads `fragment_atoms`: groups of atom numbers and ranges (`1-3 4-6,9`). Returns the group of each atom, −1 where it is in none.
 * Reports numbers that are no atoms, atoms listed twice (they stay in the first), and atoms left out.
 */
export function readFragmentAtoms(
  text: Snapshot,
  frame: FrameTree,
  entry: Entry,
  problems: FindingCollector,
): Int32Array {
  const count = frame.atoms.count;
  const labels = new Int32Array(count).fill(-1);
  const free = new FreeList(count);
  let label = 0;
  for (const group of listGroups(text, entry)) {
    for (const { span, from, to } of rangesOf(text, group)) {
      if (!(from >= 1 && to >= from && to <= count)) {
        const written = text.slice(span.start, Math.min(span.end, span.start + 30));
        problems.add('value-invalid', span, () => {
          return `"${written}" in fragment_atoms is no atom number or range between 1 and ${count}.`;
        });
        continue;
      }
      let taken = -1;
      let expected = from - 1;
      const kept: Range[] = [];
      for (let atom = free.next(expected); atom < to; atom = free.next(atom)) {
        if (taken < 0 && atom > expected) taken = expected;
        addTo(kept, atom + 1);
        expected = atom + 1;
        labels[atom] = label;
        free.take(atom);
      }
      if (taken < 0 && expected < to) taken = expected;
      if (taken < 0) continue;
      problems.add(
        'fragments-overlap',
        span,
        () => `Atom ${taken + 1} is listed already.`,
        () => overlapFix(text, group, span, kept),
      );
    }
    label++;
  }
  let left = 0;
  let firstLeft = -1;
  for (let atom = 0; atom < count; atom++) {
    if (labels[atom]! >= 0) continue;
    left++;
    if (firstLeft < 0) firstLeft = atom;
  }
  if (left > 0) {
    problems.add('atoms-ungrouped', entry.value, () => {
      return `${left} atom${left === 1 ? ' is' : 's are'} in no fragment, the first one atom ${firstLeft + 1}.`;
    });
  }
  return labels;
}

interface Range {
  from: number;
  to: number;
}

/** A list with more pieces is not written anew. */
const MOST_PIECES = 40;

/** Puts a number behind others, in runs; past a few pieces they are only counted. */
function addTo(ranges: Range[], number: number): void {
  const last = ranges[ranges.length - 1];
  if (last !== undefined && last.to === number - 1) last.to = number;
  else if (ranges.length <= MOST_PIECES) ranges.push({ from: number, to: number });
}

/** Leaves of a range the atoms that are in no earlier fragment; with none left the range goes, and with it its comma. */
function overlapFix(text: Snapshot, group: Span, span: Span, kept: readonly Range[]): FindingDetail {
  if (kept.length > MOST_PIECES) return {};
  const title = 'Leave the atoms to the first fragment';
  const words = kept.map(({ from, to }) => (from === to ? String(from) : `${from}-${to}`)).join(',');
  if (words !== '') return { fix: { title, edits: [{ ...span, text: words }] } };
  let { start, end } = span;
  const isSeparator = (unit: number | undefined) => unit === COMMA || unit === BLANK;
  while (end < group.end && isSeparator(text.bytes[end])) end++;
  if (end === group.end) while (start > group.start && isSeparator(text.bytes[start - 1])) start--;
  // A group that is left without atoms goes with the blank before it; in brackets it would leave them empty.
  if (start === group.start && end === group.end) {
    if (text.bytes[start - 1] !== BLANK) return {};
    start--;
  }
  return { fix: { title, edits: [{ start, end, text: '' }] } };
}

/** Which of the first `count` numbers are not taken yet; skips over taken ones in almost constant time. */
class FreeList {
  readonly #next: Int32Array;

  constructor(count: number) {
    this.#next = Int32Array.from({ length: count + 1 }, (_, i) => i);
  }

  /** The first free number from `i` on, or the count where there is none. */
  next(i: number): number {
    const next = this.#next;
    let at = i;
    while (next[at] !== at) {
      next[at] = next[next[at]!]!;
      at = next[at]!;
    }
    return at;
  }

  take(i: number): void {
    this.#next[i] = i + 1;
  }
}

/** The atom indices that ranges of atom numbers cover, each once, ascending. */
export function atomsInRanges(ranges: readonly { from: number; to: number }[]): number[] {
  const atoms: number[] = [];
  let next = 0;
  for (const { from, to } of [...ranges].sort((a, b) => a.from - b.from)) {
    for (let atom = Math.max(next, from - 1); atom < to; atom++) atoms.push(atom);
    next = Math.max(next, to);
  }
  return atoms;
}

/** The numbers and ranges of one group; NaN-like −1 where one is unreadable. */
export function rangesOf(text: Snapshot, group: Span): { span: Span; from: number; to: number }[] {
  const { bytes } = text;
  const ranges: { span: Span; from: number; to: number }[] = [];
  let i = group.start;
  while (i < group.end) {
    while (i < group.end && (bytes[i] === COMMA || bytes[i] === BLANK)) i++;
    const start = i;
    while (i < group.end && bytes[i] !== COMMA && bytes[i] !== BLANK) i++;
    if (i === start) continue;
    let dash = start;
    while (dash < i && bytes[dash] !== DASH) dash++;
    const from = scanCount(bytes, start, dash);
    const to = dash < i ? scanCount(bytes, dash + 1, i) : from;
    ranges.push({ span: { start, end: i }, from, to });
  }
  return ranges;
}
