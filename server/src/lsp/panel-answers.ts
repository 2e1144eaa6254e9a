import { FileAnalysis, type FrameAnalysis } from '../analysis/frame-analysis';
import { fragmentLines } from '../features/fragment-lines';
import { fragmentTitle } from '../features/fragment-title';
import { frameIndexAt } from '../features/frame-at';
import { PairList } from '../features/pair-list';
import { fragmentAtLine, placeSteps } from '../features/panel-place';
import { seriesSteps } from '../features/series';
import { atomsOf } from '../model/fragment-set';
import { energyUnitsPerKJPerMol } from '../physics/units';
import type { Analysed } from './analyser';
import type { Pace } from './pace';
import type {
  FragmentLines,
  FragmentLinesParams,
  PanelAnswer,
  PanelFrameParams,
  PanelMatrix,
  PanelPlace,
  PanelPlaceParams,
  PanelRows,
  PanelRowsParams,
  PanelSeries,
  PanelSeriesParams,
  ThemeKind,
} from './protocol';
import { offsetOf } from './text-store';

/** The strongest pairs are looked for, where the cursor is on no fragment, among at most so many. */
const MOST_SEARCHED = 20_000;
const MOST_ROWS_A_REQUEST = 1000;
/** A larger table of energies fragment by fragment cannot be read any more. */
export const MOST_MATRIX_FRAGMENTS = 300;
const MOST_SERIES_FRAMES = 5000;

/** Answers the panel from one analysis; what is costly is kept as long as the analysis lives. */
export class PanelAnswers {
  readonly #analysed: Analysed;
  readonly #lists = new Map<number, PairList | null>();
  readonly #orders = new Map<string, Int32Array>();

  constructor(analysed: Analysed) {
    this.#analysed = analysed;
  }

  #answer(kTKJPerMol: number): PanelAnswer {
    const { document, settings } = this.#analysed;
    const { energyUnit: unit } = settings;
    return { version: document.version, unit, unitsPerKJPerMol: energyUnitsPerKJPerMol(unit, kTKJPerMol), kTKJPerMol };
  }

  async place({ position, pair }: PanelPlaceParams, theme: ThemeKind | null, pace: Pace): Promise<PanelPlace> {
    const { tree, document, settings, frames } = this.#analysed;
    const offset = offsetOf(document, position);
    const index = Math.max(0, frameIndexAt(tree, offset));
    if (tree.frames.length === 0) return { ...this.#answer(Number.NaN), place: null };
    const frame = await frames.frame(index, pace);
    const asked = pair?.frame === index + 1 ? pair : null;
    const line = tree.lines.lineAt(offset);
    const isOnFragment = fragmentAtLine(frame, line) >= 0;
    const list = isOnFragment ? null : await this.#list(frame, Math.min(MOST_SEARCHED, settings.panelPairLimit), pace);
    const look = { unit: settings.energyUnit, theme };
    const place = await pace.finish(placeSteps(tree, frame, line, asked, list, look));
    return { ...this.#answer(frame.system.kTKJPerMol), place };
  }

  async rows({ frame: number, query, from, count }: PanelRowsParams, pace: Pace): Promise<PanelRows | null> {
    const frame = await this.#frameOf(number, pace);
    if (frame === null) return null;
    const { panelPairLimit } = this.#analysed.settings;
    const answer = { ...this.#answer(frame.system.kTKJPerMol), frame: number, from };
    const list = await this.#list(frame, panelPairLimit, pace);
    if (list === null) {
      const reason = `This frame has more than ${panelPairLimit} pairs (polewise.limits.panelPairs), so the table is off; the partners of the fragment at the cursor are there.`;
      return { ...answer, rows: [], matching: 0, pairs: 0, reason };
    }
    const order = await this.#order(number, list, query, pace);
    const end = from + Math.min(count, MOST_ROWS_A_REQUEST);
    const rows = Array.from(order.subarray(from, end), (at) => list.row(at));
    const reason = list.count === 0 ? 'No two fragments of this frame are within the cutoff.' : null;
    return { ...answer, rows, matching: order.length, pairs: list.count, reason };
  }

  async matrix({ frame: number }: PanelFrameParams, pace: Pace): Promise<PanelMatrix | null> {
    const frame = await this.#frameOf(number, pace);
    if (frame === null) return null;
    const { model, system } = frame;
    const { count } = model.fragments;
    const answer = { ...this.#answer(system.kTKJPerMol), frame: number };
    if (count > MOST_MATRIX_FRAGMENTS) {
      const reason = `This frame has ${count} fragments; energies fragment by fragment are shown for up to ${MOST_MATRIX_FRAGMENTS}.`;
      return { ...answer, titles: [], first: [], second: [], energyKJPerMol: [], advice: [], reason };
    }
    const list = (await this.#list(frame, Number.POSITIVE_INFINITY, pace))!;
    const rows = Array.from({ length: list.count }, (_, at) => list.row(at));
    return {
      ...answer,
      titles: Array.from({ length: count }, (_, f) => fragmentTitle(model, f)),
      first: rows.map(({ first }) => first),
      second: rows.map(({ second }) => second),
      energyKJPerMol: rows.map(({ energyKJPerMol }) => energyKJPerMol),
      advice: rows.map(({ advice }) => advice),
      reason: list.count === 0 ? 'No two fragments of this frame are within the cutoff.' : null,
    };
  }

  async series({ frame: number, first, second }: PanelSeriesParams, pace: Pace): Promise<PanelSeries | null> {
    const { tree, settings } = this.#analysed;
    const frame = await this.#frameOf(number, pace);
    const isThere = (f: number) => Number.isInteger(f) && f >= 1 && f <= (frame?.model.fragments.count ?? 0);
    if (frame === null || !isThere(first) || !isThere(second)) return null;
    const titles = [fragmentTitle(frame.model, first - 1), fragmentTitle(frame.model, second - 1)] as const;
    const answer = { ...this.#answer(frame.system.kTKJPerMol), frame: number, titles };
    const without = (reason: string): PanelSeries => ({ ...answer, frames: [], events: [], reason });
    if (tree.frames.length < 2) return without('The file has one frame: there is nothing to follow.');
    if (tree.frames.length > MOST_SERIES_FRAMES) {
      return without(`More than ${MOST_SERIES_FRAMES} frames: use polewise series on the command line.`);
    }
    const start = await this.#frameOf(1, pace);
    const [f, g] = [first, second].map((h) => inFirstFrame(start!, frame, h - 1)) as [number, number];
    if (f < 0 || g < 0) return without('The first frame has no such pair, so it cannot be followed.');
    // A fresh analysis: the frames that are kept may be those that an edit goes on from.
    const series = await pace.finish(seriesSteps(new FileAnalysis(tree, settings.request), [f + 1, g + 1]));
    if (!series.ok) return without(`${series.reason}.`);
    return { ...answer, frames: series.frames, events: series.events, reason: null };
  }

  async lines({ frame: number, fragments }: FragmentLinesParams, pace: Pace): Promise<FragmentLines | null> {
    const frame = await this.#frameOf(number, pace);
    if (frame === null) return null;
    const { count } = frame.model.fragments;
    const there = fragments.filter((f) => Number.isInteger(f) && f >= 1 && f <= count);
    return {
      version: this.#analysed.document.version,
      runs: there.flatMap((f) => fragmentLines(this.#analysed.tree, frame.model, f - 1)),
    };
  }

  async #frameOf(number: number, pace: Pace): Promise<FrameAnalysis | null> {
    const { tree, frames } = this.#analysed;
    return Number.isInteger(number) && number >= 1 && number <= tree.frames.length
      ? frames.frame(number - 1, pace)
      : null;
  }

  /** All pairs of a frame, `null` where they are more than `most`. */
  async #list(frame: FrameAnalysis, most: number, pace: Pace): Promise<PairList | null> {
    const known = this.#lists.get(frame.index);
    if (known !== undefined && known !== null) return known.count <= most ? known : null;
    const counted = this.#analysed.frames.standing(frame.index)?.survey.pairs ?? 0;
    if (counted > most) return null;
    const list = await pace.finish(PairList.steps(frame, most));
    if (list !== null) this.#lists.set(frame.index, list);
    return list;
  }

  async #order(frame: number, list: PairList, query: PanelRowsParams['query'], pace: Pace): Promise<Int32Array> {
    const { key, descending, advice } = query;
    const text = String(query.text ?? '');
    const name = JSON.stringify([frame, key, descending, advice, text]);
    let order = this.#orders.get(name);
    if (order === undefined) {
      order = await pace.finish(list.orderSteps({ key, descending, advice, text }));
      // One order is looked at at a time.
      this.#orders.clear();
      this.#orders.set(name, order);
    }
    return order;
  }
}

/** A fragment of a frame by its number in the first frame, both from 0; −1 where that has none such. */
function inFirstFrame({ model: first }: FrameAnalysis, { model }: FrameAnalysis, f: number): number {
  const label = model.labels[f]!;
  if (label !== '') return first.labels.indexOf(label);
  const atom = atomsOf(model.fragments, f)[0]!;
  return first.fragments.ofAtom[atom] ?? -1;
}
