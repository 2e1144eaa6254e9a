import type { Advice } from '../analysis/advice';
import type { Contact } from '../analysis/contact';
import { type FileAnalysis, type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import { energyInUse, evaluatePair, type Pair } from '../analysis/pair';
import type { Basis, Regime } from '../analysis/reference';
import type { System } from '../analysis/system';
import type { Steps } from '../base/steps';
import { imageResult, minimumImage } from '../model/cell';
import { FollowedFragment, OTHER_ATOMS } from './follow-fragment';
import { known, type Maybe, type SettingsRecord, settingsRecord } from './records';
import { EventWatcher, type SeriesEvent } from './series-events';

/** A pair in one frame; numbers from 1. */
export interface SeriesFrame {
  readonly frame: number;
  /** Numbers of the two fragments in this frame, which may differ from those in the first. */
  readonly first: Maybe;
  readonly second: Maybe;
  readonly distanceA: Maybe;
  /** The energy that the events speak of: the reference, else the point estimate. */
  readonly energyKJPerMol: Maybe;
  readonly energyFrom: 'reference' | 'point' | null;
  readonly referenceKJPerMol: Maybe;
  readonly basis: Basis | null;
  readonly pointDipoleKJPerMol: Maybe;
  readonly inductionKJPerMol: Maybe;
  readonly dispersionKJPerMol: Maybe;
  readonly kTKJPerMol: Maybe;
  /** |E|/kT. */
  readonly multipleOfKT: Maybe;
  readonly contact: Contact | null;
  readonly regime: Regime | null;
  readonly advice: Advice | null;
  /** Why there is no energy, where there is none. */
  readonly missing: string | null;
}

/** A pair over the frames of a file. */
export interface Series {
  readonly ok: true;
  /** The two fragments by their numbers in the first frame. */
  readonly first: number;
  readonly second: number;
  /** Settings of the first frame. */
  readonly settings: SettingsRecord;
  readonly frames: readonly SeriesFrame[];
  readonly events: readonly SeriesEvent[];
}

/** Pairs looked at between two pauses. */
const PAIRS_A_STEP = 256;

/**
 * Follows a pair of fragments, given by their numbers in the first frame, through all frames of a file; without numbers the pair of
 * the largest energy in the first frame. Of each frame one record is kept.
 */
export function* seriesSteps(
  analysis: FileAnalysis,
  chosen: readonly [number, number] | null,
): Steps<Series | { readonly ok: false; readonly reason: string }> {
  const total = analysis.file.frames.length;
  if (total === 0) return { ok: false, reason: 'there is no frame' };
  let frame = yield* analysis.frameSteps(0);
  const numbers = chosen ?? (yield* strongestSteps(frame));
  if (numbers === null) return { ok: false, reason: 'no pair of the first frame has a known energy' };
  const wrong = problemOf(numbers, frame.system.count);
  if (wrong !== null) return { ok: false, reason: wrong };
  const [first, second] = numbers[0] < numbers[1] ? numbers : [numbers[1], numbers[0]];
  const settings = settingsRecord(frame);
  const follow = [followerOf(frame, first - 1), followerOf(frame, second - 1)] as const;
  const frames: SeriesFrame[] = [];
  const watcher = new EventWatcher();
  let placeBefore: Place | null = null;
  for (let index = 0; index < total; index++) {
    if (index > 0) frame = yield* analysis.frameSteps(index);
    const { record, place } = lookAt(frame, follow[0](frame), follow[1](frame));
    frames.push(record);
    watcher.see(record, hasJumped(frame.system, placeBefore, place));
    placeBefore = place ?? placeBefore;
    yield;
  }
  return { ok: true, first, second, settings, frames, events: watcher.list() };
}

function problemOf([a, b]: readonly [number, number], count: number): string | null {
  const absent = [a, b].find((number) => !Number.isInteger(number) || number < 1 || number > count);
  if (absent !== undefined) {
    return `the first frame has ${count} fragment${count === 1 ? '' : 's'}, no fragment ${absent}`;
  }
  return a === b ? `fragment ${a} makes no pair with itself` : null;
}

/** The pair of the largest energy; null where none is known. */
function* strongestSteps(frame: FrameAnalysis): Steps<[number, number] | null> {
  let strongest: [number, number] | null = null;
  let most = Number.NEGATIVE_INFINITY;
  let seen = 0;
  for (const pair of pairsOf(frame)) {
    const size = Math.abs(energyInUse(pair));
    if (Number.isFinite(size) && size > most) {
      most = size;
      strongest = [pair.first + 1, pair.second + 1];
    }
    if (++seen % PAIRS_A_STEP === 0) yield;
  }
  return strongest;
}

type Follower = (frame: FrameAnalysis) => number | string;

/** Tells which fragment of a frame, from 0, is one of the first frame. Those of a companion file come after the frame's own. */
function followerOf({ model }: FrameAnalysis, f: number): Follower {
  const own = model.fragments.count;
  if (f >= own) return (frame) => frame.model.fragments.count + f - own;
  const followed = new FollowedFragment(model, f);
  return (frame) => followed.find(frame.model);
}

type Place = readonly [x: number, y: number, z: number];

function lookAt(
  { index, system }: FrameAnalysis,
  f: number | string,
  g: number | string,
): { readonly record: SeriesFrame; readonly place: Place | null } {
  if (typeof f === 'string' || typeof g === 'string') {
    const reasons = new Set([f, g].filter((found) => typeof found === 'string'));
    if (reasons.size > 1) reasons.delete(OTHER_ATOMS);
    const missing = [...reasons].join('; ');
    return { record: { ...NOTHING_KNOWN, frame: index + 1, missing }, place: null };
  }
  const numbers = { frame: index + 1, first: f + 1, second: g + 1 };
  const unusable = [f, g].find((fragment) => system.usable[fragment] !== 1);
  if (unusable !== undefined) {
    const missing = `fragment ${unusable + 1} has an atom that cannot be read, or no end`;
    return { record: { ...NOTHING_KNOWN, ...numbers, missing }, place: null };
  }
  const pair = evaluatePair(system, Math.min(f, g), Math.max(f, g));
  const energy = known(energyInUse(pair));
  const record: SeriesFrame = {
    ...numbers,
    distanceA: known(pair.distanceA),
    energyKJPerMol: energy,
    energyFrom: energy === null ? null : Number.isFinite(pair.referenceKJPerMol) ? 'reference' : 'point',
    referenceKJPerMol: known(pair.referenceKJPerMol),
    basis: pair.basis,
    pointDipoleKJPerMol: known(pair.energies.pointDipole),
    inductionKJPerMol: known(pair.energies.induction),
    dispersionKJPerMol: known(pair.energies.dispersion),
    kTKJPerMol: system.kTKJPerMol,
    multipleOfKT: energy === null ? null : Math.abs(energy) / system.kTKJPerMol,
    contact: pair.contact,
    regime: pair.regime,
    advice: pair.advice,
    missing: energy === null ? whyUnknown(system, pair) : null,
  };
  const towards = f < g ? pair.distanceA : -pair.distanceA;
  return { record, place: [pair.u[0] * towards, pair.u[1] * towards, pair.u[2] * towards] };
}

const NOTHING_KNOWN: Omit<SeriesFrame, 'frame' | 'missing'> = {
  first: null,
  second: null,
  distanceA: null,
  energyKJPerMol: null,
  energyFrom: null,
  referenceKJPerMol: null,
  basis: null,
  pointDipoleKJPerMol: null,
  inductionKJPerMol: null,
  dispersionKJPerMol: null,
  kTKJPerMol: null,
  multipleOfKT: null,
  contact: null,
  regime: null,
  advice: null,
};

function whyUnknown({ moments }: System, { first, second, contact, enclosed }: Pair): string {
  if (contact === 'bonded') return 'the two are bonded: parts of one molecule';
  if (enclosed) return 'the centre of one lies within the extent of the other';
  const unknown = [first, second].filter((f) => Number.isNaN(moments.dipoleEA[3 * f]!)).map((f) => f + 1);
  if (unknown.length === 0) return 'no energy is known';
  return unknown.length === 1
    ? `the dipole of fragment ${unknown[0]} is not known`
    : `the dipoles of fragments ${unknown.join(' and ')} are not known`;
}

const IMAGE = imageResult();

/** Whether the second fragment went to be seen in another image, by less than a straight way there would take. */
function hasJumped({ cell }: System, before: Place | null, after: Place | null): boolean {
  if (cell === null || before === null || after === null) return false;
  minimumImage(cell, after[0] - before[0], after[1] - before[1], after[2] - before[2], IMAGE);
  return IMAGE.image.some((n) => n !== 0);
}
