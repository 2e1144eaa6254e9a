import type { ExtensionContext } from 'vscode';
import { LanguageClient, type ServerOptions, TransportKind } from 'vscode-languageclient/node';
import { start } from './start';

let client: LanguageClient | undefined;

/** Entry on the desktop: the server is a process of its own. */
export function activate(context: ExtensionContext): void {
  const module = context.asAbsolutePath('server/dist/server.cjs');
  const serverOptions: ServerOptions = {
    run: { module, transport: TransportKind.ipc },
    debug: { module, transport: TransportKind.ipc, options: { execArgv: ['--nolazy', '--inspect=6179'] } },
  };
  start(context, (options) => {
    client = new LanguageClient('polewise', 'Polewise', serverOptions, options);
    return client;
  });
}

export async function deactivate(): Promise<void> {
  await client?.stop();
  client = undefined;
}
