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

/** A word of a list, and whether it stood in quotes and so is a string whatever it looks like. */
interface Word {
  readonly text: string;
  readonly quoted: boolean;
}

/**
 * Types a value by the rules of the extended XYZ convention (libAtoms/extxyz, README, "Extended XYZ specification"): int before
 * float before bool before string; a list takes the widest type of its items; `[a, b]` and `[[a], [b]]` need commas between
 * items, none leading or trailing, and rows of one length; blank-separated lists stand in braces or, unless of strings, in
 * quotes, and one item there is a scalar.
 */
export function typedValue(snapshot: Snapshot, entry: Entry): TypedValue {
  if (!entry.closed) return invalid('The closing quote or bracket is missing.');
  const text = snapshot.slice(entry.inner.start, entry.inner.end);
  switch (entry.form) {
    case 'bare':
      if (text === '') return invalid('The value is missing.');
      return /["=,[\]{}\\]/.test(text) ? invalid('Such a value must be quoted.') : combine([bare(text)], []);
    case 'bracketed':
      return bracketed(text);
    case 'braced': {
      const words = blankSeparated(text);
      if (words === null || words.length === 0) return invalid('A list in braces needs items parted by blanks.');
      return combine(words, words.length === 1 ? [] : [words.length]);
    }
    case 'quoted': {
      const words = text.trim().split(/\s+/).map(bare);
      const list = combine(words, words.length === 1 ? [] : [words.length]);
      return list.kind === 'string' ? { kind: 'string', shape: [], items: [unescaped(text)] } : list;
    }
  }
}

function invalid(reason: string): TypedValue {
  return { kind: 'invalid', reason };
}

function bare(text: string): Word {
  return { text, quoted: false };
}

function unescaped(text: string): string {
  return text.replace(/\\(.)/gs, (_, unit: string) => (unit === 'n' ? '\n' : unit));
}

/** Pieces of a list: quoted strings, brackets, commas, and runs of anything else that needs no quotes. */
const PIECE = /\s*(?:"((?:\\.|[^"\\])*)"|([[\],])|([^\s"=,[\]{}\\]+))/sy;

type Piece = Word | '[' | ']' | ',';

function piecesOf(text: string): Piece[] | null {
  const pieces: Piece[] = [];
  PIECE.lastIndex = 0;
  const end = text.trimEnd().length;
  while (PIECE.lastIndex < end) {
    const match = PIECE.exec(text);
    if (match === null) return null;
    if (match[1] !== undefined) pieces.push({ text: unescaped(match[1]), quoted: true });
    else pieces.push((match[2] as '[' | ']' | ',' | undefined) ?? bare(match[3]!));
  }
  return pieces;
}

function blankSeparated(text: string): Word[] | null {
  const pieces = piecesOf(text);
  return pieces?.every((piece): piece is Word => typeof piece !== 'string') ? pieces : null;
}

/** The inside of `[…]`: one row of items, or rows in brackets of their own. */
function bracketed(text: string): TypedValue {
  const pieces = piecesOf(text);
  if (pieces === null) return invalid('An item must be quoted.');
  if (pieces[0] !== '[') {
    const row = commaSeparated(pieces);
    return row === null ? invalid('Items must be parted by single commas.') : combine(row, [row.length]);
  }
  const rows: Word[][] = [];
  for (let at = 0; at < pieces.length; ) {
    const close = pieces.indexOf(']', at);
    const row = pieces[at] === '[' && close > at ? commaSeparated(pieces.slice(at + 1, close)) : null;
    if (row === null) return invalid('Rows must be lists in brackets, parted by single commas.');
    rows.push(row);
    at = close + 1;
    if (at === pieces.length) break;
    if (pieces[at] !== ',' || at + 1 === pieces.length) return invalid('Rows must be parted by single commas.');
    at++;
  }
  const width = rows[0]!.length;
  if (rows.some((row) => row.length !== width)) return invalid('The rows of the array differ in length.');
  return combine(rows.flat(), [rows.length, width]);
}

function commaSeparated(pieces: readonly Piece[]): Word[] | null {
  const words: Word[] = [];
  if (pieces.length % 2 === 0) return null;
  for (const [k, piece] of pieces.entries()) {
    if (k % 2 === 1 ? piece !== ',' : typeof piece === 'string') return null;
    if (typeof piece !== 'string') words.push(piece);
  }
  return words;
}

function kindOfWord({ text, quoted }: Word): ValueKind {
  return quoted ? 'string' : kindOf(text);
}

function kindOf(word: string): ValueKind {
  if (INTEGER.test(word)) return 'int';
  if (isFloat(word)) return 'float';
  return TRUE.test(word) || FALSE.test(word) ? 'bool' : 'string';
}

function isFloat(word: string): boolean {
  return /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[dDeE][+-]?\d+)?$/.test(word);
}

function combine(words: readonly Word[], shape: readonly number[]): TypedValue & { kind: ValueKind } {
  const kinds = new Set(words.map(kindOfWord));
  let kind: ValueKind = 'string';
  if (kinds.size === 1) kind = [...kinds][0]!;
  else if (kinds.size === 2 && kinds.has('int') && kinds.has('float')) kind = 'float';
  const items = words.map(({ text }) => {
    if (kind === 'bool') return TRUE.test(text);
    return kind === 'string' ? text : Number(text.replace(/[dD]/, 'e'));
  });
  return { kind, shape, items };
}

/** Reads `T`/`F` words as a boolean, or `undefined`. */
export function readBoolean(word: string): boolean | undefined {
  if (TRUE.test(word) || word === '1') return true;
  if (FALSE.test(word) || word === '0') return false;
  return undefined;
}
