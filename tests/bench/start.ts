import { WireClient } from '../wire/client';
import { median, metOrMissed, printTable, shown } from './table';

const GOAL = 1.1;

/**
 * From spawning the server to its answer to `initialize`: what passes before the editor can use it. Most of it is Node itself, hence
 * the ratio to a server that does nothing, bundled in the same way.
 */
export async function benchStart(emptyServer: string, rounds: number): Promise<void> {
  const ours: number[] = [];
  const empty: number[] = [];
  const sides = [
    { times: ours, server: 'server/dist/server.cjs' },
    { times: empty, server: emptyServer },
  ];
  for (let round = -1; round < rounds; round++) {
    // Neither is always the one to find a busy machine.
    sides.reverse();
    for (const { times, server } of sides) {
      const begin = performance.now();
      const client = await WireClient.start({ server });
      times.push(performance.now() - begin);
      await client.stop();
    }
    if (round < 0) ours.length = empty.length = 0;
  }
  const ratio = median(ours)! / median(empty)!;
  console.log(`\nStart: spawn to the answer to initialize, medians of ${rounds} interleaved rounds, ms.`);
  printTable([
    ['', 'empty server', 'ours', 'ours/empty', 'goal', ''],
    ['start', shown(median(empty)), shown(median(ours)), shown(ratio), `<= ${GOAL}`, metOrMissed(ratio <= GOAL)],
  ]);
}
