import type { CancellationToken } from 'vscode-languageserver';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Steps } from '../base/steps';
import { type DimerHarvest, dimerStem, harvestSteps } from '../features/dimers';
import { frameIndexNear } from '../features/frame-at';
import { pairChoiceSteps } from '../features/pair-choices';
import { PairTable, pairTableSteps } from '../features/pair-table';
import { namesOf } from '../features/partner-view';
import { MEDIA } from '../physics/media';
import { energyUnitsPerKJPerMol } from '../physics/units';
import type { Analysed } from './analyser';
import { documentName } from './document-name';
import {
  type Answer,
  DIMERS_REQUEST,
  type DimersParams,
  type DimersResult,
  FRAME_AT_REQUEST,
  type FrameAtResult,
  type LineParams,
  MEDIA_REQUEST,
  type MediumEntry,
  PAIR_CHOICES_REQUEST,
  PAIR_TABLE_REQUEST,
  type PairChoicesParams,
  type PairChoicesResult,
  type PairTableParams,
  type PairTableResult,
} from './protocol';
import type { Session } from './session';

/** More files are not made at once: nobody means to have them in one folder by a click. */
const MOST_FILES = 1000;
/** A longer table does not belong on a clipboard. */
const MOST_ROWS = 50_000;
/** More pairs are not offered in a list. */
const MOST_CHOICES = 1000;

const CLOSED = 'The document is not open.';
const OUTDATED = 'The text changed meanwhile.';
const CANCELLED = 'It was cancelled.';
const NO_FRAME = 'No frame could be read.';

function refusal(reason: string, isOutdated = false): { result: null; reason: string; isOutdated: boolean } {
  return { result: null, reason, isOutdated };
}

/** Answers the commands that act on what was found: dimer files, tables, and what is to be chosen for them. */
export function serveActing({ connection, workspace }: Session): void {
  /** The newest analysis, or why there is none. */
  const newest = async (uri: string): Promise<Analysed | ReturnType<typeof refusal>> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null) return workspace.document(uri) === undefined ? refusal(CLOSED) : refusal(OUTDATED, true);
    return analysed.tree.frames.length === 0 ? refusal(NO_FRAME) : analysed;
  };

  /** Goes through the frames asked for one after another, as long as the text is the same and somebody waits. */
  const throughFrames = async <T>(
    uri: string,
    frame: number | null,
    token: CancellationToken,
    begin: (analysed: Analysed) => {
      eachFrame(frame: FrameAnalysis): Steps<string | null>;
      result(): T;
    },
  ): Promise<Answer<T>> => {
    const analysed = await newest(uri);
    if ('reason' in analysed) return analysed;
    const { frames } = analysed.tree;
    const wrong = frame !== null && frames[frame - 1] === undefined;
    if (wrong) return refusal(`There is no frame ${frame}: the file has ${frames.length}.`);
    const { eachFrame, result } = begin(analysed);
    const answer = await workspace.paced<Answer<T>>(
      analysed,
      async (pace) => {
        for (const { index } of frame === null ? frames : [frames[frame - 1]!]) {
          const reason = await pace.finish(eachFrame(await analysed.frames.frame(index, pace)));
          if (reason !== null) return refusal(reason);
        }
        return { result: result(), reason: null };
      },
      () => !token.isCancellationRequested,
    );
    return answer ?? (token.isCancellationRequested ? refusal(CANCELLED) : refusal(OUTDATED, true));
  };

  connection.onRequest(FRAME_AT_REQUEST, async ({ uri, line }: LineParams): Promise<Answer<FrameAtResult>> => {
    const analysed = await newest(uri);
    if ('reason' in analysed) return analysed;
    const { tree, document } = analysed;
    const frame = frameIndexNear(tree, line) + 1;
    return { result: { frame, frames: tree.frames.length, version: document.version }, reason: null };
  });

  connection.onRequest(
    PAIR_CHOICES_REQUEST,
    ({ uri, frame }: PairChoicesParams, token): Promise<Answer<PairChoicesResult>> =>
      throughFrames(uri, frame, token, ({ settings: { energyUnit }, document: { version } }) => {
        let answer: PairChoicesResult = { counts: NO_PAIRS, pairs: [], energyUnit, version };
        return {
          *eachFrame(analysis) {
            const { counts, pairs } = yield* pairChoiceSteps(analysis, MOST_CHOICES);
            const scale = energyUnitsPerKJPerMol(energyUnit, analysis.system.kTKJPerMol);
            const inUnit = pairs.map(({ energyKJPerMol, ...pair }) => ({
              ...pair,
              energy: energyKJPerMol === null ? null : energyKJPerMol * scale,
            }));
            answer = { counts, pairs: inUnit, energyUnit, version };
            return null;
          },
          result: () => answer,
        };
      }),
  );

  connection.onRequest(
    DIMERS_REQUEST,
    ({ uri, frame, pairs, advice }: DimersParams, token): Promise<Answer<DimersResult>> =>
      throughFrames(uri, frame, token, ({ document: { version } }) => {
        const harvest: DimerHarvest = { files: [], refused: [] };
        const name = documentName(uri);
        const source = { name, stem: dimerStem(name) };
        return {
          *eachFrame(analysis) {
            const names = namesOf(analysis);
            const all = yield* harvestSteps(analysis, { pairs, advice }, names, source, MOST_FILES, harvest);
            return all ? null : TOO_MANY_FILES;
          },
          result: () => ({ ...harvest, version }),
        };
      }),
  );

  connection.onRequest(
    PAIR_TABLE_REQUEST,
    ({ uri, frame }: PairTableParams, token): Promise<Answer<PairTableResult>> =>
      throughFrames(uri, frame, token, ({ document: { version } }) => {
        const lines: string[] = [];
        const table = new PairTable();
        const file = documentName(uri);
        const name = `${dimerStem(file)}${frame === null ? '' : `-${frame}`}-pairs.csv`;
        return {
          *eachFrame(analysis) {
            return (yield* pairTableSteps(analysis, file, table, MOST_ROWS, lines)) ? null : TOO_MANY_ROWS;
          },
          result: () => ({ text: lines.join(''), name, pairs: lines.length, version }),
        };
      }),
  );

  connection.onRequest(MEDIA_REQUEST, (): readonly MediumEntry[] => MEDIA);
}

const NO_PAIRS = { accept: 0, review: 0, compute: 0, repair: 0 } as const;

const TOO_MANY_FILES =
  `These are more than ${MOST_FILES} files, which are not written at once from the editor. ` +
  'Choose fewer pairs, or write them with `polewise dimers` on the command line.';

const TOO_MANY_ROWS =
  `The table has more than ${MOST_ROWS} pairs, which is too long to copy. ` +
  'Write it to a file with `polewise pairs --format csv` on the command line.';
