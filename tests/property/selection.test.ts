import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { FileAnalysis } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { frameIndexAt } from '../../server/src/features/frame-at';
import { selectionSpans } from '../../server/src/features/selection';
import { parse } from '../../server/src/formats/parse';
import type { Language } from '../../server/src/formats/tree';
import { changeDocument, openDocument } from '../../server/src/lsp/text-store';
import { snapshotOf } from '../../server/src/text/snapshot';
import { randomEdit, randomFrom } from './random-edits';

/** Selections nest, whatever the text. */

const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const TEXTS_EACH = 12;
const PLACES_EACH = 40;

function expectNested(text: string, language: Language, places: readonly number[]): void {
  const tree = parse(snapshotOf(text), language);
  const analysis = new FileAnalysis(tree, DEFAULT_REQUEST);
  for (const offset of places) {
    const index = frameIndexAt(tree, offset);
    const spans = selectionSpans(tree, index < 0 ? null : analysis.frame(index).model, offset);
    expect(spans.at(-1)).toEqual({ start: 0, end: text.length });
    for (const [k, { start, end }] of spans.entries()) {
      expect(start).toBeLessThanOrEqual(offset);
      expect(end).toBeGreaterThanOrEqual(offset);
      if (k === 0) continue;
      const inner = spans[k - 1]!;
      expect(start).toBeLessThanOrEqual(inner.start);
      expect(end).toBeGreaterThanOrEqual(inner.end);
      expect(end - start).toBeGreaterThan(inner.end - inner.start);
    }
  }
}

describe('in a text that is edited at random', () => {
  it.each(SAMPLES)('each step of a selection holds the one before it: %s', (name) => {
    const language: Language = name.endsWith('.pdb') ? 'pdb' : 'xyz';
    const original = readFileSync(`samples/${name}`, 'utf8').slice(0, 6000);
    const random = randomFrom(name.length);
    let text = original;
    for (let n = 0; n < TEXTS_EACH; n++) {
      const places = Array.from({ length: PLACES_EACH }, () => Math.floor(random() * (text.length + 1)));
      expectNested(text, language, [...places, 0, text.length]);
      expectNested(text.replaceAll('\n', '\r\n'), language, places);
      const changes = randomEdit(random, text, language, [original], { isDamaged: n % 2 === 1, isCalm: false });
      const document = changeDocument(openDocument('', language, 1, text), 2, changes);
      text = document.snapshot.slice(0, document.snapshot.length);
    }
  });
});
