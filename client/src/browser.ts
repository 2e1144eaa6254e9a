import { type ExtensionContext, Uri } from 'vscode';
import {
  BrowserMessageReader,
  BrowserMessageWriter,
  LanguageClient,
  type MessageTransports,
} from 'vscode-languageclient/browser';
import { start } from './start';

let client: LanguageClient | undefined;
let worker: Worker | undefined;

/** Entry in a browser: the server is a web worker. */
export function activate(context: ExtensionContext): void {
  const script = Uri.joinPath(context.extensionUri, 'server/dist/worker.js').toString(true);
  // A client that starts again wants a worker of its own. The library would not know a worker made here: the host's `Worker` is not its own.
  const startWorker = (): Promise<MessageTransports> => {
    worker?.terminate();
    worker = new Worker(script);
    return Promise.resolve({ reader: new BrowserMessageReader(worker), writer: new BrowserMessageWriter(worker) });
  };
  start(context, (options) => {
    client = new LanguageClient('polewise', 'Polewise', startWorker, options);
    return client;
  });
}

export async function deactivate(): Promise<void> {
  await client?.stop();
  worker?.terminate();
  client = worker = undefined;
}
