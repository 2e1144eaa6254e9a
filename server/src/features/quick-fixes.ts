import type { FindingCode } from '../base/catalogue';
import type { Finding, TextEdit } from '../base/finding';
import type { Span } from '../base/span';

/** Remedies that change no number and no atom: they may be applied all at once, but for those that take something out. */
const SAFE: ReadonlySet<FindingCode> = new Set(['count-wrong', 'key-misspelt', 'array-length']);

/** The findings that a span touches. */
export function findingsIn(findings: readonly Finding[], span: Span): Finding[] {
  return findings.filter(({ start, end }) => start <= span.end && end >= span.start);
}

/** The edits of all safe remedies, ascending; of two that touch the same place the first stands. */
export function safeEdits(findings: readonly Finding[]): TextEdit[] {
  const edits: TextEdit[] = [];
  for (const { code, fix } of findings) {
    if (fix === undefined || fix.drops || !SAFE.has(code)) continue;
    const isClear = fix.edits.every((edit) => edits.every((other) => edit.end < other.start || edit.start > other.end));
    if (isClear) edits.push(...fix.edits);
  }
  return edits.sort((a, b) => a.start - b.start);
}
