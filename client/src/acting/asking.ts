import { CancellationTokenSource, ProgressLocation, window } from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import type { Answer } from '../../../server/src/lsp/protocol';

/** After this long a notification says what is being waited for, and lets it be cancelled, ms. */
const PATIENCE_MS = 500;

/** Asks the server; `null` where that was cancelled. */
export async function request<T>(
  client: BaseLanguageClient,
  title: string,
  method: string,
  params: unknown,
): Promise<T | null> {
  const stop = new CancellationTokenSource();
  const answer = client.sendRequest<T>(method, params, stop.token);
  const slow = setTimeout(() => {
    const options = { location: ProgressLocation.Notification, title, cancellable: true };
    void window.withProgress(options, (_, token) => {
      token.onCancellationRequested(() => stop.cancel());
      return answer.then(
        () => undefined,
        () => undefined,
      );
    });
  }, PATIENCE_MS);
  try {
    const result = await answer;
    return stop.token.isCancellationRequested ? null : result;
  } catch (error) {
    if (stop.token.isCancellationRequested) return null;
    throw error;
  } finally {
    clearTimeout(slow);
    stop.dispose();
  }
}

/**
 * Asks the server about a document: once more where the text changed meanwhile, and shows the reason where there is no result, which is
 * `null` then.
 */
export async function ask<T>(
  client: BaseLanguageClient,
  title: string,
  method: string,
  params: unknown,
): Promise<T | null> {
  let answer = await request<Answer<T>>(client, title, method, params);
  const isOutdated = answer !== null && answer.reason !== null && answer.isOutdated;
  if (isOutdated) answer = await request<Answer<T>>(client, title, method, params);
  if (answer === null) return null;
  if (answer.reason !== null) void window.showInformationMessage(answer.reason);
  return answer.result;
}
