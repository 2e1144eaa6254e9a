import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  CodeLensRequest,
  CodeLensResolveRequest,
  CompletionRequest,
  DefinitionRequest,
  DocumentHighlightRequest,
  type DocumentSymbol,
  DocumentSymbolRequest,
  InlayHintRequest,
  LSPErrorCodes,
  SelectionRangeRequest,
} from 'vscode-languageserver-protocol';
import { waterBox } from '../bench/water';
import { WireClient } from './client';

/** Parts that switch off by themselves as documents grow, over a real connection. */

const CLUSTER = readFileSync('samples/water-cluster.xyz', 'utf8');
const ATOMS = 24;
const SCAN = readFileSync('samples/polar-dimer-scan.xyz', 'utf8');

let client: WireClient;
let count = 0;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

/** What is shown of a text under some settings, and what the status says. */
async function shown(settings: unknown, text = CLUSTER) {
  const uri = `file:///limits/${++count}.xyz`;
  client.configure(settings);
  client.open(uri, text);
  const textDocument = { uri };
  const range = { start: { line: 0, character: 0 }, end: { line: 100, character: 0 } };
  const hints = (await client.connection.sendRequest(InlayHintRequest.type, { textDocument, range }))!;
  const lenses = (await client.connection.sendRequest(CodeLensRequest.type, { textDocument }))!;
  const symbols = (await client.connection.sendRequest(DocumentSymbolRequest.type, {
    textDocument,
  })) as DocumentSymbol[];
  const isTold = () => client.statuses.some((status) => status.uri === uri && status.state !== 'busy');
  await client.until(isTold);
  const { state, text: words, detail } = [...client.statuses].reverse().find((status) => status.uri === uri)!;
  client.close(uri);
  return {
    hints: hints.length > 0,
    lens: lenses.length > 0,
    frames: symbols.length,
    fragments: symbols[0]?.children?.length ?? 0,
    state,
    words,
    detail,
  };
}

const ALL = { hints: true, lens: true, frames: 1, fragments: 7, state: 'idle' };

describe('a document of 24 atoms', () => {
  it.each<[what: string, limits: Record<string, number>, expected: object, off: string]>([
    ['no limit below', { hints: ATOMS, lens: ATOMS, outline: ATOMS }, ALL, ''],
    ['hints', { hints: ATOMS - 1 }, { ...ALL, hints: false, state: 'limited' }, 'hints'],
    ['lenses', { lens: ATOMS - 1 }, { ...ALL, lens: false, state: 'limited' }, 'lens'],
    ['outline', { outline: ATOMS - 1 }, { ...ALL, fragments: 0, state: 'limited' }, 'outline'],
    [
      'all',
      { hints: 1, lens: 1, outline: 1 },
      { hints: false, lens: false, frames: 1, fragments: 0, state: 'limited' },
      'hints, lens, outline',
    ],
    ['hints never', { hints: 0 }, { ...ALL, hints: false }, ''],
    ['lenses never', { lens: 0 }, { ...ALL, lens: false }, ''],
    ['outline never', { outline: 0 }, { ...ALL, frames: 0, fragments: 0 }, ''],
  ])('%s', async (_, limits, expected, off) => {
    const found = await shown({ limits });
    expect(found).toMatchObject(expected);
    expect(found.words).toBe(`1 frame, 7 fragments, 21 pairs${off === '' ? '' : `; ${off} off`}`);
    for (const part of off === '' ? [] : off.split(', ')) {
      expect(found.detail).toContain(`polewise.limits.${part} is ${limits[part]}`);
    }
    expect(found.detail.includes('Off for')).toBe(off !== '');
  });

  it('keeps hints, lenses and outline where the pairs alone are too many', async () => {
    const found = await shown({ analysisLimit: 10 });
    expect(found).toMatchObject({ ...ALL, state: 'limited', words: '1 frame, pairs off' });
    const less = await shown({ analysisLimit: 10, limits: { hints: 10 } });
    expect(less).toMatchObject({ hints: false, lens: true, words: '1 frame, pairs, hints off' });
  });

  it('takes the default for a limit that is no number, and says so', async () => {
    expect(await shown({ limits: { hints: 'few' } })).toMatchObject({
      ...ALL,
      detail: expect.stringContaining('polewise.limits.hints is no number'),
    });
  });
});

describe('a trajectory', () => {
  it('counts the atoms of all frames, and misses no fragments in an outline that never has them', async () => {
    const found = await shown({ limits: { lens: 143, outline: 143 } }, SCAN);
    expect(found).toMatchObject({ lens: false, hints: true, frames: 12, fragments: 0, state: 'limited' });
    expect(found.words).toMatch(/; lens off$/);
  });
});

describe('a frame of more than 5000 fragments', () => {
  const lines = Array.from({ length: 5001 }, (_, k) => `Ar ${10 * (k % 100)} ${10 * Math.floor(k / 100)} 0`);
  const LARGE = `5001\n\n${lines.join('\n')}\n`;

  it('is outlined without them, and the status says so without calling it a limit of the settings', async () => {
    const found = await shown({}, LARGE);
    expect(found).toMatchObject({ frames: 1, fragments: 0, state: 'idle' });
    expect(found.words).toMatch(/^1 frame, 5001 fragments, \d+ pairs$/);
    expect(found.detail).toContain('fragments in the outline (never more than 5000)');
  });
});

describe('a frame of 50,000 atoms', () => {
  const { xyz, atoms } = waterBox(50_000);
  const text = xyz.replace('water', 'kind_axes="H2O:O>H"');
  const uri = 'file:///limits/large.xyz';
  const textDocument = { uri };
  const at = (line: number, character: number) => ({ textDocument, position: { line, character } });

  it('is answered at every place, and meanwhile others are', async () => {
    client.configure({});
    client.open(uri, text);
    const { connection } = client;
    const [lens] = (await connection.sendRequest(CodeLensRequest.type, { textDocument }))!;
    const order: string[] = [];
    const resolved = connection.sendRequest(CodeLensResolveRequest.type, lens!).then(({ command }) => {
      order.push('lens');
      return command!.title;
    });
    await connection.sendRequest(CompletionRequest.type, at(1, 11)).then(() => order.push('completion'));
    expect(await resolved).toMatch(/^H2O \(\d+\) – H2O \(\d+\): /);
    expect(order).toEqual(['completion', 'lens']);
    // A composition that all fragments have leads to all their lines, which follow one another.
    expect(await connection.sendRequest(DefinitionRequest.type, at(1, 12))).toHaveLength(1);
    expect(await connection.sendRequest(DocumentHighlightRequest.type, at(atoms - 1, 3))).toHaveLength(4);
    expect((await connection.sendRequest(DocumentHighlightRequest.type, at(1, 12)))!.length).toBeLessThan(3000);
    const [chain] = (await connection.sendRequest(SelectionRangeRequest.type, {
      textDocument,
      positions: [{ line: atoms - 1, character: 0 }],
    }))!;
    expect(chain!.parent!.parent!.range.end.line - chain!.parent!.parent!.range.start.line).toBe(2);
  });

  it('has a lens given up when it changes', async () => {
    const [lens] = (await client.connection.sendRequest(CodeLensRequest.type, { textDocument }))!;
    client.change(uri, 2, [{ range: { start: { line: 2, character: 0 }, end: { line: 2, character: 1 } }, text: 'S' }]);
    const [again] = (await client.connection.sendRequest(CodeLensRequest.type, { textDocument }))!;
    await expect(client.connection.sendRequest(CodeLensResolveRequest.type, lens!)).rejects.toMatchObject({
      code: LSPErrorCodes.ContentModified,
    });
    const resolving = client.connection.sendRequest(CodeLensResolveRequest.type, again!);
    const given = expect(resolving).rejects.toMatchObject({ code: LSPErrorCodes.ContentModified });
    client.change(uri, 3, [{ range: { start: { line: 2, character: 0 }, end: { line: 2, character: 1 } }, text: 'O' }]);
    await given;
    client.close(uri);
  });
});
