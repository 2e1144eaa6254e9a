import { type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import type { Steps } from '../base/steps';
import { csvLine, type Field } from './csv';
import { type PairRecord, pairRecord } from './records';

/** The fields of a record in their order: nested names joined by a dot, lists by blanks in one field. */
function fieldsOf(record: PairRecord): [string, Field][] {
  return Object.entries(record).flatMap(([name, value]): [string, Field][] => {
    if (Array.isArray(value)) return [[name, value.join(' ')]];
    if (value === null || typeof value !== 'object') return [[name, value as Field]];
    return Object.entries(value).map(([inner, field]) => [
      `${name}.${inner}`,
      Array.isArray(field) ? field.join(' ') : (field as Field),
    ]);
  });
}

/** The pair table as comma-separated values (RFC 4180) with the names of the JSON fields; an empty field stands for null. */
export class PairTable {
  #titled = false;

  /** The lines of one more pair of a file: before the first one stand the titles. */
  linesOf(file: string, frame: number, record: PairRecord): string {
    const fields = fieldsOf(record);
    const titles = this.#titled ? '' : csvLine(['file', 'frame', ...fields.map(([title]) => title)]);
    this.#titled = true;
    return titles + csvLine([file, frame, ...fields.map(([, field]) => field)]);
  }
}

/** Adds the lines of a frame's pairs to others; returns false where that would be more than `most` pairs. */
export function* pairTableSteps(
  frame: FrameAnalysis,
  file: string,
  table: PairTable,
  most: number,
  lines: string[],
): Steps<boolean> {
  for (const pair of pairsOf(frame)) {
    yield;
    if (lines.length === most) return false;
    lines.push(table.linesOf(file, frame.index + 1, pairRecord(frame.system, pair)));
  }
  return true;
}
