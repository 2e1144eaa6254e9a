import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  type CodeAction,
  CodeActionRequest,
  type Diagnostic,
  DiagnosticSeverity,
  type Range,
  type TextDocumentEdit,
  type TextEdit,
} from 'vscode-languageserver-protocol';
import { FINDING_CODES, severityOf } from '../../server/src/base/catalogue';
import { MENDED_CODES } from '../../server/src/features/remedies/table';
import { parse } from '../../server/src/formats/parse';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';
import { FINDING_CASES, type FindingCase } from '../unit/findings-table';
import { WireClient } from './client';
import { REMEDY_CASES } from './remedy-cases';

/** Every remedy that is offered for a small file with one thing wrong, applied and looked at again. */

const CASES: readonly FindingCase[] = [...FINDING_CASES.filter(({ text }) => text.length < 20000), ...REMEDY_CASES];
/** With what is known of molecules, and without: some things are wrong only then. */
const SETTINGS = [{}, { library: false, estimates: false }];

let clients: WireClient[];
let count = 0;
/** Codes for which something was offered that mends, and those that were met. */
const mended = new Set<string>();
const met = new Set<string>();

beforeAll(async () => {
  clients = await Promise.all(SETTINGS.map((settings) => WireClient.start({ settings })));
});

afterAll(async () => {
  expect(await Promise.all(clients.map((client) => client.stop()))).toEqual([0, 0]);
});

const whole = (text: string): Range => ({
  start: { line: 0, character: 0 },
  end: { line: text.split('\n').length, character: 0 },
});

async function look(client: WireClient, text: string, language: string) {
  const uri = `file:///remedies/${++count}.${language}`;
  client.open(uri, text, language);
  return { uri, diagnostics: await client.diagnostics(uri) };
}

function quickFixes(client: WireClient, uri: string, text: string, diagnostics: Diagnostic[]): Promise<CodeAction[]> {
  return client.connection.sendRequest(CodeActionRequest.type, {
    textDocument: { uri },
    range: whole(text),
    context: { diagnostics, only: ['quickfix'] },
  }) as Promise<CodeAction[]>;
}

function editsOf(action: CodeAction): TextEdit[] {
  const [change, ...others] = action.edit!.documentChanges as TextDocumentEdit[];
  expect(others).toEqual([]);
  return change!.edits as TextEdit[];
}

function applied(text: string, edits: readonly TextEdit[]): string {
  const { starts } = indexLines(snapshotOf(text));
  const offset = ({ line, character }: Range['start']) => (starts[line] ?? text.length) + character;
  return [...edits]
    .sort((a, b) => offset(b.range.start) - offset(a.range.start))
    .reduce((result, { range, newText }) => {
      return result.slice(0, offset(range.start)) + newText + result.slice(offset(range.end));
    }, text);
}

const isLoud = ({ severity, code }: Diagnostic) =>
  (severity === DiagnosticSeverity.Error || severity === DiagnosticSeverity.Warning) && code !== 'near-field';

/** Codes of errors and warnings that there are more of than before. */
function newlyLoud(before: readonly Diagnostic[], after: readonly Diagnostic[]): string[] {
  const countOf = (list: readonly Diagnostic[], code: unknown) =>
    list.filter((entry) => isLoud(entry) && entry.code === code).length;
  return [...new Set(after.filter(isLoud).map(({ code }) => String(code)))].filter(
    (code) => countOf(after, code) > countOf(before, code),
  );
}

/** First line and line after the last of the frame that holds a line, with the blank line that may follow it. */
function frameLines(text: string, line: number): [from: number, to: number] {
  const frame = parse(snapshotOf(text), 'xyz').frames.find(({ endLine }) => line < endLine);
  return [frame!.firstLine, frame!.endLine + 1];
}

describe.each([
  ['with what is known', 0],
  ['with the file alone', 1],
] as const)('%s', (_, which) => {
  describe.each(['\n', '\r\n'])('and lines that end in %j', (lineEnd) => {
    it.each(CASES)('$fact: mended by each remedy', async ({ text: source, language = 'xyz' }) => {
      const client = clients[which]!;
      const text = source.replace(/\n/g, lineEnd);
      const { uri, diagnostics } = await look(client, text, language);
      for (const { code } of diagnostics) met.add(String(code));
      for (const action of await quickFixes(client, uri, text, diagnostics)) {
        const { title } = action;
        const code = String(action.diagnostics![0]!.code);
        const isSilencing = title.startsWith('Do not report');
        if (!isSilencing) mended.add(code);
        if (action.command !== undefined) continue;
        const edits = editsOf(action);
        const after = applied(text, edits);
        const again = await look(client, after, language);
        const countOf = (list: readonly Diagnostic[]) => list.filter((entry) => entry.code === code).length;
        expect(countOf(again.diagnostics), `${title}\n${after}`).toBeLessThan(countOf(diagnostics));
        if (isSilencing) expect(countOf(again.diagnostics)).toBe(0);
        expect(newlyLoud(diagnostics, again.diagnostics), `${title}\n${after}`).toEqual([]);
        if (lineEnd === '\r\n') expect(after.replace(/\r\n/g, '')).not.toContain('\n');
        // A finding of a frame is mended in that frame.
        if (language === 'xyz' && !isSilencing) {
          const { line } = action.diagnostics![0]!.range.start;
          const [from, to] = frameLines(text, line);
          for (const { range } of edits) {
            expect(range.start.line, title).toBeGreaterThanOrEqual(from);
            expect(range.end.line, title).toBeLessThan(to);
          }
        }
      }
    });
  });
});

describe('a dipole that is filled in', () => {
  it.each([
    [
      'as published',
      'a kind without a dipole is information, once a kind',
      'Give H2O its published dipole, 1.85 D along O>H',
    ],
    [
      'as estimated',
      'a molecule that nothing but an estimate gives a dipole',
      'Give C2H5FO its estimated dipole, 1.7 D, as a vector',
    ],
  ])('is named for what it is: %s', async (_, fact, title) => {
    const client = clients[1]!;
    const { text } = CASES.find((entry) => entry.fact === fact)!;
    const { uri, diagnostics } = await look(client, text, 'xyz');
    const titles = (await quickFixes(client, uri, text, diagnostics)).map((action) => action.title);
    expect(titles[0]).toBe(title);
  });
});

describe('the table of what is mended', () => {
  it('names a finding exactly where some remedy was offered for it', () => {
    expect([...mended].sort()).toEqual([...MENDED_CODES].sort());
  });

  it('was asked about every finding but that of a crowd', () => {
    expect(FINDING_CODES.filter((code) => !met.has(code))).toEqual(['too-dense']);
  });

  it('lets any finding below an error be silenced', () => {
    expect(FINDING_CODES.filter((code) => severityOf(code) !== 'error').length).toBeGreaterThan(20);
  });
});
