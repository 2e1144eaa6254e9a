import type { Advice } from '../analysis/advice';
import { type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import { energyInUse, type Pair } from '../analysis/pair';
import type { Steps } from '../base/steps';
import { byStrength } from './partner-view';
import { known, type Maybe } from './records';

/** A pair to choose; fragments from 1. */
export interface PairChoice {
  readonly first: number;
  readonly second: number;
  /** What the two fragments are called. */
  readonly names: readonly [string, string];
  readonly distanceA: Maybe;
  /** The reference, and where there is none the point estimate. */
  readonly energyKJPerMol: Maybe;
  readonly advice: Advice;
}

/** The pairs of a frame to choose from. */
export interface PairChoices {
  /** How many pairs of the frame have each advice. */
  readonly counts: Readonly<Record<Advice, number>>;
  /** Those that matter most, strongest first; parts of one molecule are no choice. */
  readonly pairs: readonly PairChoice[];
}

/** The pairs of a frame to choose from, `most` at the most. */
export function* pairChoiceSteps(frame: FrameAnalysis, most: number): Steps<PairChoices> {
  const counts = { accept: 0, review: 0, compute: 0, repair: 0 };
  const strongest: Pair[] = [];
  for (const pair of pairsOf(frame)) {
    yield;
    if (pair.advice === null) continue;
    counts[pair.advice]++;
    strongest.push(pair);
    if (strongest.length > 4 * most) strongest.sort(byStrength).splice(most);
  }
  strongest.sort(byStrength).splice(most);
  return { counts, pairs: strongest.map((pair) => choiceOf(frame, pair)) };
}

function choiceOf({ model }: FrameAnalysis, pair: Pair): PairChoice {
  const nameOf = (f: number) => model.labels[f] || model.names[f]!;
  return {
    first: pair.first + 1,
    second: pair.second + 1,
    names: [nameOf(pair.first), nameOf(pair.second)],
    distanceA: known(pair.distanceA),
    energyKJPerMol: known(energyInUse(pair)),
    advice: pair.advice!,
  };
}
