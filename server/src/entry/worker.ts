import {
  BrowserMessageReader,
  BrowserMessageWriter,
  createConnection,
  ProposedFeatures,
} from 'vscode-languageserver/browser';
import { startServer } from '../lsp/server';

declare const POLEWISE_VERSION: string;
declare const self: DedicatedWorkerGlobalScope;

const { port1: inbox, port2: outbox } = new MessageChannel();
const waiting: (() => void)[] = [];
inbox.onmessage = () => waiting.shift()?.();

/** Goes on after what has arrived meanwhile; a timer would wait 4 ms each time. */
function turn(): Promise<void> {
  return new Promise((resolve) => {
    waiting.push(resolve);
    outbox.postMessage(null);
  });
}

/** Arguments that a call can take. */
const CHUNK = 0x4000;

function base64(text: string): string {
  const bytes = new TextEncoder().encode(text);
  let binary = '';
  for (let from = 0; from < bytes.length; from += CHUNK) {
    binary += String.fromCharCode(...bytes.subarray(from, from + CHUNK));
  }
  return btoa(binary);
}

// The entry in a browser: the server is a web worker.
const connection = createConnection(
  ProposedFeatures.all,
  new BrowserMessageReader(self),
  new BrowserMessageWriter(self),
);
connection.onExit(() => self.close());
startServer(connection, { clock: { turn, now: () => performance.now() }, version: POLEWISE_VERSION, base64 });
