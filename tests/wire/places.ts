import type { Position, Range } from 'vscode-languageserver-protocol';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';

/** Where a piece of a text begins, or the `nth` such piece (from 0), moved by some units. */
export function placeOf(text: string, piece: string, { nth = 0, into = 0 } = {}): Position {
  let at = text.indexOf(piece);
  for (let k = 0; k < nth && at >= 0; k++) at = text.indexOf(piece, at + 1);
  if (at < 0) throw new Error(`There is no ${piece}`);
  const { line, column } = indexLines(snapshotOf(text)).positionAt(at + into);
  return { line, character: column };
}

/** The offset of a position; NaN where the text has no such place. */
export function offsetIn(text: string, { line, character }: Position): number {
  const lines = indexLines(snapshotOf(text));
  if (line === lines.count && character === 0) return text.length;
  if (line < 0 || line >= lines.count || character < 0) return Number.NaN;
  const offset = lines.starts[line]! + character;
  return offset <= lines.end(line) ? offset : Number.NaN;
}

/** What stands in a range; the range must lie inside the text. */
export function textIn(text: string, { start, end }: Range): string {
  const [from, to] = [offsetIn(text, start), offsetIn(text, end)];
  if (Number.isNaN(from) || Number.isNaN(to) || from > to) throw new Error('The range lies outside the text.');
  return text.slice(from, to);
}

/** The text after edits of it, given as ranges and new texts. */
export function edited(text: string, edits: readonly { readonly range: Range; readonly newText: string }[]): string {
  return [...edits]
    .sort((a, b) => offsetIn(text, b.range.start) - offsetIn(text, a.range.start))
    .reduce((result, { range, newText }) => {
      return result.slice(0, offsetIn(text, range.start)) + newText + result.slice(offsetIn(text, range.end));
    }, text);
}
