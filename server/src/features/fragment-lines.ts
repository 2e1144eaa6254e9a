import { atomsOf } from '../model/fragment-set';
import type { FrameModel } from '../model/frame-model';

/** Lines that follow one another, from 0; the last one belongs to the run. */
export interface LineRun {
  readonly firstLine: number;
  readonly lastLine: number;
}

/** The lines of a fragment's atoms as runs, in order of the text. */
export function fragmentLines({ fragments, tree }: FrameModel, f: number): LineRun[] {
  const lines = Array.from(atomsOf(fragments, f), (atom) => tree.atoms.line[atom]!).sort((a, b) => a - b);
  const runs: { firstLine: number; lastLine: number }[] = [];
  for (const line of lines) {
    const last = runs[runs.length - 1];
    if (last !== undefined && line <= last.lastLine + 1) last.lastLine = line;
    else runs.push({ firstLine: line, lastLine: line });
  }
  return runs;
}
