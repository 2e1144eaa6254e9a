import { FileFindings } from '../../server/src/analysis/findings';
import { FileAnalysis, type FrameAnalysis } from '../../server/src/analysis/frame-analysis';
import type { Pair } from '../../server/src/analysis/pair';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Finding } from '../../server/src/base/finding';
import { parse } from '../../server/src/formats/parse';
import type { CoordinateTree, Language } from '../../server/src/formats/tree';
import { snapshotOf } from '../../server/src/text/snapshot';

/** A text taken through the whole pipeline. */
export interface Analysed {
  readonly tree: CoordinateTree;
  readonly frames: readonly FrameAnalysis[];
  readonly pairs: readonly (readonly Pair[])[];
  readonly findings: readonly Finding[];
}

/** Parses a text, analyses all frames, and takes all pairs and findings. */
export function analyse(
  text: string,
  language: Language = 'xyz',
  request: AnalysisRequest = DEFAULT_REQUEST,
): Analysed {
  const tree = parse(snapshotOf(text), language);
  const file = new FileAnalysis(tree, request);
  const findings = new FileFindings(tree);
  const frames = tree.frames.map((_, index) => file.frame(index));
  const pairs = frames.map((frame) => [...findings.pairsOfFrame(frame)]);
  return { tree, frames, pairs, findings: findings.list() };
}

/** Each finding as `code: text under its span`. */
export function underlined(text: string, findings: readonly Finding[]): string[] {
  return findings.map(({ code, start, end }) => `${code}: ${text.slice(start, end)}`);
}

/** The text after the edits of a finding's fix. */
export function applyFix(text: string, finding: Finding): string {
  const edits = [...(finding.fix?.edits ?? [])].sort((a, b) => b.start - a.start);
  return edits.reduce(
    (result, { start, end, text: piece }) => result.slice(0, start) + piece + result.slice(end),
    text,
  );
}
