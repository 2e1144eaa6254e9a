import { type DocumentSymbol, type FoldingRange, SymbolKind } from 'vscode-languageserver';
import type { OutlineEntry } from '../features/outline';
import type { CoordinateTree } from '../formats/tree';
import type { LineIndex } from '../text/lines';
import { rangeOf } from './diagnostics';

const KINDS = { frame: SymbolKind.Namespace, fragment: SymbolKind.Object } as const;

export function symbolsOf(lines: LineIndex, entries: readonly OutlineEntry[]): DocumentSymbol[] {
  return entries.map(({ name, detail, kind, span, mark, children }) => ({
    name,
    detail,
    kind: KINDS[kind],
    range: rangeOf(lines, span),
    selectionRange: rangeOf(lines, mark),
    children: symbolsOf(lines, children),
  }));
}

/** Every frame folds, from its first line to its last. */
export function foldingOf({ frames }: CoordinateTree): FoldingRange[] {
  return frames
    .filter(({ firstLine, endLine }) => endLine - 1 > firstLine)
    .map(({ firstLine, endLine }) => ({ startLine: firstLine, endLine: endLine - 1 }));
}
