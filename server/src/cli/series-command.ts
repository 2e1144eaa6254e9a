import { FileAnalysis, type FrameAnalysis } from '../analysis/frame-analysis';
import type { AnalysisRequest } from '../analysis/settings';
import type { Part } from '../analysis/system';
import type { Steps } from '../base/steps';
import type { FragmentName } from '../features/records';
import { type Series, seriesSteps } from '../features/series';
import type { Language } from '../formats/tree';
import type { EnergyUnit } from '../physics/units';
import { readCoordinates, UsageError } from './input';
import { Output, Pacer } from './output';
import { focusOf, namesOf } from './pairs-command';
import { writeSeriesCsv, writeSeriesJson, writeSeriesText } from './report-series';

export interface SeriesOptions {
  readonly format: 'text' | 'json' | 'csv';
  readonly unit: EnergyUnit;
  /** Two fragments of the first frame joined by a comma; without it the pair of the largest energy there. */
  readonly pair?: string;
  readonly language?: Language;
}

/** A series on its way into a report. */
export interface SeriesForReport {
  readonly name: string;
  readonly language: Language;
  readonly series: Series;
  /** Names of the fragments of the first frame, counted from 0. */
  nameOf(fragment: number): FragmentName;
}

const WRITERS = { text: writeSeriesText, json: writeSeriesJson, csv: writeSeriesCsv } as const;

/** Prints a pair over the frames of a file; returns the exit status. */
export async function seriesCommand(
  name: string,
  request: AnalysisRequest,
  options: SeriesOptions,
  companion: Part | null,
): Promise<number> {
  const pacer = new Pacer();
  const file = await readCoordinates(name, options.language);
  if (file.frames.length === 0) {
    throw new UsageError(`${name}: holds no frame. ${file.problems[0]?.message ?? ''}`.trimEnd());
  }
  const analysis = new FileAnalysis(file, request, companion);
  const inSteps = async <T>(steps: Steps<T>): Promise<T> => {
    let step = steps.next();
    while (!step.done) {
      await pacer.pause(() => name);
      step = steps.next();
    }
    return step.value;
  };
  const frame = await inSteps(analysis.frameSteps(0));
  const nameOf = namesOf(frame.model, companion?.model ?? null);
  const chosen = options.pair === undefined ? null : chosenPair(name, frame, options.pair, nameOf);
  const series = await inSteps(seriesSteps(analysis, chosen));
  pacer.done();
  if (!series.ok) {
    throw new UsageError(`${name}: ${series.reason}${chosen === null ? '; --pair A,B names one' : ''}`);
  }
  const output = new Output();
  await WRITERS[options.format](output, { name, language: file.language, series, nameOf }, options.unit);
  await output.flush();
  return 0;
}

/** The two fragments that a text means. Names may hold commas, so each comma is tried as the one between them. */
function chosenPair(
  file: string,
  frame: FrameAnalysis,
  text: string,
  nameOf: (f: number) => FragmentName,
): [number, number] {
  const meant = (part: string) => focusOf(frame, part.trim(), nameOf).flatMap((isMeant, f) => (isMeant ? [f + 1] : []));
  const splits = [...text.matchAll(/,/g)].map(({ index }) => {
    const parts = [text.slice(0, index), text.slice(index + 1)] as const;
    return parts.map((part) => ({ part, numbers: meant(part) }));
  });
  if (splits.length === 0)
    throw new UsageError(`--pair takes two fragments joined by a comma, such as 1,2; not "${text}"`);
  const sides = splits.find((both) => both.every(({ numbers }) => numbers.length > 0)) ?? splits[0]!;
  const [first, second] = sides.map(({ part, numbers }) => {
    if (numbers.length === 1) return numbers[0]!;
    if (numbers.length === 0) throw new UsageError(`${file}: no fragment of the first frame is called "${part}"`);
    const shown = numbers.slice(0, MOST_NAMED).join(', ') + (numbers.length > MOST_NAMED ? ', …' : '');
    throw new UsageError(`${file}: "${part}" is ${numbers.length} fragments (${shown}); give the number of one`);
  });
  return [first!, second!];
}

const MOST_NAMED = 8;
