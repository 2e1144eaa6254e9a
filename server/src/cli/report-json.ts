import { findingRecord, fragmentRecord, inductionRecord, pairRecord, settingsRecord } from '../features/records';
import type { Output } from './output';
import type { FileForReport, PairReport } from './pairs-command';

/** The pairs as one JSON object a file (an array of them for several), written piece by piece. */
export function jsonReport(): PairReport {
  let several = false;
  let written = 0;
  return {
    begin(output: Output, files: number) {
      several = files > 1;
      if (several) output.write('[\n');
    },
    async writeFile(output, opened, pause) {
      if (written++ > 0) output.write(',\n');
      const { name, file, findings, frameNumbers } = opened;
      output.write(
        `{"schema":"polewise/pairs/1","file":${JSON.stringify(name)},"language":"${file.language}","frames":[`,
      );
      for (let place = 0; place < frameNumbers.length; place++) await writeFrame(output, opened, place, pause);
      const records = findings.list().map((finding) => findingRecord(file.lines, finding));
      output.write(`\n],"findings":${JSON.stringify(records)}}\n`);
    },
    end(output) {
      if (several) output.write(']\n');
    },
  };
}

async function writeFrame(
  output: Output,
  opened: FileForReport,
  place: number,
  pause: () => Promise<void> | undefined,
): Promise<void> {
  const { frame, pairs, nameOf } = opened.frameAt(place);
  const head = {
    frame: frame.index + 1,
    atomCount: frame.model.tree.atoms.count,
    settings: settingsRecord(frame),
    induction: inductionRecord(frame),
  };
  output.write(`${place === 0 ? '' : ','}\n${JSON.stringify(head).slice(0, -1)},"fragments":[`);
  for (let f = 0; f < frame.system.count; f++) {
    output.write(`${f === 0 ? '' : ','}\n${JSON.stringify(fragmentRecord(frame, f, nameOf))}`);
    const turn = pause();
    if (turn !== undefined) await turn;
  }
  output.write('\n],"pairs":[');
  let count = 0;
  for (const pair of pairs) {
    output.write(`${count++ === 0 ? '' : ','}\n${JSON.stringify(pairRecord(frame.system, pair))}`);
    const turn = pause();
    if (turn !== undefined) await turn;
  }
  output.write('\n]}');
}
