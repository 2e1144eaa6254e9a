import type { Language } from '../formats/tree';
import { indexLines } from '../text/lines';
import { snapshotOf } from '../text/snapshot';
import { type IndexedText, type Splice, splicedText } from '../text/splice';

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
export interface OpenDocument extends IndexedText {
  readonly uri: string;
  readonly language: Language;
  readonly version: number;
  /** Rises by one with every change of an open document. */
  readonly serial: number;
  /** What was done to the version before, where it can be told in pieces of that; `null` for a text given whole. */
  readonly splices: readonly Splice[] | null;
}

/** What was done to one version of a document to make the next; `null` where another lies between, or it is not known. */
export function splicesSince(earlier: OpenDocument, document: OpenDocument): readonly Splice[] | null {
  return document.serial === earlier.serial + 1 ? document.splices : null;
}

export function openDocument(uri: string, language: Language, version: number, text: string): OpenDocument {
  const snapshot = snapshotOf(text);
  return { uri, language, version, snapshot, lines: indexLines(snapshot), serial: 0, splices: null };
}

/** Offset of a place, clamped into the text and onto its line. */
export function offsetOf({ lines, snapshot }: IndexedText, { line, character }: PlaceInText): number {
  if (line < 0) return 0;
  // After a last line end there is one more, empty line for the editor.
  if (line >= lines.count) return snapshot.length;
  return Math.min(lines.starts[line]! + Math.max(0, character), lines.end(line));
}

/**
 * The document after a set of changes. Changes come one after another, each in the text that the one before left; an editor with
 * many cursors sends them from the end of the text to its beginning, and then all are applied at once: the cost is one copy of the
 * text, however many they are.
 */
export function changeDocument(document: OpenDocument, version: number, changes: readonly TextChange[]): OpenDocument {
  const { uri, language } = document;
  const serial = document.serial + 1;
  const splices = splicesFromBehind(document, changes);
  if (splices !== null) return { uri, language, version, serial, ...splicedText(document, splices), splices };
  let current: IndexedText = document;
  for (const { range, text } of changes) {
    if (range === undefined) current = openDocument(uri, language, version, text);
    else current = splicedText(current, [spliceOf(current, range, text)]);
  }
  const { snapshot, lines } = current;
  return { uri, language, version, serial, snapshot, lines, splices: null };
}

function spliceOf(document: IndexedText, range: NonNullable<TextChange['range']>, text: string): Splice {
  const start = offsetOf(document, range.start);
  return { start, end: Math.max(start, offsetOf(document, range.end)), text };
}

/** The changes as pieces of the old text, ascending, where every one lies before the one sent before it, else `null`. */
function splicesFromBehind(document: OpenDocument, changes: readonly TextChange[]): Splice[] | null {
  const splices: Splice[] = [];
  let before = document.snapshot.length;
  for (const { range, text } of changes) {
    if (range === undefined) return null;
    const splice = spliceOf(document, range, text);
    if (splice.end > before) return null;
    splices.push(splice);
    before = splice.start;
  }
  return splices.reverse();
}
