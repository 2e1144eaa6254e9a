import { FileFindings } from '../analysis/findings';
import { FileAnalysis, type FrameAnalysis } from '../analysis/frame-analysis';
import type { Pair } from '../analysis/pair';
import type { AnalysisRequest } from '../analysis/settings';
import type { Part } from '../analysis/system';
import { type FragmentName, type PairRecord, pairRecord } from '../features/records';
import { parseSelector, selectorMatches } from '../formats/pdb/remarks';
import type { CoordinateTree, Language } from '../formats/tree';
import { atomsOf } from '../model/fragment-set';
import type { FrameModel } from '../model/frame-model';
import type { EnergyUnit } from '../physics/units';
import { readCompanion } from './companion';
import { readCoordinates, UsageError } from './input';
import { Output, Pacer } from './output';
import { csvReport } from './report-csv';
import { jsonReport } from './report-json';
import { jsonLinesReport } from './report-jsonl';
import { textReport } from './report-text';

export interface PairsOptions {
  readonly format: 'text' | 'json' | 'jsonl' | 'csv';
  /** Frame number from 1, or `all`. */
  readonly frame: number | 'all';
  readonly unit: EnergyUnit;
  readonly focus?: string;
  readonly with?: string;
  readonly language?: Language;
}

/** One frame on its way into a report: its pairs come one by one, its findings are complete after the last. */
export interface FrameForReport {
  readonly frame: FrameAnalysis;
  readonly pairs: Iterable<Pair>;
  nameOf(fragment: number): FragmentName;
}

/** One file on its way into a report. */
export interface FileForReport {
  readonly name: string;
  readonly file: CoordinateTree;
  readonly findings: FileFindings;
  readonly frameNumbers: readonly number[];
  /** Makes the frame at a place of {@link frameNumbers}. */
  frameAt(place: number): FrameForReport;
}

/** Writes reports of files one after another. */
export interface PairReport {
  begin(output: Output, files: number): void;
  writeFile(output: Output, file: FileForReport, pause: () => Promise<void> | undefined): Promise<void>;
  end(output: Output): void;
}

const REPORTS: Readonly<Record<PairsOptions['format'], (options: PairsOptions) => PairReport>> = {
  text: textReport,
  json: jsonReport,
  jsonl: jsonLinesReport,
  csv: csvReport,
};

/** Prints the pairs of files; returns the exit status. */
export async function pairsCommand(
  files: readonly string[],
  request: AnalysisRequest,
  options: PairsOptions,
): Promise<number> {
  const output = new Output();
  const pacer = new Pacer();
  const companion = options.with === undefined ? null : await readCompanion(options.with, request);
  const report = REPORTS[options.format](options);
  let status = 0;
  let begun = false;
  for (const name of files) {
    try {
      const opened = await openForReport(name, request, options, companion);
      if (!begun) report.begin(output, files.length);
      begun = true;
      await report.writeFile(output, opened, () => {
        if (output.isFull) return output.flush();
        return pacer.pause(() => name);
      });
      await output.flush();
    } catch (error) {
      if (!(error instanceof UsageError)) throw error;
      pacer.done();
      process.stderr.write(`polewise: ${error.message}\n`);
      status = 2;
    }
  }
  pacer.done();
  if (!begun && files.length > 1) report.begin(output, files.length);
  if (begun || files.length > 1) report.end(output);
  await output.flush();
  return status;
}

/** Reads a file and prepares its frames. Throws {@link UsageError} where there is nothing to report. */
export async function openForReport(
  name: string,
  request: AnalysisRequest,
  options: Pick<PairsOptions, 'frame' | 'focus' | 'language'>,
  companion: Part | null,
): Promise<FileForReport> {
  const file = await readCoordinates(name, options.language);
  const { frames } = file;
  const reasons = file.problems.slice(0, 1).map((problem) => problem.message);
  if (frames.length === 0) throw new UsageError(`${name}: holds no frame. ${reasons.join('')}`);
  if (options.frame !== 'all' && options.frame > frames.length) {
    throw new UsageError(
      `${name}: has ${frames.length} frame${frames.length === 1 ? '' : 's'}, no frame ${options.frame}`,
    );
  }
  const analysis = new FileAnalysis(file, request, companion);
  const findings = new FileFindings(file);
  const frameNumbers = options.frame === 'all' ? frames.map((frame) => frame.index + 1) : [options.frame];
  const prepare = (place: number) => {
    const frame = analysis.frame(frameNumbers[place]! - 1);
    const nameOf = namesOf(frame.model, companion?.model ?? null);
    return { frame, nameOf, wanted: options.focus === undefined ? null : focusOf(frame, options.focus, nameOf) };
  };
  // A focus that means nothing must be said before anything is written.
  let prepared: ReturnType<typeof prepare> | null = prepare(0);
  if (prepared.wanted !== null && !prepared.wanted.includes(true)) {
    throw new UsageError(`${name}: no fragment is called "${options.focus}"`);
  }
  return {
    name,
    file,
    findings,
    frameNumbers,
    frameAt: (place) => {
      const { frame, nameOf, wanted } = place === 0 && prepared !== null ? prepared : prepare(place);
      prepared = null;
      const all = findings.pairsOfFrame(frame);
      return { frame, nameOf, pairs: wanted === null ? all : only(all, wanted) };
    },
  };
}

/** Hands every pair of every frame to a writer as plain data, pausing between them. */
export async function eachPairRecord(
  { frameNumbers, frameAt }: FileForReport,
  pause: () => Promise<void> | undefined,
  write: (frame: number, record: PairRecord) => void,
): Promise<void> {
  for (let place = 0; place < frameNumbers.length; place++) {
    const { frame, pairs } = frameAt(place);
    for (const pair of pairs) {
      write(frame.index + 1, pairRecord(frame.system, pair));
      const turn = pause();
      if (turn !== undefined) await turn;
    }
  }
}

function* only(pairs: Iterable<Pair>, wanted: readonly boolean[]): Generator<Pair> {
  for (const pair of pairs) if (wanted[pair.first] || wanted[pair.second]) yield pair;
}

export function namesOf(model: FrameModel, companion: FrameModel | null): (fragment: number) => FragmentName {
  return (fragment) => {
    const own = model.fragments.count;
    const [source, f] = fragment < own ? [model, fragment] : [companion!, fragment - own];
    return { name: source.names[f]!, label: source.labels[f] === '' ? null : source.labels[f]! };
  };
}

/** Which fragments a focus means: a number, a selector `chain:residue:number`, or a name. */
export function focusOf(frame: FrameAnalysis, focus: string, nameOf: (f: number) => FragmentName): boolean[] {
  const { model, system } = frame;
  const fragments = Array.from({ length: system.count }, (_, f) => f);
  if (/^\d+$/.test(focus)) return fragments.map((f) => f + 1 === Number(focus));
  const selector = parseSelector(focus);
  if (selector !== null && model.tree.residues !== null) {
    const { atoms, residues } = model.tree;
    return fragments.map((f) => {
      if (f >= model.fragments.count) return false;
      return atomsOf(model.fragments, f).some((atom) => selectorMatches(selector, residues![atoms.residue![atom]!]!));
    });
  }
  return fragments.map((f) => nameOf(f).name === focus || nameOf(f).label === focus);
}
