import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  CodeActionRequest,
  CompletionRequest,
  DocumentSymbolRequest,
  FoldingRangeRequest,
  InlayHintRequest,
} from 'vscode-languageserver-protocol';
import { WireClient } from './client';

/** The server as a browser runs it, in a scope without anything of Node, beside the one that is a process. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const WORKER = 'server/dist/worker.js';
let worker: WireClient;
let node: WireClient;

beforeAll(async () => {
  [worker, node] = await Promise.all([WireClient.start({ worker: WORKER }), WireClient.start()]);
});

afterAll(async () => {
  expect(await node.stop()).toBe(0);
  // Ends with the worker closed by itself.
  expect(await worker.stop()).toBe(0);
});

/** All that a server says of a text. */
async function answers(client: WireClient, uri: string, text: string, language: string) {
  client.open(uri, text, language);
  const { connection } = client;
  const textDocument = { uri };
  const lines = text.split(/\r?\n/);
  const range = { start: { line: 0, character: 0 }, end: { line: lines.length, character: 0 } };
  const diagnostics = await client.diagnostics(uri);
  const hovers = [];
  // Some of every part of the file.
  const step = Math.max(1, Math.floor(lines.length / 40));
  for (let line = 0; line < lines.length; line += step) {
    for (const character of [0, 35]) hovers.push(await client.hover(uri, line, character));
  }
  return {
    diagnostics,
    hovers,
    actions: await connection.sendRequest(CodeActionRequest.type, { textDocument, range, context: { diagnostics } }),
    symbols: await connection.sendRequest(DocumentSymbolRequest.type, { textDocument }),
    folding: await connection.sendRequest(FoldingRangeRequest.type, { textDocument }),
    hints: await connection.sendRequest(InlayHintRequest.type, { textDocument, range }),
    completion: await connection.sendRequest(CompletionRequest.type, {
      textDocument,
      position: { line: 1, character: 0 },
    }),
    status: client.statuses.filter((status) => status.uri === uri).at(-1),
  };
}

describe('the server in a worker', () => {
  it('can do what the process can', () => {
    expect(worker.initialized).toEqual(node.initialized);
  });

  it.each(SAMPLES)('says of %s what the process says', async (name) => {
    const text = readFileSync(`samples/${name}`, 'utf8');
    const language = name.endsWith('.pdb') ? 'pdb' : 'xyz';
    const uri = `file:///worker/${name}`;
    const [said, wanted] = await Promise.all([
      answers(worker, uri, text, language),
      answers(node, uri, text, language),
    ]);
    expect(JSON.stringify(wanted.hovers)).toContain('data:image/svg+xml;base64,');
    expect(said).toEqual(wanted);
  });

  it.each([
    ['25 degC', []],
    ['25 D', ['unit-unknown']],
  ])('reads units, with the evaluator that sleeps until then: %s', async (temperature, codes) => {
    const uri = `file:///${encodeURIComponent(temperature)}.xyz`;
    worker.open(uri, `2\ntemperature="${temperature}"\nHe 0 0 0\nHe 0 0 9\n`);
    expect((await worker.diagnostics(uri)).map(({ code }) => code)).toEqual(codes);
  });

  it('answers while it analyses another document', async () => {
    const atoms = Array.from(
      { length: 20_000 },
      (_, k) => `He ${4 * (k % 30)} ${4 * (Math.floor(k / 30) % 30)} ${k / 225}`,
    );
    worker.open('file:///small.xyz', '1\n\nHe 0 0 0\n');
    await worker.diagnostics('file:///small.xyz');
    worker.open('file:///large.xyz', `${atoms.length}\n\n${atoms.join('\n')}\n`);
    let isDone = false;
    const done = worker.diagnostics('file:///large.xyz').then(() => {
      isDone = true;
    });
    const early: boolean[] = [];
    for (let question = 0; question < 5; question++) {
      await worker.hover('file:///small.xyz', 2, 0);
      early.push(!isDone);
    }
    await done;
    expect(early.filter(Boolean).length).toBeGreaterThanOrEqual(3);
  });
});
