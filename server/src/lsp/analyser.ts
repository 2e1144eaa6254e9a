import { FileFindings } from '../analysis/findings';
import { FileAnalysis, type FrameAnalysis } from '../analysis/frame-analysis';
import { matchFragments } from '../analysis/match-fragments';
import { type PairSurvey, resurveySteps, surveySteps } from '../analysis/survey';
import { type StandingFrame, updateFrame } from '../analysis/update-frame';
import type { Finding } from '../base/finding';
import { parse } from '../formats/parse';
import { type Reread, reread } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import { differenceOf } from '../text/splice';
import type { Pace } from './pace';
import type { ServerSettings } from './settings';
import { type OpenDocument, splicesSince } from './text-store';

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
  readonly work: Work;
  readonly frames: FrameStore;
}

/** What an analysis had to look at. */
export interface Work {
  readonly lines: number;
  readonly pairs: number;
}

/**
 * Analyses a document: from where an analysis of an earlier version stands where that is possible, else afresh. Both give the same, down to
 * the last bit. The earlier analysis is not to be used any more afterwards.
 */
export async function analyseDocument(
  document: OpenDocument,
  settings: ServerSettings,
  pace: Pace,
  earlier: Analysed | null,
): Promise<Analysed> {
  await pace.rest();
  const usable = earlier?.settings === settings && earlier.document.language === document.language ? earlier : null;
  return (
    (usable === null ? null : updated(usable, document)) ?? (await analysedAfresh(document, settings, pace, usable))
  );
}

/** The analysis after an edit that changed nothing but the numbers of a few atoms; `null` where it did more. */
function updated(earlier: Analysed, document: OpenDocument): Analysed | null {
  const standing = earlier.frames.takeStanding();
  if (standing === null) return null;
  const again = readAgain(earlier, document);
  if (again === null) return null;
  const now = updateFrame(standing, again.tree, again.changes);
  if (now === null) return null;
  const { tree } = again;
  const found = new FileFindings(tree);
  found.addFrame(now.frame, now.survey);
  const analysis = new FileAnalysis(tree, earlier.settings.request);
  return {
    ...earlier,
    document,
    tree,
    findings: found.list(),
    fragments: now.frame.model.fragments.count,
    pairs: now.survey.pairs,
    work: { lines: again.linesRead, pairs: now.survey.looked },
    frames: new FrameStore(analysis, now),
  };
}

function readAgain(earlier: Analysed, document: OpenDocument): Reread | null {
  const splices = splicesSince(earlier.document, document) ?? [];
  if (splices.length > 0) return reread(earlier.tree, document, splices);
  const difference = differenceOf(earlier.document.snapshot, document.snapshot);
  return reread(earlier.tree, document, difference === null ? [] : [difference]);
}

async function analysedAfresh(
  document: OpenDocument,
  settings: ServerSettings,
  pace: Pace,
  earlier: Analysed | null,
): Promise<Analysed> {
  const tree = parse(document.snapshot, document.language);
  await pace.rest();
  const frames = new FrameStore(new FileAnalysis(tree, settings.request), null);
  const found = new FileFindings(tree);
  const atoms = tree.frames.reduce((sum, frame) => sum + frame.atoms.count, 0);
  const limited = atoms > settings.analysisLimit;
  let fragments = 0;
  let pairs = 0;
  let looked = 0;
  for (let index = 0; index < tree.frames.length && !limited; index++) {
    const frame = await frames.frame(index, pace);
    const survey = await surveyOf(frame, earlier?.frames.standing(index) ?? null, pace);
    frames.keepSurvey(index, survey);
    await pace.finish(found.frameSteps(frame, survey));
    fragments += frame.model.fragments.count;
    pairs += survey.pairs;
    looked += survey.looked;
    await pace.rest();
  }
  const work = { lines: tree.lines.count, pairs: looked };
  return { document, settings, tree, findings: found.list(), fragments, pairs, limited, work, frames };
}

/** With a larger share of fragments changed, taking over the rest gains nothing. */
const MOST_CHANGED = 1 / 3;

/** Looks through the pairs of a frame; those that an earlier state has as well are taken over. */
async function surveyOf(frame: FrameAnalysis, earlier: StandingFrame | null, pace: Pace): Promise<PairSurvey> {
  const { system, partners } = frame;
  const match = earlier === null ? null : matchFragments(earlier.frame.system, system);
  if (earlier === null || match === null || match.fresh.length > MOST_CHANGED * system.count) {
    return pace.finish(surveySteps(system, partners));
  }
  const before = { system: earlier.frame.system, partners: earlier.frame.partners, survey: earlier.survey };
  return pace.finish(resurveySteps(before, system, partners, match));
}

/** The last few frames asked for. */
const FRAMES_KEPT = 8;

/** The frames of one version of a document, a few of which are kept. */
export class FrameStore {
  readonly #analysis: FileAnalysis;
  readonly #frames = new Map<number, FrameAnalysis>();
  readonly #surveys = new Map<number, PairSurvey>();
  #standing: StandingFrame | null;

  /** @param standing the only frame, where it has been brought up to date */
  constructor(analysis: FileAnalysis, standing: StandingFrame | null) {
    this.#analysis = analysis;
    this.#standing = standing;
    if (standing === null) return;
    this.#frames.set(0, standing.frame);
    this.#surveys.set(0, standing.survey);
  }

  /** A frame analysed, from 0. */
  async frame(index: number, pace: Pace): Promise<FrameAnalysis> {
    const known = this.#frames.get(index) ?? (await pace.finish(this.#analysis.frameSteps(index)));
    this.#frames.delete(index);
    this.#frames.set(index, known);
    for (const oldest of this.#frames.keys()) {
      if (this.#frames.size <= FRAMES_KEPT) break;
      this.#frames.delete(oldest);
      this.#surveys.delete(oldest);
    }
    return known;
  }

  /** A frame as far as it is kept. */
  known(index: number): FrameAnalysis | null {
    return this.#frames.get(index) ?? null;
  }

  /** A frame with its pairs looked through, from 0; what is known of them is not looked for again. */
  async surveyed(index: number, pace: Pace): Promise<StandingFrame> {
    const frame = await this.frame(index, pace);
    const known = this.standing(index);
    if (known !== null) return known;
    const survey = await pace.finish(surveySteps(frame.system, frame.partners));
    if (this.#frames.get(index) === frame) this.#surveys.set(index, survey);
    return { frame, survey, atomGrid: null };
  }

  keepSurvey(index: number, survey: PairSurvey): void {
    this.#surveys.set(index, survey);
  }

  /** A frame whose pairs have been looked through, where it is still kept. */
  standing(index: number): StandingFrame | null {
    const frame = this.#frames.get(index);
    const survey = this.#surveys.get(index);
    return frame === undefined || survey === undefined ? null : { frame, survey, atomGrid: null };
  }

  /** The only frame, for an update that may write into it; it is given out once. */
  takeStanding(): StandingFrame | null {
    if (this.#isTaken || this.#analysis.file.frames.length !== 1) return null;
    this.#isTaken = true;
    return this.#standing ?? this.standing(0);
  }

  #isTaken = false;
}
