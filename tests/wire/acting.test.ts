import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { CancellationToken, CancellationTokenSource } from 'vscode-languageserver-protocol';
import type { Advice } from '../../server/src/analysis/advice';
import {
  type Answer,
  DIMERS_REQUEST,
  type DimersParams,
  type DimersResult,
  FRAME_AT_REQUEST,
  type FrameAtResult,
  MEDIA_REQUEST,
  PAIR_CHOICES_REQUEST,
  PAIR_TABLE_REQUEST,
  type PairChoicesResult,
  type PairTableResult,
} from '../../server/src/lsp/protocol';
import { MEDIA } from '../../server/src/physics/media';
import { WireClient } from './client';

/** Dimer files, pair tables and what is to be chosen for them, over a real connection and beside the command line. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const ALL_ADVICE: readonly Advice[] = ['accept', 'review', 'compute', 'repair'];
const CLI = resolve('server/dist/cli.cjs');
const scratch = mkdtempSync(join(tmpdir(), 'polewise-acting-'));
let client: WireClient;
let count = 0;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  rmSync(scratch, { recursive: true });
  expect(await client.stop()).toBe(0);
});

/** Runs the command line in the folder of the samples; what it tells on standard error comes with it. */
function polewise(...args: string[]): { stdout: string; stderr: string } {
  const { status, stdout, stderr } = spawnSync('node', [CLI, ...args], {
    cwd: 'samples',
    encoding: 'utf8',
    maxBuffer: 1 << 28,
  });
  expect(status, stderr).toBe(0);
  return { stdout, stderr };
}

function open(name: string, text: string): string {
  const uri = `file:///acting/${++count}/${name}`;
  client.open(uri, text, name.endsWith('.pdb') ? 'pdb' : 'xyz');
  return uri;
}

const openSample = (name: string) => open(name, readFileSync(`samples/${name}`, 'utf8'));

function dimers(
  uri: string,
  asked: Partial<DimersParams>,
  token = CancellationToken.None,
): Promise<Answer<DimersResult>> {
  const params: DimersParams = { frame: null, pairs: null, advice: null, ...asked, uri };
  return client.connection.sendRequest(DIMERS_REQUEST, params, token);
}

function table(uri: string, frame: number | null): Promise<Answer<PairTableResult>> {
  return client.connection.sendRequest(PAIR_TABLE_REQUEST, { uri, frame, format: 'csv' });
}

function choices(uri: string, frame: number): Promise<Answer<PairChoicesResult>> {
  return client.connection.sendRequest(PAIR_CHOICES_REQUEST, { uri, frame });
}

function resultOf<T>(answer: Answer<T>): T {
  expect(answer.reason).toBeNull();
  return answer.result!;
}

describe.each(SAMPLES)('of %s', (name) => {
  it('dimer files are those of the command line, byte for byte, and so are the refusals', async () => {
    // The box has thousands of pairs that matter to nobody.
    const advice = name === 'periodic-box.xyz' ? (['compute'] as const) : ALL_ADVICE;
    const folder = mkdtempSync(join(scratch, 'jobs-'));
    const { stderr } = polewise('dimers', name, '--out', folder, '--advice', advice.join(','));
    const written = readdirSync(folder).sort();
    const { files, refused } = resultOf(await dimers(openSample(name), { advice }));
    expect(files.map((file) => file.name).sort()).toEqual(written);
    for (const file of files) expect(file.text, file.name).toBe(readFileSync(join(folder, file.name), 'utf8'));
    const told = stderr.split('\n').filter((line) => line.includes('is not written'));
    expect(refused.map(({ frame, first, second, reason }) => `${frame}-${first}-${second}: ${reason}`)).toEqual(
      told.map((line) => line.replace(/^polewise: pair (\S+) is not written/, '$1')),
    );
    expect(files.length + refused.length).toBeGreaterThan(0);
  });

  it('the pair table is that of the command line, byte for byte', async () => {
    const uri = openSample(name);
    expect(resultOf(await table(uri, null)).text).toBe(polewise('pairs', '--format', 'csv', name).stdout);
    const first = polewise('pairs', '--format', 'csv', '--frame', '1', name).stdout;
    const { text, pairs } = resultOf(await table(uri, 1));
    expect(text).toBe(first);
    expect(pairs).toBe(Math.max(0, first.split('\n').length - 2));
  });
});

describe('dimer files', () => {
  it('are made of the pairs that are named, once each, whatever their order', async () => {
    const uri = openSample('water-cluster.xyz');
    const pairs = [
      [3, 1],
      [1, 3],
      [2, 7],
    ] as const;
    const { files, version } = resultOf(await dimers(uri, { frame: 1, pairs }));
    expect(files.map(({ name, frame, first, second, atoms }) => [name, frame, first, second, atoms])).toEqual([
      ['water-cluster-1-1-3.xyz', 1, 1, 3, 6],
      ['water-cluster-1-2-7.xyz', 1, 2, 7, 9],
    ]);
    expect(files.every(({ text, atoms }) => text.startsWith(`${atoms}\n`))).toBe(true);
    expect(version).toBe(1);
  });

  it('of named pairs are held to an advice where one is asked for', async () => {
    const uri = openSample('water-cluster.xyz');
    const { pairs } = resultOf(await choices(uri, 1));
    const all = pairs.map(({ first, second }) => [first, second] as const);
    const { files } = resultOf(await dimers(uri, { frame: 1, pairs: all, advice: ['compute'] }));
    const wanted = pairs.filter(({ advice }) => advice === 'compute');
    expect(wanted.length).toBeGreaterThan(0);
    expect(files).toHaveLength(wanted.length);
  });

  it.each([
    [[1, 1], 'a fragment makes no pair with itself'],
    [[1, 8], 'there is no fragment 8 in frame 1'],
    [[0, 2], 'there is no fragment 0 in frame 1'],
    [[1.5, 2], 'there is no fragment 1.5 in frame 1'],
  ] as const)('of %j are refused: %s', async (pair, reason) => {
    const { files, refused } = resultOf(await dimers(openSample('water-cluster.xyz'), { frame: 1, pairs: [pair] }));
    expect(files).toEqual([]);
    expect(refused).toEqual([{ frame: 1, first: pair[0], second: pair[1], reason }]);
  });

  it('of an unreadable fragment and of pieces cut from a chain are refused', async () => {
    const broken = open(
      'broken.xyz',
      '6\n\nO 0 0 0\nH 0 0.76 x\nH 0 -0.76 0.59\nO 5 0 0\nH 5 0.76 0.59\nH 5 -0.76 0.59\n',
    );
    const [unread] = resultOf(await dimers(broken, { frame: 1, pairs: [[1, 2]] })).refused;
    expect(unread?.reason).toBe('fragment 1 could not be read whole, or has no end');
    const site = openSample('binding-site.pdb');
    const cut = resultOf(await dimers(site, { frame: 1, advice: ALL_ADVICE })).refused;
    expect(cut.length).toBeGreaterThan(0);
    expect(cut[0]!.reason).toMatch(/cut from a chain, with open bonds$/);
  });

  it('are not made past a thousand at once, with the reason', async () => {
    const side = Array.from({ length: 4 }, (_, k) => k);
    const atoms = side.flatMap((x) => side.flatMap((y) => side.map((z) => `Ne ${4 * x} ${4 * y} ${4 * z}`)));
    const uri = open('many.xyz', `${atoms.length}\n\n${atoms.join('\n')}\n`);
    const whole = resultOf(await table(uri, 1));
    expect(whole.pairs).toBeGreaterThan(1000);
    const answer = await dimers(uri, {});
    expect(answer).toMatchObject({ result: null, isOutdated: false });
    expect(answer.reason).toContain('more than 1000 files');
    const some = await dimers(uri, { pairs: atoms.slice(1).map((_, k) => [1, k + 2] as const) });
    expect(resultOf(some).files).toHaveLength(63);
  });
});

describe('nothing is answered', () => {
  it('for a document that is not open', async () => {
    const reason = 'The document is not open.';
    const closed = openSample('water-cluster.xyz');
    client.close(closed);
    for (const uri of ['file:///never/opened.xyz', closed]) {
      expect(await dimers(uri, {})).toEqual({ result: null, reason, isOutdated: false });
      expect(await table(uri, 1)).toEqual({ result: null, reason, isOutdated: false });
      expect(await choices(uri, 1)).toEqual({ result: null, reason, isOutdated: false });
    }
  });

  it.each(['', 'not a frame'])('for a text without a frame: %j', async (text) => {
    const uri = open('empty.xyz', text);
    const nothing = { result: null, reason: 'No frame could be read.', isOutdated: false };
    expect(await dimers(uri, {})).toEqual(nothing);
    expect(await table(uri, null)).toEqual(nothing);
    expect(await client.connection.sendRequest(FRAME_AT_REQUEST, { uri, line: 0 })).toEqual(nothing);
  });

  it.each([0, 13, 1.5])('for frame %d of twelve', async (frame) => {
    const uri = openSample('polar-dimer-scan.xyz');
    const reason = `There is no frame ${frame}: the file has 12.`;
    expect(await dimers(uri, { frame })).toMatchObject({ result: null, reason });
    expect(await table(uri, frame)).toMatchObject({ result: null, reason });
    expect(await choices(uri, frame)).toMatchObject({ result: null, reason });
  });

  it('of a text that changed meanwhile; the next question is answered for the new one', async () => {
    const text = readFileSync('samples/water-cluster.xyz', 'utf8');
    const uri = open('water-cluster.xyz', text);
    const question = dimers(uri, { frame: 1, pairs: [[1, 2]] });
    client.change(uri, 2, [{ text: text.replace('-0.0101', '-0.5101') }]);
    expect(await question).toEqual({ result: null, reason: 'The text changed meanwhile.', isOutdated: true });
    expect(resultOf(await dimers(uri, { frame: 1, pairs: [[1, 2]] })).version).toBe(2);
  });

  it('in the middle of long work either, and other questions are answered meanwhile', async () => {
    const text = box(3000);
    const uri = open('box.xyz', text);
    await client.diagnostics(uri);
    const order: string[] = [];
    const long = table(uri, 1).then((answer) => {
      order.push('table');
      return answer;
    });
    await client.hover(uri, 3, 0).then(() => order.push('hover'));
    client.change(uri, 2, [{ range: { start: { line: 2, character: 0 }, end: { line: 2, character: 1 } }, text: 'O' }]);
    expect(await long).toMatchObject({ result: null, isOutdated: true });
    expect(order).toEqual(['hover', 'table']);
  });
});

it('long work ends when it is cancelled', async () => {
  const uri = open('box.xyz', box(3000));
  await client.diagnostics(uri);
  const stop = new CancellationTokenSource();
  const long = dimers(uri, { advice: ['repair'] }, stop.token);
  await client.hover(uri, 3, 0);
  stop.cancel();
  expect(await long).toEqual({ result: null, reason: 'It was cancelled.', isOutdated: false });
});

/** Waters on a lattice of 3.1 Å, so that they touch. */
function box(molecules: number): string {
  const side = Math.ceil(Math.cbrt(molecules));
  const lines: string[] = [];
  for (let n = 0; n < molecules; n++) {
    const [x, y, z] = [n % side, Math.floor(n / side) % side, Math.floor(n / side ** 2)].map((k) => 3.1 * k);
    lines.push(`O ${x} ${y} ${z}`, `H ${x} ${y! + 0.757} ${z! + 0.587}`, `H ${x} ${y! - 0.757} ${z! + 0.587}`);
  }
  return `${lines.length}\n\n${lines.join('\n')}\n`;
}

describe('choices', () => {
  it('are the pairs, strongest first, with counts, names, and energies in the unit of the settings', async () => {
    const own = await WireClient.start({ settings: { energyUnit: 'meV' } });
    const text = readFileSync('samples/water-cluster.xyz', 'utf8');
    own.open('file:///w.xyz', text);
    const params = { uri: 'file:///w.xyz', frame: 1 };
    const answer: Answer<PairChoicesResult> = await own.connection.sendRequest(PAIR_CHOICES_REQUEST, params);
    const { counts, pairs, energyUnit } = resultOf(answer);
    const rows = polewise('pairs', '--format', 'jsonl', 'water-cluster.xyz').stdout.trim().split('\n');
    type Row = { first: number; second: number; referenceKJPerMol: number; advice: Advice; distanceA: number };
    const expected = rows.map((line) => JSON.parse(line) as Row);
    expect(energyUnit).toBe('meV');
    expect(pairs).toHaveLength(expected.length);
    for (const advice of ALL_ADVICE)
      expect(counts[advice]).toBe(expected.filter((row) => row.advice === advice).length);
    for (const { first, second, names, distanceA, energy, advice } of pairs) {
      const row = expected.find((other) => other.first === first && other.second === second)!;
      expect([distanceA, advice]).toEqual([row.distanceA, row.advice]);
      expect(names).toEqual([first, second].map((f) => (f === 7 ? 'CH4O' : 'H2O')));
      expect(energy! / row.referenceKJPerMol).toBeCloseTo(10.364, 2);
    }
    const sizes = pairs.slice(0, 3).map(({ energy }) => Math.abs(energy!));
    expect(sizes).toEqual([...sizes].sort((a, b) => b - a));
    await own.stop();
  });
});

describe('the frame of a line', () => {
  const frameAt = (uri: string, line: number): Promise<Answer<FrameAtResult>> =>
    client.connection.sendRequest(FRAME_AT_REQUEST, { uri, line });

  it.each([
    ['polar-dimer-scan.xyz', 0, 1],
    ['polar-dimer-scan.xyz', 13, 1],
    ['polar-dimer-scan.xyz', 14, 2],
    ['polar-dimer-scan.xyz', 100000, 12],
    ['binding-site.pdb', 0, 1],
  ])('%s, line %d: frame %d', async (name, line, frame) => {
    expect(resultOf(await frameAt(openSample(name), line)).frame).toBe(frame);
  });
});

it('media are those of the table', async () => {
  expect(await client.connection.sendRequest(MEDIA_REQUEST)).toEqual(MEDIA);
});
