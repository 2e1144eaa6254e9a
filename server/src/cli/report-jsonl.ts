import { pairRecord } from '../features/records';
import type { PairReport } from './pairs-command';

/** One pair a line, with `file` and `frame` added, so that outputs can simply be joined. */
export function jsonLinesReport(): PairReport {
  return {
    begin() {},
    async writeFile(output, { name, frameNumbers, frameAt }, pause) {
      for (let place = 0; place < frameNumbers.length; place++) {
        const { frame, pairs } = frameAt(place);
        for (const pair of pairs) {
          output.write(
            `${JSON.stringify({ file: name, frame: frame.index + 1, ...pairRecord(frame.system, pair) })}\n`,
          );
          const turn = pause();
          if (turn !== undefined) await turn;
        }
      }
    },
    end() {},
  };
}
