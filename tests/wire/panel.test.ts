import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { PairRow, RowQuery } from '../../server/src/features/pair-list';
import {
  FRAGMENT_LINES_REQUEST,
  type FragmentLines,
  PANEL_MATRIX_REQUEST,
  PANEL_PLACE_REQUEST,
  PANEL_ROWS_REQUEST,
  PANEL_SERIES_REQUEST,
  type PanelMatrix,
  type PanelPlace,
  type PanelRows,
  type PanelSeries,
} from '../../server/src/lsp/protocol';
import { readSettings } from '../../server/src/lsp/settings';
import { analyse } from '../support/analyse';
import { WireClient } from './client';

/** What the panel is answered over a real connection. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const BY_STRENGTH: RowQuery = { key: 'strength', descending: true, advice: null, text: '' };
let client: WireClient;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

const open = (text: string, language = 'xyz') => client.openNew(text, language);

function openSample(name: string): string {
  return open(readFileSync(`samples/${name}`, 'utf8'), name.endsWith('.pdb') ? 'pdb' : 'xyz');
}

function ask<T>(method: string, params: object): Promise<T> {
  return client.connection.sendRequest(method, params);
}

function placeAt(uri: string, line: number, pair: object | null = null): Promise<PanelPlace | null> {
  return ask(PANEL_PLACE_REQUEST, { uri, position: { line, character: 2 }, pair });
}

function rowsOf(uri: string, query: Partial<RowQuery> = {}, from = 0, size = 1000): Promise<PanelRows | null> {
  return ask(PANEL_ROWS_REQUEST, { uri, frame: 1, query: { ...BY_STRENGTH, ...query }, from, count: size });
}

/** All rows that a query wants, page by page. */
async function allRows(uri: string, query: Partial<RowQuery> = {}): Promise<PairRow[]> {
  const rows: PairRow[] = [];
  for (;;) {
    const answer = await rowsOf(uri, query, rows.length);
    if (answer === null || answer.rows.length === 0) return rows;
    rows.push(...answer.rows);
  }
}

const numbersOf = (rows: readonly PairRow[]) => rows.map(({ first, second }) => `${first}-${second}`);

describe('the place of the cursor', () => {
  it('leads with the strongest pair of the fragment on the line, seen from it', async () => {
    const uri = openSample('water-cluster.xyz');
    const answer = await placeAt(uri, 9);
    const { here, chosen, partners, partnerCount } = answer!.place!;
    expect(here!.fragment.fragment).toBe(3);
    expect(chosen!.first.fragment).toBe(3);
    expect(chosen!.strengthKJPerMol).toBe(partners[0]!.strengthKJPerMol);
    expect(partners.map((row) => row.strengthKJPerMol)).toEqual(
      [...partners.map((row) => row.strengthKJPerMol)].sort((a, b) => b - a),
    );
    expect(partnerCount).toBe(6);
  });

  it('keeps a chosen pair while the cursor is on one of its fragments or on none, and gives it up elsewhere', async () => {
    const uri = openSample('water-cluster.xyz');
    const pair = { frame: 1, first: 2, second: 7 };
    const shown = async (line: number) => {
      const { chosen, isAsked } = (await placeAt(uri, line, pair))!.place!;
      return [Math.min(chosen!.first.fragment, chosen!.second.fragment), isAsked];
    };
    expect(await shown(5)).toEqual([2, true]);
    expect(await shown(20)).toEqual([2, true]);
    expect(await shown(1)).toEqual([2, true]);
    expect((await shown(2))[1]).toBe(false);
  });

  it('gives the curve through the energies that the pair has now', async () => {
    const uri = openSample('water-cluster.xyz');
    const { pair, curve } = (await placeAt(uri, 2))!.place!.chosen!;
    const { points, presentA } = curve!;
    expect(presentA).toBe(pair.distanceA);
    const after = points.findIndex((point) => point.distanceA > presentA);
    const [a, b] = [points[after - 1]!, points[after]!];
    const share = (presentA - a.distanceA) / (b.distanceA - a.distanceA);
    const between = a.referenceKJPerMol! + share * (b.referenceKJPerMol! - a.referenceKJPerMol!);
    expect(Math.abs(between - pair.referenceKJPerMol!)).toBeLessThan(0.02 * Math.abs(pair.referenceKJPerMol!));
  });

  it('shows the strongest pairs of the frame on a line without an atom', async () => {
    const uri = openSample('water-cluster.xyz');
    const { here, partners, chosen } = (await placeAt(uri, 1))!.place!;
    expect(here).toBeNull();
    expect(numbersOf(partners)).toEqual(numbersOf((await rowsOf(uri))!.rows.slice(0, 20)));
    expect(chosen!.pair.first).toBe(partners[0]!.first);
  });

  it('says why there is no pair', async () => {
    const single = open('3\n\nO 0 0 0\nH 0.96 0 0\nH -0.24 0.93 0\n');
    expect((await placeAt(single, 2))!.place).toMatchObject({ chosen: null, reason: 'No partner within the cutoff.' });
    expect((await placeAt(single, 1))!.place!.reason).toBe('The frame has fewer than two fragments.');
  });

  it('tells that there is no frame', async () => {
    expect((await placeAt(open(''), 0))!.place).toBeNull();
  });

  it('writes energies in the unit of the settings', async () => {
    const own = await WireClient.start({ settings: { energyUnit: 'kcal/mol' } });
    const uri = 'file:///panel/unit.xyz';
    own.open(uri, readFileSync('samples/water-cluster.xyz', 'utf8'), 'xyz');
    const params = { uri, position: { line: 3, character: 0 }, pair: null };
    const answer: PanelPlace = await own.connection.sendRequest(PANEL_PLACE_REQUEST, params);
    expect(answer.unit).toBe('kcal/mol');
    // 1 kcal is 4.184 kJ by definition (thermochemical calorie).
    expect(answer.unitsPerKJPerMol).toBeCloseTo(1 / 4.184, 12);
    expect(answer.place!.chosen!.picture.svg).toContain('kcal/mol');
    await own.stop();
  });
});

describe('the table of all pairs', () => {
  it.each(SAMPLES)('has the pairs that an analysis of %s finds', async (name) => {
    const text = readFileSync(`samples/${name}`, 'utf8');
    const language = name.endsWith('.pdb') ? 'pdb' : 'xyz';
    // As the editor does it: with library and estimates.
    const pairs = analyse(text, language, readSettings({}).request).pairs[0] ?? [];
    const rows = await allRows(open(text, language), { key: 'pair', descending: false });
    expect(numbersOf(rows)).toEqual(pairs.map(({ first, second }) => `${first + 1}-${second + 1}`));
    expect(rows.map((row) => row.strengthKJPerMol)).toEqual(pairs.map((pair) => pair.strengthKJPerMol));
    expect(rows.map((row) => row.advice)).toEqual(pairs.map((pair) => pair.advice));
  });

  const values: Readonly<Record<string, (row: PairRow) => number | null>> = {
    distance: (row) => row.distanceA,
    energy: (row) => row.energyKJPerMol,
    point: (row) => row.pointKJPerMol,
    strength: (row) => row.strengthKJPerMol,
  };

  it.each(
    Object.keys(values).flatMap((key) => [
      [key, true],
      [key, false],
    ]) as [keyof typeof values & RowQuery['key'], boolean][],
  )('is ordered by %s, descending %s, what is unknown last', async (key, descending) => {
    const answer = await rowsOf(openSample('binding-site.pdb'), { key, descending });
    const column = answer!.rows.map(values[key]!);
    const known = column.filter((value) => value !== null);
    expect(column.slice(0, known.length)).toEqual(known);
    expect(known).toEqual([...known].sort((a, b) => (descending ? b - a : a - b)));
    expect(known.length).toBeGreaterThan(10);
  });

  it('gives the same rows page by page', async () => {
    const uri = openSample('binding-site.pdb');
    const whole = (await rowsOf(uri))!;
    const pages: PairRow[] = [];
    for (let from = 0; from < whole.matching; from += 7) pages.push(...(await rowsOf(uri, {}, from, 7))!.rows);
    expect(pages).toEqual(whole.rows);
  });

  it.each([
    ['compute', (row: PairRow) => row.advice === 'compute'],
    ['accept', (row: PairRow) => row.advice === 'accept'],
  ] as const)('is filtered by the advice %s', async (advice, belongs) => {
    const uri = openSample('water-cluster.xyz');
    const all = (await rowsOf(uri))!.rows;
    const some = (await rowsOf(uri, { advice }))!;
    expect(some.rows).toEqual(all.filter(belongs));
    expect([some.matching, some.pairs]).toEqual([some.rows.length, all.length]);
    expect(some.rows.length).toBeGreaterThan(0);
  });

  it.each([
    ['7', (row: PairRow) => row.first === 7 || row.second === 7],
    ['ch4', (row: PairRow) => row.names.some((name) => name.includes('CH4'))],
    ['nothing', () => false],
  ] as const)('is filtered by the fragment "%s"', async (text, belongs) => {
    const uri = openSample('water-cluster.xyz');
    const all = (await rowsOf(uri))!.rows;
    expect((await rowsOf(uri, { text }))!.rows).toEqual(all.filter(belongs));
  });

  it('sorts thousands of pairs as a plain sort does', async () => {
    const water = (x: number, y: number, z: number) =>
      `O ${x} ${y} ${z}\nH ${x + 0.96} ${y} ${z}\nH ${x - 0.24} ${y + 0.93} ${z}\n`;
    let atoms = '';
    for (let k = 0; k < 216; k++) atoms += water(4 * (k % 6), 4 * (Math.floor(k / 6) % 6), 4 * Math.floor(k / 36));
    const uri = open(`648\n\n${atoms}`);
    const rows = await allRows(uri);
    expect(rows.length).toBeGreaterThan(5000);
    const wanted = [...rows].sort(
      (a, b) => b.strengthKJPerMol - a.strengthKJPerMol || a.first - b.first || a.second - b.second,
    );
    expect(numbersOf(rows)).toEqual(numbersOf(wanted));
  });

  it('is off where a frame has more pairs than the settings allow, and says so', async () => {
    const own = await WireClient.start({ settings: { limits: { panelPairs: 20 } } });
    const uri = 'file:///panel/limit.xyz';
    own.open(uri, readFileSync('samples/water-cluster.xyz', 'utf8'), 'xyz');
    const params = { uri, frame: 1, query: BY_STRENGTH, from: 0, count: 10 };
    const answer: PanelRows = await own.connection.sendRequest(PANEL_ROWS_REQUEST, params);
    expect(answer.rows).toEqual([]);
    expect(answer.reason).toContain('polewise.limits.panelPairs');
    // The fragment at the cursor has its partners all the same.
    const at = { uri, position: { line: 3, character: 0 }, pair: null };
    const place: PanelPlace = await own.connection.sendRequest(PANEL_PLACE_REQUEST, at);
    expect(place.place!.partners.length).toBe(6);
    await own.stop();
  });
});

describe('energies fragment by fragment', () => {
  it('are those of the table', async () => {
    const uri = openSample('binding-site.pdb');
    const matrix: PanelMatrix = await ask(PANEL_MATRIX_REQUEST, { uri, frame: 1 });
    const { rows } = (await rowsOf(uri, { key: 'pair', descending: false }))!;
    expect(matrix.energyKJPerMol).toEqual(rows.map((row) => row.energyKJPerMol));
    expect(matrix.first.map((f, k) => `${f}-${matrix.second[k]}`)).toEqual(numbersOf(rows));
    expect(matrix.titles).toHaveLength(13);
  });

  it('are not shown for more than 300 fragments', async () => {
    const atoms = Array.from({ length: 301 }, (_, k) => `Ar ${4 * k} 0 0\n`).join('');
    const matrix: PanelMatrix = await ask(PANEL_MATRIX_REQUEST, { uri: open(`301\n\n${atoms}`), frame: 1 });
    expect(matrix.titles).toEqual([]);
    expect(matrix.reason).toContain('301 fragments');
  });
});

describe('a pair over the frames', () => {
  it('has one record a frame', async () => {
    const uri = openSample('polar-dimer-scan.xyz');
    const series: PanelSeries = await ask(PANEL_SERIES_REQUEST, { uri, frame: 5, first: 1, second: 2 });
    expect(series.frames).toHaveLength(12);
    expect(series.reason).toBeNull();
    const place = (await placeAt(uri, 58))!.place!;
    expect(place.frame).toBe(5);
    expect(series.frames[4]!.energyKJPerMol).toBe(place.partners[0]!.energyKJPerMol);
  });

  it('says why there is none in a file of one frame', async () => {
    const uri = openSample('water-cluster.xyz');
    const series: PanelSeries = await ask(PANEL_SERIES_REQUEST, { uri, frame: 1, first: 1, second: 2 });
    expect(series.reason).toContain('one frame');
  });
});

describe('lines of fragments', () => {
  it('are runs in order of the text', async () => {
    const uri = open(
      '6\nfragment_atoms="1,5,6 2-4"\nO 0 0 0\nO 3 0 0\nH 3.96 0 0\nH 2.76 0.93 0\nH 0.96 0 0\nH -0.24 0.93 0\n',
    );
    const lines: FragmentLines = await ask(FRAGMENT_LINES_REQUEST, { uri, frame: 1, fragments: [1, 2] });
    expect(lines.runs).toEqual([
      { firstLine: 2, lastLine: 2 },
      { firstLine: 6, lastLine: 7 },
      { firstLine: 3, lastLine: 5 },
    ]);
  });
});

describe('nothing stale', () => {
  it('is answered of a closed document', async () => {
    const uri = openSample('water-cluster.xyz');
    await placeAt(uri, 3);
    client.close(uri);
    expect(await placeAt(uri, 3)).toBeNull();
    expect(await rowsOf(uri)).toBeNull();
  });

  it('is answered after a change: the answer is of the new version', async () => {
    const uri = openSample('water-cluster.xyz');
    const before = (await rowsOf(uri))!;
    client.change(uri, 2, [
      { range: { start: { line: 2, character: 0 }, end: { line: 2, character: 0 } }, text: ' ' },
      { range: { start: { line: 20, character: 8 }, end: { line: 20, character: 15 } }, text: '-9.4896' },
    ]);
    const after = (await rowsOf(uri))!;
    expect([before.version, after.version]).toEqual([1, 2]);
    expect(after.rows).not.toEqual(before.rows);
  });

  it('keeps its head where a question makes no sense', async () => {
    const uri = openSample('water-cluster.xyz');
    const query = { key: 'colour', descending: 'yes', advice: 'none such', text: 7 };
    const answer: PanelRows = await ask(PANEL_ROWS_REQUEST, { uri, frame: 1, query, from: -5, count: 3 });
    expect(answer.matching).toBe(0);
    const all: PanelRows = await ask(PANEL_ROWS_REQUEST, {
      uri,
      frame: 1,
      query: { ...query, advice: null },
      from: 0,
      count: 99,
    });
    expect(all.rows.every(({ first, second }) => first === 7 || second === 7)).toBe(true);
  });

  it.each([
    [PANEL_ROWS_REQUEST, { frame: 99, query: BY_STRENGTH, from: 0, count: 5 }],
    [PANEL_MATRIX_REQUEST, { frame: 0 }],
    [PANEL_SERIES_REQUEST, { frame: 1, first: 1, second: 99 }],
    [FRAGMENT_LINES_REQUEST, { frame: 1.5, fragments: [1] }],
  ])('%s of what is not there gives null', async (method, params) => {
    expect(await ask(method, { ...params, uri: openSample('water-cluster.xyz') })).toBeNull();
  });
});
