import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Span } from '../base/span';
import type { CoordinateTree } from '../formats/tree';
import { atomsOf } from '../model/fragment-set';
import { fragmentTitle } from './fragment-title';

/** A frame or fragment of the outline. */
export interface OutlineEntry {
  readonly name: string;
  readonly detail: string;
  readonly kind: 'frame' | 'fragment';
  readonly span: Span;
  /** What is marked when it is chosen. */
  readonly mark: Span;
  readonly children: readonly OutlineEntry[];
}

/** A frame of more fragments is listed without them. */
export const MOST_OUTLINED_FRAGMENTS = 5000;

/** The frames of a file, and of the one whose analysis is at hand the fragments. */
export function outlineOf(file: CoordinateTree, analysed: FrameAnalysis | null): OutlineEntry[] {
  return file.frames.map((frame) => {
    const span = linesSpan(file, frame.firstLine, frame.endLine);
    const count = frame.atoms.count;
    return {
      name: file.language === 'pdb' ? `Model ${frame.index + 1}` : `Frame ${frame.index + 1}`,
      detail: `${count} atom${count === 1 ? '' : 's'}`,
      kind: 'frame',
      span,
      mark: linesSpan(file, frame.firstLine, frame.firstLine + 1),
      children: analysed?.index === frame.index ? fragmentsOf(file, analysed) : [],
    };
  });
}

function fragmentsOf(file: CoordinateTree, { model, moments }: FrameAnalysis): OutlineEntry[] {
  const { fragments, tree, formulas } = model;
  if (fragments.count > MOST_OUTLINED_FRAGMENTS) return [];
  return Array.from({ length: fragments.count }, (_, f) => {
    const atoms = atomsOf(fragments, f);
    const first = tree.atoms.line[atoms[0]!]!;
    const last = tree.atoms.line[atoms[atoms.length - 1]!]!;
    const charge = moments.chargeE[f]!;
    const sign = Math.abs(charge) < 0.005 ? '' : `, ${charge > 0 ? '+' : '−'}${Math.abs(charge).toFixed(2)} e`;
    return {
      name: fragmentTitle(model, f),
      detail: `${formulas[f]}${sign}`,
      kind: 'fragment',
      span: linesSpan(file, first, last + 1),
      mark: tree.fieldSpan(atoms[0]!, 'line'),
      children: [],
    };
  });
}

/** From the start of a line to the end of the one before `endLine`, without its line end. */
export function linesSpan({ lines }: CoordinateTree, firstLine: number, endLine: number): Span {
  const start = lines.starts[firstLine]!;
  const last = Math.max(firstLine, Math.min(endLine, lines.count) - 1);
  return { start, end: Math.max(start, lines.end(last)) };
}
