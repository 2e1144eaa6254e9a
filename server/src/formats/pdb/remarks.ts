import type { FindingCollector } from '../../base/finding';
import type { Span } from '../../base/span';
import type { LineIndex } from '../../text/lines';
import type { Snapshot } from '../../text/snapshot';
import type { IndexedText } from '../../text/splice';
import { type Entry, scanEntries } from '../annotation/entries';
import { lineRemoval, removal } from '../annotation/entry-fixes';
import { FILE_KEYS, likelyKey, SELECTED_KEYS } from '../annotation/keys';
import { valueText } from '../annotation/lists';
import { meantSelector, replacement } from '../annotation/meant';
import { reportKeys } from '../annotation/report-keys';
import type { FrameTree, RemarkAnnotation, Residue, Selector } from '../tree';
import { decodeHybrid36 } from './hybrid36';
import { nearestSelector } from './nearest-selector';

const FIRST_FREE_REMARK = 6;
const LAST_FREE_REMARK = 99;
/** Column of the text of a REMARK, from 0. */
const TEXT_COLUMN = 11;

const KNOWN = new Set<string>([...SELECTED_KEYS, ...FILE_KEYS]);

/**
 * Reads the annotation in one REMARK line, or `null` where the line is none: its number is outside the free range 6–99, or none
 * of its keys is ours.
 */
export function readRemark(
  text: Snapshot,
  lines: LineIndex,
  line: number,
  problems: FindingCollector,
): RemarkAnnotation | null {
  const lineStart = lines.starts[line]!;
  const lineEnd = lines.end(line);
  if (lineEnd <= lineStart + TEXT_COLUMN) return null;
  const number = Number(text.slice(lineStart + 6, lineStart + 10));
  if (!(number >= FIRST_FREE_REMARK && number <= LAST_FREE_REMARK)) return null;
  const entries = scanEntries(text, lineStart + TEXT_COLUMN - 1, lineEnd);
  if (!entries.some(({ key }) => KNOWN.has(key) || likelyKey(key, [...KNOWN]) !== undefined)) return null;
  const selectorEntry = entries.find((entry) => entry.key === 'fragment');
  const known: readonly string[] = selectorEntry === undefined ? FILE_KEYS : SELECTED_KEYS;
  reportKeys(text, entries, known, problems);
  const rest = entries.filter((entry) => entry.key !== 'fragment');
  if (selectorEntry === undefined) {
    return { line, selector: null, selectorSpan: { start: lineStart, end: lineEnd }, entries: rest };
  }
  const selector = parseSelector(valueText(text, selectorEntry));
  if (selector === null) {
    problems.add(
      'value-invalid',
      selectorEntry.value,
      () => 'A selector is chain:residue:number with an optional insertion code.',
      () => replacement(selectorEntry.inner, meantSelector(valueText(text, selectorEntry).slice(0, 40))),
    );
    return null;
  }
  return { line, selector, selectorSpan: selectorEntry.value, entries: rest };
}

/** Parses `chain:residue:number[insertion]`; `*` for any, `_` for a blank chain. `null` where it is no selector. */
export function parseSelector(text: string): Selector | null {
  const parts = text.split(':');
  if (parts.length !== 3) return null;
  const [chain, name, place] = parts.map((part) => part.trim()) as [string, string, string];
  if (chain === '' || name === '' || place === '') return null;
  const any = place === '*';
  const match = /^(-?\d+|[A-Za-z][0-9A-Za-z]{3})([A-Za-z]?)$/.exec(place);
  if (!any && match === null) return null;
  const number = any ? null : decodeHybrid36(match![1]!.length < 4 ? match![1]!.padStart(4) : match![1]!, 4);
  return {
    chain: chain === '*' ? null : chain === '_' ? '' : chain,
    name: name === '*' ? null : name,
    number,
    insertion: any ? null : match![2]!,
  };
}

/** Whether a selector takes a residue in. */
export function selectorMatches(selector: Selector, residue: Residue): boolean {
  return (
    (selector.chain === null || selector.chain === residue.chain) &&
    (selector.name === null || selector.name === residue.name) &&
    (selector.number === null || selector.number === residue.number) &&
    (selector.insertion === null || selector.insertion === residue.insertion)
  );
}

/** How exact a selector is: a number outweighs a name, a name a chain. */
export function selectorWeight(selector: Selector): number {
  return (selector.number === null ? 0 : 4) + (selector.name === null ? 0 : 2) + (selector.chain === null ? 0 : 1);
}

/** Reports selectors that match nothing in any model, and keys given twice for one selector on different lines. */
export function checkRemarks(
  remarks: readonly RemarkAnnotation[],
  frames: readonly FrameTree[],
  { snapshot: text, lines }: IndexedText,
  problems: FindingCollector,
): void {
  const first = new Map<string, { line: number; entry: Entry }>();
  const residues = residuesByNumber(remarks.some(({ selector }) => selector !== null) ? frames : []);
  for (const { line, selector, selectorSpan, entries } of remarks) {
    if (selector !== null && !isMatched(selector, residues)) {
      problems.add(
        'selector-unmatched',
        selectorSpan,
        () =>
          `No fragment of the file is ${text.slice(selectorSpan.start, Math.min(selectorSpan.end, selectorSpan.start + 60))}.`,
        () => replacement(innerOf(text, selectorSpan), nearestSelector(selector, residues.get(null)!)),
      );
    }
    const owner = JSON.stringify(selector);
    for (const entry of entries) {
      if (!KNOWN.has(entry.key)) continue;
      const id = `${owner} ${entry.key}`;
      const earlier = first.get(id);
      if (earlier === undefined) first.set(id, { line, entry });
      else if (earlier.line !== line) {
        problems.add(
          'key-repeated',
          entry.keySpan,
          () =>
            `"${entry.key}" is given on line ${earlier.line + 1} and again on line ${line + 1} for the same fragments; the first one is used.`,
          () => ({
            related: [{ ...earlier.entry.keySpan, message: 'The first one stands here.' }],
            fix: isAlone(text, lines, line, entry) ? lineRemoval(lines, line) : removal(text, entry),
          }),
        );
      }
    }
  }
}

/** Whether a remark says nothing but one thing of its fragments. */
function isAlone(text: Snapshot, lines: LineIndex, line: number, { keySpan, value }: Entry): boolean {
  const before = text.slice(lines.starts[line]! + TEXT_COLUMN - 1, keySpan.start);
  const after = text.slice(value.end, lines.end(line));
  return /^["'\s]*(?:fragment["']?\s*=\s*(?:"[^"]*"|'[^']*'|\S+)\s*)?$/.test(`${before} ${after}`);
}

/** One of each different residue of a file by its number, and all of them under null. */
function residuesByNumber(frames: readonly FrameTree[]): Map<number | null, Residue[]> {
  const seen = new Set<string>();
  const byNumber = new Map<number | null, Residue[]>([[null, []]]);
  for (const residue of frames.flatMap((frame) => frame.residues ?? [])) {
    const id = `${residue.chain}:${residue.name}:${residue.number}${residue.insertion}`;
    if (seen.has(id)) continue;
    seen.add(id);
    byNumber.get(null)!.push(residue);
    const list = byNumber.get(residue.number);
    if (list === undefined) byNumber.set(residue.number, [residue]);
    else list.push(residue);
  }
  return byNumber;
}

/** A value without the quotes around it. */
function innerOf({ bytes }: Snapshot, { start, end }: Span): Span {
  const isQuoted = end - start > 1 && (bytes[start] === 34 || bytes[start] === 39) && bytes[end - 1] === bytes[start];
  return isQuoted ? { start: start + 1, end: end - 1 } : { start, end };
}

function isMatched(selector: Selector, residues: ReadonlyMap<number | null, readonly Residue[]>): boolean {
  return (residues.get(selector.number) ?? []).some((residue) => selectorMatches(selector, residue));
}
