import type { FindingDetail, Fix } from '../../base/finding';
import type { LineIndex } from '../../text/lines';
import { isBlank, trimEnd } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from './entries';
import { listGroups, listItems, listWords } from './lists';

const QUOTES = new Set([34, 39]);

/** Takes an entry out of its line with the blanks before it, or those after it where it is the first thing there. */
export function removal({ bytes, length }: Snapshot, entry: Entry): Fix {
  let start = entry.keySpan.start;
  if (QUOTES.has(bytes[start - 1]!) && bytes[entry.keySpan.end] === bytes[start - 1]) start--;
  let end = entry.value.end;
  let blanksFrom = start;
  while (blanksFrom > 0 && isBlank(bytes[blanksFrom - 1]!)) blanksFrom--;
  const isFirst = blanksFrom === 0 || bytes[blanksFrom - 1] === 10 || bytes[blanksFrom - 1] === 13;
  if (isFirst) while (end < length && isBlank(bytes[end]!)) end++;
  else start = blanksFrom;
  return { title: `Remove the second ${entry.key}`, edits: [{ start, end, text: '' }] };
}

/** Takes a whole line out. */
export function lineRemoval(lines: LineIndex, line: number): Fix {
  const edits = [{ start: lines.starts[line]!, end: lines.starts[line + 1]!, text: '' }];
  return { title: 'Remove the second line', edits };
}

/** Keys whose lists are of groups, in which commas join. */
const GROUPED: ReadonlySet<string> = new Set(['fragment_atoms', 'fragment_axes', 'kind_axes', 'kind_dipole_sizes']);

/** Writes a value flat and in double quotes; one that was not closed ends before the next key. */
export function portable(text: Snapshot, entry: Entry): FindingDetail {
  const { inner, value } = entry;
  if (inner.end === inner.start) return {};
  const end = entry.closed ? inner.end : endOfUnclosed(text, entry);
  const known: Entry = { ...entry, inner: { start: inner.start, end } };
  const isGrouped = GROUPED.has(entry.key);
  const items = isGrouped
    ? listGroups(text, known)
    : entry.key.endsWith('names')
      ? listWords(text, known)
      : listItems(text, known);
  const words = items.map((item) => text.slice(item.start, item.end));
  const pieces = isGrouped ? words.map((word) => word.replace(/\s*,\s*/g, ',')) : words;
  // A name that holds a blank can stand in no flat list.
  if (pieces.length === 0 || pieces.some((word) => /[\s"\\]/.test(word))) return {};
  const last = entry.closed ? value.end : end;
  const edits = [{ start: value.start, end: last, text: `"${pieces.join(' ')}"` }];
  return { fix: { title: entry.closed ? 'Write it flat and quoted' : 'Close it, flat and quoted', edits } };
}

function endOfUnclosed(text: Snapshot, { inner }: Entry): number {
  const words = text.slice(inner.start, inner.end);
  const next = /\s+[A-Za-z_]\w*\s*=/.exec(words);
  return trimEnd(text.bytes, inner.start, next === null ? inner.end : inner.start + next.index);
}
