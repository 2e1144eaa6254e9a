import { PairTable } from '../features/pair-table';
import { eachPairRecord, type PairReport } from './pairs-command';

/** Comma-separated values (RFC 4180) with the names of the JSON fields; an empty field stands for null. */
export function csvReport(): PairReport {
  const table = new PairTable();
  return {
    begin() {},
    async writeFile(output, opened, pause) {
      await eachPairRecord(opened, pause, (frame, record) => output.write(table.linesOf(opened.name, frame, record)));
    },
    end() {},
  };
}
