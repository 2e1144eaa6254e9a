import type { Span } from '../../base/span';
import { isBlank, skipBlanks } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';

/** How a value is written. */
export type ValueForm = 'bare' | 'quoted' | 'braced' | 'bracketed';

/** One `key=value` of an annotation. */
export interface Entry {
  readonly key: string;
  readonly keySpan: Span;
  /** The value without its outer quotes, braces or brackets. */
  readonly inner: Span;
  /** The value with them. */
  readonly value: Span;
  readonly form: ValueForm;
  /** False where the closing quote, brace or bracket is missing: the value then runs to the end of the line. */
  readonly closed: boolean;
}

const DOUBLE_QUOTE = 34;
const SINGLE_QUOTE = 39;
const EQUALS = 61;
const BACKSLASH = 92;
const OPEN_BRACKET = 91;
const CLOSE_BRACKET = 93;
const OPEN_BRACE = 123;
const CLOSE_BRACE = 125;

/** Longest key; a longer run of characters before `=` is free text. */
const LONGEST_KEY = 200;

/**
 * Finds the `key=value` pairs in one line of free text. Blanks may stand around the `=`; keys are bare or quoted; values are
 * bare, quoted, in braces or in (nested) brackets. Everything else is free text and passed over. Total and linear.
 */
export function scanEntries(snapshot: Snapshot, start: number, end: number): Entry[] {
  const { bytes } = snapshot;
  const entries: Entry[] = [];
  let i = skipBlanks(bytes, start, end);
  while (i < end) {
    let keyStart = i;
    let keyEnd: number;
    const first = bytes[i]!;
    if (first === DOUBLE_QUOTE || first === SINGLE_QUOTE) {
      const close = closingQuote(bytes, i, end);
      keyStart = i + 1;
      keyEnd = close < 0 ? i + 1 : close;
      i = close < 0 ? i + 1 : close + 1;
    } else {
      while (i < end && !isBlank(bytes[i]!) && bytes[i] !== EQUALS) i++;
      keyEnd = i;
    }
    const equals = skipBlanks(bytes, i, end);
    if (equals >= end || bytes[equals] !== EQUALS) {
      i = Math.max(equals, i);
      continue;
    }
    const valueStart = skipBlanks(bytes, equals + 1, end);
    if (keyEnd === keyStart || keyEnd - keyStart > LONGEST_KEY) {
      i = valueStart;
      continue;
    }
    const entry = scanValue(snapshot, keyStart, keyEnd, valueStart, end);
    entries.push(entry);
    i = skipBlanks(bytes, entry.value.end, end);
  }
  return entries;
}

function scanValue(snapshot: Snapshot, keyStart: number, keyEnd: number, start: number, end: number): Entry {
  const { bytes } = snapshot;
  const first = start < end ? bytes[start]! : 0;
  let form: ValueForm = 'bare';
  let close = -1;
  if (first === DOUBLE_QUOTE || first === SINGLE_QUOTE) {
    form = 'quoted';
    close = closingQuote(bytes, start, end);
  } else if (first === OPEN_BRACE) {
    form = 'braced';
    close = closingBracket(bytes, start, end, OPEN_BRACE, CLOSE_BRACE);
  } else if (first === OPEN_BRACKET) {
    form = 'bracketed';
    close = closingBracket(bytes, start, end, OPEN_BRACKET, CLOSE_BRACKET);
  }
  const key = snapshot.slice(keyStart, keyEnd);
  const keySpan = { start: keyStart, end: keyEnd };
  if (form === 'bare') {
    let stop = start;
    while (stop < end && !isBlank(bytes[stop]!)) stop++;
    return { key, keySpan, inner: { start, end: stop }, value: { start, end: stop }, form, closed: true };
  }
  const closed = close >= 0;
  const innerEnd = closed ? close : end;
  return {
    key,
    keySpan,
    inner: { start: start + 1, end: innerEnd },
    value: { start, end: closed ? close + 1 : end },
    form,
    closed,
  };
}

function closingQuote(bytes: Uint8Array, open: number, end: number): number {
  const quote = bytes[open]!;
  for (let i = open + 1; i < end; i++) {
    if (bytes[i] === BACKSLASH) i++;
    else if (bytes[i] === quote) return i;
  }
  return -1;
}

function closingBracket(bytes: Uint8Array, open: number, end: number, opening: number, closing: number): number {
  let depth = 0;
  for (let i = open; i < end; i++) {
    const unit = bytes[i]!;
    if (unit === DOUBLE_QUOTE) {
      const close = closingQuote(bytes, i, end);
      if (close < 0) return -1;
      i = close;
    } else if (unit === opening) depth++;
    else if (unit === closing && --depth === 0) return i;
  }
  return -1;
}
