import type { FrameAnalysis } from '../analysis/frame-analysis';
import { evaluatePair, type Pair } from '../analysis/pair';
import { isWithinCutoff } from '../analysis/partners';
import { type FragmentName, type FragmentRecord, fragmentRecord, type PairRecord, pairRecord } from './records';

/** A partner of a fragment, seen from it. */
export interface PartnerView {
  readonly partner: FragmentRecord;
  readonly pair: PairRecord;
  readonly strengthKJPerMol: number;
}

/** What the fragments of a frame are called. */
export function namesOf(frame: FrameAnalysis): (fragment: number) => FragmentName {
  return (f) => ({ name: frame.model.names[f]!, label: frame.model.labels[f] === '' ? null : frame.model.labels[f]! });
}

/** All pairs of one fragment. */
export function pairsOfFragment(frame: FrameAnalysis, f: number): Pair[] {
  const { system, partners } = frame;
  return Array.from(partners.of(f, false))
    .map((g) => evaluatePair(system, Math.min(f, g), Math.max(f, g)))
    .filter((pair) => pair.contact !== 'apart' || isWithinCutoff(system, pair.first, pair.second, pair.distanceA));
}

/** Order of pairs by what they matter. */
export function byStrength(a: Pair, b: Pair): number {
  return b.strengthKJPerMol - a.strengthKJPerMol || a.first - b.first || a.second - b.second;
}

/** A pair as seen from fragment `f`, one of its two. */
export function viewFrom(frame: FrameAnalysis, f: number, pair: Pair): PartnerView {
  const other = pair.first === f ? pair.second : pair.first;
  return {
    partner: fragmentRecord(frame, other, namesOf(frame)),
    pair: turned(pairRecord(frame.system, pair), pair.second === f),
    strengthKJPerMol: pair.strengthKJPerMol,
  };
}

/** A pair as seen from its second fragment, where that is asked for: the line of centres turns round. */
function turned(record: PairRecord, isTurned: boolean): PairRecord {
  if (!isTurned) return record;
  const opposite = (angle: number | null) => (angle === null ? null : 180 - angle);
  return { ...record, theta1Deg: opposite(record.theta2Deg), theta2Deg: opposite(record.theta1Deg) };
}
