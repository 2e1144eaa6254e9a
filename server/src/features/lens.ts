import type { FrameAnalysis } from '../analysis/frame-analysis';
import { energyInUse } from '../analysis/pair';
import { pairsToCompute, strongestPair } from '../analysis/pairs-of-note';
import type { PairSurvey } from '../analysis/survey';
import type { Steps } from '../base/steps';
import { fragmentTitle } from './fragment-title';
import { known, type Maybe } from './records';

/** What stands above a frame, as plain data; frame and fragments count from 1. */
export interface FrameLens {
  readonly frame: number;
  readonly pairs: number;
  readonly kTKJPerMol: number;
  /** `null` where no pair has an energy. */
  readonly strongest: {
    readonly first: number;
    readonly second: number;
    readonly name1: string;
    readonly name2: string;
    readonly energyKJPerMol: Maybe;
    readonly verdict: string;
  } | null;
  /** False where all pairs are so weak and so many that the strongest was not looked for. */
  readonly isSearched: boolean;
  /** Pairs worth a quantum calculation. */
  readonly compute: readonly (readonly [number, number])[];
}

/** Sums a frame up from the survey of its pairs. */
export function* lensSteps(frame: FrameAnalysis, survey: PairSurvey): Steps<FrameLens> {
  const { pair, isSearched } = yield* strongestPair(frame, survey);
  const flat = yield* pairsToCompute(frame, survey);
  const compute: [number, number][] = [];
  for (let k = 0; k < flat.length; k += 2) compute.push([flat[k]! + 1, flat[k + 1]! + 1]);
  const { model, system } = frame;
  return {
    frame: frame.index + 1,
    pairs: survey.pairs,
    kTKJPerMol: system.kTKJPerMol,
    strongest:
      pair === null
        ? null
        : {
            first: pair.first + 1,
            second: pair.second + 1,
            name1: fragmentTitle(model, pair.first),
            name2: fragmentTitle(model, pair.second),
            energyKJPerMol: known(energyInUse(pair)),
            verdict: pair.contact === 'clash' ? 'clash' : (pair.regime ?? 'no basis to judge the point dipole'),
          },
    isSearched,
    compute,
  };
}
