import { type ExtensionContext, window } from 'vscode';
import {
  LanguageClient,
  type LanguageClientOptions,
  type ServerOptions,
  State,
  TransportKind,
} from 'vscode-languageclient/node';
import { readWorkspaceFiles, watchLibraryFiles } from './library-files';
import { type ServerState, type StatusParams, StatusView } from './status';
import { currentThemeKind } from './theme';

/** Our languages, wherever their text lives: on disk, untitled, remote or virtual. */
const SELECTOR = [{ language: 'xyz' }, { language: 'pdb' }];

const SERVER_STATES: Readonly<Record<State, ServerState>> = {
  [State.Starting]: 'starting',
  [State.StartFailed]: 'stopped',
  [State.Running]: 'running',
  [State.Stopped]: 'stopped',
};

let client: LanguageClient | undefined;

export async function activate(context: ExtensionContext): Promise<void> {
  const module = context.asAbsolutePath('server/dist/server.cjs');
  const serverOptions: ServerOptions = {
    run: { module, transport: TransportKind.ipc },
    debug: { module, transport: TransportKind.ipc, options: { execArgv: ['--nolazy', '--inspect=6179'] } },
  };
  const clientOptions: LanguageClientOptions = {
    documentSelector: SELECTOR,
    initializationOptions: () => ({ themeKind: currentThemeKind() }),
  };
  const started = new LanguageClient('polewise', 'Polewise', serverOptions, clientOptions);
  client = started;

  const status = new StatusView(SELECTOR);
  context.subscriptions.push(
    status,
    started.onDidChangeState(({ newState }) => status.serverIs(SERVER_STATES[newState])),
    started.onNotification('polewise/status', (params: StatusParams) => status.update(params)),
    started.onRequest('polewise/readFiles', readWorkspaceFiles),
    watchLibraryFiles(() => {
      if (started.isRunning()) void started.sendNotification('polewise/filesChanged');
    }),
    window.onDidChangeActiveColorTheme(() => {
      if (started.isRunning()) void started.sendNotification('polewise/theme', { themeKind: currentThemeKind() });
    }),
  );
  await started.start();
}

export async function deactivate(): Promise<void> {
  await client?.stop();
  client = undefined;
}
