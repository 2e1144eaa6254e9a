import {
  CodeLensRefreshRequest,
  type Connection,
  DidChangeConfigurationNotification,
  DocumentDiagnosticReportKind,
  ErrorCodes,
  LSPErrorCodes,
  ResponseError,
  TextDocumentSyncKind,
} from 'vscode-languageserver';
import type { Language } from '../formats/tree';
import { serveActing } from './acting';
import { diagnosticsOf } from './diagnostics';
import { EDITING_CAPABILITIES, serveEditing } from './editing';
import { LENS_CAPABILITIES, serveLens } from './lens';
import { NAVIGATION_CAPABILITIES, serveNavigation } from './navigation';
import { servePanel } from './panel';
import {
  FILES_CHANGED_NOTIFICATION,
  READ_FILES_REQUEST,
  STATUS_NOTIFICATION,
  type StatusParams,
  THEME_NOTIFICATION,
  type ThemeKind,
} from './protocol';
import { READING_CAPABILITIES, serveReading } from './reading';
import { serveRewriting } from './rewriting';
import { abilitiesOf, NO_ABILITIES, type Platform } from './session';
import { type LibraryFile, libraryFileNames, readSettings, SettingsStore } from './settings';
import { busyStatus, failedStatus, readyStatus } from './status';
import { Workspace } from './workspace';

const THEMES: readonly ThemeKind[] = ['light', 'dark', 'high-contrast'];

/** The kind of theme that a client tells of, or `null`. */
function themeOf(params: unknown): ThemeKind | null {
  const kind = (params as { themeKind?: unknown } | null | undefined)?.themeKind;
  return THEMES.find((theme) => theme === kind) ?? null;
}

/** Serves one connection: documents, findings, hovers, settings, status. */
export function startServer(connection: Connection, platform: Platform): void {
  let client = NO_ABILITIES;
  let pushed: unknown = {};
  let theme: ThemeKind | null = null;

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
    client = abilitiesOf(capabilities);
    return {
      capabilities: {
        textDocumentSync: { openClose: true, change: TextDocumentSyncKind.Incremental },
        ...READING_CAPABILITIES,
        ...EDITING_CAPABILITIES,
        ...NAVIGATION_CAPABILITIES,
        ...LENS_CAPABILITIES,
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

  /** Settings are read and everything is analysed anew; the editor is to ask again for what it shows. */
  const refreshAll = () => {
    settings.clear();
    workspace.refresh();
    if (client.pull && client.refresh) void connection.languages.diagnostics.refresh();
    if (client.refreshLenses) connection.sendRequest(CodeLensRefreshRequest.type).catch(() => undefined);
    if (client.refreshHints) connection.languages.inlayHint.refresh().catch(() => undefined);
  };

  connection.onDidChangeConfiguration((change) => {
    pushed = (change.settings as { polewise?: unknown } | null)?.polewise ?? {};
    refreshAll();
  });

  connection.onNotification(FILES_CHANGED_NOTIFICATION, () => {
    refreshAll();
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

  const session = {
    connection,
    platform,
    workspace,
    get client() {
      return client;
    },
    get theme() {
      return theme;
    },
  };
  serveReading(session);
  serveEditing(session);
  servePanel(session);
  serveNavigation(session);
  serveLens(session);
  serveActing(session);
  serveRewriting(session);

  connection.onNotification(THEME_NOTIFICATION, (params: unknown) => {
    theme = themeOf(params);
  });

  connection.onRequest((method) => {
    throw new ResponseError(ErrorCodes.MethodNotFound, `${method} is not served`);
  });

  connection.listen();
}
