import fc from 'fast-check';
import { expect, test } from 'vitest';
import { indexLines } from '../../server/src/text/lines';
import { snapshotOf } from '../../server/src/text/snapshot';
import { differenceOf, type Splice, splicedText } from '../../server/src/text/splice';

const RUNS = { seed: 20260214, numRuns: 4000 } as const;

/** Short texts rich in line ends of every kind, and units that are no ASCII. */
const piece = fc
  .array(fc.constantFrom('\r', '\n', '\r\n', 'O', '1.5', ' ', 'é', '\ud83d', ''), { maxLength: 6 })
  .map((p) => p.join(''));
const text = fc.array(piece, { maxLength: 8 }).map((pieces) => pieces.join('x'));

/** Ascending, disjoint replacements within a text. */
const spliced = text.chain((old) =>
  fc
    .array(fc.tuple(fc.nat(old.length), fc.nat(old.length), piece), { maxLength: 4 })
    .map((drafts): [string, Splice[]] => {
      const ends = [...drafts.map(([a]) => a), ...drafts.map(([, b]) => b)].sort((a, b) => a - b);
      return [old, drafts.map(([, , by], k) => ({ start: ends[2 * k]!, end: ends[2 * k + 1]!, text: by }))];
    }),
);

function replaced(old: string, splices: readonly Splice[]): string {
  return splices.reduceRight((result, { start, end, text }) => result.slice(0, start) + text + result.slice(end), old);
}

function indexed(whole: string) {
  const snapshot = snapshotOf(whole);
  return { snapshot, lines: indexLines(snapshot) };
}

test('a text after replacements has the bytes, the units and the lines of a text read afresh', () => {
  fc.assert(
    fc.property(spliced, ([old, splices]) => {
      const fresh = indexed(replaced(old, splices));
      const { snapshot, lines } = splicedText(indexed(old), splices);
      expect([...snapshot.bytes]).toEqual([...fresh.snapshot.bytes]);
      expect(snapshot.slice(0, snapshot.length)).toBe(replaced(old, splices));
      expect([...lines.starts]).toEqual([...fresh.lines.starts]);
      expect(lines.count).toBe(fresh.lines.count);
      for (let line = 0; line < lines.count; line++) expect(lines.end(line)).toBe(fresh.lines.end(line));
    }),
    RUNS,
  );
});

test('the difference of two texts turns one into the other', () => {
  fc.assert(
    fc.property(spliced, ([old, splices]) => {
      const now = replaced(old, splices);
      const difference = differenceOf(snapshotOf(old), snapshotOf(now));
      expect(replaced(old, difference === null ? [] : [difference])).toBe(now);
    }),
    RUNS,
  );
});
