import { readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type CodeAction,
  CodeActionRequest,
  CodeActionResolveRequest,
  type TextDocumentEdit,
} from 'vscode-languageserver-protocol';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Language } from '../../server/src/formats/tree';
import type { EditAnswer } from '../../server/src/lsp/protocol';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';
import { analyse } from '../support/analyse';
import { WireClient } from './client';

/** Rewritings that are looked at first, and the requests behind the commands that annotate, over a real connection. */

const REQUEST = { ...DEFAULT_REQUEST, knowledge: builtInKnowledge({ library: true, estimates: true }) };
const PREVIEWS = { workspace: { workspaceEdit: { documentChanges: true, changeAnnotationSupport: {} } } };
const LAZY = { textDocument: { codeAction: { dataSupport: true, resolveSupport: { properties: ['edit'] } } } };
const xyz = (comment: string, ...atoms: string[]) => `${[atoms.length, comment, ...atoms].join('\n')}\n`;
const water = (z: number) => [`O 0 0 ${z}`, `H 0.757 0.586 ${z}`, `H -0.757 0.586 ${z}`];
const PUBLISHED =
  'published (water: NIST CCCBDB (Standard Reference Database 101), release 17b (2015), experimental dipole moments, to 0.01 D)';

let client: WireClient;
let previewing: WireClient;
let count = 0;

beforeAll(async () => {
  client = await WireClient.start();
  previewing = await WireClient.start({ abilities: { ...PREVIEWS, ...LAZY } });
});

afterAll(async () => {
  expect([await client.stop(), await previewing.stop()]).toEqual([0, 0]);
});

function open(text: string, language = 'xyz', at = client): string {
  const uri = `file:///rewriting/${++count}.${language}`;
  at.open(uri, text, language);
  return uri;
}

function applied(text: string, edit: { documentChanges?: readonly unknown[] } | null | undefined): string {
  const [change, ...others] = edit!.documentChanges as TextDocumentEdit[];
  expect(others).toEqual([]);
  expect(change!.textDocument.version).toBe(1);
  const { starts } = indexLines(snapshotOf(text));
  const offset = ({ line, character }: { line: number; character: number }) =>
    (starts[line] ?? text.length) + character;
  return [...change!.edits]
    .sort((a, b) => offset(b.range.start) - offset(a.range.start))
    .reduce((result, { range, ...edit }) => {
      const piece = 'newText' in edit ? edit.newText : '';
      return result.slice(0, offset(range.start)) + piece + result.slice(offset(range.end));
    }, text);
}

async function ask(method: string, text: string, line: number, more: object = {}, language = 'xyz') {
  const answer: EditAnswer = await client.connection.sendRequest(method, { uri: open(text, language), line, ...more });
  return answer.edit === null ? answer.reason : applied(text, answer.edit);
}

/** Dipoles of all fragments of all frames, and their net charges. */
function moments(text: string, language: Language = 'xyz'): number[] {
  return analyse(text, language, REQUEST).frames.flatMap((frame) => [
    ...Array.from(frame.moments.dipoleEA),
    ...Array.from(frame.moments.chargeE),
  ]);
}

function expectSame(a: readonly number[], b: readonly number[]): void {
  expect(a.length).toBe(b.length);
  const isUnknown = (list: readonly number[]) => list.map(Number.isNaN);
  expect(isUnknown(a)).toEqual(isUnknown(b));
  for (const [k, value] of a.entries()) if (!Number.isNaN(value)) expect(value).toBeCloseTo(b[k]!, 5);
}

const loud = (text: string, language: Language = 'xyz') =>
  analyse(text, language, REQUEST)
    .findings.filter(({ severity, code }) => code !== 'near-field' && (severity === 'error' || severity === 'warning'))
    .map(({ code, message }) => `${code}: ${message}`);

describe('an annotated header', () => {
  it('says of two waters what is known of them, behind what stands there', async () => {
    const text = xyz('by hand', ...water(0), ...water(8));
    const after = await ask('polewise/insertHeader', text, 1);
    expect(after).toBe(
      xyz(
        'by hand fragment_names="H2O H2O" fragment_charges="0 0" kind_dipole_sizes="H2O:1.85" kind_axes="H2O:O>H" ' +
          `dipole_unit=D total_charge=0 multiplicity=1 relative_permittivity=1 temperature=298.15 dipole_sources="H2O: ${PUBLISHED}"`,
        ...water(0),
        ...water(8),
      ),
    );
    expectSame(moments(after!), moments(text));
    expect(loud(after!)).toEqual([]);
    expect(await ask('polewise/insertHeader', after!, 1)).toBe('The frame has all of these keys already.');
  });

  it('leaves what is given, and goes to the frame of the line that is asked about', async () => {
    const frame = xyz('temperature=310', ...water(0), ...water(8));
    const after = (await ask('polewise/insertHeader', frame + frame, 10))!;
    expect(after.startsWith(frame)).toBe(true);
    expect(after.slice(frame.length)).toMatch(
      /^6\ntemperature=310 fragment_names=.* relative_permittivity=1 dipole_sources=/,
    );
  });

  it('takes a radical for no ion where the multiplicity says so', async () => {
    const after = (await ask('polewise/insertHeader', xyz('multiplicity=2', 'O 0 0 0', 'H 0 0 0.97', ...water(4)), 1))!;
    expect(after).not.toContain('_charge');
    expect(loud(after)).toEqual([]);
  });

  it('keeps to the line ends of the file', async () => {
    const text = xyz('', ...water(0), ...water(8)).replace(/\n/g, '\r\n');
    const after = (await ask('polewise/insertHeader', text, 0))!;
    expect(after.replace(/\r\n/g, '')).not.toMatch(/[\r\n]/);
    expect(after).toMatch(/^6\r\nfragment_names=/);
  });

  it('in a PDB file stands in remarks before the coordinates', async () => {
    const text = readFileSync('samples/binding-site.pdb', 'utf8').replace(/^REMARK {2}99 .*=.*\n/gm, '');
    const after = (await ask('polewise/insertHeader', text, 0, {}, 'pdb'))!;
    const added = after.split('\n').filter((line) => !text.split('\n').includes(line));
    expect(
      added.every((line) => line.startsWith('REMARK  99 ') && (line.length <= 80 || line.includes('fragment='))),
    ).toBe(true);
    expect(
      after
        .split('\n')
        .filter((line) => !added.includes(line))
        .join('\n'),
    ).toBe(text);
    expectSame(moments(after, 'pdb'), moments(text, 'pdb'));
    expect(loud(after, 'pdb')).toEqual(loud(text, 'pdb'));
  });

  it.each([
    ['a frame without a comment line', `${water(0).join('\n')}\n`, 'The frame has no comment line.'],
    [
      'a quote that is not closed',
      xyz('note="far', ...water(0)),
      'A quote or bracket of the comment line is not closed.',
    ],
    ['no frame', 'hello\n', 'The file holds no frame.'],
  ])('is refused with a reason for %s', async (_, text, reason) => {
    expect(await ask('polewise/insertHeader', text, 0)).toBe(reason);
  });

  it('is refused for a document that is not open', async () => {
    const answer = await client.connection.sendRequest('polewise/insertHeader', {
      uri: 'file:///nowhere.xyz',
      line: 0,
    });
    expect(answer).toEqual({ edit: null, reason: 'The text has changed meanwhile, or is not open.' });
  });
});

describe('dipoles from the best source', () => {
  it('are added for the kinds that have none, in the unit of the file', async () => {
    const text = xyz(
      'dipole_unit=a.u. kind_dipole_sizes="CO:0.0432" kind_axes="CO:C>O"',
      'C 0 0 0',
      'O 0 0 1.128',
      ...water(8),
    );
    const after = (await ask('polewise/addDipoles', text, 1))!;
    expect(after.split('\n')[1]).toBe(
      `dipole_unit=a.u. kind_dipole_sizes="CO:0.0432 H2O:0.727846" kind_axes="CO:C>O H2O:O>H" dipole_sources="H2O: ${PUBLISHED}"`,
    );
    expectSame(moments(after), moments(text));
  });

  it('are vectors where no axis describes them, beside vectors that are given', async () => {
    // Methanol: published size, direction from the geometry.
    const methanol = [
      'C -0.0466 0.6634 0.0',
      'O -0.0466 -0.7545 0.0',
      'H -1.0868 0.9758 0.0',
      'H 0.4378 1.0711 0.8890',
      'H 0.4378 1.0711 -0.8890',
      'H 0.8603 -1.0568 0.0',
    ];
    const text = xyz('fragment_dipoles="nan nan nan 0 1.9 0"', ...methanol, ...water(9));
    const after = (await ask('polewise/addDipoles', text, 1))!;
    expect(after.split('\n')[1]).toMatch(
      /^fragment_dipoles="-?[\d.]+ -?[\d.]+ 0 0 1.9 0" dipole_sources="CH4O: published \(methanol.*estimated from the geometry\)"$/,
    );
    expectSame(moments(after), moments(text));
  });

  it('do not take from a later frame what it has from the first', async () => {
    const atoms = [...water(0), ...['C 0 0 8', 'O 0 0 9.128']];
    const text = xyz('kind_dipole_sizes="H2O:1.9" kind_axes="H2O:O>H"', ...atoms) + xyz('later', ...atoms);
    const after = (await ask('polewise/addDipoles', text, 8))!;
    expect(after.split('\n')[8]).toMatch(/^later kind_dipole_sizes="H2O:1\.9 CO:0\.11" kind_axes="H2O:O>H CO:/);
    expectSame(moments(after), moments(text));
  });

  it('are not written for isomers under one composition', async () => {
    const ethanol = [
      'C -1.168 -0.387 0',
      'C 0 0.569 0',
      'O 1.201 -0.179 0',
      'H -2.118 0.146 0',
      'H -1.126 -1.027 0.884',
      'H -1.126 -1.027 -0.884',
      'H -0.043 1.212 0.887',
      'H -0.043 1.212 -0.887',
      'H 1.935 0.45 0',
    ];
    const ether = [
      'O 20 0.594 0',
      'C 21.165 -0.195 0',
      'C 18.835 -0.195 0',
      'H 22.015 0.485 0',
      'H 17.985 0.485 0',
      'H 21.212 -0.834 0.893',
      'H 21.212 -0.834 -0.893',
      'H 18.788 -0.834 0.893',
      'H 18.788 -0.834 -0.893',
    ];
    const text = xyz('', ...ethanol, ...ether);
    const after = (await ask('polewise/addDipoles', text, 1))!;
    expect(after).not.toContain('kind_');
    expect(after).toContain('fragment_dipoles=');
    expectSame(moments(after), moments(text));
  });

  it.each([
    ['charges give them', xyz('Properties=species:S:1:pos:R:3:charge:R:1', 'H 0 0 0 0.4', 'F 0 0 0.917 -0.4')],
    ['the file gives them', xyz('kind_dipole_sizes="H2O:1.855" kind_axes="H2O:O>H"', ...water(0))],
  ])('are refused where %s', async (_, text) => {
    expect(await ask('polewise/addDipoles', text, 1)).toBe(
      'The file gives the dipole of every fragment, or charges that give it.',
    );
  });
});

describe('a setting of the file', () => {
  const text = xyz('by hand temperature="300 K"', ...water(0)) + xyz('', ...water(0));
  const set = (line: number, key: string, value: string) => ask('polewise/setFileSetting', text, line, { key, value });

  it.each([
    [1, 'temperature', '310', 'by hand temperature=310'],
    [1, 'temperature', '25 degC', 'by hand temperature="25 degC"'],
    [1, 'relative_permittivity', 'water', 'by hand temperature="300 K" relative_permittivity=water'],
  ])('on line %i: %s %s gives %s', async (line, key, value, comment) => {
    expect(await set(line, key, value)).toBe(text.replace('by hand temperature="300 K"', comment));
  });

  it('goes to the frame of the line', async () => {
    expect(await set(6, 'temperature', '310')).toBe(text.replace('3\n\n', '3\ntemperature=310\n'));
  });

  it.each([
    ['temperature', '-3', 'The temperature must be above 0 K.'],
    ['temperature', 'warm', '"warm" is no temperature. "warm" is no unit that can be used here.'],
    ['relative_permittivity', '0.5', '"0.5" is no number from 1 up and no known medium.'],
    ['relative_permittivity', '4" x=', 'A value holds no quotes and no line end.'],
    ['cutoff', '4', 'There is no such setting.'],
  ])('%s %s is refused with a reason', async (key, value, reason) => {
    expect(await set(1, key, value)).toBe(reason);
  });

  it('of a PDB file is a remark, which is changed where there is one', async () => {
    const site = readFileSync('samples/binding-site.pdb', 'utf8');
    const once = (await ask('polewise/setFileSetting', site, 40, { key: 'temperature', value: '277' }, 'pdb'))!;
    expect(analyse(once, 'pdb').frames[0]!.settings.temperatureK).toBe(277);
    const twice = (await ask('polewise/setFileSetting', once, 40, { key: 'temperature', value: '278' }, 'pdb'))!;
    expect(twice).toBe(once.replace('temperature=277', 'temperature=278'));
  });
});

describe('a rewriting', () => {
  const WATERS = [
    'O   0.0000   0.0000   0.0000',
    'H   0.7572   0.0000   0.5865',
    'H  -0.7572   0.0000   0.5865',
    'O   0.0000   0.0000   5.0000',
    'H   0.7572   0.0000   4.4135',
    'H  -0.7572   0.0000   4.4135',
  ];
  const TEXT = xyz('two waters', ...WATERS);
  const actions = (at: WireClient, uri: string, line: number, only = ['refactor.rewrite']) =>
    at.connection.sendRequest(CodeActionRequest.type, {
      textDocument: { uri },
      range: { start: { line, character: 0 }, end: { line, character: 0 } },
      context: { diagnostics: [], only },
    }) as Promise<CodeAction[]>;

  it('turns the fragment of an atom line, and says what the energy becomes', async () => {
    const [turn, ...others] = await actions(client, open(TEXT), 5);
    expect(others).toEqual([]);
    expect(turn).toMatchObject({ kind: 'refactor.rewrite.polewise.turn' });
    const [, before, after] =
      /^Turn H2O \(fragment 2\) to its most attractive orientation toward H2O \(fragment 1\) \((\S+) → (\S+) kJ\/mol\)$/.exec(
        turn!.title,
      )!;
    const number = (text: string) => Number(text.replace('−', '-'));
    const energy = (text: string) => analyse(text, 'xyz', REQUEST).pairs[0]![0]!.referenceKJPerMol;
    expect(energy(TEXT)).toBeCloseTo(number(before!), 1);
    expect(energy(applied(TEXT, turn!.edit))).toBeCloseTo(number(after!), 1);
    expect(number(after!)).toBeLessThan(number(before!));
    expect(turn!.edit!.changeAnnotations).toBeUndefined();
  });

  it('is to be looked at first where the editor can show that', async () => {
    const uri = open(TEXT, 'xyz', previewing);
    const [turn] = await actions(previewing, uri, 5);
    expect(turn!.edit).toBeUndefined();
    const { edit } = await previewing.connection.sendRequest(CodeActionResolveRequest.type, turn!);
    const [id] = Object.keys(edit!.changeAnnotations!);
    expect(edit!.changeAnnotations![id!]).toEqual({ label: turn!.title, needsConfirmation: true });
    const [change] = edit!.documentChanges as TextDocumentEdit[];
    // One edit, so that nobody can take half of a turned molecule; it does what the plain edits do.
    expect(change!.edits).toMatchObject([{ annotationId: id }]);
    const [plain] = await actions(client, open(TEXT), 5);
    expect(applied(TEXT, edit!)).toBe(applied(TEXT, plain!.edit));
  });

  it('of a whole frame is offered at its head', async () => {
    const titles = (await actions(client, open(TEXT), 1)).map(({ title }) => title);
    expect(titles).toEqual(['Insert an annotated header', 'Add dipoles for all fragments from the best source']);
    const [dipoles] = await actions(client, open(TEXT), 1, ['refactor.rewrite.polewise.dipoles']);
    expect(applied(TEXT, dipoles!.edit)).toContain('two waters kind_dipole_sizes="H2O:1.85" kind_axes="H2O:O>H"');
  });

  it('moves a fragment out of a clash', async () => {
    const text = xyz(
      'fragment_atoms="1-3 4-6"',
      ...WATERS.slice(0, 3),
      ...WATERS.slice(3).map((line) => line.replace(/[45]\.(\d+)$/, '1.$1')),
    );
    const [move] = await actions(client, open(text), 2, ['refactor.rewrite.polewise.move']);
    expect(move!.title).toMatch(/^Move H2O \(fragment 1\) \d\.\d\d Å out of the clash$/);
    const after = applied(text, move!.edit);
    expect(after.split('\n').slice(5)).toEqual(text.split('\n').slice(5));
    expect(loud(after)).toEqual([]);
  });

  it('is none of those that are asked for where only remedies are', async () => {
    expect(await actions(client, open(TEXT), 5, ['quickfix'])).toEqual([]);
  });
});

describe('pairs to be computed', () => {
  it('are handed to the command of the editor that writes them', async () => {
    const text = xyz(
      '',
      ...['O 0 0 0', 'H 0.957 0 0', 'H -0.24 0.927 0', 'O 2.8 0 0', 'H 3.386 0.757 0', 'H 3.386 -0.757 0'],
    );
    const uri = open(text);
    const diagnostics = await client.diagnostics(uri);
    const near = diagnostics.find(({ code }) => code === 'near-field')!;
    const offered = (await client.connection.sendRequest(CodeActionRequest.type, {
      textDocument: { uri },
      range: near.range,
      context: { diagnostics, only: ['quickfix'] },
    })) as CodeAction[];
    const [write] = offered.filter(({ command }) => command !== undefined);
    expect(write!.title).toBe('Write H2O (fragment 1) and H2O (fragment 2) as a file of their own…');
    expect(write!.edit).toBeUndefined();
    expect(write!.command).toMatchObject({
      command: 'polewise.writeDimers',
      arguments: [{ uri, frame: 1, pairs: [[1, 2]] }],
    });
  });
});
