import { FileFindings } from '../analysis/findings';
import { FileAnalysis, type FrameAnalysis } from '../analysis/frame-analysis';
import { surveyPairs } from '../analysis/survey';
import type { Finding } from '../base/finding';
import { parse } from '../formats/parse';
import type { CoordinateTree } from '../formats/tree';
import type { ServerSettings } from './settings';
import type { OpenDocument } from './text-store';

/** What one version of a document was found to hold. */
export interface Analysed {
  readonly document: OpenDocument;
  readonly settings: ServerSettings;
  readonly tree: CoordinateTree;
  readonly findings: readonly Finding[];
  readonly fragments: number;
  readonly pairs: number;
  /** Whether pairs were left out because the document is larger than the settings allow. */
  readonly limited: boolean;
  /** A frame analysed, from 0; the last few asked for are kept. */
  frame(index: number): FrameAnalysis;
}

/** Lets other work run; the platform's way of going on in a later turn. */
export type Turn = () => Promise<void>;

/** Work goes on for this long before others get a turn, ms. */
const SLICE_MS = 8;
const FRAMES_KEPT = 8;

/** Thrown inside where a run is no longer wanted; never leaves this module's callers. */
export class Outdated extends Error {}

/**
 * Analyses a document in slices. `isWanted` is asked after every turn given to others; where it says no, {@link Outdated} is thrown and
 * nothing of the run is kept.
 */
export async function analyseDocument(
  document: OpenDocument,
  settings: ServerSettings,
  turn: Turn,
  now: () => number,
  isWanted: () => boolean,
): Promise<Analysed> {
  let sliceStart = now();
  const rest = async () => {
    await turn();
    if (!isWanted()) throw new Outdated();
    sliceStart = now();
  };
  await rest();
  const tree = parse(document.snapshot, document.language);
  const analysis = new FileAnalysis(tree, settings.request);
  const found = new FileFindings(tree);
  const kept = new FrameCache(analysis);
  const atoms = tree.frames.reduce((sum, frame) => sum + frame.atoms.count, 0);
  const limited = atoms > settings.analysisLimit;
  let fragments = 0;
  let pairs = 0;
  for (let index = 0; index < tree.frames.length && !limited; index++) {
    await rest();
    const frame = kept.frame(index);
    fragments += frame.model.fragments.count;
    const survey = surveyPairs(frame.system);
    let step = survey.next();
    for (; !step.done; step = survey.next()) if (now() - sliceStart > SLICE_MS) await rest();
    found.addFrame(frame, step.value);
    pairs += step.value.pairs;
  }
  return {
    document,
    settings,
    tree,
    findings: found.list(),
    fragments,
    pairs,
    limited,
    frame: (index) => kept.frame(index),
  };
}

/** The last few frames asked for. */
class FrameCache {
  readonly #analysis: FileAnalysis;
  readonly #frames = new Map<number, FrameAnalysis>();

  constructor(analysis: FileAnalysis) {
    this.#analysis = analysis;
  }

  frame(index: number): FrameAnalysis {
    const known = this.#frames.get(index) ?? this.#analysis.frame(index);
    this.#frames.delete(index);
    this.#frames.set(index, known);
    for (const oldest of this.#frames.keys()) {
      if (this.#frames.size <= FRAMES_KEPT) break;
      this.#frames.delete(oldest);
    }
    return known;
  }
}
