import { CodeActionKind, type ServerCapabilities } from 'vscode-languageserver';
import { codeActionsAt, FIX_ALL_KIND } from './code-actions';
import { completionItemsAt } from './completion';
import type { Session } from './session';
import { offsetOf } from './text-store';

export const EDITING_CAPABILITIES: ServerCapabilities = {
  codeActionProvider: { codeActionKinds: [CodeActionKind.QuickFix, FIX_ALL_KIND] },
  completionProvider: { triggerCharacters: ['=', ' ', '_'] },
};

/** Answers what a writer asks: remedies and completion. */
export function serveEditing({ connection, workspace }: Session): void {
  connection.onCodeAction(async ({ textDocument: { uri }, range, context: { diagnostics, only } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    const { document } = analysed;
    const start = offsetOf(document, range.start);
    const span = { start, end: Math.max(start, offsetOf(document, range.end)) };
    return codeActionsAt(analysed, span, diagnostics, only);
  });

  // Completion needs the text alone: it does not wait for any analysis.
  connection.onCompletion(({ textDocument: { uri }, position }) => {
    const document = workspace.document(uri);
    return document === undefined ? [] : completionItemsAt(document, position);
  });
}
