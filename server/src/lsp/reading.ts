import { type Hover, type InlayHint, MarkupKind, type ServerCapabilities } from 'vscode-languageserver';
import { outlineOf } from '../features/outline';
import { rangeOf } from './diagnostics';
import { isOff } from './limits';
import { foldingOf, symbolsOf } from './outline';
import { renderHover } from './render-hover';
import type { Session } from './session';
import { offsetOf } from './text-store';

export const READING_CAPABILITIES: ServerCapabilities = {
  hoverProvider: true,
  documentSymbolProvider: true,
  foldingRangeProvider: true,
  inlayHintProvider: true,
};

/** Answers what a reader asks: hovers, hints, outline, folding. */
export function serveReading(session: Session): void {
  const { connection, workspace, platform } = session;

  connection.onHover(async ({ textDocument: { uri }, position }, token): Promise<Hover | null> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return null;
    const { document } = analysed;
    const offset = offsetOf(document, position);
    const data = await workspace.hover(analysed, offset);
    if (token.isCancellationRequested) return null;
    if (data === null) return null;
    return {
      contents: {
        kind: MarkupKind.Markdown,
        value: renderHover(data, { unit: analysed.settings.energyUnit, theme: session.theme, base64: platform.base64 }),
      },
      range: rangeOf(document.lines, data.span),
    };
  });

  connection.onDocumentSymbol(async ({ textDocument: { uri } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    if (analysed.settings.limits.outline === 0) return [];
    const hasFragments = analysed.tree.frames.length === 1 && !isOff('outline', analysed);
    const only = hasFragments ? await workspace.frame(analysed, 0) : null;
    return symbolsOf(analysed.document.lines, outlineOf(analysed.tree, only));
  });

  connection.onFoldingRanges(async ({ textDocument: { uri } }, token) => {
    const analysed = await workspace.analysed(uri);
    return analysed === null || token.isCancellationRequested ? [] : foldingOf(analysed.tree);
  });

  connection.languages.inlayHint.on(async ({ textDocument: { uri }, range }, token): Promise<InlayHint[]> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || isOff('hints', analysed) || token.isCancellationRequested) return [];
    const { lines } = analysed.document;
    const hints = await workspace.hints(analysed, range.start.line, range.end.line + 1);
    return hints.map(({ offset, text, tooltip }) => ({
      position: rangeOf(lines, { start: offset, end: offset }).start,
      label: text,
      tooltip,
      paddingLeft: true,
    }));
  });
}
