import type { PairRecord } from '../features/records';
import { eachPairRecord, type PairReport } from './pairs-command';

export type Field = string | number | null;

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

/** Comma-separated values (RFC 4180) with the names of the JSON fields; an empty field stands for null. */
export function csvReport(): PairReport {
  let titled = false;
  return {
    begin() {},
    async writeFile(output, opened, pause) {
      await eachPairRecord(opened, pause, (frame, record) => {
        const fields = fieldsOf(record);
        if (!titled) output.write(`file,frame,${fields.map(([title]) => title).join(',')}\n`);
        titled = true;
        output.write(`${quoted(opened.name)},${frame},${fields.map(([, field]) => quoted(field)).join(',')}\n`);
      });
    },
    end() {},
  };
}

export function quoted(field: Field): string {
  if (field === null) return '';
  const text = String(field);
  return /[",\r\n]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text;
}
