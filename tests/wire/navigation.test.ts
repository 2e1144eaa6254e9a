import { readdirSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type DefinitionLink,
  DefinitionRequest,
  DocumentHighlightRequest,
  type Location,
  type Position,
  PrepareRenameRequest,
  type Range,
  ReferencesRequest,
  RenameRequest,
  type SelectionRange,
  SelectionRangeRequest,
  type TextDocumentEdit,
} from 'vscode-languageserver-protocol';
import { WireClient } from './client';
import { edited, offsetIn, placeOf, textIn } from './places';

/** Definition, references, highlights, rename and growing selection over a real connection. */

let client: WireClient;

beforeAll(async () => {
  client = await WireClient.start();
});

afterAll(async () => {
  expect(await client.stop()).toBe(0);
});

const open = (text: string, language = 'xyz') => client.openNew(text, language);

const languageOf = (text: string) => (/^(?:REMARK|ATOM|HETATM|MODEL|CRYST1)/m.test(text) ? 'pdb' : 'xyz');

async function definition(text: string, position: Position): Promise<string[]> {
  const uri = open(text, languageOf(text));
  const found = await client.connection.sendRequest(DefinitionRequest.type, { textDocument: { uri }, position });
  return ((found ?? []) as Location[]).map(({ range }) => textIn(text, range));
}

async function references(text: string, position: Position, includeDeclaration = true): Promise<string[]> {
  const uri = open(text, languageOf(text));
  const context = { includeDeclaration };
  const found = await client.connection.sendRequest(ReferencesRequest.type, {
    textDocument: { uri },
    position,
    context,
  });
  return (found ?? []).map(({ range }) => textIn(text, range));
}

async function highlights(text: string, position: Position): Promise<string[]> {
  const uri = open(text, languageOf(text));
  const found = await client.connection.sendRequest(DocumentHighlightRequest.type, { textDocument: { uri }, position });
  return (found ?? []).map(({ range }) => textIn(text, range));
}

/** The text after a rename; the edit must be for the version that is open. */
async function renamed(text: string, position: Position, newName: string): Promise<string> {
  const uri = open(text, languageOf(text));
  const edit = await client.connection.sendRequest(RenameRequest.type, { textDocument: { uri }, position, newName });
  const [change, ...others] = edit!.documentChanges as TextDocumentEdit[];
  expect(others).toEqual([]);
  expect(change!.textDocument).toEqual({ uri, version: 1 });
  return edited(text, change!.edits as { range: Range; newText: string }[]);
}

/** Two waters and a chloride; the second water is given by its atoms 4, 5 and 6, the ion by 7. An astral character stands before. */
const LINES = [
  '7',
  '\u{1f4a7} fragment_atoms="7 1-3 4,5-6" fragment_names="donor taker ion" fragment_charges="0 nan -1" ' +
    'fragment_dipoles="0 0 1.8 nan nan nan 0 0 0" fragment_axes="1>2,3 4>5-6 nan" kind_dipole_sizes="H2O:1.855 Cl:0"',
  'O 0.00  0.00  0.00',
  'H 0.76  0.59  0.00',
  'H -0.76 0.59  0.00',
  'O 0.00  3.00  0.00',
  'H 0.76  3.59  0.00',
  'H -0.76 3.59  0.00',
  'Cl 4.00 0.00  0.00',
];
const LIST = `${LINES.join('\n')}\n`;
const FIRST = LINES.slice(2, 5).join('\n');
const SECOND = LINES.slice(5, 8).join('\n');
const ION = LINES[8]!;

const record = (serial: number, name: string, residue: string, chain: string, n: number, x: number, element: string) =>
  `HETATM${String(serial).padStart(5)}  ${name.padEnd(3)} ${residue} ${chain}${String(n).padStart(4)}    ` +
  `${[x, 0, 0].map((c) => c.toFixed(3).padStart(8)).join('')}  1.00  0.00          ${element.padStart(2)}`;
const RECORDS = [
  record(1, 'O', 'HOH', ' ', 1, 0, 'O'),
  record(2, 'H1', 'HOH', ' ', 1, 0.96, 'H'),
  record(3, 'O', 'HOH', 'B', 2, 5, 'O'),
  record(4, 'H1', 'HOH', 'B', 2, 5.96, 'H'),
  record(5, 'NA', 'NA ', 'B', 3, 9, 'NA'),
];
const PDB = `${[
  'REMARK  99 fragment=_:HOH:1 name=inner charge=0',
  'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1',
  'REMARK  99 temperature=310',
  ...RECORDS,
  'END',
].join('\n')}\n`;

describe('definition leads from the annotation to atoms', () => {
  it.each<[what: string, piece: string, into: number, atoms: string[]]>([
    ['a name', 'taker', 2, [SECOND]],
    ['the end of a name', 'taker', 5, [SECOND]],
    ['a group of atoms that is not in the order of the fragments', '"7 1-3', 1, [ION]],
    ['a range', '1-3', 1, [FIRST]],
    ['one number of a group', '4,5-6', 0, [LINES[5]!]],
    ['a range within a group', '5-6"', 0, [LINES.slice(6, 8).join('\n')]],
    ['a charge', ' -1"', 2, [ION]],
    ['a component of a dipole', 'nan nan nan', 5, [SECOND]],
    ['an atom of an axis', '>2,3', 1, [LINES[3]!]],
    ['atoms of an axis', '>5-6', 2, [LINES.slice(6, 8).join('\n')]],
    ['an axis that is not given', '5-6 nan', 5, [ION]],
    ['a composition', 'H2O:', 1, [`${FIRST}\n${SECOND}`]],
    ['the value for a composition', 'Cl:0', 3, [ION]],
    ['a key', 'fragment_names', 3, []],
    ['free text', '\u{1f4a7}', 0, []],
  ])('%s', async (_, piece, into, atoms) => {
    for (const text of [LIST, LIST.replaceAll('\n', '\r\n')]) {
      const found = await definition(text, placeOf(text, piece, { into }));
      expect(found.map((place) => place.replaceAll('\r\n', '\n'))).toEqual(atoms);
    }
  });

  it.each<[what: string, piece: string, into: number, atoms: number[][]]>([
    ['a selector of a blank chain', '_:HOH:1', 2, [[0, 1]]],
    ['a selector of several', '*:HOH:*', 0, [[0, 1, 2, 3]]],
    ['a name', 'inner', 1, [[0, 1]]],
    ['a size', '1.855', 1, [[0, 1, 2, 3]]],
    ['an atom name of an axis', 'H1\n', 1, [[1], [3]]],
    ['a key of the file', '310', 1, []],
  ])('in a REMARK: %s', async (_, piece, into, atoms) => {
    const expected = atoms.map((run) => run.map((atom) => RECORDS[atom]!.trimEnd()).join('\n'));
    expect(await definition(PDB, placeOf(PDB, piece, { into }))).toEqual(expected);
  });

  it('gives every run of lines of a fragment whose atoms do not stand together', async () => {
    const text = LIST.replace('"7 1-3 4,5-6"', '"7 1,5-6 4,2-3"');
    expect(await definition(text, placeOf(text, 'donor'))).toEqual([LINES[2], LINES.slice(6, 8).join('\n')]);
  });

  it('tells what it leads from where the editor takes links', async () => {
    const own = await WireClient.start({ abilities: { textDocument: { definition: { linkSupport: true } } } });
    own.open('file:///links.xyz', LIST);
    const [link, ...others] = (await own.connection.sendRequest(DefinitionRequest.type, {
      textDocument: { uri: 'file:///links.xyz' },
      position: placeOf(LIST, 'taker', { into: 3 }),
    })) as DefinitionLink[];
    expect(others).toEqual([]);
    expect(textIn(LIST, link!.originSelectionRange!)).toBe('taker');
    expect(textIn(LIST, link!.targetRange)).toBe(SECOND);
    expect(textIn(LIST, link!.targetSelectionRange)).toBe(LINES[5]);
    await own.stop();
  });
});

describe('from an atom', () => {
  it('definition leads to what is said of its fragment', async () => {
    expect(await definition(LIST, { line: 6, character: 4 })).toEqual([
      '4,5-6',
      'taker',
      'nan',
      'nan nan nan',
      '4>5-6',
      'H2O:1.855',
    ]);
  });

  it('definition leads to the REMARK lines that name it', async () => {
    const place = placeOf(PDB, RECORDS[2]!, { into: 3 });
    expect(await definition(PDB, place)).toEqual(['*:HOH:* dipole_size=1.855 axis=O>H1']);
  });

  it('definition in a later frame leads to what holds there: its own keys, and names and kinds of the first', async () => {
    const later = LIST.replace(/fragment_names="[^"]*" |kind_dipole_sizes="[^"]*"/g, '').replace('0 nan -1', '1 2 3');
    const text = LIST + later;
    const found = await definition(text, { line: LINES.length + 2, character: 0 });
    expect(found).toEqual(['donor', 'H2O:1.855', '1-3', '1', '0 0 1.8', '1>2,3']);
  });

  it('references are the annotation and every line of its atoms', async () => {
    expect(await references(LIST, { line: 8, character: 0 })).toEqual(['7', 'ion', '-1', '0 0 0', 'nan', 'Cl:0', ION]);
    expect(await references(LIST, placeOf(LIST, 'ion'), false)).not.toContain(ION);
    expect((await references(LIST, placeOf(LIST, 'donor'))).slice(-3)).toEqual(LINES.slice(2, 5));
  });

  it('every line of its fragment is highlighted, and what is said of it', async () => {
    expect(await highlights(LIST, { line: 4, character: 8 })).toEqual(
      expect.arrayContaining(['donor', '1-3', ...LINES.slice(2, 5)]),
    );
    expect(await highlights(LIST, { line: 4, character: 8 })).not.toContain('taker');
    expect(await highlights(LIST, { line: 0, character: 0 })).toEqual([]);
  });
});

describe('renaming', () => {
  it.each([
    ['from the list', placeOf(LIST, 'taker', { into: 1 })],
    ['from an atom', { line: 6, character: 0 }],
  ])('changes the name in the list and nothing else: %s', async (_, position) => {
    expect(await renamed(LIST, position, 'acceptor')).toBe(LIST.replace('taker', 'acceptor'));
    const crlf = LIST.replaceAll('\n', '\r\n');
    expect(await renamed(crlf, position, 'acceptor')).toBe(crlf.replace('taker', 'acceptor'));
  });

  it('offers the name under the cursor, and that of the atom under it', async () => {
    const uri = open(LIST);
    const prepare = (position: Position) =>
      client.connection.sendRequest(PrepareRenameRequest.type, { textDocument: { uri }, position });
    const at = placeOf(LIST, 'donor');
    expect(await prepare(at)).toEqual({
      range: { start: at, end: { line: 1, character: at.character + 5 } },
      placeholder: 'donor',
    });
    expect(await prepare({ line: 8, character: 9 })).toEqual({
      range: { start: { line: 8, character: 0 }, end: { line: 8, character: 2 } },
      placeholder: 'ion',
    });
  });

  it('changes the name in every frame that gives it', async () => {
    const other = LIST.replace('taker', 'third');
    expect(await renamed(LIST + other + LIST, placeOf(LIST, 'taker'), 'a')).toBe(
      LIST.replace('taker', 'a') + other + LIST.replace('taker', 'a'),
    );
  });

  it('changes the name in a REMARK', async () => {
    for (const position of [placeOf(PDB, 'inner'), placeOf(PDB, RECORDS[1]!)]) {
      expect(await renamed(PDB, position, 'outer')).toBe(PDB.replace('inner', 'outer'));
    }
  });

  const column = (rows: string[]) =>
    `${['2', 'Properties=species:S:1:pos:R:3:fragment:S:1:charge:R:1', ...rows].join('\n')}\n`;
  it.each<[what: string, rows: string[], name: string, expected: string[]]>([
    ['a shorter one', ['C 0 0 0 left  0.1', 'C 9 0 0 right 0.2'], 'it', ['C 0 0 0 it    0.1', 'C 9 0 0 right 0.2']],
    ['a longer one', ['C 0 0 0 one   0.1', 'C 9 0 0 right 0.2'], 'these', ['C 0 0 0 these 0.1', 'C 9 0 0 right 0.2']],
    ['one too long', ['C 0 0 0 one 0.1', 'C 9 0 0 two 0.2'], 'these', ['C 0 0 0 these 0.1', 'C 9 0 0 two 0.2']],
    [
      'one to the right',
      ['C 0 0 0   one 0.1', 'C 9 0 0 right 0.2'],
      'both',
      ['C 0 0 0  both 0.1', 'C 9 0 0 right 0.2'],
    ],
  ])('keeps the columns of a fragment column: %s', async (_, rows, name, expected) => {
    const text = column(rows);
    expect(await renamed(text, placeOf(text, rows[0]!.split(/\s+/)[4]!), name)).toBe(column(expected));
  });

  it('changes every row of a fragment column, in every frame', async () => {
    const text = readFileSync('samples/ion-pair.xyz', 'utf8');
    const both = text + text;
    const expected = both.replaceAll(' ammonium', ' cation');
    expect(await renamed(both, { line: 2, character: 0 }, 'cation')).toBe(expected);
  });

  it.each([
    ['', /empty/],
    ['two words', /blanks/],
    ['a,b', /cannot hold ,/],
    ['a"b', /cannot hold "/],
    ['nan', /not given/],
    ['x'.repeat(61), /at most 60/],
  ])('refuses "%s" and says why', async (name, reason) => {
    await expect(renamed(LIST, placeOf(LIST, 'taker'), name)).rejects.toThrow(reason);
  });

  it('refuses a name of a fragment column that would join two fragments, and a number', async () => {
    const text = readFileSync('samples/ion-pair.xyz', 'utf8');
    await expect(renamed(text, placeOf(text, 'ammonium'), 'formate')).rejects.toThrow(/become one/);
    await expect(renamed(text, placeOf(text, 'ammonium'), '12')).rejects.toThrow(/number/);
  });

  it.each([
    ['an atom of a fragment without a name', 'samples/bare-cluster.xyz', 4],
    ['a count line', 'samples/ion-pair.xyz', 0],
  ])('says that there is no name: %s', async (_, file, line) => {
    await expect(renamed(readFileSync(file, 'utf8'), { line, character: 0 }, 'a')).rejects.toThrow(/no fragment name/);
  });
});

describe('the selection grows', () => {
  const grown = async (text: string, position: Position) => {
    const uri = open(text, languageOf(text));
    const [innermost] = await client.connection
      .sendRequest(SelectionRangeRequest.type, {
        textDocument: { uri },
        positions: [position],
      })
      .then((ranges) => ranges!);
    const steps: string[] = [];
    for (let at: SelectionRange | undefined = innermost; at !== undefined; at = at.parent) {
      steps.push(textIn(text, at.range));
    }
    return steps;
  };

  it('from a field over line, fragment and frame to the file', async () => {
    expect(await grown(LIST + LIST, { line: 6, character: 4 })).toEqual([
      '0.76',
      LINES[6],
      SECOND,
      LIST.trimEnd(),
      LIST + LIST,
    ]);
  });

  it('takes the blanks around a line before its fragment', async () => {
    const text = LIST.replaceAll(/^(H|O) (.*)$/gm, '  $1 $2 ');
    expect((await grown(text, { line: 6, character: 2 })).slice(0, 4)).toEqual([
      'H',
      LINES[6],
      `  ${LINES[6]} `,
      LINES.slice(5, 8)
        .map((line) => `  ${line} `)
        .join('\n'),
    ]);
  });

  it('over the run of lines where a fragment does not stand together', async () => {
    const text = LIST.replace('"7 1-3 4,5-6"', '"7 1,5-6 4,2-3"');
    expect((await grown(text, { line: 7, character: 0 })).slice(0, 3)).toEqual([
      'H',
      LINES[7],
      LINES.slice(6, 8).join('\n'),
    ]);
  });

  it('from a list item over value and entry to the line', async () => {
    expect((await grown(LIST, placeOf(LIST, '1.8 nan'))).slice(0, 6)).toEqual([
      '1.8',
      '0 0 1.8',
      '0 0 1.8 nan nan nan 0 0 0',
      '"0 0 1.8 nan nan nan 0 0 0"',
      'fragment_dipoles="0 0 1.8 nan nan nan 0 0 0"',
      LINES[1],
    ]);
    expect((await grown(LIST, placeOf(LIST, '2,3'))).slice(0, 2)).toEqual(['2', '1>2,3']);
  });

  it('in a REMARK from an atom name to the line', async () => {
    expect(await grown(PDB, placeOf(PDB, 'H1\n'))).toEqual([
      'H1',
      'O>H1',
      'axis=O>H1',
      'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1',
      PDB,
    ]);
  });

  it('on the empty line at the end of the file', async () => {
    expect(await grown(LIST, { line: LINES.length, character: 0 })).toEqual([LIST]);
  });
});

describe('every place of every sample is answered', () => {
  const samples = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
  const texts = samples.map((name) => [name, readFileSync(`samples/${name}`, 'utf8')] as const);

  it.each([
    ...texts,
    ['empty', ''] as const,
    ['one line', '3'] as const,
    ['CRLF', LIST.replaceAll('\n', '\r\n')] as const,
    ['blank chain', PDB] as const,
  ])('%s', async (name, text) => {
    const uri = open(text, name.endsWith('.pdb') || name === 'blank chain' ? 'pdb' : 'xyz');
    const { connection } = client;
    const textDocument = { uri };
    const count = text.split('\n').length;
    for (let line = 0; line < count + 2; line += line < 12 ? 1 : 7) {
      const length = (text.split('\n')[line] ?? '').length;
      for (const character of [0, Math.floor(length / 3), length, length + 50]) {
        const position = { line, character };
        const at = { textDocument, position };
        const defined = (await connection.sendRequest(DefinitionRequest.type, at)) as Location[] | null;
        const context = { includeDeclaration: true };
        const referred = await connection.sendRequest(ReferencesRequest.type, { ...at, context });
        const marked = await connection.sendRequest(DocumentHighlightRequest.type, at);
        for (const { range } of [...(defined ?? []), ...(referred ?? []), ...(marked ?? [])]) textIn(text, range);
        const [chain] = (await connection.sendRequest(SelectionRangeRequest.type, {
          textDocument,
          positions: [position],
        }))!;
        for (let step: SelectionRange | undefined = chain; step?.parent !== undefined; step = step.parent) {
          const [inner, outer] = [step.range, step.parent.range].map(({ start, end }) => {
            return [offsetIn(text, start), offsetIn(text, end)] as const;
          });
          expect(outer![0]).toBeLessThanOrEqual(inner![0]);
          expect(outer![1]).toBeGreaterThanOrEqual(inner![1]);
          expect(outer![1] - outer![0]).toBeGreaterThan(inner![1] - inner![0]);
        }
        const prepared = await connection.sendRequest(PrepareRenameRequest.type, at).catch((error: Error) => {
          expect(error.message).toMatch(/no fragment name/);
          return null;
        });
        if (prepared !== null && 'placeholder' in prepared) {
          expect(prepared.placeholder).not.toBe('');
          textIn(text, prepared.range);
        }
      }
    }
  });
});
