// Runs inside the extension host, with the packaged extension installed and a copy of the samples as the open folder.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import { type ExecFileSyncOptionsWithStringEncoding, execFileSync } from 'node:child_process';
import { appendFileSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';

const WAIT = 20_000;
const NOT_YET = 1_000;

/** A finding in the words of the command line and of the editor alike; lines and columns from 1. */
interface Shown {
  readonly code: string;
  readonly severity: string;
  readonly message: string;
  readonly range: string;
}

const folder = () => vscode.workspace.workspaceFolders![0]!.uri;
const sample = (name: string) => vscode.Uri.joinPath(folder(), name);
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

async function until<T>(what: string, look: () => T | undefined | Promise<T | undefined>): Promise<T> {
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
function polewise(args: string[], input: string): unknown {
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

function codeOf({ code }: vscode.Diagnostic): string {
  return String(typeof code === 'object' ? code.value : code);
}

const ours = (uri: vscode.Uri) => vscode.languages.getDiagnostics(uri).filter(({ source }) => source === 'polewise');

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
async function agrees(document: vscode.TextDocument): Promise<string[]> {
  const wanted = expected(document);
  const same = () => (JSON.stringify(shown(document.uri)) === JSON.stringify(wanted) ? true : undefined);
  await until('findings equal to those of the command line', same).catch(() =>
    deepStrictEqual(shown(document.uri), wanted),
  );
  return wanted;
}

/** Opens as a click in the explorer does, so that closing the editor closes the document too. */
async function open(uri: vscode.Uri): Promise<{ document: vscode.TextDocument; editor: vscode.TextEditor }> {
  await vscode.commands.executeCommand('vscode.open', uri, { preview: false });
  const editor = await until(`${uri.path} opened`, () => {
    const active = vscode.window.activeTextEditor;
    return active?.document.uri.toString() === uri.toString() ? active : undefined;
  });
  return { document: editor.document, editor };
}

async function closeAll(): Promise<void> {
  for (const _ of vscode.window.tabGroups.all.flatMap(({ tabs }) => tabs)) {
    await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor');
  }
}

/** The first place of a text, as a range. */
function find(document: vscode.TextDocument, text: string): vscode.Range {
  const offset = document.getText().indexOf(text);
  ok(offset >= 0, `"${text}" is in the document`);
  return new vscode.Range(document.positionAt(offset), document.positionAt(offset + text.length));
}

async function replace(editor: vscode.TextEditor, range: vscode.Range, text: string): Promise<void> {
  ok(await editor.edit((edit) => edit.replace(range, text)), 'the edit was applied');
}

async function hoverText(uri: vscode.Uri, line: number, character: number): Promise<string> {
  const position = new vscode.Position(line - 1, character - 1);
  const hovers = await vscode.commands.executeCommand<vscode.Hover[]>('vscode.executeHoverProvider', uri, position);
  const contents = hovers.flatMap((hover) => hover.contents);
  return contents.map((content) => (typeof content === 'string' ? content : content.value)).join('\n');
}

/** Markdown as it reads: escapes gone, the typographic minus as a plain one. */
const plain = (markdown: string) => markdown.replace(/\\([^a-zA-Z0-9\s])/g, '$1').replace(/−/g, '-');

async function sampleAgrees(name: string, language: string, codes: string[]): Promise<void> {
  const { document } = await open(sample(name));
  strictEqual(document.languageId, language);
  const found = (await agrees(document)).join('\n');
  for (const code of codes) ok(found.includes(`"code":"${code}"`), `${code} is among the findings`);
}

const TESTS: Readonly<Record<string, () => Promise<void>>> = {
  'the installed package is the one under test, and sleeps until one of our files opens': async () => {
    const extension = vscode.extensions.getExtension('polewise.polewise');
    ok(extension, 'polewise is installed');
    ok(extension.extensionPath.includes('extensions'), extension.extensionPath);
    strictEqual(extension.isActive, false);
    await open(sample('water-cluster.xyz'));
    await until('polewise active', () => extension.isActive || undefined);
  },

  'typical-mistakes.xyz: language, codes, ranges, words': () =>
    sampleAgrees('typical-mistakes.xyz', 'xyz', ['number-unreadable', 'element-unknown', 'clash', 'dipole-reversed']),

  'binding-site.pdb: language, codes, ranges, words': () =>
    sampleAgrees('binding-site.pdb', 'pdb', ['near-field', 'edge-field', 'dipole-missing']),

  'every sample shows what the command line finds': async () => {
    const files = await vscode.workspace.fs.readDirectory(folder());
    const names = files.map(([name]) => name).filter((name) => /\.(xyz|pdb)$/.test(name));
    ok(names.length >= 9, 'the samples are there');
    for (const name of names) await agrees((await open(sample(name))).document);
  },

  'editing a digit changes the findings; undo brings them back': async () => {
    const { document, editor } = await open(sample('typical-mistakes.xyz'));
    const before = await agrees(document);
    await replace(editor, find(document, '      1.2.3 '), '      1.203 ');
    const mended = await agrees(document);
    strictEqual(before.filter((text) => text.includes('1.2.3')).length, 1);
    strictEqual(mended.filter((text) => text.includes('1.2.3')).length, 0);
    await vscode.commands.executeCommand('undo');
    await until('undone', () => document.getText().includes('      1.2.3 ') || undefined);
    deepStrictEqual(await agrees(document), before);
  },

  'moving an atom changes the physics': async () => {
    const { document, editor } = await open(sample('water-cluster.xyz'));
    await agrees(document);
    const second = find(document, '-0.0101');
    await replace(editor, second, '-1.0101');
    await agrees(document);
    await replace(
      editor,
      new vscode.Range(second.start, document.positionAt(document.offsetAt(second.start) + 7)),
      '-0.0101',
    );
    await agrees(document);
  },

  'a burst of edits ends on the findings of the last text': async () => {
    const { document, editor } = await open(sample('typical-mistakes.xyz'));
    for (let digit = 0; digit < 30; digit++) {
      const first = document.lineAt(2).text;
      await replace(editor, document.lineAt(2).range, first.replace(/-1\.\d/, `-1.${digit % 10}`));
    }
    await replace(editor, find(document, '\nQx '), '\nNa ');
    const now = await agrees(document);
    strictEqual(now.filter((text) => text.includes('"element-unknown"')).length, 0);
  },

  'hover on an atom: its fragment and its partners, with the numbers of the command line': async () => {
    const { document } = await open(sample('water-cluster.xyz'));
    await agrees(document);
    type Pair = { first: number; second: number; distanceA: number; referenceKJPerMol: number; advice: string };
    const pairs = polewise(['pairs', '--format', 'json', '--language', 'xyz', '-'], document.getText()) as {
      frames: { pairs: Pair[] }[];
    };
    const first = pairs.frames[0]!.pairs.filter((pair) => pair.first === 1);
    const strongest = first.sort((a, b) => Math.abs(b.referenceKJPerMol) - Math.abs(a.referenceKJPerMol))[0]!;
    const text = plain(await hoverText(document.uri, 3, 10));
    for (const word of ['H2O', '1.855', strongest.distanceA.toFixed(2), strongest.advice, 'kT', 'kJ/mol']) {
      ok(text.includes(word), `"${word}" in: ${text}`);
    }
  },

  'hover on the comment line, a key, a MODEL and a PDB atom': async () => {
    const { document } = await open(sample('water-cluster.xyz'));
    const count = plain(await hoverText(document.uri, 1, 1));
    ok(count.includes('7 fragments'), count);
    const key = find(document, 'kind_dipole_sizes');
    const about = plain(await hoverText(document.uri, 2, key.start.character + 3));
    ok(about.includes('kind_dipole_sizes'), about);
    const scan = (await open(sample('polar-dimer-scan.xyz'))).document;
    const comment = plain(await hoverText(scan.uri, 2, 3));
    ok(/frame 1 of \d+/i.test(comment) && comment.includes('2 fragments'), comment);
    const { document: pdb } = await open(sample('binding-site.pdb'));
    const model = plain(await hoverText(pdb.uri, find(pdb, 'MODEL ').start.line + 1, 2));
    ok(/frame 1 of 2/i.test(model), model);
    const ligand = plain(await hoverText(pdb.uri, find(pdb, ' LIG A').start.line + 1, 35));
    ok(/aminobenzonitrile|LIG:401/.test(ligand) && ligand.includes('6.600'), ligand);
  },

  'settings take effect at once': async () => {
    const { document } = await open(sample('typical-mistakes.xyz'));
    await agrees(document);
    const counts = () => ({
      unreadable: ours(document.uri).filter((diagnostic) => codeOf(diagnostic) === 'number-unreadable'),
      unknown: ours(document.uri).filter((diagnostic) => codeOf(diagnostic) === 'element-unknown'),
    });
    ok(counts().unreadable.length >= 2 && counts().unknown.length === 1);
    const set = (name: string, value: unknown) =>
      vscode.workspace.getConfiguration('polewise').update(name, value, vscode.ConfigurationTarget.Workspace);
    try {
      await set('severities', { 'number-unreadable': 'hint', 'element-unknown': 'off' });
      await until('severities in force', () => {
        const { unreadable, unknown } = counts();
        const softened = unreadable.every(({ severity }) => severity === vscode.DiagnosticSeverity.Hint);
        return (unreadable.length >= 2 && softened && unknown.length === 0) || undefined;
      });
      await set('energyUnit', 'meV');
      const water = (await open(sample('water-cluster.xyz'))).document;
      await until('the hover in meV', async () => (await hoverText(water.uri, 3, 10)).includes('meV') || undefined);
    } finally {
      await set('severities', undefined);
      await set('energyUnit', undefined);
    }
    await agrees(document);
  },

  'an untitled document of our language is checked like a file': async () => {
    const content = '2\nmade up\nO 0 0 0\nH 0 0 O.9\n';
    const document = await vscode.workspace.openTextDocument({ language: 'xyz', content });
    await vscode.window.showTextDocument(document);
    strictEqual(document.uri.scheme, 'untitled');
    const found = await agrees(document);
    ok(found.some((text) => text.includes('"number-unreadable"')));
  },

  'changing the language of a document changes what reads it': async () => {
    const { document } = await open(sample('water-cluster.xyz'));
    await agrees(document);
    const asPdb = await vscode.languages.setTextDocumentLanguage(document, 'pdb');
    await until(
      'no frame for a PDB reader',
      () => ours(asPdb.uri).some((it) => codeOf(it) === 'no-frame') || undefined,
    );
    strictEqual(ours(asPdb.uri).length, 1);
    const asText = await vscode.languages.setTextDocumentLanguage(asPdb, 'plaintext');
    await until('no findings in plain text', () => ours(asText.uri).length === 0 || undefined);
    await pause(NOT_YET);
    strictEqual(ours(asText.uri).length, 0);
    await agrees(await vscode.languages.setTextDocumentLanguage(asText, 'xyz'));
  },

  'closing takes the findings away': async () => {
    const { document } = await open(sample('typical-mistakes.xyz'));
    await agrees(document);
    await closeAll();
    await until('findings gone', () => ours(document.uri).length === 0 || undefined);
    await pause(NOT_YET);
    strictEqual(ours(document.uri).length, 0);
  },

  'nothing was written to the samples': async () => {
    for (const [name] of await vscode.workspace.fs.readDirectory(folder())) {
      if (!/\.(xyz|pdb)$/.test(name)) continue;
      const original = join(process.env.POLEWISE_CLI!, '../../../samples', name);
      strictEqual(readFileSync(sample(name).fsPath, 'utf8'), readFileSync(original, 'utf8'), name);
    }
  },
};

/** Called by the extension host. */
export async function run(): Promise<void> {
  const report = (line: string) => appendFileSync(process.env.POLEWISE_REPORT!, `${line}\n`);
  let failed = 0;
  for (const [name, test] of Object.entries(TESTS)) {
    const started = Date.now();
    let outcome = 'passed';
    try {
      await test();
    } catch (error) {
      failed++;
      outcome = 'FAILED';
      report(String((error as Error).stack));
    }
    await closeAll();
    report(`${outcome} ${name} (${Date.now() - started} ms)`);
  }
  if (failed > 0) throw new Error(`${failed} of ${Object.keys(TESTS).length} failed`);
}
