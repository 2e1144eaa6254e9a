import { type ChildProcess, spawn } from 'node:child_process';
import { resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import {
  AbstractMessageReader,
  AbstractMessageWriter,
  type ClientCapabilities,
  ConfigurationRequest,
  createProtocolConnection,
  type DataCallback,
  type Diagnostic,
  DidChangeConfigurationNotification,
  DidChangeTextDocumentNotification,
  DidCloseTextDocumentNotification,
  DidOpenTextDocumentNotification,
  type DocumentDiagnosticReport,
  DocumentDiagnosticRequest,
  ExitNotification,
  type Hover,
  HoverRequest,
  InitializedNotification,
  InitializeRequest,
  type InitializeResult,
  LSPErrorCodes,
  type Message,
  type MessageReader,
  type MessageWriter,
  type ProtocolConnection,
  PublishDiagnosticsNotification,
  type PublishDiagnosticsParams,
  RegistrationRequest,
  ShutdownRequest,
  StreamMessageReader,
  StreamMessageWriter,
  type TextDocumentContentChangeEvent,
} from 'vscode-languageserver-protocol/node';

/** What the server tells in its status notification. */
export interface Status {
  readonly uri: string;
  readonly state: string;
  readonly text: string;
  readonly detail: string;
}

export interface ClientOptions {
  /** Whether the client asks for diagnostics itself (default true). */
  readonly pull?: boolean;
  readonly settings?: unknown;
  /** What else the client says that it can do. */
  readonly abilities?: Pick<ClientCapabilities, 'textDocument' | 'workspace'>;
  /** Texts of the files of the workspace by name. */
  readonly files?: Readonly<Record<string, string>>;
  /** The server's program (default: the built server). */
  readonly server?: string;
  /** The program of a server that is a web worker, in place of {@link server}. */
  readonly worker?: string;
  /** A module that Node loads before the server, and that answers what {@link WireClient.askPreloaded} asks. */
  readonly preload?: string;
}

/** Where a server runs and how it is spoken to. */
interface Running {
  readonly reader: MessageReader;
  readonly writer: MessageWriter;
  readonly process: ChildProcess | null;
  /** Its exit status, once it has ended. */
  readonly exit: Promise<number | null>;
}

function runProcess({ server = 'server/dist/server.cjs', preload }: ClientOptions): Running {
  const loaded = preload === undefined ? [] : ['--expose-gc', '--require', resolve(preload)];
  const child = spawn('node', [...loaded, resolve(server), '--stdio'], {
    stdio: ['pipe', 'pipe', 'inherit', ...(preload === undefined ? [] : ['ipc' as const])],
  });
  return {
    reader: new StreamMessageReader(child.stdout!),
    writer: new StreamMessageWriter(child.stdin!),
    process: child,
    exit: new Promise((done) => child.on('exit', done)),
  };
}

class WorkerReader extends AbstractMessageReader {
  constructor(readonly worker: Worker) {
    super();
  }

  listen(callback: DataCallback) {
    this.worker.on('message', callback);
    return { dispose: () => this.worker.off('message', callback) };
  }
}

class WorkerWriter extends AbstractMessageWriter {
  constructor(readonly worker: Worker) {
    super();
  }

  write(message: Message): Promise<void> {
    this.worker.postMessage(message);
    return Promise.resolve();
  }

  end(): void {}
}

function runWorker(script: string): Running {
  const scope = fileURLToPath(new URL('browser-worker.cjs', import.meta.url));
  const worker = new Worker(scope, { workerData: resolve(script) });
  return {
    reader: new WorkerReader(worker),
    writer: new WorkerWriter(worker),
    process: null,
    exit: new Promise((done) => worker.on('exit', done)),
  };
}

/** A client of the built server over a real connection (standard input and output of a process, or the messages of a worker). */
export class WireClient {
  readonly connection: ProtocolConnection;
  readonly published: PublishDiagnosticsParams[] = [];
  readonly statuses: Status[] = [];
  /** What the server asked to be asked for again. */
  readonly refreshed: string[] = [];
  settings: unknown;
  files: Record<string, string>;
  initialized: InitializeResult | undefined;
  #opened = 0;
  readonly #process: ChildProcess | null;
  readonly #exit: Promise<number | null>;
  readonly #waiting: { test: () => boolean; done: () => void }[] = [];

  private constructor(options: ClientOptions) {
    this.settings = options.settings ?? {};
    this.files = { ...options.files };
    const running = options.worker === undefined ? runProcess(options) : runWorker(options.worker);
    this.#process = running.process;
    this.#exit = running.exit;
    this.connection = createProtocolConnection(running.reader, running.writer);
    this.connection.onRequest('polewise/readFiles', ({ names }: { names: string[] }) =>
      names.map((name) => this.files[name] ?? null),
    );
    this.connection.onRequest(ConfigurationRequest.type, ({ items }) => items.map(() => this.settings));
    this.connection.onRequest(RegistrationRequest.type, () => undefined);
    for (const what of ['diagnostic', 'codeLens', 'inlayHint']) {
      this.connection.onRequest(`workspace/${what}/refresh`, () => {
        this.refreshed.push(what);
        this.#look();
        return null;
      });
    }
    this.connection.onNotification(PublishDiagnosticsNotification.type, (params) => {
      this.published.push(params);
      this.#look();
    });
    this.connection.onNotification('polewise/status', (status: Status) => {
      this.statuses.push(status);
      this.#look();
    });
    this.connection.listen();
  }

  static async start(options: ClientOptions = {}): Promise<WireClient> {
    const { pull = true, abilities = {} } = options;
    const client = new WireClient(options);
    const capabilities: ClientCapabilities = {
      workspace: { configuration: true, diagnostics: { refreshSupport: true }, ...abilities.workspace },
      textDocument: { ...(pull ? { diagnostic: {} } : {}), ...abilities.textDocument },
    };
    client.initialized = await client.connection.sendRequest(InitializeRequest.type, {
      processId: process.pid,
      rootUri: null,
      capabilities,
    });
    await client.connection.sendNotification(InitializedNotification.type, {});
    return client;
  }

  #look(): void {
    for (const entry of [...this.#waiting]) {
      if (!entry.test()) continue;
      this.#waiting.splice(this.#waiting.indexOf(entry), 1);
      entry.done();
    }
  }

  /** Waits until something holds; looked at whenever the server tells something. */
  until(test: () => boolean): Promise<void> {
    if (test()) return Promise.resolve();
    return new Promise((done) => this.#waiting.push({ test, done }));
  }

  /** Opens a text under an address of its own, and gives that. */
  openNew(text: string, languageId = 'xyz'): string {
    const uri = `file:///new/${++this.#opened}.${languageId}`;
    this.open(uri, text, languageId);
    return uri;
  }

  open(uri: string, text: string, languageId = 'xyz', version = 1): void {
    void this.connection.sendNotification(DidOpenTextDocumentNotification.type, {
      textDocument: { uri, languageId, version, text },
    });
  }

  change(uri: string, version: number, contentChanges: TextDocumentContentChangeEvent[]): void {
    void this.connection.sendNotification(DidChangeTextDocumentNotification.type, {
      textDocument: { uri, version },
      contentChanges,
    });
  }

  close(uri: string): void {
    void this.connection.sendNotification(DidCloseTextDocumentNotification.type, { textDocument: { uri } });
  }

  /** A file of the workspace is saved. */
  save(name: string, text: string): void {
    this.files[name] = text;
    void this.connection.sendNotification('polewise/filesChanged');
  }

  configure(settings: unknown): void {
    this.settings = settings;
    void this.connection.sendNotification(DidChangeConfigurationNotification.type, {
      settings: { polewise: settings },
    });
  }

  /** The diagnostics of the newest version: asked again where the server says that the text changed meanwhile. */
  async diagnostics(uri: string): Promise<Diagnostic[]> {
    for (;;) {
      try {
        const report: DocumentDiagnosticReport = await this.connection.sendRequest(DocumentDiagnosticRequest.type, {
          textDocument: { uri },
        });
        return report.kind === 'full' ? report.items : [];
      } catch (error) {
        if ((error as { code?: number }).code !== LSPErrorCodes.ServerCancelled) throw error;
      }
    }
  }

  hover(uri: string, line: number, character: number): Promise<Hover | null> {
    return this.connection.sendRequest(HoverRequest.type, { textDocument: { uri }, position: { line, character } });
  }

  /** Sends a message to the module loaded before the server; its next message is the answer. */
  askPreloaded(question: string): Promise<unknown> {
    return new Promise((done, failed) => {
      this.#process!.once('message', done);
      this.#process!.send(question, (error) => error && failed(error));
    });
  }

  /** Shuts the server down as the protocol asks; returns its exit status. */
  async stop(): Promise<number | null> {
    await this.connection.sendRequest(ShutdownRequest.type);
    await this.connection.sendNotification(ExitNotification.type);
    const status = await this.#exit;
    this.connection.dispose();
    return status;
  }
}
