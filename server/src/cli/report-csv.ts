import { type PairRecord, pairRecord } from '../features/records';
import type { PairReport } from './pairs-command';

type Field = string | number | null;

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
    async writeFile(output, { name, frameNumbers, frameAt }, pause) {
      for (let place = 0; place < frameNumbers.length; place++) {
        const { frame, pairs } = frameAt(place);
        for (const pair of pairs) {
          const fields = fieldsOf(pairRecord(frame.system, pair));
          if (!titled) output.write(`file,frame,${fields.map(([title]) => title).join(',')}\n`);
          titled = true;
          output.write(`${quoted(name)},${frame.index + 1},${fields.map(([, field]) => quoted(field)).join(',')}\n`);
          const turn = pause();
          if (turn !== undefined) await turn;
        }
      }
    },
    end() {},
  };
}

function quoted(field: Field): string {
  if (field === null) return '';
  const text = String(field);
  return /[",\r\n]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text;
}
