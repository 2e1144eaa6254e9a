import {
  type CompletionItem,
  CompletionItemKind,
  type CompletionList,
  InsertTextFormat,
  MarkupKind,
} from 'vscode-languageserver';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import { type Completion, type CompletionPlace, completionsAt } from '../features/completion';
import { frameAtLine } from '../features/frame-at';
import { atomicNumberOf } from '../physics/elements';
import { scanCount, skipBlanks, skipField, trimEnd } from '../text/numbers';
import type { Analysed } from './analyser';
import { type OpenDocument, offsetOf, type PlaceInText } from './text-store';

const KINDS: Readonly<Record<Completion['kind'], CompletionItemKind>> = {
  key: CompletionItemKind.Property,
  value: CompletionItemKind.EnumMember,
  element: CompletionItemKind.Constant,
  fragment: CompletionItemKind.Class,
  atom: CompletionItemKind.Field,
  snippet: CompletionItemKind.Snippet,
};
/** A line with more before the cursor is not looked at. */
const LONGEST = 100_000;
/** Longer lists are cut to what fits the word, and asked for again as it grows. */
const MOST_ITEMS = 300;
/** Lines in which elements are looked for. */
const LINES_LOOKED_AT = 2000;

/** How a client asks for completion, and what is at hand. */
export interface CompletionAbilities {
  /** The last analysis done, of whatever version of the text. */
  readonly last: Analysed | null;
  readonly isAsked: boolean;
  readonly snippets: boolean;
}

/** What may stand at a place of a document. Needs the text alone; the last analysis, where there is one, lets it say more. */
export function completionItemsAt(
  document: OpenDocument,
  position: PlaceInText,
  { last, isAsked, snippets }: CompletionAbilities,
): CompletionItem[] | CompletionList {
  const { lines, snapshot, language } = document;
  const offset = offsetOf(document, position);
  // Behind a last line end the editor shows one more line, which is empty.
  const line = Math.min(position.line, lines.count);
  const start = line < lines.count ? lines.starts[line]! : snapshot.length;
  if (offset - start > LONGEST) return [];
  const end = line < lines.count ? Math.min(lines.end(line), offset + LONGEST) : offset;
  const place: CompletionPlace = {
    language,
    before: snapshot.slice(start, offset),
    after: snapshot.slice(offset, end),
    line: kindOfLine(document, line),
    isAsked,
    frame: last === null ? null : frameThere(last, document, line),
    elements: () => elementsIn(document),
  };
  const word = { line, offset: offset - start };
  return listOf(completionsAt(place), place.before, (completion, n) => itemOf(completion, n, word, snippets));
}

function listOf(
  completions: readonly Completion[],
  before: string,
  item: (completion: Completion, n: number) => CompletionItem,
): CompletionItem[] | CompletionList {
  if (completions.length <= MOST_ITEMS) return completions.map(item);
  const fitting = completions.filter(({ label, replaced }) => {
    const word = before.slice(before.length - replaced).toLowerCase();
    return label.toLowerCase().includes(word);
  });
  return { isIncomplete: true, items: fitting.slice(0, MOST_ITEMS).map(item) };
}

function itemOf(
  { label, kind, detail, documentation, insert, template, replaced }: Completion,
  n: number,
  { line, offset }: { readonly line: number; readonly offset: number },
  snippets: boolean,
): CompletionItem {
  const isTemplate = snippets && template !== null;
  return {
    label,
    kind: KINDS[kind],
    detail,
    ...(documentation === '' ? {} : { documentation: { kind: MarkupKind.Markdown, value: documentation } }),
    // The order is meant.
    sortText: String(n).padStart(4, '0'),
    ...(isTemplate ? { insertTextFormat: InsertTextFormat.Snippet } : {}),
    textEdit: {
      range: { start: { line, character: offset - replaced }, end: { line, character: offset } },
      newText: isTemplate ? template : insert,
    },
  };
}

function kindOfLine(document: OpenDocument, line: number): CompletionPlace['line'] {
  if (document.language === 'pdb' || line === 0) return 'other';
  if (isCount(document, line - 1)) return 'comment';
  return line === 1 || isCount(document, line) ? 'other' : 'atom';
}

/** Whether a line holds a whole number alone: the next one is then a comment line. */
function isCount({ lines, snapshot }: OpenDocument, line: number): boolean {
  if (line >= lines.count) return false;
  const end = lines.end(line);
  const start = skipBlanks(snapshot.bytes, lines.starts[line]!, end);
  return scanCount(snapshot.bytes, start, trimEnd(snapshot.bytes, start, end)) >= 0;
}

/** The frame that stands at a line, as it was last understood; `null` where that cannot be told or is not at hand. */
function frameThere({ tree, document: then, frames }: Analysed, now: OpenDocument, line: number): FrameAnalysis | null {
  if (now.language !== then.language || tree.frames.length === 0) return null;
  if (now.language === 'pdb' || tree.frames.length === 1) return frames.known(0);
  if (then.lines.count !== now.lines.count) return null;
  const frame = frameAtLine(tree, line);
  return frame === undefined ? null : frames.known(frame.index);
}

/** The elements of the first lines, in the order of their appearance. */
function elementsIn({ lines, snapshot }: OpenDocument): number[] {
  const elements = new Set<number>();
  for (let line = 0; line < Math.min(lines.count, LINES_LOOKED_AT); line++) {
    const end = lines.end(line);
    const start = skipBlanks(snapshot.bytes, lines.starts[line]!, end);
    const stop = skipField(snapshot.bytes, start, end);
    // A lone word is no atom line.
    if (stop - start > 2 || skipBlanks(snapshot.bytes, stop, end) === end) continue;
    const z = atomicNumberOf(snapshot.slice(start, stop));
    if (z > 0) elements.add(z);
  }
  return [...elements];
}
