// What goes on around a document that is not typing: large files, renaming, deleting, two editors, read-only, other languages.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import { chmodSync, readFileSync, unlinkSync, writeFileSync } from 'node:fs';
import * as vscode from 'vscode';
import {
  agrees,
  closeAll,
  codeOf,
  find,
  hoverText,
  NOT_YET,
  open,
  ours,
  pause,
  plain,
  replace,
  type Suite,
  until,
  withFiles,
} from './suite-kit';

const WATER = ['O 0.0000 0.0000 0.1173', 'H 0.0000 0.7572 -0.4692', 'H 0.0000 -0.7572 -0.4692'];
/** A water with a letter in a number. */
const WRONG = '3\nwater\nO 0 0 0.1173\nH 0 0.7572 -0.4692\nH 0 -O.7572 -0.4692\n';

const codes = (uri: vscode.Uri) => ours(uri).map(codeOf);
const has = (uri: vscode.Uri, code: string) => until(code, () => codes(uri).includes(code) || undefined);
const none = (uri: vscode.Uri) => until(`no findings in ${uri.path}`, () => codes(uri).length === 0 || undefined);

/** Waters on a lattice, all but touching. */
function waters(count: number): string {
  const side = Math.ceil(count ** (1 / 3));
  const lines = [String(3 * count), 'many waters'];
  for (let n = 0; n < count; n++) {
    const [x, y, z] = [n % side, Math.floor(n / side) % side, Math.floor(n / side ** 2)].map((index) => 3.2 * index);
    for (const line of WATER) {
      const [symbol, ...place] = line.split(' ') as [string, string, string, string];
      const moved = place.map((value, axis) => (Number(value) + [x!, y!, z!][axis]!).toFixed(4).padStart(11));
      lines.push(`${symbol} ${moved.join('')}`);
    }
  }
  return `${lines.join('\n')}\n`;
}

export const ROUGH: Suite = {
  'a file of 50,001 atoms gets its findings, and edits and hovers in it are answered': () =>
    withFiles({ 'large.xyz': waters(16_667) }, async (uri) => {
      const { document, editor } = await open(uri('large.xyz'));
      strictEqual(document.languageId, 'xyz');
      await has(document.uri, 'near-field');
      await replace(editor, document.lineAt(40_000).range, 'O 0.0 O.0 0.0');
      await has(document.uri, 'number-unreadable');
      ok(plain(await hoverText(document.uri, 3, 1)).includes('H2O'));
      await vscode.commands.executeCommand('undo');
      await until('mended', () => !codes(document.uri).includes('number-unreadable') || undefined);
    }),

  'a file renamed while it is open has its findings under the new name, in the language of that': () =>
    withFiles({ 'before.xyz': WRONG }, async (uri) => {
      await has((await open(uri('before.xyz'))).document.uri, 'number-unreadable');
      const rename = async (from: string, to: string) => {
        const edit = new vscode.WorkspaceEdit();
        edit.renameFile(uri(from), uri(to));
        ok(await vscode.workspace.applyEdit(edit));
      };
      await rename('before.xyz', 'after.xyz');
      await none(uri('before.xyz'));
      await has(uri('after.xyz'), 'number-unreadable');
      await rename('after.xyz', 'after.pdb');
      await none(uri('after.xyz'));
      await has(uri('after.pdb'), 'no-frame');
    }),

  'an edit in one of two editors of a file counts for both': () =>
    withFiles({ 'twice.xyz': WRONG }, async (uri) => {
      const { document, editor: left } = await open(uri('twice.xyz'));
      const right = await vscode.window.showTextDocument(document, { viewColumn: vscode.ViewColumn.Two });
      ok(left.viewColumn !== right.viewColumn && vscode.window.visibleTextEditors.length === 2);
      await agrees(document);
      await replace(right, find(document, 'O.7572'), '0.7572');
      strictEqual((await agrees(document)).filter((text) => text.includes('number-unreadable')).length, 0);
      await replace(left, document.lineAt(2).range, 'Qx 0 0 0.1173');
      strictEqual((await agrees(document)).filter((text) => text.includes('element-unknown')).length, 1);
      // The other editor goes, and the document stays.
      await vscode.commands.executeCommand('workbench.action.closeEditorsInGroup');
      await pause(NOT_YET);
      strictEqual(codes(document.uri).filter((code) => code === 'element-unknown').length, 1);
    }),

  'a file that is not to be written has its findings, and stays as it is': () =>
    withFiles({ 'locked.xyz': WRONG }, async (uri) => {
      const settings = vscode.workspace.getConfiguration('files');
      const target = vscode.ConfigurationTarget.Workspace;
      await settings.update('readonlyInclude', { '**/own/locked.xyz': true }, target);
      chmodSync(uri('locked.xyz').fsPath, 0o444);
      try {
        const { document } = await open(uri('locked.xyz'));
        await agrees(document);
        await has(document.uri, 'number-unreadable');
        ok(plain(await hoverText(document.uri, 3, 1)).includes('H2O'));
        await vscode.commands.executeCommand('type', { text: 'x' });
        await pause(NOT_YET);
        strictEqual(document.isDirty, false);
        strictEqual(document.getText(), WRONG);
        strictEqual(readFileSync(uri('locked.xyz').fsPath, 'utf8'), WRONG);
      } finally {
        await settings.update('readonlyInclude', undefined, target);
      }
    }),

  'a file deleted while it is open keeps its findings until it is closed': () =>
    withFiles({ 'gone.xyz': WRONG }, async (uri) => {
      const { document, editor } = await open(uri('gone.xyz'));
      await has(document.uri, 'number-unreadable');
      unlinkSync(uri('gone.xyz').fsPath);
      await pause(NOT_YET);
      await agrees(document);
      await replace(editor, document.lineAt(2).range, 'Qx 0 0 0.1173');
      await has(document.uri, 'element-unknown');
      await closeAll();
      await none(document.uri);
    }),

  'a file changed on disk by another program is read again': () =>
    withFiles({ 'changed.xyz': WRONG }, async (uri) => {
      const { document } = await open(uri('changed.xyz'));
      await has(document.uri, 'number-unreadable');
      writeFileSync(uri('changed.xyz').fsPath, WRONG.replace('O.7572', '0.7572').replace('3\n', '4\n'));
      await has(document.uri, 'count-wrong');
      strictEqual((await agrees(document)).filter((text) => text.includes('number-unreadable')).length, 0);
    }),

  'plain text that is made one of our languages by hand is checked, and no longer when it is plain text again':
    async () => {
      const before = await vscode.workspace.openTextDocument({ language: 'plaintext', content: WRONG });
      const editor = await vscode.window.showTextDocument(before);
      await pause(NOT_YET);
      deepStrictEqual(codes(before.uri), []);
      const asXyz = await vscode.languages.setTextDocumentLanguage(before, 'xyz');
      strictEqual(asXyz.uri.scheme, 'untitled');
      await has(asXyz.uri, 'number-unreadable');
      await agrees(asXyz);
      await replace(editor, find(asXyz, 'O.7572'), '0.7572');
      strictEqual((await agrees(asXyz)).filter((text) => text.includes('number-unreadable')).length, 0);
      ok(plain(await hoverText(asXyz.uri, 3, 1)).includes('H2O'));
      await vscode.languages.setTextDocumentLanguage(asXyz, 'plaintext');
      await none(asXyz.uri);
    },

  'a comment line of a million characters is read, and edits beside it and in it are answered': () => {
    const comment = `note="${'0.125 '.repeat(170_000)}" charge=0`;
    const lines = WRONG.split('\n');
    lines[1] = comment;
    return withFiles({ 'long.xyz': lines.join('\n') }, async (uri) => {
      const { document, editor } = await open(uri('long.xyz'));
      await has(document.uri, 'number-unreadable');
      await replace(editor, find(document, 'O.7572'), '0.7572');
      await until('mended', () => !codes(document.uri).includes('number-unreadable') || undefined);
      await replace(editor, find(document, 'charge=0'), 'charge=zero');
      await has(document.uri, 'number-unreadable');
      ok((await hoverText(document.uri, 2, comment.length - 4)).includes('charge'));
      await agrees(document);
    });
  },
};
