// Lenses and ways around in a document, as the editor asks for them.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import * as vscode from 'vscode';
import { agrees, find, open, polewise, type Suite, sample, until } from './suite-kit';

const ask = <T>(command: string, ...args: unknown[]) =>
  vscode.commands.executeCommand<T>(`vscode.execute${command}`, ...args);

/** The sample that names its fragments, and the place of the name of the second; its atoms stand in lines 9 to 11. */
async function named() {
  const { document, editor } = await open(sample('media-and-units.xyz'));
  await agrees(document);
  const name = find(document, 'water');
  return { document, editor, name, at: name.start.translate(0, 2) };
}

const WATER_LINES = [8, 9, 10];

const linesOf = (ranges: readonly vscode.Range[]) =>
  [
    ...new Set(
      ranges.flatMap(({ start, end }) => Array.from({ length: end.line - start.line + 1 }, (_, k) => start.line + k)),
    ),
  ].sort((a, b) => a - b);

export const NAVIGATION: Suite = {
  'a lens above each frame says what the command line counts, and leads to the panel': async () => {
    for (const name of ['water-cluster.xyz', 'polar-dimer-scan.xyz', 'binding-site.pdb']) {
      const { document } = await open(sample(name));
      await agrees(document);
      const args = ['pairs', '--format', 'json', '--language', document.languageId, '-'];
      const { frames } = polewise(args, document.getText()) as { frames: { pairs: { advice: string }[] }[] };
      const lenses = await ask<vscode.CodeLens[]>('CodeLensProvider', document.uri, 1000);
      const titles = lenses.flatMap(({ command }) => (command === undefined ? [] : [command.title]));
      strictEqual(titles.filter((title) => title === 'Open panel').length, frames.length);
      const computed = frames.map(({ pairs }) => pairs.filter(({ advice }) => advice === 'compute').length);
      const words = computed.map((n) => (n === 0 ? 'no pair to compute' : `${n} pair${n === 1 ? '' : 's'} to compute`));
      deepStrictEqual(
        titles.filter((title) => title.endsWith('to compute')),
        words,
      );
    }
  },

  'from the name of a fragment to its atoms': async () => {
    const { document, at } = await named();
    const found = await ask<(vscode.Location | vscode.LocationLink)[]>('DefinitionProvider', document.uri, at);
    deepStrictEqual(linesOf(found.map((it) => ('targetRange' in it ? it.targetRange : it.range))), WATER_LINES);
  },

  'from an atom to all that speaks of its fragment': async () => {
    const { document, name } = await named();
    const onAtom = new vscode.Position(WATER_LINES[0]!, 0);
    const found = await ask<vscode.Location[]>('ReferenceProvider', document.uri, onAtom);
    ok(
      found.some(({ range }) => range.isEqual(name)),
      'the name is among them',
    );
    const marked = await ask<vscode.DocumentHighlight[]>('DocumentHighlights', document.uri, onAtom);
    ok(marked.some(({ range }) => range.isEqual(name)));
    ok(WATER_LINES.every((line) => linesOf(marked.map(({ range }) => range)).includes(line)));
  },

  'a fragment is renamed by an edit of its name alone': async () => {
    const { document, name, at } = await named();
    const before = document.getText();
    const edit = await ask<vscode.WorkspaceEdit>('DocumentRenameProvider', document.uri, at, 'aqua');
    const [[, edits]] = edit.entries() as [[vscode.Uri, vscode.TextEdit[]]];
    strictEqual(edits.length, 1);
    ok(name.contains(edits[0]!.range));
    ok(await vscode.workspace.applyEdit(edit));
    strictEqual(document.getText(), before.replace('water', 'aqua'));
    await agrees(document);
    await vscode.commands.executeCommand('undo');
    await until('undone', () => document.getText() === before || undefined);
  },

  'a selection grows from a field to the document': async () => {
    const { document } = await named();
    const at = new vscode.Position(WATER_LINES[0]!, 10);
    const [chain] = await ask<vscode.SelectionRange[]>('SelectionRangeProvider', document.uri, [at]);
    const sizes: number[] = [];
    let last: vscode.Range | undefined;
    for (let range: vscode.SelectionRange | undefined = chain; range !== undefined; range = range.parent) {
      ok(range.range.contains(at) && (last === undefined || range.range.contains(last)));
      last = range.range;
      sizes.push(document.getText(range.range).length);
    }
    ok(sizes.length >= 4, sizes.join(' '));
    strictEqual(sizes.at(-1), document.getText().length);
  },
};
