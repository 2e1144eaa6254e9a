import {
  CodeActionKind,
  type Connection,
  DidChangeConfigurationNotification,
  DocumentDiagnosticReportKind,
  ErrorCodes,
  type Hover,
  type InlayHint,
  LSPErrorCodes,
  MarkupKind,
  ResponseError,
  TextDocumentSyncKind,
} from 'vscode-languageserver';
import { outlineOf } from '../features/outline';
import type { PictureTheme } from '../features/pair-picture-parts';
import type { Language } from '../formats/tree';
import { codeActionsAt, FIX_ALL_KIND } from './code-actions';
import { completionItemsAt } from './completion';
import { diagnosticsOf, rangeOf } from './diagnostics';
import { foldingOf, symbolsOf } from './outline';
import type { Clock } from './pace';
import { renderHover } from './render-hover';
import { type LibraryFile, libraryFileNames, readSettings, SettingsStore } from './settings';
import { busyStatus, failedStatus, readyStatus, STATUS_NOTIFICATION, type StatusParams } from './status';
import { offsetOf } from './text-store';
import { Workspace } from './workspace';

/** What the entry gives the server of its platform. */
export interface Platform {
  readonly clock: Clock;
  readonly version: string;
  /** Base64 of the UTF-8 bytes of a text. */
  base64(text: string): string;
}

interface ClientAbilities {
  configuration: boolean;
  pull: boolean;
  refresh: boolean;
}

/** Asks the editor for the texts of files by their names in the workspace of a document: a list of texts, null for what cannot be read. */
const READ_FILES_REQUEST = 'polewise/readFiles';
/** Tells that such a file has changed. */
const FILES_CHANGED_NOTIFICATION = 'polewise/filesChanged';
const THEME_NOTIFICATION = 'polewise/theme';
const THEMES: readonly PictureTheme[] = ['light', 'dark', 'high-contrast'];

/** The kind of theme that a client tells of, or `null`. */
function themeOf(params: unknown): PictureTheme | null {
  const kind = (params as { themeKind?: unknown } | null | undefined)?.themeKind;
  return THEMES.find((theme) => theme === kind) ?? null;
}

/** Serves one connection: documents, findings, hovers, settings, status. */
export function startServer(connection: Connection, platform: Platform): void {
  const client: ClientAbilities = { configuration: false, pull: false, refresh: false };
  let pushed: unknown = {};
  let theme: PictureTheme | null = null;

  /** The texts of files beside a document; only the editor can read them, wherever the workspace lives. */
  const readFiles = async (uri: string, names: readonly string[]): Promise<LibraryFile[]> => {
    const answer: unknown = await connection.sendRequest(READ_FILES_REQUEST, { uri, names }).catch(() => null);
    const texts: unknown[] = Array.isArray(answer) ? answer : [];
    return names.map((name, k) => ({ name, text: typeof texts[k] === 'string' ? texts[k] : null }));
  };
  const settings = new SettingsStore(async (uri) => {
    const raw: unknown = client.configuration
      ? await connection.workspace.getConfiguration({ scopeUri: uri, section: 'polewise' })
      : pushed;
    const names = libraryFileNames(raw);
    return readSettings(raw, names.length === 0 ? [] : await readFiles(uri, names));
  });
  const tell = (status: StatusParams) => void connection.sendNotification(STATUS_NOTIFICATION, status);
  const workspace = new Workspace(
    { clock: platform.clock, settingsOf: (uri) => settings.of(uri) },
    {
      busy: (uri) => tell(busyStatus(uri)),
      failed: (uri, reason) => tell(failedStatus(uri, reason)),
      ready: (analysed) => {
        tell(readyStatus(analysed));
        if (client.pull) return;
        const { uri, version } = analysed.document;
        void connection.sendDiagnostics({ uri, version, diagnostics: diagnosticsOf(analysed) });
      },
    },
  );

  connection.onInitialize(({ capabilities, initializationOptions }) => {
    theme = themeOf(initializationOptions);
    client.configuration = capabilities.workspace?.configuration === true;
    client.pull = capabilities.textDocument?.diagnostic !== undefined;
    client.refresh = capabilities.workspace?.diagnostics?.refreshSupport === true;
    return {
      capabilities: {
        textDocumentSync: { openClose: true, change: TextDocumentSyncKind.Incremental },
        hoverProvider: true,
        codeActionProvider: { codeActionKinds: [CodeActionKind.QuickFix, FIX_ALL_KIND] },
        documentSymbolProvider: true,
        foldingRangeProvider: true,
        inlayHintProvider: true,
        completionProvider: { triggerCharacters: ['=', ' ', '_'] },
        ...(client.pull
          ? {
              diagnosticProvider: { identifier: 'polewise', interFileDependencies: false, workspaceDiagnostics: false },
            }
          : {}),
      },
      serverInfo: { name: 'Polewise', version: platform.version },
    };
  });

  connection.onInitialized(() => {
    if (client.configuration) void connection.client.register(DidChangeConfigurationNotification.type, undefined);
  });

  connection.onDidChangeConfiguration((change) => {
    pushed = (change.settings as { polewise?: unknown } | null)?.polewise ?? {};
    settings.clear();
    workspace.refresh();
    if (client.pull && client.refresh) void connection.languages.diagnostics.refresh();
  });

  connection.onNotification(FILES_CHANGED_NOTIFICATION, () => {
    settings.clear();
    workspace.refresh();
    if (client.pull && client.refresh) void connection.languages.diagnostics.refresh();
  });

  connection.onDidOpenTextDocument(({ textDocument: { uri, languageId, version, text } }) => {
    const language: Language = languageId === 'pdb' ? 'pdb' : 'xyz';
    workspace.open(uri, language, version, text);
  });
  connection.onDidChangeTextDocument(({ textDocument: { uri, version }, contentChanges }) => {
    workspace.change(uri, version, contentChanges);
  });
  connection.onDidCloseTextDocument(({ textDocument: { uri } }) => {
    workspace.close(uri);
    settings.forget(uri);
    if (!client.pull) void connection.sendDiagnostics({ uri, diagnostics: [] });
  });

  connection.languages.diagnostics.on(async ({ textDocument: { uri } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (token.isCancellationRequested) throw new ResponseError(LSPErrorCodes.RequestCancelled, 'cancelled');
    if (analysed !== null) return { kind: DocumentDiagnosticReportKind.Full, items: diagnosticsOf(analysed) };
    if (workspace.document(uri) === undefined) return { kind: DocumentDiagnosticReportKind.Full, items: [] };
    // The text changed meanwhile; the editor is to ask again for the new version.
    throw new ResponseError(LSPErrorCodes.ServerCancelled, 'outdated', { retriggerRequest: true });
  });

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
        value: renderHover(data, { unit: analysed.settings.energyUnit, theme, base64: platform.base64 }),
      },
      range: rangeOf(document.lines, data.span),
    };
  });

  connection.onCodeAction(async ({ textDocument: { uri }, range, context: { diagnostics, only } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    const { document } = analysed;
    const start = offsetOf(document, range.start);
    const span = { start, end: Math.max(start, offsetOf(document, range.end)) };
    return codeActionsAt(analysed, span, diagnostics, only);
  });

  connection.onDocumentSymbol(async ({ textDocument: { uri } }, token) => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    const only = analysed.tree.frames.length === 1 && !analysed.limited ? await workspace.frame(analysed, 0) : null;
    return symbolsOf(analysed.document.lines, outlineOf(analysed.tree, only));
  });

  connection.onFoldingRanges(async ({ textDocument: { uri } }, token) => {
    const analysed = await workspace.analysed(uri);
    return analysed === null || token.isCancellationRequested ? [] : foldingOf(analysed.tree);
  });

  connection.languages.inlayHint.on(async ({ textDocument: { uri }, range }, token): Promise<InlayHint[]> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || analysed.limited || token.isCancellationRequested) return [];
    const { lines } = analysed.document;
    const hints = await workspace.hints(analysed, range.start.line, range.end.line + 1);
    return hints.map(({ offset, text, tooltip }) => ({
      position: rangeOf(lines, { start: offset, end: offset }).start,
      label: text,
      tooltip,
      paddingLeft: true,
    }));
  });

  // Completion needs the text alone: it does not wait for any analysis.
  connection.onCompletion(({ textDocument: { uri }, position }) => {
    const document = workspace.document(uri);
    return document === undefined ? [] : completionItemsAt(document, position);
  });

  connection.onNotification(THEME_NOTIFICATION, (params: unknown) => {
    theme = themeOf(params);
  });

  connection.onRequest((method) => {
    throw new ResponseError(ErrorCodes.MethodNotFound, `${method} is not served`);
  });

  connection.listen();
}
