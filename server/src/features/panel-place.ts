import type { FrameAnalysis } from '../analysis/frame-analysis';
import { evaluatePair, type Pair } from '../analysis/pair';
import type { Steps } from '../base/steps';
import { atomAtLine } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import type { EnergyUnit } from '../physics/units';
import { fragmentTitle } from './fragment-title';
import { type PairList, type PairRow, pairRow } from './pair-list';
import { type PairPicture, pairPicture } from './pair-picture';
import { pictureInputOf } from './pair-picture-input';
import type { PictureTheme } from './pair-picture-parts';
import type { PairNumbers } from './pair-place';
import { byStrength, namesOf, pairsOfFragment, viewFrom } from './partner-view';
import { type FragmentRecord, fragmentRecord, type PairRecord } from './records';
import { type SeparationCurve, separationCurveSteps } from './separation-curve';

/** The pair that the panel leads with, seen from its first fragment. */
export interface ChosenPair {
  readonly first: FragmentRecord;
  readonly second: FragmentRecord;
  readonly titles: readonly [string, string];
  readonly pair: PairRecord;
  readonly strengthKJPerMol: number;
  readonly picture: PairPicture;
  /** `null` where no curve can be drawn. */
  readonly curve: SeparationCurve | null;
}

/** What the panel shows of the place where the cursor is. */
export interface PlaceData {
  readonly frame: number;
  readonly frames: number;
  readonly atoms: number;
  readonly fragments: number;
  readonly temperatureK: number;
  readonly relativePermittivity: number;
  readonly kTKJPerMol: number;
  readonly centre: string;
  /** The fragment of the atom under the cursor. */
  readonly here: { readonly fragment: FragmentRecord; readonly title: string } | null;
  readonly chosen: ChosenPair | null;
  /** Whether the pair shown is the one that was asked for. */
  readonly isAsked: boolean;
  /** Partners of the fragment here in order of what they matter; without one, the strongest pairs of the frame. */
  readonly partners: readonly PairRow[];
  readonly partnerCount: number;
  /** Why there is no pair to show, where there is none. */
  readonly reason: string | null;
}

const MOST_PARTNERS = 200;
/** Strongest pairs shown where the cursor is on no fragment. */
const MOST_STRONGEST = 20;

export interface PlaceLook {
  readonly unit: EnergyUnit;
  readonly theme: PictureTheme | null;
}

/**
 * What the panel shows for a line of a frame. The pair asked for is shown as long as the cursor is on one of its fragments or on none, else
 * the strongest of the fragment here.
 *
 * @param list all pairs of the frame, for a line without a fragment; `null` where they are too many
 */
export function* placeSteps(
  file: CoordinateTree,
  frame: FrameAnalysis,
  line: number,
  asked: PairNumbers | null,
  list: PairList | null,
  look: PlaceLook,
): Steps<PlaceData> {
  const { model, system, settings } = frame;
  const f = fragmentAtLine(frame, line);
  const partners = f < 0 ? [] : pairsOfFragment(frame, f).sort(byStrength);
  yield;
  const rows =
    f < 0
      ? list === null
        ? []
        : yield* strongestRows(list)
      : partners.slice(0, MOST_PARTNERS).map((pair) => pairRow(model, pair));
  const wanted = askedPair(frame, f, asked);
  const pair = wanted ?? (f >= 0 ? partners[0] : pairOfRow(frame, rows[0])) ?? null;
  return {
    frame: frame.index + 1,
    frames: file.frames.length,
    atoms: model.tree.atoms.count,
    fragments: model.fragments.count,
    temperatureK: settings.temperatureK,
    relativePermittivity: settings.relativePermittivity,
    kTKJPerMol: system.kTKJPerMol,
    centre: settings.centre,
    here: f < 0 ? null : { fragment: fragmentRecord(frame, f, namesOf(frame)), title: fragmentTitle(model, f) },
    chosen: pair === null ? null : yield* chosenSteps(frame, f === pair.second ? f : pair.first, pair, look),
    isAsked: wanted !== null,
    partners: rows,
    partnerCount: f < 0 ? (list?.count ?? 0) : partners.length,
    reason: pair !== null ? null : reasonFor(frame, f, list),
  };
}

/** The fragment (from 0) whose atom stands on a line, −1 where there is none. */
export function fragmentAtLine({ model }: FrameAnalysis, line: number): number {
  const atom = atomAtLine(model.tree, line);
  return atom < 0 ? -1 : model.fragments.ofAtom[atom]!;
}

function* strongestRows(list: PairList): Steps<PairRow[]> {
  const order = yield* list.orderSteps({ key: 'strength', descending: true, advice: null, text: '' });
  return Array.from(order.subarray(0, MOST_STRONGEST), (at) => list.row(at));
}

/** The pair asked for, where the frame has it and the cursor is on one of its fragments or on none. */
function askedPair({ system, model }: FrameAnalysis, here: number, asked: PairNumbers | null): Pair | null {
  if (asked === null) return null;
  const [f, g] = [Math.min(asked.first, asked.second) - 1, Math.max(asked.first, asked.second) - 1];
  const isThere = (h: number) => Number.isInteger(h) && h >= 0 && h < model.fragments.count && system.usable[h] === 1;
  if (f === g || !isThere(f) || !isThere(g) || (here >= 0 && here !== f && here !== g)) return null;
  return evaluatePair(system, f, g);
}

function pairOfRow({ system }: FrameAnalysis, row: PairRow | undefined): Pair | undefined {
  return row === undefined ? undefined : evaluatePair(system, row.first - 1, row.second - 1);
}

function* chosenSteps(frame: FrameAnalysis, from: number, pair: Pair, look: PlaceLook): Steps<ChosenPair> {
  const view = viewFrom(frame, from, pair);
  const first = fragmentRecord(frame, from, namesOf(frame));
  const second = view.partner;
  const { kTKJPerMol } = frame.system;
  return {
    first,
    second,
    titles: [fragmentTitle(frame.model, first.fragment - 1), fragmentTitle(frame.model, second.fragment - 1)],
    pair: view.pair,
    strengthKJPerMol: pair.strengthKJPerMol,
    picture: pairPicture(pictureInputOf(first, second, view.pair, { ...look, kTKJPerMol })),
    curve: yield* separationCurveSteps(frame.system, pair),
  };
}

function reasonFor({ model, system }: FrameAnalysis, f: number, list: PairList | null): string {
  if (f >= 0 && system.usable[f] !== 1) {
    return 'This fragment could not be read whole (or has no end), so its pairs are not estimated.';
  }
  if (f >= 0) return 'No partner within the cutoff.';
  if (model.fragments.count < 2) return 'The frame has fewer than two fragments.';
  return list === null ? 'Put the cursor on an atom line to see its pairs.' : 'No two fragments are within the cutoff.';
}
