import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type CompletionItem,
  type CompletionList,
  CompletionRequest,
  CompletionTriggerKind,
  type InsertReplaceEdit,
  type MarkupContent,
  type TextEdit,
} from 'vscode-languageserver-protocol';
import { FILE_KEYS, FRAME_KEYS, SELECTED_KEYS } from '../../server/src/formats/annotation/keys';
import { ELEMENT_ROWS } from '../../server/src/physics/element-table';
import { WireClient } from './client';
import { edited, textIn } from './places';

/** Completion over a real connection. A bar marks the cursor in the texts here. */

let client: WireClient;
let snippets: WireClient;
let count = 0;

beforeAll(async () => {
  client = await WireClient.start();
  const completionItem = { snippetSupport: true };
  snippets = await WireClient.start({ abilities: { textDocument: { completion: { completionItem } } } });
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
  expect(await snippets.stop()).toBe(0);
});

interface Asked {
  readonly own?: WireClient;
  readonly language?: string;
  /** Waits until the text has been analysed (default). */
  readonly isAnalysed?: boolean;
  readonly trigger?: string;
}

/** What is offered at the bar, and the text without it. */
async function offered(marked: string, { own = client, language, isAnalysed = true, trigger }: Asked = {}) {
  const at = marked.indexOf('|');
  const text = marked.replace('|', '');
  const pdb = /^(?:REMARK|ATOM|HETATM)/m.test(text) ? 'pdb' : 'xyz';
  const uri = `file:///completion/${++count}.xyz`;
  own.open(uri, text, language ?? pdb);
  if (isAnalysed) await own.diagnostics(uri);
  const before = marked.slice(0, at).split('\n');
  const answer = await own.connection.sendRequest(CompletionRequest.type, {
    textDocument: { uri },
    position: { line: before.length - 1, character: before.at(-1)!.length },
    ...(trigger === undefined
      ? {}
      : { context: { triggerKind: CompletionTriggerKind.TriggerCharacter, triggerCharacter: trigger } }),
  });
  const isList = answer !== null && 'items' in answer;
  const items: CompletionItem[] = isList ? answer.items : (answer ?? []);
  return { uri, text, items, isIncomplete: isList && (answer as CompletionList).isIncomplete };
}

const labelsOf = async (marked: string, asked?: Asked) =>
  (await offered(marked, asked)).items.map(({ label }) => label);

/** The text after an item is chosen. */
function chosen(text: string, items: readonly CompletionItem[], label: string): string {
  const item = items.find((candidate) => candidate.label === label)!;
  const { range, newText } = item.textEdit as Exclude<TextEdit | InsertReplaceEdit, InsertReplaceEdit>;
  return edited(text, [{ range, newText }]);
}

const ATOMS = 'O 0 0 0\nH 0.76 0.59 0\nH -0.76 0.59 0\nO 0 3 0\nH 0.76 3.59 0\nH -0.76 3.59 0\nCl 4 0 0\n';
/** Two waters and a chloride, with a comment line. */
const frame = (comment: string) => `7\n${comment}\n${ATOMS}`;

const record = (serial: number, name: string, residue: string, chain: string, n: number, x: number, element: string) =>
  `HETATM${String(serial).padStart(5)}  ${name.padEnd(3)} ${residue} ${chain}${String(n).padStart(4)}    ` +
  `${[x, 0, 0].map((c) => c.toFixed(3).padStart(8)).join('')}  1.00  0.00          ${element.padStart(2)}`;
const RECORDS = [
  record(1, 'O', 'HOH', ' ', 1, 0, 'O'),
  record(2, 'H1', 'HOH', ' ', 1, 0.96, 'H'),
  record(3, 'C1', 'LIG', 'B', 2, 5, 'C'),
  record(4, 'N1', 'LIG', 'B', 2, 6.16, 'N'),
].join('\n');
const pdb = (line: string) => `${line}\n${RECORDS}\nEND\n`;

describe('element symbols', () => {
  it('are offered at the first field of an atom line: those of the file, then common ones, then the rest', async () => {
    const labels = await labelsOf('3\nwater\nO 0 0 0\nH 0 0 1\n|');
    expect(labels.slice(0, 12)).toEqual(['O', 'H', 'C', 'N', 'F', 'P', 'S', 'Cl', 'Br', 'I', 'He', 'Li']);
    expect(new Set(labels).size).toBe(118);
    expect(labels).toHaveLength(118);
  });

  it('come in that order, and with name, number, radius and its source', async () => {
    const { items } = await offered('3\nwater\nO 0 0 0\n  S|\n');
    const order = [...items].sort((a, b) => (a.sortText! < b.sortText! ? -1 : 1));
    expect(order.map(({ label }) => label)).toEqual(items.map(({ label }) => label));
    const selenium = items.find(({ label }) => label === 'Se')!;
    expect(selenium.detail).toBe('selenium');
    expect((selenium.documentation as MarkupContent).value).toBe(
      '**selenium**, atomic number 34\n\nVan der Waals radius 1.90 Å (Bondi 1964).',
    );
    const uranium = items.find(({ label }) => label === ELEMENT_ROWS.find((row) => row[5] === '-')![0])!;
    expect((uranium.documentation as MarkupContent).value).toContain('2.00 Å (none is published)');
  });

  it('take the place of the letters that are there', async () => {
    const { text, items } = await offered('3\nwater\nO 0 0 0\n  S| 0 0 1\n');
    expect(chosen(text, items, 'Se')).toBe(text.replace('S', 'Se'));
  });

  it.each([
    ['the second field', '3\nwater\nO |\n'],
    ['a number', '3\nwater\nO 0.|\n'],
    ['a count line', '|3\nwater\n'],
    ['within a word', '3\nwater\nC|l 0 0 0\n'],
    ['a longer word', '3\nwater\nwat|\n'],
  ])('are not offered at %s', async (_, text) => {
    expect(await labelsOf(text)).toEqual([]);
  });

  it('do not come up because of a blank', async () => {
    expect(await labelsOf('3\nwater\nO 0 0 0\n |', { trigger: ' ' })).toEqual([]);
    expect(await labelsOf('3\nwater\nO 0 0 0\n |')).toHaveLength(118);
  });
});

describe('keys', () => {
  it.each([
    ...FRAME_KEYS.map((key) => [key, '7\nword |\n'] as const),
    ...[...SELECTED_KEYS, ...FILE_KEYS].map((key) => [key, 'REMARK  99 |\n'] as const),
  ])('say what %s means, its values and an example', async (key, text) => {
    const { items } = await offered(text);
    const item = items.find(({ label }) => label === key)!;
    const { kind, value } = item.documentation as MarkupContent;
    expect(kind).toBe('markdown');
    // An editor shows the values above the rest: they do not stand there twice.
    expect(item.detail).not.toBe('');
    expect(item.detail).not.toContain('`');
    expect(value).not.toContain('Values: ');
    expect(value).toMatch(new RegExp(`\`${key}=[^\`]+\`$`));
  });

  const example = ({ documentation }: CompletionItem) => /`([^`]+)`$/.exec((documentation as MarkupContent).value)![1]!;

  it('have examples for XYZ that are read without an error', async () => {
    const { items } = await offered('7\nword |\n');
    const waters = frame('').replace('7', '6').replace('Cl 4 0 0\n', '');
    for (const item of items) {
      const uri = `file:///example/${item.label}.xyz`;
      client.open(uri, waters.replace('\n\n', `\n${example(item)}\n`));
      expect((await client.diagnostics(uri)).filter(({ severity }) => severity === 1)).toEqual([]);
    }
  });

  it('have examples for PDB that are read without an error', async () => {
    const { items } = await offered('REMARK  99 |\n');
    for (const item of items) {
      const selector = (SELECTED_KEYS as readonly string[]).includes(item.label) && item.label !== 'fragment';
      const uri = `file:///example/${item.label}.pdb`;
      client.open(uri, pdb(`REMARK  99 ${selector ? 'fragment=*:HOH:* ' : ''}${example(item)}`), 'pdb');
      expect((await client.diagnostics(uri)).filter(({ severity }) => severity === 1)).toEqual([]);
    }
  });

  it('that stand behind the cursor are not offered again', async () => {
    expect(await labelsOf('7\n | pbc="T T T"\n')).not.toContain('pbc');
  });
});

describe('values', () => {
  it.each<[what: string, marked: string, expected: string[]]>([
    ['the name of the fragment in turn', frame('fragment_names="a |'), ['H2O', 'water', 'Cl']],
    ['the name of an ion', frame('fragment_names="a b |'), ['Cl', 'chloride', 'H2O']],
    ['no name behind the last', frame('fragment_names="a b c |'), []],
    ['atoms of the fragment in turn', frame('fragment_axes="1>2 |'), ['4', '5', '6']],
    ['atoms on the other side of an axis', frame('fragment_axes="1>2 4>5,|'), ['4', '5', '6']],
    ['the fragments as they are', frame('fragment_atoms="|'), ['1-3 4-6 7']],
    ['compositions', frame('kind_dipole_sizes="|'), ['H2O', 'Cl']],
    ['compositions not given yet', frame('kind_axes="H2O:O>H |'), ['Cl']],
    ['elements of a composition', frame('kind_axes="H2O:|'), ['H', 'O']],
    ['elements on the other side', frame('kind_axes="H2O:O>|'), ['H', 'O']],
    ['no number for a size', frame('kind_dipole_sizes="H2O:|'), []],
    ['units behind a number', frame('temperature="25 |'), ['K', 'degC', 'degF']],
    ['no unit without quotes', frame('temperature=25|'), []],
    ['units of a dipole', frame('dipole_unit=|'), ['D', 'e*angstrom', 'a.u.', 'C*m']],
    ['nothing for a key of another program', frame('energy=|'), []],
    ['nothing for a word of every object', frame('constructor=|'), []],
    ['atom names of the residue selected', pdb('REMARK  99 fragment=B:LIG:2 axis=|'), ['C1', 'N1']],
    ['atom names on the other side', pdb('REMARK  99 fragment=_:HOH:1 axis=O>|'), ['O', 'H1']],
    ['atom names where the selector stands behind', pdb('REMARK  99 axis=| fragment=*:HOH:*'), ['O', 'H1']],
    ['no atom names without a selector', pdb('REMARK  99 axis=|'), []],
    ['units of a size', pdb('REMARK  99 dipole_size="1.8 |'), ['D', 'e*angstrom', 'a.u.', 'C*m']],
    ['selectors', pdb('REMARK  99 fragment=|'), ['*:HOH:*', '_:HOH:*', '*:LIG:*', 'B:LIG:*', '_:HOH:1', 'B:LIG:2']],
  ])('%s', async (_, marked, expected) => {
    expect(await labelsOf(marked)).toEqual(expected);
  });

  it.each([
    ['a selector as a whole', pdb('REMARK  99 fragment=B:LI|'), 'B:LIG:2', 'fragment=B:LIG:2'],
    ['an atom name after the mark', pdb('REMARK  99 fragment=B:LIG:2 axis=C1>N|'), 'N1', 'axis=C1>N1'],
    ['a composition, with its colon', frame('kind_axes="H|'), 'H2O', 'kind_axes="H2O:'],
    ['an element of an axis', frame('kind_axes="H2O:O>|'), 'H', 'kind_axes="H2O:O>H'],
    ['an atom of an axis', frame('fragment_axes="1>2,3 4>|'), '5', 'fragment_axes="1>2,3 4>5'],
  ])('put in place: %s', async (_, marked, label, expected) => {
    const { text, items } = await offered(marked);
    const line = chosen(text, items, label)
      .split('\n')
      .find((candidate) => candidate.includes(expected));
    expect(line?.endsWith(expected)).toBe(true);
  });

  it('of more than 300 are cut to what fits, and asked for again', async () => {
    const many = Array.from({ length: 400 }, (_, k) => record(k + 1, 'O', 'HOH', 'W', k + 1, 4 * k, 'O')).join('\n');
    const all = await offered(`REMARK  99 fragment=|\n${many}\nEND\n`);
    expect(all.isIncomplete).toBe(true);
    expect(all.items).toHaveLength(300);
    const some = await offered(`REMARK  99 fragment=W:HOH:39|\n${many}\nEND\n`);
    expect(some.isIncomplete).toBe(true);
    expect(some.items.map(({ label }) => label)).toEqual(
      ['39', ...Array.from({ length: 10 }, (_, k) => `39${k}`)].map((n) => `W:HOH:${n}`),
    );
    expect((await offered(pdb('REMARK  99 fragment=|'))).isIncomplete).toBe(false);
  });
});

describe('a header for an empty comment line', () => {
  const header = (items: readonly CompletionItem[]) => items.find(({ label }) => label === 'annotated header');

  it('has a place for each fragment of the frame', async () => {
    const { items } = await offered(frame('|'), { own: snippets });
    const item = header(items)!;
    expect(item.insertTextFormat).toBe(2);
    expect(item.detail).toBe('names, charges, dipole sizes and axes of 3 fragments');
    const keys = item.textEdit!.newText.split(/ (?=fragment_)/);
    expect(keys.map((key) => key.replace(/\$\{(\d+):([^}]*)\}/g, '<$1 $2>'))).toEqual([
      'fragment_names="<1 H2O> <2 H2O> <3 Cl>"',
      'fragment_charges="<4 0> <5 0> <6 nan>"',
      'fragment_dipole_sizes="<7 nan> <8 nan> <9 nan>"',
      'fragment_axes="<10 nan> <11 nan> <12 nan>"',
    ]);
  });

  it('is plain text for an editor without such places, and is read without an error', async () => {
    const { text, items } = await offered(frame('|'));
    expect(header(items)!.insertTextFormat).toBeUndefined();
    const after = chosen(text, items, 'annotated header');
    client.open('file:///header.xyz', after);
    expect((await client.diagnostics('file:///header.xyz')).filter(({ severity }) => severity === 1)).toEqual([]);
  });

  it('gives the charges that the file tells, and whole numbers of them', async () => {
    const text = readFileSync('samples/ion-pair.xyz', 'utf8').split('\n');
    const rows = text.slice(2).map((line) => line.split(/\s+/).slice(0, 5).join(' '));
    const { uri, items } = await offered(`15\nProperties=species:S:1:pos:R:3:charge:R:1|\n${rows.join('\n')}\n`, {
      own: snippets,
    });
    expect(header(items)).toBeUndefined();
    const range = { start: { line: 1, character: 0 }, end: { line: 1, character: 50 } };
    snippets.change(uri, 2, [{ range, text: '' }]);
    const found = await snippets.connection.sendRequest(CompletionRequest.type, {
      textDocument: { uri },
      position: { line: 1, character: 0 },
    });
    expect(header(found as CompletionItem[])!.textEdit!.newText).toMatch(
      / fragment_charges="\$\{5:1\} \$\{6:-1\} \$\{7:0\} \$\{8:0\}"/,
    );
  });

  it('goes by compositions where there are many fragments', async () => {
    const argons = Array.from({ length: 25 }, (_, k) => `Ar ${6 * k} 0 0`).join('\n');
    const { items } = await offered(`25\n|\n${argons}\n`, { own: snippets });
    expect(header(items)!.textEdit!.newText).toMatch(
      /^kind_dipole_sizes="Ar:\$\{1:nan\}" kind_axes="Ar:\$\{2:Ar>Ar\}"$/,
    );
  });

  it('shows how it is done where nothing is analysed yet', async () => {
    const { items } = await offered('7\n|\n', { own: snippets, isAnalysed: false });
    expect(header(items)!.textEdit!.newText).toMatch(/^fragment_atoms="\$\{1:1-3\} \$\{2:4-6\}" /);
  });

  it.each([
    ['a line that is not empty', frame('water |')],
    ['another line', frame('water').replace('O 0 0 0', '|')],
    ['a count line', '|\n\n'],
  ])('is not offered on %s', async (_, marked) => {
    expect(header((await offered(marked)).items)).toBeUndefined();
  });
});

describe('an annotation line of a PDB file', () => {
  it.each(['', 'REM'])('begins with a selector, and places for size and axis: "%s"', async (typed) => {
    const { items } = await offered(pdb(`${typed}|`), { own: snippets });
    expect(items.map(({ label }) => label)).toEqual(['REMARK  99 fragment=']);
    expect(items[0]!.textEdit!.newText).toMatch(
      /^REMARK {2}99 fragment=\$\{1:(?:B:LIG:2|_:HOH:1)\} dipole_size=\$2 axis=\$3$/,
    );
    expect((items[0]!.textEdit as TextEdit).range.start.character).toBe(0);
  });

  it('is not offered on a record', async () => {
    expect(await labelsOf(pdb('ATOM|'))).toEqual([]);
    expect(await labelsOf(`${pdb('END')}R|E`)).toEqual([]);
  });
});

describe('completion does not wait', () => {
  const many = Array.from(
    { length: 20_000 },
    (_, k) => `Ar ${5 * (k % 27)} ${5 * (Math.floor(k / 27) % 27)} ${5 * Math.floor(k / 729)}`,
  );
  const text = `20000\nkind_axes="\n${many.join('\n')}\n`;

  it('for an analysis, and goes by the last one', async () => {
    const uri = 'file:///running.xyz';
    client.open(uri, text);
    const ask = async () => {
      const position = { line: 1, character: 11 };
      const found = await client.connection.sendRequest(CompletionRequest.type, { textDocument: { uri }, position });
      return { labels: (found as CompletionItem[]).map(({ label }) => label), status: client.statuses.at(-1)!.state };
    };
    expect(await ask()).toEqual({ labels: [], status: 'busy' });
    await client.diagnostics(uri);
    client.change(uri, 2, [{ text: `${text}\n` }]);
    expect(await ask()).toEqual({ labels: ['Ar'], status: 'busy' });
    client.close(uri);
  });
});

describe('a key called like what every object has', () => {
  it.each(['constructor', 'toString', '__proto__'])('means nothing: %s', async (key) => {
    const text = frame(`${key}=1 |`);
    const { uri, items } = await offered(text);
    expect(items.length).toBeGreaterThan(10);
    expect(await client.hover(uri, 1, 1)).toEqual(await client.hover(uri, 1, key.length + 3));
  });
});

describe('every place is answered', () => {
  const samples = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
  it.each([...samples.map((name) => [name, readFileSync(`samples/${name}`, 'utf8')] as const), ['empty', ''] as const])(
    '%s',
    async (name, text) => {
      const uri = `file:///everywhere/${name}`;
      client.open(uri, text, name.endsWith('.pdb') ? 'pdb' : 'xyz');
      await client.diagnostics(uri);
      const lines = text.split('\n');
      for (let line = 0; line < lines.length + 2; line += line < 12 ? 1 : 7) {
        const length = (lines[line] ?? '').length;
        for (const character of new Set([0, 1, Math.floor(length / 3), Math.floor(length / 2), length, length + 50])) {
          const answer = await client.connection.sendRequest(CompletionRequest.type, {
            textDocument: { uri },
            position: { line, character },
          });
          for (const { textEdit } of (answer ?? []) as CompletionItem[]) textIn(text, (textEdit as TextEdit).range);
        }
      }
    },
  );

  it('whatever stands on a long line', async () => {
    for (const piece of ['a', 'a=', 'a={', '[', '" ', '\\']) {
      const { uri } = await offered(`1\n${piece.repeat(40_000 / piece.length)}|\nAr 0 0 0\n`);
      client.close(uri);
    }
  }, 20_000);
});
