// What the suites in the extension host are written in.
import { deepStrictEqual, ok } from 'node:assert/strict';
import { type ExecFileSyncOptionsWithStringEncoding, execFileSync } from 'node:child_process';
import { mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';

const WAIT = 20_000;
export const NOT_YET = 1_000;

/** Tests by name, run in their order. */
export type Suite = Readonly<Record<string, () => Promise<void>>>;

/** A finding in the words of the command line and of the editor alike; lines and columns from 1. */
interface Shown {
  readonly code: string;
  readonly severity: string;
  readonly message: string;
  readonly range: string;
}

/** The open folder: a copy of the samples. */
export const folder = () => vscode.workspace.workspaceFolders![0]!.uri;
export const sample = (name: string) => vscode.Uri.joinPath(folder(), name);
export const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/** Looks again and again until there is something. */
export async function until<T>(what: string, look: () => T | undefined | Promise<T | undefined>): Promise<T> {
  const deadline = Date.now() + WAIT;
  for (;;) {
    const seen = await look();
    if (seen !== undefined) return seen;
    if (Date.now() > deadline) throw new Error(`waited in vain: ${what}`);
    await pause(50);
  }
}

const answers = new Map<string, unknown>();

/** What the command line says of a text, as JSON. */
export function polewise(args: string[], input: string): unknown {
  const question = JSON.stringify([args, input]);
  if (!answers.has(question)) answers.set(question, askPolewise(args, input));
  return answers.get(question);
}

function askPolewise(args: string[], input: string): unknown {
  const env = { ...process.env, ELECTRON_RUN_AS_NODE: '1' };
  const options: ExecFileSyncOptionsWithStringEncoding = {
    input,
    env,
    encoding: 'utf8',
    maxBuffer: 1 << 26,
    stdio: 'pipe',
  };
  try {
    return JSON.parse(execFileSync(process.execPath, [process.env.POLEWISE_CLI!, ...args], options));
  } catch (error) {
    // Status 1 says that there are errors among the findings.
    const { status, stdout } = error as { status?: number; stdout?: string };
    if (status !== 1) throw error;
    return JSON.parse(stdout!);
  }
}

const sorted = (list: Shown[]) => list.map((shown) => JSON.stringify(shown)).sort();

/** What the command line finds in a text. */
function expected(document: vscode.TextDocument): string[] {
  const args = ['findings', '--format', 'json', '--language', document.languageId, '--fail-on', 'error', '-'];
  type Found = { code: string; severity: string; message: string } & Record<
    'line' | 'column' | 'endLine' | 'endColumn',
    number
  >;
  const { findings } = polewise(args, document.getText()) as { findings: Found[] };
  return sorted(
    findings.map(({ code, severity, message, line, column, endLine, endColumn }) => ({
      code,
      severity,
      message,
      range: `${line}:${column}-${endLine}:${endColumn}`,
    })),
  );
}

const SEVERITY = ['error', 'warning', 'information', 'hint'];

/** The code of a finding. */
export function codeOf({ code }: vscode.Diagnostic): string {
  return String(typeof code === 'object' ? code.value : code);
}

/** Our findings in a document. */
export const ours = (uri: vscode.Uri) =>
  vscode.languages.getDiagnostics(uri).filter(({ source }) => source === 'polewise');

/** What the editor shows under the lines of a document. */
function shown(uri: vscode.Uri): string[] {
  return sorted(
    ours(uri).map((diagnostic) => {
      const { start, end } = diagnostic.range;
      return {
        code: codeOf(diagnostic),
        severity: SEVERITY[diagnostic.severity]!,
        message: diagnostic.message,
        range: `${start.line + 1}:${start.character + 1}-${end.line + 1}:${end.character + 1}`,
      };
    }),
  );
}

/** Waits until the editor shows exactly what the command line finds in the present text. */
export async function agrees(document: vscode.TextDocument): Promise<string[]> {
  const wanted = expected(document);
  const same = () => (JSON.stringify(shown(document.uri)) === JSON.stringify(wanted) ? true : undefined);
  await until('findings equal to those of the command line', same).catch(() =>
    deepStrictEqual(shown(document.uri), wanted),
  );
  return wanted;
}

/** Opens as a click in the explorer does, so that closing the editor closes the document too. */
export async function open(uri: vscode.Uri): Promise<{ document: vscode.TextDocument; editor: vscode.TextEditor }> {
  await vscode.commands.executeCommand('vscode.open', uri, { preview: false });
  const editor = await until(`${uri.path} opened`, () => {
    const active = vscode.window.activeTextEditor;
    return active?.document.uri.toString() === uri.toString() ? active : undefined;
  });
  return { document: editor.document, editor };
}

/** Closes every editor; what was edited is lost. */
export async function closeAll(): Promise<void> {
  for (const _ of vscode.window.tabGroups.all.flatMap(({ tabs }) => tabs)) {
    await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor');
  }
}

/** The first place of a text, as a range. */
export function find(document: vscode.TextDocument, text: string): vscode.Range {
  const offset = document.getText().indexOf(text);
  ok(offset >= 0, `"${text}" is in the document`);
  return new vscode.Range(document.positionAt(offset), document.positionAt(offset + text.length));
}

/** Edits as typing does. */
export async function replace(editor: vscode.TextEditor, range: vscode.Range, text: string): Promise<void> {
  ok(await editor.edit((edit) => edit.replace(range, text)), 'the edit was applied');
}

/** What the hover at a place says; lines and columns from 1. */
export async function hoverText(uri: vscode.Uri, line: number, character: number): Promise<string> {
  const position = new vscode.Position(line - 1, character - 1);
  const hovers = await vscode.commands.executeCommand<vscode.Hover[]>('vscode.executeHoverProvider', uri, position);
  const contents = hovers.flatMap((hover) => hover.contents);
  return contents.map((content) => (typeof content === 'string' ? content : content.value)).join('\n');
}

/** Markdown as it reads: escapes gone, the typographic minus as a plain one. */
export const plain = (markdown: string) => markdown.replace(/\\([^a-zA-Z0-9\s])/g, '$1').replace(/−/g, '-');

/** Files of a test's own, beside the samples; they are gone afterwards. */
export async function withFiles(
  texts: Readonly<Record<string, string>>,
  test: (uri: (name: string) => vscode.Uri) => Promise<void>,
): Promise<void> {
  const place = join(folder().fsPath, 'own');
  mkdirSync(place);
  try {
    for (const [name, text] of Object.entries(texts)) writeFileSync(join(place, name), text);
    await test((name) =>
      vscode.Uri.file(join(place, name)).with({ scheme: folder().scheme, authority: folder().authority }),
    );
  } finally {
    await closeAll();
    rmSync(place, { recursive: true, force: true });
  }
}
