import type { Span } from '../../base/span';
import { isBlank, scanNumber } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from './entries';

const COMMA = 44;
const QUOTES = new Set([34, 39]);
/** Brackets, braces and backslash: nesting carries no meaning once a list is flat. */
const BRACKETS = new Set([91, 93, 123, 125, 92]);

function isSeparator(unit: number): boolean {
  return isBlank(unit) || unit === COMMA || QUOTES.has(unit) || BRACKETS.has(unit);
}

/** The items of a list, however it is nested or separated: flat, in order. Linear, whatever the depth. */
export function listItems(snapshot: Snapshot, entry: Entry): Span[] {
  const { bytes } = snapshot;
  const items: Span[] = [];
  const end = entry.inner.end;
  let i = entry.inner.start;
  while (i < end) {
    while (i < end && isSeparator(bytes[i]!)) i++;
    const start = i;
    while (i < end && !isSeparator(bytes[i]!)) i++;
    if (i > start) items.push({ start, end: i });
  }
  return items;
}

/** A list of words; a word in inner quotes may hold blanks. */
export function listWords(snapshot: Snapshot, entry: Entry): Span[] {
  const { bytes } = snapshot;
  const items: Span[] = [];
  const end = entry.inner.end;
  let i = entry.inner.start;
  while (i < end) {
    if (QUOTES.has(bytes[i]!) && entry.form !== 'quoted') {
      const quote = bytes[i]!;
      const start = ++i;
      while (i < end && bytes[i] !== quote) i++;
      items.push({ start, end: i });
      i++;
    } else if (isSeparator(bytes[i]!)) i++;
    else {
      const start = i;
      while (i < end && !isSeparator(bytes[i]!)) i++;
      items.push({ start, end: i });
    }
  }
  return items;
}

/**
 * The groups of a list of lists such as `"1-3 4-6,9"` or `[[1,2,3],[4,5]]`: blanks, quotes and brackets part groups, a comma
 * joins what stands on both its sides unless one of these stands beside it.
 */
export function listGroups(snapshot: Snapshot, entry: Entry): Span[] {
  const { bytes } = snapshot;
  const groups: Span[] = [];
  const end = entry.inner.end;
  let i = entry.inner.start;
  while (i < end) {
    while (i < end && isSeparator(bytes[i]!)) i++;
    const start = i;
    let stop = i;
    while (i < end) {
      const unit = bytes[i]!;
      if (QUOTES.has(unit) || BRACKETS.has(unit)) break;
      if (isBlank(unit)) {
        let next = i;
        while (next < end && isBlank(bytes[next]!)) next++;
        if (bytes[next] !== COMMA && bytes[i - 1] !== COMMA) break;
        i = next;
        continue;
      }
      i++;
      if (unit !== COMMA) stop = i;
    }
    if (stop > start) groups.push({ start, end: stop });
  }
  return groups;
}

/** The whole-line text of a value, without escapes. */
export function valueText(snapshot: Snapshot, entry: Entry): string {
  const text = snapshot.slice(entry.inner.start, entry.inner.end);
  return entry.form === 'quoted' ? text.replace(/\\(.)/g, '$1') : text;
}

/** A number, or NaN with `given` false where the text is `nan`. */
export function itemNumber(snapshot: Snapshot, span: Span): { value: number; readable: boolean } {
  const value = scanNumber(snapshot, span.start, span.end);
  if (Number.isFinite(value)) return { value, readable: true };
  const readable = span.end - span.start === 3 && snapshot.slice(span.start, span.end).toLowerCase() === 'nan';
  return { value: Number.NaN, readable };
}
