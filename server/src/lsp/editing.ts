import { CompletionTriggerKind, LSPErrorCodes, ResponseError, type ServerCapabilities } from 'vscode-languageserver';
import { ACTION_KINDS } from '../features/actions';
import { codeActionsAt, resolvedEdit, uriOfAction } from './code-actions';
import { completionItemsAt } from './completion';
import type { Session } from './session';
import { offsetOf } from './text-store';

export const EDITING_CAPABILITIES: ServerCapabilities = {
  codeActionProvider: { codeActionKinds: [...ACTION_KINDS], resolveProvider: true },
  completionProvider: { triggerCharacters: ['=', ' ', '_', '"', ':', '>', ','] },
};

/** Answers what a writer asks: remedies and completion. */
export function serveEditing(session: Session): void {
  const { connection, workspace } = session;
  connection.onCodeAction(async ({ textDocument: { uri }, range, context: { diagnostics, only } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    const { document } = analysed;
    const start = offsetOf(document, range.start);
    const span = { start, end: Math.max(start, offsetOf(document, range.end)) };
    return codeActionsAt(analysed, { span, diagnostics, only, isLazy: session.client.lazyEdits });
  });

  connection.onCodeActionResolve(async (action) => {
    const uri = uriOfAction(action);
    if (uri === null) return action;
    const analysed = await workspace.analysed(uri);
    const edit = analysed === null ? null : resolvedEdit(analysed, action);
    if (edit !== null) return { ...action, edit };
    throw new ResponseError(LSPErrorCodes.ContentModified, 'The text has changed since this was offered.');
  });

  // Completion does not wait for any analysis.
  connection.onCompletion(({ textDocument: { uri }, position, context }) => {
    const document = workspace.document(uri);
    if (document === undefined) return [];
    const last = workspace.lastAnalysed(uri);
    const isAsked = context?.triggerKind !== CompletionTriggerKind.TriggerCharacter;
    return completionItemsAt(document, position, { last, isAsked, snippets: session.client.snippets });
  });
}
