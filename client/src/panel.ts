import {
  commands,
  type Selection as EditorSelection,
  type ExtensionContext,
  env,
  Position,
  Range,
  Selection,
  type TextDocument,
  type TextEditor,
  Uri,
  ViewColumn,
  type WebviewPanel,
  window,
  workspace,
} from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import type { PairPlace } from '../../server/src/features/pair-place';
import {
  type DocumentPair,
  FRAGMENT_LINES_REQUEST,
  type FragmentLines,
  OPEN_PANEL_COMMAND,
  PANEL_PLACE_REQUEST,
  type PanelPlace,
  type PanelPlaceParams,
  type StatusParams,
  WRITE_DIMERS_COMMAND,
} from '../../server/src/lsp/protocol';
import { type FromHost, type KeptState, PANEL_METHODS, type ToHost } from '../panel/messages';
import { isOurs, nameOf } from './documents';
import { panelHtml } from './panel-html';

const PANEL_TYPE = 'polewise.pairs';
const WAIT_MS = 60;
/** What the panel may ask of the server. */
const METHODS: ReadonlySet<string> = new Set(PANEL_METHODS);
const MOST_SELECTIONS = 500;

/** The coordinates that a person means: those in the active editor, else the first in view, else any that are open. */
function documentInView(): TextDocument | undefined {
  const editors = [window.activeTextEditor, ...window.visibleTextEditors].filter((editor) => editor !== undefined);
  return editors.map(({ document }) => document).find(isOurs) ?? workspace.textDocuments.find(isOurs);
}

/** The panel of pairs beside the editor: it follows the cursor, and rests while nobody sees it. */
export class PairPanel {
  readonly #context: ExtensionContext;
  readonly #client: BaseLanguageClient;
  #panel: WebviewPanel | null = null;
  #uri: string | null = null;
  #position = new Position(0, 0);
  #pair: PairPlace | null = null;
  /** Rises with every question: an answer to an earlier one is not shown. */
  #round = 0;
  #timer: ReturnType<typeof setTimeout> | undefined;
  #isReady = false;
  /** Whether something changed while the panel was out of sight. */
  #isStale = false;

  constructor(context: ExtensionContext, client: BaseLanguageClient) {
    this.#context = context;
    this.#client = client;
    context.subscriptions.push(
      commands.registerCommand(OPEN_PANEL_COMMAND, (target?: Partial<DocumentPair>) => this.open(target)),
      window.registerWebviewPanelSerializer(PANEL_TYPE, {
        deserializeWebviewPanel: async (panel, state: Partial<KeptState> | undefined) => this.#restore(panel, state),
      }),
      window.onDidChangeTextEditorSelection(({ textEditor }) => this.#follow(textEditor)),
      window.onDidChangeActiveTextEditor((editor) => editor !== undefined && this.#follow(editor)),
      workspace.onDidCloseTextDocument((document) => {
        if (document.uri.toString() === this.#uri) this.#ask();
      }),
      window.onDidChangeActiveColorTheme(() => this.#ask()),
    );
  }

  /** Opens the panel beside the editor, on the document and pair given or on what the active editor shows. */
  open(target: Partial<DocumentPair> = {}): void {
    const document = documentInView();
    if (target.uri !== undefined) this.#turnTo(target.uri);
    else if (document !== undefined) this.#turnTo(document.uri.toString());
    this.#position = this.#editor()?.selection.active ?? this.#position;
    const { frame, first, second } = target;
    if (frame !== undefined && first !== undefined && second !== undefined) {
      this.#pair = { frame, first, second };
      void this.#select(this.#pair);
    }
    if (this.#panel !== null) this.#panel.reveal(undefined, true);
    else {
      // Beside the text, which need not be where the keyboard is.
      const viewColumn = this.#editor()?.viewColumn;
      const column = {
        viewColumn: viewColumn === undefined ? ViewColumn.Beside : viewColumn + 1,
        preserveFocus: true,
      };
      this.#take(window.createWebviewPanel(PANEL_TYPE, 'Pairs', column));
    }
    this.#ask();
  }

  /** Something was told of a document: its newest version has been analysed, or is about to be. */
  statusChanged({ uri, state }: StatusParams): void {
    if (uri !== this.#uri) return;
    if (state === 'busy') this.#tell({ kind: 'state', state: 'busy', text: '' });
    else this.#ask();
  }

  #restore(panel: WebviewPanel, state: Partial<KeptState> | undefined): void {
    this.#panel?.dispose();
    if (typeof state?.uri === 'string' && state.uri !== '') this.#turnTo(state.uri);
    this.#take(panel);
  }

  #take(panel: WebviewPanel): void {
    this.#panel = panel;
    this.#isReady = false;
    panel.webview.options = {
      enableScripts: true,
      localResourceRoots: [Uri.joinPath(this.#context.extensionUri, 'client/dist')],
    };
    panel.iconPath = Uri.joinPath(this.#context.extensionUri, 'client/assets/icon.png');
    panel.webview.onDidReceiveMessage((message: ToHost) => void this.#hear(message));
    panel.onDidChangeViewState(() => {
      if (panel.visible && this.#isStale) this.#ask();
    });
    panel.onDidDispose(() => {
      if (this.#panel !== panel) return;
      clearTimeout(this.#timer);
      this.#panel = null;
      this.#uri = null;
      this.#pair = null;
    });
    panel.webview.html = panelHtml(panel.webview, this.#context.extensionUri);
  }

  #turnTo(uri: string): void {
    if (uri === this.#uri) return;
    this.#uri = uri;
    this.#pair = null;
    this.#position = this.#editor()?.selection.active ?? new Position(0, 0);
  }

  #editor(): TextEditor | undefined {
    const active = window.activeTextEditor;
    if (active?.document.uri.toString() === this.#uri) return active;
    return window.visibleTextEditors.find(({ document }) => document.uri.toString() === this.#uri);
  }

  #follow(editor: TextEditor): void {
    if (this.#panel === null || editor !== window.activeTextEditor || !isOurs(editor.document)) return;
    this.#turnTo(editor.document.uri.toString());
    this.#position = editor.selection.active;
    this.#ask();
  }

  #tell(message: FromHost): void {
    void this.#panel?.webview.postMessage(message);
  }

  /** Asks what to show, once nothing has changed for a moment. */
  #ask(): void {
    this.#round++;
    clearTimeout(this.#timer);
    this.#timer = setTimeout(() => void this.#refresh(this.#round), WAIT_MS);
  }

  async #refresh(round: number): Promise<void> {
    if (this.#panel === null || !this.#isReady) return;
    this.#isStale = !this.#panel.visible;
    if (this.#isStale) return;
    const document = workspace.textDocuments.find(({ uri }) => uri.toString() === this.#uri);
    if (document === undefined || !isOurs(document)) return this.#showNothing();
    if (!this.#client.isRunning())
      return this.#tell({ kind: 'state', state: 'busy', text: 'The language server is starting.' });
    const { line, character } = this.#position;
    const params: PanelPlaceParams = { uri: this.#uri!, position: { line, character }, pair: this.#pair };
    const answer = await this.#client.sendRequest<PanelPlace | null>(PANEL_PLACE_REQUEST, params).catch(() => null);
    // An answer of an older version is followed by another: the analysis of the new one is told of.
    if (round !== this.#round || answer === null || answer.version !== document.version) return;
    if (answer.place?.isAsked !== true) this.#pair = null;
    const name = nameOf(document.uri);
    const isInWorkspace = workspace.getWorkspaceFolder(document.uri) !== undefined && !document.isUntitled;
    const file = isInWorkspace ? workspace.asRelativePath(document.uri, false) : name;
    this.#panel.title = `Pairs of ${name}`;
    this.#tell({ kind: 'place', uri: this.#uri!, file, answer });
  }

  #showNothing(): void {
    const name = this.#uri === null ? null : nameOf(Uri.parse(this.#uri));
    const text =
      name === null
        ? 'Open an XYZ or PDB file, and put the cursor on an atom.'
        : `${name} is not open as a coordinate file any more. Open it, or another XYZ or PDB file.`;
    this.#tell({ kind: 'state', state: 'empty', text });
  }

  async #hear(message: ToHost): Promise<void> {
    switch (message.kind) {
      case 'ready':
        this.#isReady = true;
        this.#pair ??= message.pair;
        return this.#ask();
      case 'ask':
        return this.#answer(message);
      case 'choose':
        this.#pair = message.pair;
        if (message.pair !== null) await this.#select(message.pair);
        return this.#ask();
      case 'write': {
        const { frame, first, second } = message.pair;
        await commands.executeCommand(WRITE_DIMERS_COMMAND, { uri: this.#uri, frame, pairs: [[first, second]] });
        return;
      }
      case 'copy':
        await env.clipboard.writeText(message.text);
        window.setStatusBarMessage(`Copied ${message.what} as CSV`, 3000);
        return;
      case 'save':
        return this.#save(message.name, message.text);
    }
  }

  async #answer({ id, method, params }: Extract<ToHost, { kind: 'ask' }>): Promise<void> {
    const isAllowed = METHODS.has(method) && this.#uri !== null && this.#client.isRunning();
    const result = isAllowed
      ? await this.#client.sendRequest<unknown>(method, { ...params, uri: this.#uri }).catch(() => null)
      : null;
    this.#tell({ kind: 'answer', id, result });
  }

  /** Selects the atoms of a pair in the text, the first fragment's first. */
  async #select({ frame, first, second }: PairPlace): Promise<void> {
    const uri = this.#uri;
    if (uri === null || !this.#client.isRunning()) return;
    const params = { uri, frame, fragments: [first, second] };
    const found = await this.#client
      .sendRequest<FragmentLines | null>(FRAGMENT_LINES_REQUEST, params)
      .catch(() => null);
    const document = workspace.textDocuments.find((other) => other.uri.toString() === uri);
    if (found === null || document === undefined || document.version !== found.version || found.runs.length === 0)
      return;
    const options = { viewColumn: this.#editor()?.viewColumn ?? ViewColumn.One, preserveFocus: true };
    const editor = this.#editor() ?? (await window.showTextDocument(document, options));
    const selections: EditorSelection[] = found.runs.slice(0, MOST_SELECTIONS).map(({ firstLine, lastLine }) => {
      return new Selection(lastLine, document.lineAt(lastLine).text.length, firstLine, 0);
    });
    editor.selections = selections;
    const start = selections[0]!.active;
    editor.revealRange(new Range(start, start));
    this.#position = selections[0]!.active;
  }

  async #save(name: string, text: string): Promise<void> {
    const beside = this.#uri === null ? undefined : Uri.parse(this.#uri);
    const folder =
      beside?.scheme === 'file' || beside?.scheme === 'vscode-remote'
        ? Uri.joinPath(beside, '..')
        : workspace.workspaceFolders?.[0]?.uri;
    const options = {
      filters: { SVG: ['svg'] },
      ...(folder === undefined ? {} : { defaultUri: Uri.joinPath(folder, `${name}.svg`) }),
    };
    const target = await window.showSaveDialog(options);
    if (target === undefined) return;
    try {
      await workspace.fs.writeFile(target, new TextEncoder().encode(text));
    } catch (error) {
      void window.showErrorMessage(`${name}.svg could not be written: ${(error as Error).message}`);
    }
  }
}
