import type { Span } from '../base/span';
import type { CoordinateTree } from '../formats/tree';
import { atomsOf } from '../model/fragment-set';
import type { FrameModel } from '../model/frame-model';

/** More places than this are of no use to anyone. */
const MOST_PLACES = 2000;

/** Lines that follow one another, from 0; the last one belongs to the run. */
export interface LineRun {
  readonly firstLine: number;
  readonly lastLine: number;
}

/** The lines of atoms (ascending): each run of lines that follow one another is one span. */
export function runsOf({ tree }: Pick<FrameModel, 'tree'>, atoms: ArrayLike<number>): Span[] {
  const runs: Span[] = [];
  let before = -2;
  for (let k = 0; k < atoms.length && runs.length <= MOST_PLACES; k++) {
    const span = tree.fieldSpan(atoms[k]!, 'line');
    const line = tree.atoms.line[atoms[k]!]!;
    if (line === before + 1) runs[runs.length - 1] = { start: runs[runs.length - 1]!.start, end: span.end };
    else runs.push(span);
    before = line;
  }
  return runs.slice(0, MOST_PLACES);
}

/** Every line of some runs of lines, the first few thousand. */
export function linesOf({ lines }: CoordinateTree, runs: readonly Span[]): Span[] {
  const found: Span[] = [];
  for (const { start, end } of runs) {
    const last = lines.lineAt(end);
    for (let line = lines.lineAt(start); line <= last && found.length < MOST_PLACES; line++) {
      found.push({ start: Math.max(start, lines.starts[line]!), end: Math.min(end, lines.end(line)) });
    }
  }
  return found;
}

/** The lines of a fragment's atoms as runs, in order of the text. */
export function fragmentLines({ lines }: CoordinateTree, model: FrameModel, f: number): LineRun[] {
  return runsOf(model, atomsOf(model.fragments, f)).map(({ start, end }) => ({
    firstLine: lines.lineAt(start),
    lastLine: lines.lineAt(end),
  }));
}
