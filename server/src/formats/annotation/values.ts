import { scanNumber } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from './entries';

/** The type of a value in the extended XYZ convention. */
export type ValueKind = 'int' | 'float' | 'bool' | 'string';

/** A value as the convention types it, or why it is none. */
export type TypedValue =
  | {
      readonly kind: ValueKind;
      readonly shape: readonly number[];
      readonly items: readonly (number | boolean | string)[];
    }
  | { readonly kind: 'invalid'; readonly reason: string };

const INTEGER = /^[+-]?\d+$/;
const TRUE = /^(?:T|[tT]rue|TRUE)$/;
const FALSE = /^(?:F|[fF]alse|FALSE)$/;

/**
 * Types a value by the rules of the extended XYZ convention (libAtoms/extxyz, README, "Extended XYZ specification"): int before
 * float before bool before string; a list takes the widest type of its items; `[a, b]` and `[[a], [b]]` need commas between
 * items, none leading or trailing, and rows of one length; blank-separated lists stand in quotes or braces, and one item there
 * is a scalar.
 */
export function typedValue(snapshot: Snapshot, entry: Entry): TypedValue {
  if (!entry.closed) return { kind: 'invalid', reason: 'The closing quote or bracket is missing.' };
  const text = snapshot.slice(entry.inner.start, entry.inner.end);
  if (entry.form === 'bare') {
    if (text === '') return { kind: 'invalid', reason: 'The value is missing.' };
    if (/["'=,[\]{}\\]/.test(text)) return { kind: 'invalid', reason: 'Such a value must be quoted.' };
    return combine([text], []);
  }
  if (entry.form === 'bracketed') return bracketed(text);
  const words = text.trim().split(/\s+/);
  const simple = words.every((word) => kindOf(word) !== 'string');
  if (entry.form === 'braced' || (simple && words[0] !== ''))
    return combine(words, words.length === 1 ? [] : [words.length]);
  return {
    kind: 'string',
    shape: [],
    items: [text.replace(/\\(.)/g, (_, unit: string) => (unit === 'n' ? '\n' : unit))],
  };
}

function bracketed(text: string): TypedValue {
  const trimmed = text.trim();
  if (!trimmed.startsWith('[')) {
    const items = splitItems(trimmed);
    return items === null
      ? { kind: 'invalid', reason: 'An item is missing beside a comma.' }
      : combine(items, [items.length]);
  }
  const rows: string[][] = [];
  for (const part of trimmed.split(/\]\s*,\s*\[/)) {
    const items = splitItems(part.replace(/^\[/, '').replace(/\]$/, ''));
    if (items === null) return { kind: 'invalid', reason: 'An item is missing beside a comma.' };
    rows.push(items);
  }
  const width = rows[0]!.length;
  if (!trimmed.endsWith(']') || rows.some((row) => row.length !== width)) {
    return { kind: 'invalid', reason: 'The rows of the array differ in length.' };
  }
  return combine(rows.flat(), [rows.length, width]);
}

/** Items between commas, `null` where one is empty or holds a blank outside quotes. */
function splitItems(text: string): string[] | null {
  const items = text.match(/"(?:\\.|[^"\\])*"|[^,]+|,(?=\s*(?:,|$))|^\s*,/g);
  if (items === null) return null;
  const words: string[] = [];
  for (const item of items) {
    const word = item.trim();
    if (word === '' || word.startsWith(',')) return null;
    const quoted = word.startsWith('"') && word.endsWith('"') && word.length > 1;
    if (!quoted && /[\s[\]{}="]/.test(word)) return null;
    words.push(word);
  }
  return words;
}

function kindOf(word: string): ValueKind {
  if (INTEGER.test(word)) return 'int';
  if (isFloat(word)) return 'float';
  return TRUE.test(word) || FALSE.test(word) ? 'bool' : 'string';
}

function isFloat(word: string): boolean {
  return /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[dDeE][+-]?\d+)?$/.test(word);
}

function combine(words: readonly string[], shape: readonly number[]): TypedValue {
  const kinds = new Set(words.map(kindOf));
  let kind: ValueKind = 'string';
  if (kinds.size === 1) kind = [...kinds][0]!;
  else if (kinds.size === 2 && kinds.has('int') && kinds.has('float')) kind = 'float';
  const items = words.map((word) => {
    if (kind === 'bool') return TRUE.test(word);
    if (kind === 'string') return word.replace(/^"(.*)"$/s, '$1').replace(/\\(.)/g, '$1');
    return Number(word.replace(/[dD]/, 'e'));
  });
  return { kind, shape, items };
}

/** Reads `T`/`F` words as a boolean, or `undefined`. */
export function readBoolean(word: string): boolean | undefined {
  if (TRUE.test(word) || word === '1') return true;
  if (FALSE.test(word) || word === '0') return false;
  return undefined;
}

/** A finite number from a whole value, or NaN. */
export function readNumber(snapshot: Snapshot, entry: Entry): number {
  const value = scanNumber(snapshot, entry.inner.start, entry.inner.end);
  return Number.isFinite(value) ? value : Number.NaN;
}
