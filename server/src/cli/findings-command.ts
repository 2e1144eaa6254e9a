import { FileFindings } from '../analysis/findings';
import { FileAnalysis } from '../analysis/frame-analysis';
import type { AnalysisRequest } from '../analysis/settings';
import { surveySteps } from '../analysis/survey';
import type { Part } from '../analysis/system';
import { SEVERITIES, type Severity } from '../base/catalogue';
import { type FindingRecord, findingRecord } from '../features/records';
import type { CoordinateTree, Language } from '../formats/tree';
import { readCompanion } from './companion';
import { readCoordinates, UsageError } from './input';
import { Output, Pacer } from './output';
import { sarifLog } from './sarif';

export interface FindingsOptions {
  readonly format: 'text' | 'json' | 'sarif';
  readonly failOn: Exclude<Severity, 'hint'>;
  readonly language?: Language;
  readonly with?: string;
}

/** The findings of one file. */
export interface FileReport {
  readonly file: string;
  readonly language: Language;
  readonly findings: readonly FindingRecord[];
  readonly counts: Readonly<Record<Severity, number>>;
}

/** Prints the findings of files; returns the exit status. */
export async function findingsCommand(
  files: readonly string[],
  request: AnalysisRequest,
  options: FindingsOptions,
): Promise<number> {
  const output = new Output();
  const pacer = new Pacer();
  const reports: FileReport[] = [];
  const companion = options.with === undefined ? null : await readCompanion(options.with, request);
  let failed = false;
  for (const name of files) {
    try {
      const file = await readCoordinates(name, options.language);
      const report = await reportOf(name, file, request, companion, pacer);
      reports.push(report);
      if (options.format === 'text')
        for (const finding of report.findings) output.write(`${textLine(name, finding)}\n`);
      await output.flush();
      if (file.frames.length === 0) throw new UsageError(`${name}: holds no frame`);
    } catch (error) {
      if (!(error instanceof UsageError)) throw error;
      pacer.done();
      process.stderr.write(`polewise: ${error.message}\n`);
      failed = true;
    }
  }
  pacer.done();
  if (options.format === 'text') output.write(reports.length === 0 ? '' : `${summary(reports)}\n`);
  else if (options.format === 'sarif') output.write(`${JSON.stringify(sarifLog(reports), null, 2)}\n`);
  else if (files.length > 1 || reports.length > 0) {
    const data = reports.map((report) => ({ schema: 'polewise/findings/1', ...report }));
    output.write(`${JSON.stringify(files.length === 1 ? data[0] : data, null, 2)}\n`);
  }
  await output.flush();
  if (failed) return 2;
  const limit = SEVERITIES.indexOf(options.failOn);
  return reports.some((report) => SEVERITIES.slice(0, limit + 1).some((severity) => report.counts[severity] > 0))
    ? 1
    : 0;
}

async function reportOf(
  name: string,
  file: CoordinateTree,
  request: AnalysisRequest,
  companion: Part | null,
  pacer: Pacer,
): Promise<FileReport> {
  const analysis = new FileAnalysis(file, request, companion);
  const found = new FileFindings(file);
  for (let index = 0; index < file.frames.length; index++) {
    const progress = () => `${name}: frame ${index + 1} of ${file.frames.length}`;
    const frame = analysis.frame(index);
    const survey = surveySteps(frame.system, frame.partners);
    let step = survey.next();
    for (; !step.done; step = survey.next()) {
      const turn = pacer.pause(progress);
      if (turn !== undefined) await turn;
    }
    found.addFrame(frame, step.value);
    await pacer.pause(progress);
  }
  const findings = found.list().map((finding) => findingRecord(file.lines, finding));
  return { file: name, language: file.language, findings, counts: countBySeverity(findings) };
}

export function countBySeverity(findings: readonly FindingRecord[]): Record<Severity, number> {
  const counts: Record<Severity, number> = { error: 0, warning: 0, information: 0, hint: 0 };
  for (const { severity } of findings) counts[severity]++;
  return counts;
}

function textLine(file: string, { line, column, severity, code, message }: FindingRecord): string {
  return `${file}:${line}:${column}: ${severity} ${code}: ${message}`;
}

const WORDS: Readonly<Record<Severity, readonly [one: string, many: string]>> = {
  error: ['error', 'errors'],
  warning: ['warning', 'warnings'],
  information: ['information', 'information'],
  hint: ['hint', 'hints'],
};

/** "2 errors, 1 warning", or '' where there is nothing. */
export function countsInWords(counts: Readonly<Record<Severity, number>>): string {
  return SEVERITIES.filter((severity) => counts[severity] > 0)
    .map((severity) => `${counts[severity]} ${WORDS[severity][counts[severity] === 1 ? 0 : 1]}`)
    .join(', ');
}

function summary(reports: readonly FileReport[]): string {
  const counts = countBySeverity(reports.flatMap((report) => report.findings));
  const files = reports.length === 1 ? '1 file' : `${reports.length} files`;
  return `${countsInWords(counts) || 'no findings'} in ${files}`;
}
