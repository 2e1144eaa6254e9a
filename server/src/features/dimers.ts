import type { Advice } from '../analysis/advice';
import { type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import { evaluatePair, type Pair } from '../analysis/pair';
import type { Part } from '../analysis/system';
import type { Steps } from '../base/steps';
import { dimerFile } from './dimer-file';
import type { PairPlace } from './pair-place';
import type { FragmentName } from './records';

/** A pair written as a file of its own. */
export interface Dimer {
  readonly name: string;
  readonly text: string;
  readonly atoms: number;
}

/** The file of a pair, or why there is none. */
export type PlannedDimer =
  | { readonly ok: true; readonly dimer: Dimer }
  | { readonly ok: false; readonly reason: string };

/** A file that pairs are taken from. */
export interface DimerSource {
  /** Its name without folder, as the dimer files tell it. */
  readonly name: string;
  /** What the names of the dimer files begin with. */
  readonly stem: string;
}

/** What the names of dimer files begin with: the file's name without its endings. */
export function dimerStem(name: string): string {
  return name.replace(/\.gz$/i, '').replace(/\.[^.]+$/, '');
}

/** How a pair is called in the names of files: frame, first and second fragment, from 1. */
export function dimerTitle({ index }: Pick<FrameAnalysis, 'index'>, { first, second }: Pick<Pair, 'first' | 'second'>) {
  return `${index + 1}-${first + 1}-${second + 1}`;
}

/** The file of a pair: `STEM-frame-first-second.xyz`. Pieces cut from a chain are refused. */
export function planDimer(
  frame: FrameAnalysis,
  companion: Part | null,
  pair: Pair,
  nameOf: (fragment: number) => FragmentName,
  source: DimerSource,
): PlannedDimer {
  const { system } = frame;
  const cut = [pair.first, pair.second].filter((f) => system.chains.isCut(f));
  if (cut.length > 0) {
    const names = cut.map((f) => nameOf(f).label ?? nameOf(f).name).join(' and ');
    const are = cut.length === 1 ? 'is a piece' : 'are pieces';
    return { ok: false, reason: `${names} ${are} cut from a chain, with open bonds` };
  }
  const atoms = [pair.first, pair.second].reduce((sum, f) => sum + system.starts[f + 1]! - system.starts[f]!, 0);
  const name = `${source.stem}-${dimerTitle(frame, pair)}.xyz`;
  return { ok: true, dimer: { name, text: dimerFile(frame, companion, pair, nameOf, source.name), atoms } };
}

/** Which pairs of a frame are to be written: those named (fragments from 1), or all; of them those with an advice, or all. */
export interface WantedPairs {
  readonly pairs: readonly (readonly [number, number])[] | null;
  readonly advice: readonly Advice[] | null;
}

/** What became of the pairs that were asked for. */
export interface DimerHarvest {
  readonly files: (Dimer & PairPlace)[];
  readonly refused: (PairPlace & { readonly reason: string })[];
}

/**
 * Adds the dimer files of a frame's wanted pairs to a harvest. Returns false where that would make more files than `most`: nothing is to be
 * written then.
 */
export function* harvestSteps(
  frame: FrameAnalysis,
  wanted: WantedPairs,
  nameOf: (fragment: number) => FragmentName,
  source: DimerSource,
  most: number,
  harvest: DimerHarvest,
): Steps<boolean> {
  for (const candidate of wanted.pairs === null ? pairsOf(frame) : namedPairs(frame, wanted.pairs)) {
    yield;
    if ('reason' in candidate) {
      harvest.refused.push(candidate);
      continue;
    }
    if (wanted.advice !== null && (candidate.advice === null || !wanted.advice.includes(candidate.advice))) continue;
    const place = { frame: frame.index + 1, first: candidate.first + 1, second: candidate.second + 1 };
    const planned = planDimer(frame, null, candidate, nameOf, source);
    if (!planned.ok) harvest.refused.push({ ...place, reason: planned.reason });
    else if (harvest.files.length === most) return false;
    else harvest.files.push({ ...planned.dimer, ...place });
  }
  return true;
}

/** The pairs that are named, each once, or why one cannot be had. */
function* namedPairs(
  frame: FrameAnalysis,
  pairs: NonNullable<WantedPairs['pairs']>,
): Generator<Pair | DimerHarvest['refused'][number]> {
  const { system } = frame;
  const seen = new Set<string>();
  for (const [one, other] of pairs) {
    const [first, second] = one < other ? [one, other] : [other, one];
    const key = `${first}-${second}`;
    if (seen.has(key)) continue;
    seen.add(key);
    const refuse = (reason: string) => ({ frame: frame.index + 1, first, second, reason });
    const strange = [first, second].find((f) => !Number.isInteger(f) || f < 1 || f > system.count);
    const unusable = [first, second].find((f) => system.usable[f - 1] !== 1);
    if (first === second) yield refuse('a fragment makes no pair with itself');
    else if (strange !== undefined) yield refuse(`there is no fragment ${strange} in frame ${frame.index + 1}`);
    else if (unusable !== undefined) yield refuse(`fragment ${unusable} could not be read whole, or has no end`);
    else yield evaluatePair(system, first - 1, second - 1);
  }
}
