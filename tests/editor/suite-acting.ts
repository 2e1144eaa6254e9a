// Acting on what was found: dimer files, the pair table, the sample, and files that cannot be changed.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import { type ExecFileSyncOptionsWithStringEncoding, execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as vscode from 'vscode';
import { folder, open, type Suite, sample } from './suite-kit';

const run = (command: string, ...args: unknown[]) => vscode.commands.executeCommand(`polewise.${command}`, ...args);
const bytesOf = async (uri: vscode.Uri) => new TextDecoder().decode(await vscode.workspace.fs.readFile(uri));

/** What the command line prints of a sample. */
function polewise(...args: string[]): string {
  const env = { ...process.env, ELECTRON_RUN_AS_NODE: '1' };
  const cwd = folder().fsPath;
  const options: ExecFileSyncOptionsWithStringEncoding = { env, cwd, encoding: 'utf8', stdio: 'pipe' };
  return execFileSync(process.execPath, [process.env.POLEWISE_CLI!, ...args], options);
}

/** A folder beside the samples, taken away at the end. */
async function withJobs(test: (jobs: vscode.Uri) => Promise<void>): Promise<void> {
  const jobs = sample('jobs');
  await vscode.workspace.fs.createDirectory(jobs);
  try {
    await test(jobs);
  } finally {
    await vscode.workspace.fs.delete(jobs, { recursive: true });
  }
}

const WATER_PAIRS = [
  [1, 2],
  [2, 3],
];

/** One file of a file system that nobody can write to. */
class ReadOnlyFiles implements vscode.FileSystemProvider {
  readonly onDidChangeFile = new vscode.EventEmitter<vscode.FileChangeEvent[]>().event;
  readonly #bytes: Uint8Array;

  constructor(text: string) {
    this.#bytes = new TextEncoder().encode(text);
  }

  stat(uri: vscode.Uri): vscode.FileStat {
    if (!uri.path.endsWith('/cluster.xyz')) throw vscode.FileSystemError.FileNotFound(uri);
    return { type: vscode.FileType.File, ctime: 0, mtime: 0, size: this.#bytes.length };
  }

  readFile(): Uint8Array {
    return this.#bytes;
  }

  watch(): vscode.Disposable {
    return new vscode.Disposable(() => undefined);
  }

  readDirectory(): [string, vscode.FileType][] {
    return [['cluster.xyz', vscode.FileType.File]];
  }

  #refuse(): never {
    throw vscode.FileSystemError.NoPermissions('nothing can be written here');
  }

  writeFile = () => this.#refuse();
  createDirectory = () => this.#refuse();
  delete = () => this.#refuse();
  rename = () => this.#refuse();
}

const EDITING = ['insertHeader', 'addDipoles', 'chooseTemperature', 'chooseMedium'];

export const ACTING: Suite = {
  'every command of the manifest is there': async () => {
    await open(sample('water-cluster.xyz'));
    const extension = vscode.extensions.getExtension('polewise.polewise')!;
    await extension.activate();
    const known = await vscode.commands.getCommands(true);
    const names: { command: string }[] = extension.packageJSON.contributes.commands;
    for (const { command } of names) ok(known.includes(command), `${command} is registered`);
  },
  'writing dimers: named pairs become the files of the command line': () =>
    withJobs(async (jobs) => {
      const { document } = await open(sample('water-cluster.xyz'));
      const argument = { uri: document.uri.toString(), frame: 1, pairs: WATER_PAIRS, folder: jobs.toString() };
      await run('writeDimers', argument);
      const names = (await vscode.workspace.fs.readDirectory(jobs)).map(([name]) => name).sort();
      deepStrictEqual(names, ['water-cluster-1-1-2.xyz', 'water-cluster-1-2-3.xyz']);
      const scratch = mkdtempSync(join(tmpdir(), 'polewise-dimers-'));
      try {
        polewise('dimers', 'water-cluster.xyz', '--out', scratch, '--advice', 'accept,review,compute,repair');
        ok(readdirSync(scratch).length > names.length);
        for (const name of names) {
          strictEqual(await bytesOf(vscode.Uri.joinPath(jobs, name)), readFileSync(join(scratch, name), 'utf8'));
        }
      } finally {
        rmSync(scratch, { recursive: true });
      }
    }),
  'writing dimers: existing files are kept or overwritten as told': () =>
    withJobs(async (jobs) => {
      const { document } = await open(sample('water-cluster.xyz'));
      const mine = vscode.Uri.joinPath(jobs, 'water-cluster-1-1-2.xyz');
      const other = vscode.Uri.joinPath(jobs, 'water-cluster-1-2-3.xyz');
      await vscode.workspace.fs.writeFile(mine, new TextEncoder().encode('mine'));
      const argument = { uri: document.uri.toString(), frame: 1, pairs: WATER_PAIRS, folder: jobs.toString() };
      await run('writeDimers', { ...argument, existing: 'keep' });
      strictEqual(await bytesOf(mine), 'mine');
      ok((await bytesOf(other)).startsWith('6\n'));
      await run('writeDimers', { ...argument, existing: 'overwrite' });
      ok((await bytesOf(mine)).startsWith('6\n'));
    }),
  'copying the pair table: what the command line prints, of the frame at the cursor': async () => {
    await open(sample('polar-dimer-scan.xyz'));
    const second = new vscode.Position(20, 0);
    vscode.window.activeTextEditor!.selection = new vscode.Selection(second, second);
    await run('copyPairTable');
    const expected = polewise('pairs', '--format', 'csv', '--frame', '2', 'polar-dimer-scan.xyz');
    strictEqual(await vscode.env.clipboard.readText(), expected);
  },
  'the sample opens as an unsaved text of our language, once, and its pairs can be written': () =>
    withJobs(async (jobs) => {
      await run('openSample');
      const { document, selection } = vscode.window.activeTextEditor!;
      ok(document.isUntitled, document.uri.toString());
      strictEqual(document.languageId, 'xyz');
      strictEqual(document.getText(), await bytesOf(sample('bare-cluster.xyz')));
      strictEqual(selection.active.line, 2);
      await run('explain');
      await run('openSample');
      strictEqual(vscode.window.activeTextEditor!.document, document);
      const argument = { uri: document.uri.toString(), frame: 1, pairs: [[1, 2]], folder: jobs.toString() };
      await run('writeDimers', argument);
      const names = (await vscode.workspace.fs.readDirectory(jobs)).map(([name]) => name);
      deepStrictEqual(names, ['sample-cluster-1-1-2.xyz']);
    }),
  'missing dipoles and a header are written into the file, and undo takes them back': async () => {
    for (const [command, key] of [
      ['addDipoles', 'fragment_dipoles='],
      ['insertHeader', 'fragment_names='],
    ] as const) {
      const { document } = await open(sample('bare-cluster.xyz'));
      const before = document.getText();
      await run(command);
      ok(document.lineAt(1).text.includes(key), document.lineAt(1).text);
      strictEqual(document.lineAt(0).text, '22');
      await vscode.commands.executeCommand('undo');
      strictEqual(document.getText(), before);
    }
  },

  'a file that is read-only for the session is not changed': async () => {
    const { document } = await open(sample('bare-cluster.xyz'));
    const before = document.getText();
    await vscode.commands.executeCommand('workbench.action.files.setActiveEditorReadonlyInSession');
    try {
      await run('addDipoles');
      strictEqual(document.getText(), before);
    } finally {
      await vscode.commands.executeCommand('workbench.action.files.resetActiveEditorReadonlyInSession');
    }
  },

  'a read-only file is read, and commands that would change it or write beside it do not': async () => {
    const text = await bytesOf(sample('bare-cluster.xyz'));
    const files = new ReadOnlyFiles(text);
    const provider = vscode.workspace.registerFileSystemProvider('polewise-test', files, { isReadonly: true });
    try {
      const uri = vscode.Uri.parse('polewise-test:/cluster.xyz');
      const { document } = await open(uri);
      for (const command of EDITING) await run(command);
      await run('copyPairTable');
      strictEqual((await vscode.env.clipboard.readText()).split('\n').length, 5);
      await run('writeDimers', { uri: uri.toString(), frame: 1, pairs: [[1, 2]], folder: 'polewise-test:/' });
      strictEqual(document.getText(), text);
      strictEqual(document.isDirty, false);
    } finally {
      await vscode.commands.executeCommand('workbench.action.closeActiveEditor');
      provider.dispose();
    }
  },
  'commands without an editor of ours, or with an argument of no sense, say so and do nothing': async () => {
    await vscode.commands.executeCommand('workbench.action.closeAllEditors');
    for (const command of [...EDITING, 'writeDimers', 'copyPairTable', 'explain']) await run(command);
    const text = await vscode.workspace.openTextDocument({ language: 'plaintext', content: 'no frame' });
    for (const command of [...EDITING, 'writeDimers', 'copyPairTable']) await run(command, text.uri);
    const argument = { uri: sample('water-cluster.xyz').toString(), frame: 99, pairs: [[1, 2]] };
    await run('writeDimers', argument);
    await run('writeDimers', { ...argument, frame: 1, pairs: [[1, 99]] });
  },
};
