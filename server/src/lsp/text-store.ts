import type { Language } from '../formats/tree';
import { indexLines, type LineIndex } from '../text/lines';
import { type Snapshot, snapshotOf } from '../text/snapshot';

/** A place as the protocol gives it: from 0, in UTF-16 units; may lie outside the text. */
export interface PlaceInText {
  readonly line: number;
  readonly character: number;
}

/** A change of a document: a range replaced, or the whole text where there is none. */
export interface TextChange {
  readonly range?: { readonly start: PlaceInText; readonly end: PlaceInText };
  readonly text: string;
}

/** One open document at one version; immutable. */
export interface OpenDocument {
  readonly uri: string;
  readonly language: Language;
  readonly version: number;
  readonly text: string;
  readonly snapshot: Snapshot;
  readonly lines: LineIndex;
}

export function openDocument(uri: string, language: Language, version: number, text: string): OpenDocument {
  const snapshot = snapshotOf(text);
  return { uri, language, version, text, snapshot, lines: indexLines(snapshot) };
}

/** Offset of a place, clamped into the text and onto its line. */
export function offsetOf(document: Pick<OpenDocument, 'lines' | 'text'>, { line, character }: PlaceInText): number {
  const { lines, text } = document;
  if (line < 0) return 0;
  // After a last line end there is one more, empty line for the editor.
  if (line >= lines.count) return text.length;
  return Math.min(lines.starts[line]! + Math.max(0, character), lines.end(line));
}

/**
 * The document after a set of changes. Changes come one after another, each in the text that the one before left; an editor with
 * many cursors sends them from the end of the text to its beginning, and then all are applied at once: the cost is one copy of the
 * text, however many they are.
 */
export function changeDocument(document: OpenDocument, version: number, changes: readonly TextChange[]): OpenDocument {
  const { uri, language } = document;
  const pieces = piecesFromBehind(document, changes);
  if (pieces !== null) return openDocument(uri, language, version, pieces.join(''));
  let current = document;
  for (const change of changes) {
    const text = change.range === undefined ? change.text : replaced(current, change.range, change.text);
    current = openDocument(uri, language, version, text);
  }
  return { ...current, version };
}

function replaced(document: OpenDocument, range: NonNullable<TextChange['range']>, text: string): string {
  const start = offsetOf(document, range.start);
  const end = Math.max(start, offsetOf(document, range.end));
  return document.text.slice(0, start) + text + document.text.slice(end);
}

/** The pieces of the new text where every change lies before the one sent before it, else `null`. */
function piecesFromBehind(document: OpenDocument, changes: readonly TextChange[]): string[] | null {
  const pieces: string[] = [];
  let before = document.text.length;
  for (const { range, text } of changes) {
    if (range === undefined) return null;
    const start = offsetOf(document, range.start);
    const end = Math.max(start, offsetOf(document, range.end));
    if (end > before) return null;
    pieces.push(document.text.slice(end, before), text);
    before = start;
  }
  pieces.push(document.text.slice(0, before));
  return pieces.reverse();
}
