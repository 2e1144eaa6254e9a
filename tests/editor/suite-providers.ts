// What the editor asks of our language server, on every sample, and what it does with the answers.
import { deepStrictEqual, ok, strictEqual } from 'node:assert/strict';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';
import { agrees, codeOf, open, ours, plain, polewise, type Suite, sample, until, withFiles } from './suite-kit';

const SAMPLES = readdirSync(join(process.env.POLEWISE_CLI!, '../../../samples')).filter((name) =>
  /\.(xyz|pdb)$/.test(name),
);
const MISTAKES = SAMPLES.filter((name) => name.startsWith('typical-mistakes'));

const ask = <T>(command: string, ...args: unknown[]) =>
  vscode.commands.executeCommand<T>(`vscode.execute${command}`, ...args);

const whole = (document: vscode.TextDocument) => document.validateRange(new vscode.Range(0, 0, document.lineCount, 0));

/** How many frames the command line reads. */
function framesOf(document: vscode.TextDocument): number {
  // Without the pairs themselves, which are many.
  const args = ['pairs', '--cutoff', '1', '--format', 'json', '--language', document.languageId, '-'];
  return (polewise(args, document.getText()) as { frames: unknown[] }).frames.length;
}

/** A line on which an atom stands, from 0. */
function atomLine(document: vscode.TextDocument): number {
  const isAtom = document.languageId === 'pdb' ? /^(ATOM|HETATM)/ : /^\s*[A-Z][a-z]?\s+-?\d+\.\d+\s/;
  for (let line = 0; line < document.lineCount; line++) if (isAtom.test(document.lineAt(line).text)) return line;
  throw new Error('no atom in the document');
}

/** Runs a test on every sample, each of which names itself where it fails. */
async function everySample(test: (document: vscode.TextDocument) => Promise<void>): Promise<void> {
  for (const name of SAMPLES) {
    try {
      const { document } = await open(sample(name));
      await agrees(document);
      await test(document);
    } catch (error) {
      throw new Error(name, { cause: error });
    }
  }
}

interface Remedy {
  readonly title: string;
  readonly edits: readonly vscode.TextEdit[];
  readonly edit: vscode.WorkspaceEdit;
  /** Codes of the findings at its place; which of them it is for, the answer does not say. */
  readonly codes: readonly string[];
}

async function quickFixes(document: vscode.TextDocument): Promise<Remedy[]> {
  const found = new Map<string, Remedy>();
  const kind = vscode.CodeActionKind.QuickFix.value;
  const most = 200;
  for (const { range } of ours(document.uri)) {
    const codes = ours(document.uri).flatMap((it) => (it.range.intersection(range) === undefined ? [] : [codeOf(it)]));
    const actions = await ask<vscode.CodeAction[]>('CodeActionProvider', document.uri, range, kind, most);
    for (const { title, edit } of actions) {
      ok(edit, `${title} has an edit`);
      const [entry, ...others] = edit.entries();
      deepStrictEqual(others, [], `${title} edits one file`);
      const edits = entry![1];
      found.set(JSON.stringify([title, edits]), { title, edits, edit, codes });
    }
  }
  return [...found.values()];
}

/** A text after edits that do not overlap, made here without the editor. */
function edited(document: vscode.TextDocument, edits: readonly vscode.TextEdit[]): string {
  const text = document.getText();
  return edits
    .map(({ range, newText }) => ({ from: document.offsetAt(range.start), to: document.offsetAt(range.end), newText }))
    .sort((a, b) => b.from - a.from)
    .reduce((result, { from, to, newText }) => result.slice(0, from) + newText + result.slice(to), text);
}

/** Takes one remedy after another, each in the file as it was, and looks at the findings and at the bytes on disk. */
async function everyFix(uri: vscode.Uri): Promise<number> {
  const { document } = await open(uri);
  await agrees(document);
  const before = ours(uri).map((diagnostic) => ({ code: codeOf(diagnostic), isError: diagnostic.severity === 0 }));
  const bytes = readFileSync(uri.fsPath, 'utf8');
  const count = (await quickFixes(document)).length;
  for (let index = 0; index < count; index++) {
    const { title, edit, edits, codes } = (await quickFixes(document))[index]!;
    const expected = edited(document, edits);
    ok(expected !== bytes, `${title} changes something`);
    ok(await vscode.workspace.applyEdit(edit), title);
    ok(await document.save());
    strictEqual(readFileSync(uri.fsPath, 'utf8'), expected, title);
    await agrees(document);
    const after = ours(uri);
    // Silence takes all findings of a code away, every other remedy the one that it is for.
    const isSilence = title.startsWith('Do not report');
    const isMended = codes.some((code) => {
      const left = after.filter((it) => codeOf(it) === code).length;
      return left === (isSilence ? 0 : before.filter((it) => it.code === code).length - 1);
    });
    ok(isMended, `${title} takes a finding away`);
    const errors = after.filter(({ severity }) => severity === 0).length;
    ok(errors <= before.filter(({ isError }) => isError).length, `${title} brings no error`);
    await vscode.commands.executeCommand('undo');
    await until('undone', () => document.getText() === bytes || undefined);
    ok(await document.save());
    await agrees(document);
  }
  return count;
}

export const PROVIDERS: Suite = {
  'every sample: a hover on an atom and on the first line': () =>
    everySample(async (document) => {
      for (const line of [atomLine(document), 0]) {
        const position = new vscode.Position(line, 1);
        const hovers = await ask<vscode.Hover[]>('HoverProvider', document.uri, position);
        if (line > 0 || document.languageId === 'xyz') strictEqual(hovers.length > 0, true, `line ${line}`);
        for (const { range } of hovers) ok(range?.contains(position));
      }
    }),

  'every sample: hints at the ends of lines, with a tooltip': () =>
    everySample(async (document) => {
      const hints = await ask<vscode.InlayHint[]>('InlayHintProvider', document.uri, whole(document));
      ok(hints.length > 0);
      for (const { position, label } of hints) {
        strictEqual(position.character, document.lineAt(position.line).text.trimEnd().length);
        ok(/Å to |, no dipole| D | e /.test(plain(String(label))), String(label));
      }
    }),

  'every sample: one symbol and one fold for each frame': () =>
    everySample(async (document) => {
      const frames = framesOf(document);
      const symbols = await ask<vscode.DocumentSymbol[]>('DocumentSymbolProvider', document.uri);
      strictEqual(symbols.filter(({ name }) => /^(Frame|Model) \d+/.test(name)).length, frames);
      for (const { range, selectionRange } of symbols) ok(range.contains(selectionRange));
      const folds = await ask<vscode.FoldingRange[]>('FoldingRangeProvider', document.uri);
      ok(folds.length >= frames, `${folds.length} folds, ${frames} frames`);
      for (const { start, end } of folds) ok(start < end && end < document.lineCount);
    }),

  'every sample: completion of keys where an annotation may stand': () =>
    everySample(async (document) => {
      const xyz = document.languageId === 'xyz';
      const line = xyz
        ? 1
        : document
            .getText()
            .split('\n')
            .findIndex((text) => /^REMARK {2}99 /.test(text));
      if (line < 0) return;
      const end = document.lineAt(line).range.end;
      const list = await ask<vscode.CompletionList>('CompletionItemProvider', document.uri, end);
      ok(list, 'there is a list');
      const start = new vscode.Position(line, xyz ? 0 : 11);
      const { items } = await ask<vscode.CompletionList>('CompletionItemProvider', document.uri, start);
      const labels = items.map(({ label }) => (typeof label === 'string' ? label : label.label));
      // No sample has it: a key that stands there already need not be offered again.
      ok(labels.includes('silence'), labels.join(' '));
    }),

  'every quick fix in the mistakes takes its finding away and changes nothing else, whatever the line end':
    async () => {
      const texts = Object.fromEntries(MISTAKES.map((name) => [name, readFileSync(sample(name).fsPath, 'utf8')]));
      // Over the protocol each is taken with both line ends; here one file has the one and the other the other.
      texts['typical-mistakes.pdb'] = texts['typical-mistakes.pdb']!.replaceAll('\n', '\r\n');
      await withFiles(texts, async (uri) => {
        const counts: Record<string, number> = {};
        for (const name of MISTAKES) counts[name] = await everyFix(uri(name));
        ok(counts['typical-mistakes.xyz']! >= 15 && counts['typical-mistakes.pdb']! >= 5, JSON.stringify(counts));
      });
    },
};
