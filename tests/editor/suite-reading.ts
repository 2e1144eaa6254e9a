// Findings, hovers, settings and languages, inside the extension host.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import * as vscode from 'vscode';
import {
  agrees,
  closeAll,
  codeOf,
  find,
  folder,
  hoverText,
  NOT_YET,
  open,
  ours,
  pause,
  plain,
  polewise,
  replace,
  type Suite,
  sample,
  until,
} from './suite-kit';

async function sampleAgrees(name: string, language: string, codes: string[]): Promise<void> {
  const { document } = await open(sample(name));
  strictEqual(document.languageId, language);
  const found = (await agrees(document)).join('\n');
  for (const code of codes) ok(found.includes(`"code":"${code}"`), `${code} is among the findings`);
}

export const READING: Suite = {
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
};
