import { CompletionTriggerKind, LSPErrorCodes, ResponseError, type ServerCapabilities } from 'vscode-languageserver';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Span } from '../base/span';
import { ACTION_KINDS, framesOfActions } from '../features/actions';
import type { Analysed } from './analyser';
import { type ActionFrames, codeActionsAt, resolvedEdit, spanOfAction, uriOfAction } from './code-actions';
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
    const frames = await framesAt(session, analysed, span);
    if (frames === null || token.isCancellationRequested) return [];
    const { lazyEdits: isLazy, previews: hasPreviews } = session.client;
    return codeActionsAt(analysed, frames, { span, diagnostics, only, isLazy, hasPreviews });
  });

  connection.onCodeActionResolve(async (action) => {
    const uri = uriOfAction(action);
    if (uri === null) return action;
    const analysed = await workspace.analysed(uri);
    const span = spanOfAction(action);
    const frames = analysed === null || span === null ? null : await framesAt(session, analysed, span);
    const edit =
      analysed === null || frames === null ? null : resolvedEdit(analysed, frames, action, session.client.previews);
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

/** The frames that actions at a place need; `null` where the analysis is not the newest any more. */
async function framesAt({ workspace }: Session, analysed: Analysed, span: Span): Promise<ActionFrames | null> {
  const frames = new Map<number, FrameAnalysis>();
  if (analysed.limited) return frames;
  for (const index of framesOfActions({ ...analysed, span })) {
    const frame = await workspace.frame(analysed, index);
    if (frame === null) return null;
    frames.set(index, frame);
  }
  return frames;
}
