// What any language server costs at its start: a connection, and an answer to `initialize`.
import { createConnection, ProposedFeatures } from 'vscode-languageserver/node';

const connection = createConnection(ProposedFeatures.all);
connection.onInitialize(() => ({ capabilities: {} }));
connection.listen();
