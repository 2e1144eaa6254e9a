import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type CodeAction,
  CodeActionRequest,
  CodeActionResolveRequest,
  type CompletionItem,
  CompletionRequest,
  type Diagnostic,
  type DocumentSymbol,
  DocumentSymbolRequest,
  FoldingRangeRequest,
  InlayHintRequest,
  LSPErrorCodes,
  type Range,
  type TextDocumentEdit,
} from 'vscode-languageserver-protocol';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';
import { WireClient } from './client';

/** Remedies, outline and folding over a real connection. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
let client: WireClient;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

const open = (text: string, language = 'xyz') => client.openNew(text, language);

function actions(uri: string, range: Range, diagnostics: Diagnostic[], only?: string[]): Promise<CodeAction[]> {
  const context = { diagnostics, ...(only === undefined ? {} : { only }) };
  return client.connection.sendRequest(CodeActionRequest.type, {
    textDocument: { uri },
    range,
    context,
  }) as Promise<CodeAction[]>;
}

/** The text after the edits of an action, which must be for the version that is open. */
function applied(text: string, action: CodeAction): string {
  const [change] = action.edit!.documentChanges as TextDocumentEdit[];
  expect(change!.textDocument.version).toBe(1);
  const { starts } = indexLines(snapshotOf(text));
  const offset = ({ line, character }: Range['start']) => (starts[line] ?? text.length) + character;
  return [...change!.edits]
    .map((edit) => ({ range: edit.range, newText: 'newText' in edit ? edit.newText : '' }))
    .sort((a, b) => offset(b.range.start) - offset(a.range.start))
    .reduce((result, { range, newText }) => {
      return result.slice(0, offset(range.start)) + newText + result.slice(offset(range.end));
    }, text);
}

const whole = (text: string): Range => ({
  start: { line: 0, character: 0 },
  end: { line: text.split('\n').length, character: 0 },
});

describe.each(SAMPLES)('in %s', (name) => {
  const text = readFileSync(`samples/${name}`, 'utf8');
  const language = name.endsWith('.pdb') ? 'pdb' : 'xyz';

  it('every remedy takes away the finding that it is for, and brings no error', async () => {
    const uri = open(text, language);
    const before = await client.diagnostics(uri);
    for (const action of await actions(uri, whole(text), before, ['quickfix'])) {
      if (action.edit === undefined) continue;
      const [mended] = action.diagnostics!;
      const after = await client.diagnostics(open(applied(text, action), language));
      const count = (list: Diagnostic[]) => list.filter(({ code }) => code === mended!.code).length;
      expect(count(after), action.title).toBeLessThan(count(before));
      expect(after.filter(({ severity }) => severity === 1).length).toBeLessThanOrEqual(
        before.filter(({ severity }) => severity === 1).length,
      );
    }
  });
});

describe('remedies', () => {
  const WRONG = '5\n\nO 0 0 0.1173\nH 0 0.7572 -0.4692\nH 0 -0.7572 -0.4692\n';

  it('are those of the place asked about', async () => {
    const uri = open(WRONG);
    const found = await client.diagnostics(uri);
    const at = (line: number) => ({ start: { line, character: 0 }, end: { line, character: 0 } });
    const [only, ...others] = await actions(uri, at(0), found, ['quickfix']);
    expect(only).toMatchObject({ title: 'Set the count to 3', kind: 'quickfix', isPreferred: true });
    expect(only!.diagnostics).toHaveLength(1);
    expect(others).toEqual([]);
    expect(applied(WRONG, only!)).toBe(WRONG.replace('5', '3'));
    expect(await actions(uri, at(3), found)).toEqual([]);
  });

  it('that are safe are applied all at once where that is asked for', async () => {
    const uri = open(WRONG);
    const [all] = await actions(uri, whole(WRONG), [], ['source.fixAll']);
    expect(all).toMatchObject({ kind: 'source.fixAll.polewise' });
    expect(applied(WRONG, all!)).toBe(WRONG.replace('5', '3'));
  });

  it('of a closed document are none', async () => {
    expect(await actions('file:///never/opened.xyz', whole(WRONG), [])).toEqual([]);
  });
});

describe('remedies for an editor that asks for edits later', () => {
  const WRONG = '5\n\nO 0 0 0.1173\nH 0 0.7572 -0.4692\nH 0 -0.7572 -0.4692\n';
  let own: WireClient;
  const LAZY = { textDocument: { codeAction: { dataSupport: true, resolveSupport: { properties: ['edit'] } } } };

  beforeAll(async () => {
    own = await WireClient.start({ abilities: LAZY });
  });
  afterAll(async () => {
    await own.stop();
  });

  const offered = (uri: string, only?: string[]) =>
    own.connection.sendRequest(CodeActionRequest.type, {
      textDocument: { uri },
      range: whole(WRONG),
      context: { diagnostics: [], ...(only === undefined ? {} : { only }) },
    }) as Promise<CodeAction[]>;
  const resolved = (action: CodeAction) => own.connection.sendRequest(CodeActionResolveRequest.type, action);

  it.each([['quickfix'], ['source.fixAll']])('come without them and get them when chosen: %s', async (kind) => {
    const uri = `file:///lazy/${kind}.xyz`;
    own.open(uri, WRONG);
    const [action] = await offered(uri, [kind]);
    expect(action!.edit).toBeUndefined();
    expect(applied(WRONG, await resolved(action!))).toBe(WRONG.replace('5', '3'));
  });

  it('get none for a text that is another by now', async () => {
    const uri = 'file:///lazy/changed.xyz';
    own.open(uri, WRONG);
    const [action] = await offered(uri);
    own.change(uri, 2, [{ text: `${WRONG}\n` }]);
    await expect(resolved(action!)).rejects.toMatchObject({ code: LSPErrorCodes.ContentModified });
    own.close(uri);
    await expect(resolved(action!)).rejects.toMatchObject({ code: LSPErrorCodes.ContentModified });
  });
});

describe('hints', () => {
  const hints = async (own: WireClient, uri: string, from: number, to: number) => {
    const range = { start: { line: from, character: 0 }, end: { line: to, character: 0 } };
    const found = await own.connection.sendRequest(InlayHintRequest.type, { textDocument: { uri }, range });
    return found!.map(({ position, label }) => `${position.line}: ${label as string}`);
  };
  const text = readFileSync('samples/bare-cluster.xyz', 'utf8');

  it('tell fragments, dipoles and closest contacts, at the ends of lines', async () => {
    const all = await hints(client, open(text), 0, 30);
    expect(all).toContain('2: C3H6O (1) 2.88 D library');
    expect(all).toContain('12: C2H5FO (2) 1.70 D estimated');
    expect(all).toContain('21: H2O (3) 1.85 D library');
    const { distanceA, atoms } = (await import('../support/analyse')).analyse(text).pairs[0]!.map((pair) => ({
      distanceA: pair.closestA,
      atoms: [pair.first, pair.second],
    }))[0]!;
    expect(atoms).toEqual([0, 1]);
    expect(all.some((hint) => hint.includes(`${distanceA.toFixed(2)} Å to `))).toBe(true);
  });

  it('are given for the lines asked for alone', async () => {
    const some = await hints(client, open(text), 20, 22);
    expect(some.map((hint) => Number(hint.split(':')[0])).every((line) => line >= 20 && line <= 22)).toBe(true);
    expect(some).toContain('21: H2O (3) 1.85 D library');
  });

  it('are switched off kind by kind', async () => {
    const own = await WireClient.start({ settings: { hints: { fragments: false } } });
    own.open('file:///h.xyz', text);
    const contacts = await hints(own, 'file:///h.xyz', 0, 30);
    expect(contacts.length).toBeGreaterThan(0);
    expect(contacts.every((hint) => hint.includes('Å to '))).toBe(true);
    own.configure({ hints: { fragments: false, contacts: false } });
    expect(await hints(own, 'file:///h.xyz', 0, 30)).toEqual([]);
    await own.stop();
  });
});

describe('completion', () => {
  const labels = async (text: string, line: number, language = 'xyz') => {
    const character = text.split('\n')[line]!.length;
    const items = await client.connection.sendRequest(CompletionRequest.type, {
      textDocument: { uri: open(text, language) },
      position: { line, character },
    });
    return items as CompletionItem[];
  };

  it('offers the keys of a comment line that are not given yet, with what they mean', async () => {
    const items = await labels('3\ndipole_unit=D kind_', 1);
    expect(items.map(({ label }) => label)).toContain('kind_axes');
    expect(items.map(({ label }) => label)).not.toContain('dipole_unit');
    const axes = items.find(({ label }) => label === 'kind_axes')!;
    expect(axes.detail).toContain('composition');
    expect(axes.textEdit).toEqual({
      range: { start: { line: 1, character: 14 }, end: { line: 1, character: 19 } },
      newText: 'kind_axes=',
    });
  });

  it.each([
    ['3\nrelative_permittivity=tol', 'toluene'],
    ['3\nsilence="near-field edge', 'edge-field'],
    ['3\ndipole_unit=', 'e*angstrom'],
  ])('offers the values of a key: %s', async (text, label) => {
    expect((await labels(text, 1)).map((item) => item.label)).toContain(label);
  });

  it('offers the keys of a REMARK, and none on other lines', async () => {
    expect((await labels('REMARK  99 fragment=*:HOH:* dip', 0, 'pdb')).map(({ label }) => label)).toContain(
      'dipole_size',
    );
    expect(await labels('3\nwater\nO 0.1', 2)).toEqual([]);
    expect(await labels('3\nwater\nO 0 0 0', 0)).toEqual([]);
    expect(await labels('ATOM  ', 0, 'pdb')).toEqual([]);
  });
});

describe('the outline', () => {
  const symbols = async (uri: string) =>
    (await client.connection.sendRequest(DocumentSymbolRequest.type, { textDocument: { uri } })) as DocumentSymbol[];

  it('shows the frame, and its fragments with composition and charge', async () => {
    const uri = open(readFileSync('samples/ion-pair.xyz', 'utf8'));
    const [frame, ...others] = await symbols(uri);
    expect(others).toEqual([]);
    expect(frame).toMatchObject({ name: 'Frame 1', range: { start: { line: 0, character: 0 } } });
    expect(frame!.children!.map(({ name, detail }) => `${name}: ${detail}`).slice(0, 2)).toEqual([
      'ammonium (1): H4N, +1.00 e',
      'formate (2): CHO2, −1.00 e',
    ]);
  });

  it('shows every frame of a trajectory, and each folds', async () => {
    const uri = open(readFileSync('samples/polar-dimer-scan.xyz', 'utf8'));
    expect(await symbols(uri)).toHaveLength(12);
    const folds = await client.connection.sendRequest(FoldingRangeRequest.type, { textDocument: { uri } });
    expect(folds).toHaveLength(12);
    expect(folds![1]).toEqual({ startLine: 14, endLine: 27 });
  });
});
