import { beforeAll, describe, expect, test } from 'vitest';
import { type Analysed, analyseDocument } from '../../server/src/lsp/analyser';
import { diagnosticsOf } from '../../server/src/lsp/diagnostics';
import { Pace } from '../../server/src/lsp/pace';
import { readSettings } from '../../server/src/lsp/settings';
import { changeDocument, openDocument, type TextChange } from '../../server/src/lsp/text-store';
import { waterBoxXyz } from '../property/edit-texts';

/** How much of a file an edit makes the analysis look at: counted, not timed. */

const PACE = new Pace({ turn: async () => {}, now: () => 0 }, () => true);
const SETTINGS = readSettings({});
const MOLECULES = 1000;
const TEXT = waterBoxXyz(MOLECULES, { kinds: true });
/** The atom of this line is an oxygen well inside the box. */
const LINE = 2 + 3 * 445;

/** Replaces the last digit of the x coordinate on a line. */
function lastDigitOfX(line: number): TextChange {
  const end = /^\S+\s+\S+/.exec(TEXT.split('\n')[line]!)![0].length;
  const digit = TEXT.split('\n')[line]![end - 1] === '7' ? '3' : '7';
  return { range: { start: { line, character: end - 1 }, end: { line, character: end } }, text: digit };
}

describe('an edit of a file of a thousand waters', () => {
  let fresh: Analysed;

  beforeAll(async () => {
    fresh = await analyseDocument(openDocument('file:///a', 'xyz', 0, TEXT), SETTINGS, PACE, null);
  });

  /** The analysis after an edit of the text as it was opened. */
  async function edited(changes: readonly TextChange[]): Promise<Analysed> {
    const opened = openDocument('file:///a', 'xyz', 0, TEXT);
    const earlier = await analyseDocument(opened, SETTINGS, PACE, null);
    return analyseDocument(changeDocument(opened, 1, changes), SETTINGS, PACE, earlier);
  }

  test('a fresh analysis reads every line and looks at every pair', () => {
    expect(fresh.work).toEqual({ lines: 3 * MOLECULES + 2, pairs: fresh.pairs });
    expect(fresh.pairs).toBeGreaterThan(100_000);
  });

  test('a digit: one line is read as it was and as it is, and the pairs of one fragment are looked at twice', async () => {
    const { work } = await edited([lastDigitOfX(LINE)]);
    expect(work.lines).toBe(2);
    expect(work.pairs).toBeLessThan(2 * 450);
    expect(work.pairs).toBeGreaterThan(2 * 100);
  });

  test('many cursors: a line and a fragment for each', async () => {
    const { work } = await edited([LINE + 90, LINE, LINE - 90].map(lastDigitOfX));
    expect(work.lines).toBe(6);
    expect(work.pairs).toBeLessThan(3 * 2 * 450);
  });

  test('words of the comment line: the text is read, and no pair is looked at', async () => {
    const { work, pairs } = await edited([
      { range: { start: { line: 1, character: 0 }, end: { line: 1, character: 0 } }, text: 'a remark ' },
    ]);
    expect(work).toEqual({ lines: 3 * MOLECULES + 2, pairs: 0 });
    expect(pairs).toBe(fresh.pairs);
  });

  test('a molecule taken out: the text is read, and only its pairs are looked at', async () => {
    const { work, pairs } = await edited([
      { range: { start: { line: LINE, character: 0 }, end: { line: LINE + 3, character: 0 } }, text: '' },
      { range: { start: { line: 0, character: 0 }, end: { line: 0, character: 4 } }, text: '2997' },
    ]);
    expect(work.pairs).toBe(fresh.pairs - pairs);
    expect(work.pairs).toBeLessThan(450);
  });

  test('another dipole of the kind: every pair is looked at, since every one is another', async () => {
    const { work, pairs } = await edited([
      { range: { start: { line: 1, character: 0 }, end: { line: 1, character: 0 } }, text: 'temperature=310 ' },
    ]);
    expect(work.pairs).toBe(pairs);
  });

  test('what goes over the wire is bounded, however much is found', async () => {
    const crowded = waterBoxXyz(MOLECULES, {}).replaceAll('O ', 'Q ');
    const bad = await analyseDocument(openDocument('file:///a', 'xyz', 0, crowded), SETTINGS, PACE, null);
    const sent = JSON.stringify(diagnosticsOf(bad));
    expect(bad.tree.problems.length).toBeGreaterThanOrEqual(100);
    expect(JSON.parse(sent)).toHaveLength(Math.min(SETTINGS.maxFindings, bad.findings.length));
    expect(sent.length).toBeLessThan(100_000);
  });
});
