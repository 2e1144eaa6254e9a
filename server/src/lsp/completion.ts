import { type CompletionItem, CompletionItemKind } from 'vscode-languageserver';
import { completionsAfter } from '../features/completion';
import { scanCount, skipBlanks, trimEnd } from '../text/numbers';
import { type OpenDocument, offsetOf, type PlaceInText } from './text-store';

const KINDS = { key: CompletionItemKind.Property, value: CompletionItemKind.EnumMember } as const;
/** A line with more before the cursor is not looked at. */
const LONGEST = 100_000;

/** The keys and values that may stand at a place of a document. */
export function completionItemsAt(document: OpenDocument, place: PlaceInText): CompletionItem[] {
  const { lines, snapshot, language } = document;
  const offset = offsetOf(document, place);
  const line = lines.lineAt(offset);
  const start = lines.starts[line]!;
  if (offset - start > LONGEST) return [];
  const before = snapshot.slice(start, offset);
  return completionsAfter(before, language, isBehindCount(document, line)).map(
    ({ label, kind, detail, insert, replaced }) => ({
      label,
      kind: KINDS[kind],
      detail,
      textEdit: {
        range: { start: { line, character: offset - start - replaced }, end: { line, character: offset - start } },
        newText: insert,
      },
    }),
  );
}

/** Whether the line before holds a whole number alone: then this one is a comment line. */
function isBehindCount({ lines, snapshot }: OpenDocument, line: number): boolean {
  if (line === 0) return false;
  const end = lines.end(line - 1);
  const start = skipBlanks(snapshot.bytes, lines.starts[line - 1]!, end);
  return scanCount(snapshot.bytes, start, trimEnd(snapshot.bytes, start, end)) >= 0;
}
