import { type Disposable, type DocumentSelector, LanguageStatusSeverity, languages, window, workspace } from 'vscode';
import { OPEN_PANEL_COMMAND, type StatusParams } from '../../server/src/lsp/protocol';

const SEVERITY = {
  idle: LanguageStatusSeverity.Information,
  busy: LanguageStatusSeverity.Information,
  limited: LanguageStatusSeverity.Warning,
  failed: LanguageStatusSeverity.Error,
} as const satisfies Record<StatusParams['state'], LanguageStatusSeverity>;

/** State of the server as a whole; while it is not running, nothing it said of a document holds. */
export type ServerState = 'starting' | 'running' | 'stopped';

const WITHOUT_SERVER = {
  starting: { state: 'busy', text: 'starting', detail: 'The language server is starting.' },
  running: { state: 'busy', text: 'reading', detail: 'This document has not been read yet.' },
  stopped: { state: 'failed', text: 'stopped', detail: 'The language server is not running; reload the window.' },
} as const satisfies Record<ServerState, Omit<StatusParams, 'uri'>>;

/** The language status item: shows what the server last said of the document in the active editor. */
export class StatusView implements Disposable {
  readonly #item;
  readonly #byUri = new Map<string, StatusParams>();
  readonly #subscriptions: Disposable[];
  #server: ServerState = 'starting';

  constructor(selector: DocumentSelector) {
    this.#item = languages.createLanguageStatusItem('polewise.status', selector);
    this.#item.name = 'Polewise';
    this.#item.command = { title: 'Open panel', command: OPEN_PANEL_COMMAND };
    this.#subscriptions = [
      window.onDidChangeActiveTextEditor(() => this.#show()),
      workspace.onDidCloseTextDocument((document) => this.#byUri.delete(document.uri.toString())),
    ];
    this.#show();
  }

  update(params: StatusParams): void {
    const isOpen = workspace.textDocuments.some((document) => document.uri.toString() === params.uri);
    if (!isOpen) return;
    this.#byUri.set(params.uri, params);
    this.#show();
  }

  serverIs(state: ServerState): void {
    this.#server = state;
    if (state !== 'running') this.#byUri.clear();
    this.#show();
  }

  #show(): void {
    const uri = window.activeTextEditor?.document.uri.toString();
    const { state, text, detail } = this.#byUri.get(uri ?? '') ?? WITHOUT_SERVER[this.#server];
    this.#item.severity = SEVERITY[state];
    this.#item.busy = state === 'busy';
    this.#item.text = text;
    this.#item.detail = detail;
  }

  dispose(): void {
    for (const subscription of this.#subscriptions) subscription.dispose();
    this.#item.dispose();
    this.#byUri.clear();
  }
}
