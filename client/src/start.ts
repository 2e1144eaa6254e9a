import { type ExtensionContext, window } from 'vscode';
import { type BaseLanguageClient, type LanguageClientOptions, State } from 'vscode-languageclient';
import {
  FILES_CHANGED_NOTIFICATION,
  READ_FILES_REQUEST,
  STATUS_NOTIFICATION,
  type StatusParams,
  THEME_NOTIFICATION,
} from '../../server/src/lsp/protocol';
import { registerCommands } from './commands';
import { SELECTOR } from './documents';
import { readWorkspaceFiles, watchLibraryFiles } from './library-files';
import { PairPanel } from './panel';
import { type ServerState, StatusView } from './status';
import { currentThemeKind } from './theme';

const SERVER_STATES: Readonly<Record<State, ServerState>> = {
  [State.Starting]: 'starting',
  [State.StartFailed]: 'stopped',
  [State.Running]: 'running',
  [State.Stopped]: 'stopped',
};

/** Makes the client of the server as the platform runs it. */
export type MakeClient = (options: LanguageClientOptions) => BaseLanguageClient;

/** Starts server and user interface; the same on the desktop and in a browser. */
export function start(context: ExtensionContext, makeClient: MakeClient): BaseLanguageClient {
  const client = makeClient({
    documentSelector: SELECTOR,
    initializationOptions: () => ({ themeKind: currentThemeKind() }),
  });
  const status = new StatusView(SELECTOR);
  const panel = new PairPanel(context, client);
  context.subscriptions.push(
    status,
    ...registerCommands(client),
    client.onDidChangeState(({ newState }) => status.serverIs(SERVER_STATES[newState])),
    client.onNotification(STATUS_NOTIFICATION, (params: StatusParams) => {
      status.update(params);
      panel.statusChanged(params);
    }),
    client.onRequest(READ_FILES_REQUEST, readWorkspaceFiles),
    watchLibraryFiles(() => {
      if (client.isRunning()) void client.sendNotification(FILES_CHANGED_NOTIFICATION);
    }),
    window.onDidChangeActiveColorTheme(() => {
      if (client.isRunning()) void client.sendNotification(THEME_NOTIFICATION, { themeKind: currentThemeKind() });
    }),
  );
  // Nothing waits for the server: status and panel say that it is starting, and what is asked meanwhile is answered then.
  client.start().catch(() => status.serverIs('stopped'));
  return client;
}
