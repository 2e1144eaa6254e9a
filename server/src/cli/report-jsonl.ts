import { eachPairRecord, type PairReport } from './pairs-command';

/** One pair a line, with `file` and `frame` added, so that outputs can simply be joined. */
export function jsonLinesReport(): PairReport {
  return {
    begin() {},
    async writeFile(output, opened, pause) {
      await eachPairRecord(opened, pause, (frame, record) => {
        output.write(`${JSON.stringify({ file: opened.name, frame, ...record })}\n`);
      });
    },
    end() {},
  };
}
