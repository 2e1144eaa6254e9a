import type { FindingCode } from '../base/catalogue';
import type { Finding, Fix, TextEdit } from '../base/finding';
import type { Span } from '../base/span';

/** A finding with the remedy that it offers. */
export interface QuickFix {
  readonly finding: Finding;
  readonly fix: Fix;
}

/** Remedies that change no number and no atom: they may be applied all at once. */
const SAFE: ReadonlySet<FindingCode> = new Set(['count-wrong', 'key-misspelt', 'array-length']);

/** The remedies for the findings that a span touches. */
export function quickFixesAt(findings: readonly Finding[], { start, end }: Span): QuickFix[] {
  return findings.flatMap((finding) => {
    const { fix } = finding;
    return fix !== undefined && finding.start <= end && finding.end >= start ? [{ finding, fix }] : [];
  });
}

/** The edits of all safe remedies, ascending; of two that touch the same place the first stands. */
export function safeEdits(findings: readonly Finding[]): TextEdit[] {
  const edits: TextEdit[] = [];
  for (const { code, fix } of findings) {
    if (fix === undefined || !SAFE.has(code)) continue;
    const isClear = fix.edits.every((edit) => edits.every((other) => edit.end < other.start || edit.start > other.end));
    if (isClear) edits.push(...fix.edits);
  }
  return edits.sort((a, b) => a.start - b.start);
}
