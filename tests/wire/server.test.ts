import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type Diagnostic,
  DiagnosticSeverity,
  LSPErrorCodes,
  type TextDocumentContentChangeEvent,
} from 'vscode-languageserver-protocol';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Language } from '../../server/src/formats/tree';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';
import { analyse } from '../support/analyse';
import { WireClient } from './client';

const CLUSTER = readFileSync('samples/water-cluster.xyz', 'utf8');
const MISTAKES = readFileSync('samples/typical-mistakes.xyz', 'utf8');
const SITE = readFileSync('samples/binding-site.pdb', 'utf8');

/** What the server knows besides the text. */
const REQUEST: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: true, estimates: true }),
};

/** Diagnostics as a fresh analysis of the text gives them: code and range. */
function fresh(text: string, language: Language = 'xyz'): string[] {
  const lines = indexLines(snapshotOf(text));
  return analyse(text, language, REQUEST).findings.map(({ code, start, end }) => {
    const [from, to] = [lines.positionAt(start), lines.positionAt(end)];
    return `${code} ${from.line}:${from.column}-${to.line}:${to.column}`;
  });
}

function told(diagnostics: readonly Diagnostic[]): string[] {
  return diagnostics.map(({ code, range: { start, end } }) => {
    return `${code} ${start.line}:${start.character}-${end.line}:${end.character}`;
  });
}

let client: WireClient;
let count = 0;
const nextUri = () => `file:///inputs/${++count}.xyz`;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

describe('initialize', () => {
  it('offers incremental synchronization, hovers and diagnostics to be asked for', () => {
    expect(client.initialized?.capabilities).toMatchObject({
      textDocumentSync: { openClose: true, change: 2 },
      hoverProvider: true,
      diagnosticProvider: { interFileDependencies: false, workspaceDiagnostics: false },
    });
  });
});

describe('diagnostics', () => {
  it.each([
    ['an XYZ file full of mistakes', MISTAKES, 'xyz'],
    ['a sound XYZ file', CLUSTER, 'xyz'],
    ['a PDB file', SITE, 'pdb'],
    ['an empty file', '', 'xyz'],
  ] as const)('of %s are those of a fresh analysis', async (_, text, language) => {
    const uri = nextUri();
    client.open(uri, text, language);
    expect(told(await client.diagnostics(uri))).toEqual(fresh(text, language));
  });

  it('carry severity, code, source and related places', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const [first] = await client.diagnostics(uri);
    expect(first).toMatchObject({ severity: DiagnosticSeverity.Warning, code: 'near-field', source: 'polewise' });
    expect(first!.relatedInformation!.length).toBeGreaterThan(2);
    expect(first!.relatedInformation![0]!.location.uri).toBe(uri);
  });

  it('follow an edit', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const line = CLUSTER.split('\n')[2]!;
    client.change(uri, 2, [
      { range: { start: { line: 2, character: 0 }, end: { line: 2, character: line.length } }, text: 'O 1 2' },
    ]);
    const after = CLUSTER.replace(line, 'O 1 2');
    const diagnostics = told(await client.diagnostics(uri));
    expect(diagnostics).toEqual(fresh(after));
    expect(diagnostics).toContain('field-missing 2:0-2:5');
  });

  it('follow hundreds of edits that come faster than results, ending with the last', async () => {
    const uri = nextUri();
    let text = CLUSTER;
    client.open(uri, text);
    for (let version = 2; version < 300; version++) {
      const lines = text.split('\n');
      const line = 2 + (version % 24);
      const column = lines[line]!.length;
      client.change(uri, version, [
        { range: { start: { line, character: column }, end: { line, character: column } }, text: '1' },
      ]);
      lines[line] += '1';
      text = lines.join('\n');
    }
    expect(told(await client.diagnostics(uri))).toEqual(fresh(text));
  });

  it('follow many cursors, whole-text changes and line ends', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const cursors: TextDocumentContentChangeEvent[] = [9, 6, 3].map((line) => ({
      range: { start: { line, character: 0 }, end: { line, character: 1 } },
      text: 'Qx',
    }));
    client.change(uri, 2, cursors);
    const lines = CLUSTER.split('\n').map((line, i) => ([9, 6, 3].includes(i) ? `Qx${line.slice(1)}` : line));
    expect(told(await client.diagnostics(uri))).toEqual(fresh(lines.join('\n')));
    client.change(uri, 3, [{ text: CLUSTER.replaceAll('\n', '\r\n') }]);
    expect(told(await client.diagnostics(uri))).toEqual(fresh(CLUSTER));
  });

  it('of an outdated version are never given: the question is cancelled and asked again', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const question = client.connection.sendRequest('textDocument/diagnostic', { textDocument: { uri } });
    client.change(uri, 2, [{ text: 'not a frame' }]);
    await expect(question).rejects.toMatchObject({
      code: LSPErrorCodes.ServerCancelled,
      data: { retriggerRequest: true },
    });
    expect(told(await client.diagnostics(uri))).toEqual(fresh('not a frame'));
  });

  it('are gone with the document, and there again when it is opened again', async () => {
    const uri = nextUri();
    client.open(uri, MISTAKES);
    await client.diagnostics(uri);
    client.close(uri);
    expect(await client.diagnostics(uri)).toEqual([]);
    client.open(uri, CLUSTER, 'xyz', 7);
    expect(told(await client.diagnostics(uri))).toEqual(fresh(CLUSTER));
  });

  it('change with the language of the document', async () => {
    const uri = nextUri();
    client.open(uri, SITE, 'xyz');
    expect(told(await client.diagnostics(uri))).toEqual(fresh(SITE, 'xyz'));
    client.close(uri);
    client.open(uri, SITE, 'pdb', 2);
    expect(told(await client.diagnostics(uri))).toEqual(fresh(SITE, 'pdb'));
  });

  it('have exact columns in text outside the Basic Multilingual Plane and with lone surrogates', async () => {
    const text = `2\nnote="\u{1F9EA}\uD800é" temprature=300\nHe 0 0 0\nHe 0 0 9\n`;
    const uri = nextUri();
    client.open(uri, text);
    const [diagnostic] = await client.diagnostics(uri);
    expect(diagnostic).toMatchObject({
      code: 'key-misspelt',
      range: { start: { line: 1, character: 12 }, end: { line: 1, character: 22 } },
    });
  });
});

describe('hover', () => {
  it('on an atom shows its fragment and the partners that matter', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const hover = await client.hover(uri, 2, 3);
    const text = (hover!.contents as { value: string }).value;
    expect(text).toContain('**H2O** · fragment 1, atom 1 · charge 0.00 e (library) · dipole 1.855 D (axis)');
    expect(text).toMatch(
      /Strongest partner \*\*H2O \(6\)\*\* at 2\.80 Å: attractive, −15\.7 kJ\/mol = 6\.3 kT, point dipole near, \*\*compute\*\*/,
    );
    expect(text).toMatch(/\| H2O \(6\) \| compute \| 2\.80 \|.*\| near \| touching \|/);
    expect(text).toContain('not a substitute for a quantum calculation');
    const image = /!\[([^\]]+)\]\(data:image\/svg\+xml;base64,([A-Za-z0-9+/=]+)\|width=360,height=164\)/.exec(text)!;
    expect(image[1]).toContain('Attractive');
    expect(Buffer.from(image[2]!, 'base64').toString('utf8')).toMatch(/^<svg [\s\S]*<\/svg>$/);
    expect(text.length).toBeLessThan(20000);
  });

  it('on the comment line shows the frame, on a key what it means', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const comment = CLUSTER.split('\n')[1]!;
    const onKey = await client.hover(uri, 1, comment.indexOf('kind_axes') + 2);
    expect((onKey!.contents as { value: string }).value).toContain('by element symbols or labels');
    const onCount = await client.hover(uri, 0, 0);
    expect((onCount!.contents as { value: string }).value).toContain(
      '**Frame 1 of 1** · 24 atoms · 7 fragments · 21 pairs',
    );
  });

  it('on a written dipole shows it in every unit and beside the charges', async () => {
    const uri = nextUri();
    const lines = MISTAKES.split('\n');
    const at = lines.findIndex((text) => /revers/i.test(text) && text.includes('fragment_dipoles'));
    client.open(uri, MISTAKES);
    const hover = await client.hover(uri, at, lines[at]!.indexOf('fragment_dipoles="') + 20);
    const text = (hover!.contents as { value: string }).value;
    expect(text).toMatch(/2\.310 D = 0\.4810 e·Å = 0\.9090 a\.u\. = 7\.707e−30 C·m/);
    expect(text).toContain('The charges give 2.31');
    expect(text).toContain('180° from it');
  });

  it('on a MODEL record shows the frame, on a PDB atom its residue', async () => {
    const uri = nextUri();
    client.open(uri, SITE, 'pdb');
    const lines = SITE.split('\n');
    const model = await client.hover(
      uri,
      lines.findIndex((line) => line.startsWith('MODEL')),
      2,
    );
    expect((model!.contents as { value: string }).value).toContain('**Frame 1 of 2**');
    const atom = await client.hover(
      uri,
      lines.findIndex((line) => line.includes(' LIG ') && line.startsWith('HETATM')),
      14,
    );
    expect((atom!.contents as { value: string }).value).toContain('A:LIG:401');
  });

  it.each([
    [-1, 0],
    [9999, 0],
    [2, 99999],
    [2, -5],
  ])('at line %d, column %d, outside the text or not, is no error', async (line, character) => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    await client.hover(uri, Math.max(0, line), Math.max(0, character));
    expect(told(await client.diagnostics(uri))).toEqual(fresh(CLUSTER));
  });

  it('of a document that is not open is nothing', async () => {
    expect(await client.hover('file:///inputs/closed.xyz', 0, 0)).toBeNull();
  });

  it('can be cancelled', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    const { CancellationTokenSource } = await import('vscode-languageserver-protocol');
    const source = new CancellationTokenSource();
    const asked = client.connection.sendRequest(
      'textDocument/hover',
      { textDocument: { uri }, position: { line: 2, character: 0 } },
      source.token,
    );
    source.cancel();
    const answer = await asked.catch((error: { code: number }) => error.code);
    expect([null, LSPErrorCodes.RequestCancelled]).toContain(answer);
  });
});

describe('settings', () => {
  const kinds = async (settings: unknown, text = CLUSTER) => {
    const own = await WireClient.start({ settings });
    own.open('file:///s.xyz', text);
    const diagnostics = await own.diagnostics('file:///s.xyz');
    const status = own.statuses.at(-1)!;
    await own.stop();
    return { diagnostics, status };
  };

  it('severities change or switch off a finding', async () => {
    const { diagnostics } = await kinds({ severities: { 'near-field': 'hint' } });
    expect(new Set(diagnostics.map(({ severity }) => severity))).toEqual(new Set([DiagnosticSeverity.Hint]));
    expect((await kinds({ severities: { 'near-field': 'off' } })).diagnostics).toEqual([]);
  });

  it('maxFindings keeps the worst and says how many are left out', async () => {
    const { diagnostics } = await kinds({ maxFindings: 3 }, MISTAKES);
    expect(diagnostics).toHaveLength(3);
    expect(diagnostics.every(({ severity }) => severity === DiagnosticSeverity.Error)).toBe(true);
    expect(diagnostics[2]!.message).toMatch(/\d+ more findings are not shown/);
  });

  it('of the wrong type give their default and a word in the status', async () => {
    const { diagnostics, status } = await kinds({
      temperature: {},
      cutoff: 'far',
      tolerance: 'much',
      centre: 7,
      severities: 5,
    });
    expect(told(diagnostics)).toEqual(fresh(CLUSTER));
    for (const name of ['temperature', 'cutoff', 'tolerance', 'centre', 'severities'])
      expect(status.detail).toContain(`polewise.${name}`);
  });

  describe('library files', () => {
    const BARE = '3\n\nO 0 0 0.1173\nH 0 0.7572 -0.4692\nH 0 -0.7572 -0.4692\n';
    const water = (dipole: string) =>
      JSON.stringify({ molecules: [{ name: 'water', dipole: { value: dipole, source: 'our own' } }] });
    const dipoleIn = async (own: WireClient) => {
      const hover = await own.hover('file:///b.xyz', 2, 1);
      return /dipole ([^()]*) \(([^)]*)\)/
        .exec((hover!.contents as { value: string }).value)!
        .slice(1, 3)
        .join(' from ');
    };

    it('give values of their own, and a saved one takes hold', async () => {
      const own = await WireClient.start({
        settings: { libraryFiles: ['polewise-library.json'] },
        files: { 'polewise-library.json': water('2.5 D') },
      });
      own.open('file:///b.xyz', BARE);
      expect(await dipoleIn(own)).toBe('2.500 D from library');
      own.save('polewise-library.json', water('6.671e-30 C*m'));
      expect(await dipoleIn(own)).toBe('2.000 D from library');
      await own.stop();
    });

    it.each([
      ['missing', {}, 'cannot be read'],
      ['no JSON', { 'a.json': '{' }, 'JSON'],
      ['wrong', { 'a.json': water('2.5 furlong') }, '/molecules/0/dipole'],
    ])('that are %s leave the built-in values and a word in the status', async (_, files, word) => {
      const own = await WireClient.start({ settings: { libraryFiles: ['a.json'] }, files });
      own.open('file:///b.xyz', BARE);
      expect(await dipoleIn(own)).toBe('1.85 ± 0.06 D from library');
      expect(own.statuses.at(-1)!.detail).toContain(word);
      await own.stop();
    });

    it('are of no use where library and estimates are switched off', async () => {
      const own = await WireClient.start({ settings: { library: false, estimates: false } });
      own.open('file:///b.xyz', BARE);
      const hover = await own.hover('file:///b.xyz', 2, 1);
      expect((hover!.contents as { value: string }).value).toContain('dipole unknown');
      await own.stop();
    });
  });

  it('beyond analysisLimit pairs are off, and the status says so', async () => {
    const { diagnostics, status } = await kinds({ analysisLimit: 10 });
    expect(diagnostics).toEqual([]);
    expect(status).toMatchObject({ state: 'limited', text: '1 frame, pairs off' });
  });

  it('changed while computing take hold', async () => {
    const own = await WireClient.start();
    own.open('file:///s.xyz', CLUSTER);
    own.configure({ severities: { 'near-field': 'off' } });
    expect(await own.diagnostics('file:///s.xyz')).toEqual([]);
    own.configure({});
    expect(told(await own.diagnostics('file:///s.xyz'))).toEqual(fresh(CLUSTER));
    await own.stop();
  });
});

describe('a client that does not ask', () => {
  it('is sent diagnostics with their version, and none after closing', async () => {
    const own = await WireClient.start({ pull: false });
    own.open('file:///p.xyz', MISTAKES);
    await own.until(() => own.published.length > 0);
    expect(told(own.published[0]!.diagnostics)).toEqual(fresh(MISTAKES));
    own.change('file:///p.xyz', 2, [{ text: CLUSTER }]);
    await own.until(() => own.published.at(-1)!.version === 2);
    expect(told(own.published.at(-1)!.diagnostics)).toEqual(fresh(CLUSTER));
    own.close('file:///p.xyz');
    await own.until(() => own.published.at(-1)!.diagnostics.length === 0);
    await own.stop();
  });
});

describe('status', () => {
  it('is busy, then tells frames, fragments and pairs', async () => {
    const uri = nextUri();
    client.open(uri, CLUSTER);
    await client.diagnostics(uri);
    const own = client.statuses.filter((status) => status.uri === uri);
    expect(own[0]).toMatchObject({ state: 'busy' });
    expect(own.at(-1)).toMatchObject({ state: 'idle', text: '1 frame, 7 fragments, 21 pairs' });
  });
});
