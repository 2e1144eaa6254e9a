import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type CodeLens, CodeLensRequest, CodeLensResolveRequest, LSPErrorCodes } from 'vscode-languageserver-protocol';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Language } from '../../server/src/formats/tree';
import { analyse } from '../support/analyse';
import { WireClient } from './client';
import { textIn } from './places';

/** Lenses above frames over a real connection. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const REQUEST: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: true, estimates: true }),
};
const CLUSTER = readFileSync('samples/water-cluster.xyz', 'utf8');
const ATOM = '1\nalone\nAr 0 0 0\n';

let client: WireClient;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

const open = (text: string, language = 'xyz') => client.openNew(text, language);

const lenses = async (own: WireClient, uri: string) =>
  (await own.connection.sendRequest(CodeLensRequest.type, { textDocument: { uri } }))!;
const resolved = (own: WireClient, lens: CodeLens) => own.connection.sendRequest(CodeLensResolveRequest.type, lens);

/** The words of all lenses of a document. */
async function wordsOf(own: WireClient, uri: string): Promise<string[]> {
  const words: string[] = [];
  for (const lens of await lenses(own, uri)) words.push((lens.command ?? (await resolved(own, lens)).command!).title);
  return words;
}

describe.each(SAMPLES)('in %s', (name) => {
  const text = readFileSync(`samples/${name}`, 'utf8');
  const language: Language = name.endsWith('.pdb') ? 'pdb' : 'xyz';

  it('every frame has three, on its first line, with what all its pairs say', async () => {
    const uri = open(text, language);
    const { frames, pairs } = analyse(text, language, REQUEST);
    const found = await lenses(client, uri);
    expect(found).toHaveLength(3 * frames.length);
    for (const [n, frame] of frames.entries()) {
      const [strongest, compute, panel] = found.slice(3 * n, 3 * n + 3);
      const line = frame.model.tree.firstLine;
      expect([strongest, compute, panel].map((lens) => lens!.range.start)).toEqual(
        Array(3).fill({ line, character: 0 }),
      );
      expect(textIn(text, strongest!.range)).toBe(text.split(/\r?\n/)[line]);
      expect(panel!.command).toEqual({
        title: 'Open panel',
        command: 'polewise.openPanel',
        arguments: [{ uri, frame: n + 1 }],
      });
      expect([strongest!.command, compute!.command]).toEqual([undefined, undefined]);
      const best = [...pairs[n]!].sort((a, b) => b.strengthKJPerMol - a.strengthKJPerMol)[0];
      const said = (await resolved(client, strongest!)).command!;
      if (best === undefined) expect(said).toEqual({ title: 'no pair', command: '' });
      else if (best.strengthKJPerMol > 0) {
        expect(said.command).toBe('polewise.openPanel');
        expect(said.arguments).toEqual([{ uri, frame: n + 1, first: best.first + 1, second: best.second + 1 }]);
        const energy = Number.isNaN(best.referenceKJPerMol) ? best.energies.pointDipole : best.referenceKJPerMol;
        const sizes = [energy.toFixed(1).replace('-', '−'), (Math.abs(energy) / frame.system.kTKJPerMol).toFixed(1)];
        expect(said.title).toContain(`: ${sizes[0]} kJ/mol, ${sizes[1]} kT, `);
      }
      const wanted = pairs[n]!.filter(({ advice }) => advice === 'compute');
      expect((await resolved(client, compute!)).command).toEqual(
        wanted.length === 0
          ? { title: 'no pair to compute', command: '' }
          : {
              title: `${wanted.length} pair${wanted.length === 1 ? '' : 's'} to compute`,
              command: 'polewise.writeDimers',
              arguments: [{ uri, frame: n + 1, pairs: wanted.map(({ first, second }) => [first + 1, second + 1]) }],
            },
      );
    }
  });
});

describe('the words of a lens', () => {
  it.each([
    ['samples/water-cluster.xyz', /^H2O \(\d\) – H2O \(\d\): −\d+\.\d kJ\/mol, \d+\.\d kT, (?:far|edge|near)$/],
    ['samples/ion-pair.xyz', /^ammonium \(1\) – formate \(2\): −\d+\.\d kJ\/mol, \d+\.\d kT, (?:far|edge|near)$/],
    ['samples/binding-site.pdb', /^\w:\w+:\d+ – \w:\w+:\d+: −\d+\.\d kJ\/mol, \d+\.\d kT, (?:far|edge|near|clash)$/],
  ])('name both fragments, energy and verdict: %s', async (file, pattern) => {
    const uri = open(readFileSync(file, 'utf8'), file.endsWith('.pdb') ? 'pdb' : 'xyz');
    expect((await wordsOf(client, uri))[0]).toMatch(pattern);
  });

  it('give energies in the unit of the settings, kT once', async () => {
    const inKJ = (await wordsOf(client, open(CLUSTER)))[0]!;
    const own = await WireClient.start({ settings: { energyUnit: 'kcal/mol' } });
    own.open('file:///u.xyz', CLUSTER);
    const kJ = Number(/−(\d+\.\d) kJ/.exec(inKJ)![1]);
    const kcal = Number(/−(\d+\.\d) kcal\/mol/.exec((await wordsOf(own, 'file:///u.xyz'))[0]!)![1]);
    expect(kJ / kcal).toBeCloseTo(4.184, 1);
    own.configure({ energyUnit: 'kT' });
    expect((await wordsOf(own, 'file:///u.xyz'))[0]).toMatch(/: −\d+\.\d kT, (?:far|edge|near)$/);
    await own.stop();
  });

  it.each([
    ['a lone atom', ATOM, ['no pair', 'no pair to compute', 'Open panel']],
    ['noble gases', '2\n\nAr 0 0 0\nAr 5 0 0\n', ['no pair with a known energy', 'no pair to compute', 'Open panel']],
  ])('where there is nothing: %s', async (_, text, expected) => {
    expect(await wordsOf(client, open(text))).toEqual(expected);
  });

  it('draw no icon that a name asks for', async () => {
    const text = '2\nfragment_atoms="1 2" fragment_names="$(bug) b" fragment_charges="1 -1"\nNa 0 0 0\nCl 4 0 0\n';
    expect((await wordsOf(client, open(text)))[0]).toMatch(/^\$ \(bug\) \(1\) – b \(2\)/);
  });

  it('are none in a text without frames', async () => {
    expect(await lenses(client, open(''))).toEqual([]);
    expect(await lenses(client, 'file:///never/opened.xyz')).toEqual([]);
  });
});

describe('lenses', () => {
  it('stand above the first 200 frames of a long trajectory', async () => {
    const found = await lenses(client, open(ATOM.repeat(250)));
    expect(found).toHaveLength(600);
    expect(found.at(-1)!.range.start.line).toBe(3 * 199);
  });

  it('of an old version are not answered', async () => {
    const uri = open(CLUSTER);
    const [lens] = await lenses(client, uri);
    client.change(uri, 2, [{ text: CLUSTER.replace('-1.1687', '-1.2687') }]);
    await expect(resolved(client, lens!)).rejects.toMatchObject({ code: LSPErrorCodes.ContentModified });
    client.close(uri);
    await expect(resolved(client, lens!)).rejects.toMatchObject({ code: LSPErrorCodes.ContentModified });
  });

  it('follow an edit as a fresh text has them', async () => {
    const uri = open(CLUSTER);
    const before = await wordsOf(client, uri);
    const at = { line: 2, character: CLUSTER.split('\n')[2]!.indexOf('-1.1687') };
    const range = { start: at, end: { line: 2, character: at.character + 7 } };
    client.change(uri, 2, [{ range, text: '-3.1687' }]);
    const after = await wordsOf(client, uri);
    expect(after).not.toEqual(before);
    expect(after).toEqual(await wordsOf(client, open(CLUSTER.replace('-1.1687', '-3.1687'))));
  });

  it('are switched off by their setting, and asked for again after it', async () => {
    const own = await WireClient.start({
      abilities: { workspace: { codeLens: { refreshSupport: true }, inlayHint: { refreshSupport: true } } },
    });
    own.open('file:///off.xyz', CLUSTER);
    expect(await lenses(own, 'file:///off.xyz')).toHaveLength(3);
    own.configure({ lens: { frames: false } });
    expect(await lenses(own, 'file:///off.xyz')).toEqual([]);
    await own.until(() => own.refreshed.includes('codeLens') && own.refreshed.includes('inlayHint'));
    await own.stop();
  });
});
