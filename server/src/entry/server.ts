import { createConnection, ProposedFeatures } from 'vscode-languageserver/node';
import { startServer } from '../lsp/server';

declare const POLEWISE_VERSION: string;

startServer(createConnection(ProposedFeatures.all), {
  clock: { turn: () => new Promise((resolve) => setImmediate(resolve)), now: () => performance.now() },
  version: POLEWISE_VERSION,
  base64: (text) => Buffer.from(text, 'utf8').toString('base64'),
});
