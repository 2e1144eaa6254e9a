import { WireClient } from '../wire/client';
import { median, metOrMissed, printTable, shown } from './table';
import type { WaterBox } from './water';

const GOAL_MS = 20;
/** Rounds end after this long (but not before the third), ms. */
const SESSION_MS = 45_000;
const SMALL = 'file:///small.xyz';

/**
 * What a person who works in one document waits while another one, large and just opened, is analysed: hovers on a document of two atoms,
 * asked one after another, and of each round the longest. While the text arrives it has to be read as a whole; that is told apart.
 */
export async function benchWait(box: WaterBox, rounds: number): Promise<void> {
  const rows: string[][] = [];
  for (const language of ['xyz', 'pdb'] as const) {
    const client = await WireClient.start();
    client.open(SMALL, '2\n\nHe 0 0 0\nHe 0 0 9\n');
    await client.diagnostics(SMALL);
    const idle: number[] = [];
    for (let n = 0; n < 50; n++) idle.push(await hoverMs(client));
    const waits: Waits[] = [];
    const begin = performance.now();
    for (let round = 0; round < rounds && (round < 3 || performance.now() - begin < SESSION_MS); round++) {
      waits.push(await longestWaits(client, `file:///large-${round}.${language}`, box[language], language));
    }
    await client.stop();
    const analysing = waits.map((wait) => wait.analysing);
    const longest = median(analysing)!;
    rows.push([
      language,
      String(waits.length),
      shown(median(idle)),
      shown(median(waits.map((wait) => wait.arriving))),
      shown(longest),
      shown(Math.max(...analysing)),
      `<= ${GOAL_MS}`,
      metOrMissed(longest <= GOAL_MS),
    ]);
  }
  console.log(`\nWait: the longest time of a hover on a small document while ${box.atoms} atoms are analysed, ms.`);
  printTable([['', 'rounds', 'idle', 'text arrives', 'analysis', 'worst round', 'goal', ''], ...rows]);
}

interface Waits {
  /** From sending the text until the server says that it computes. */
  readonly arriving: number;
  /** From then until there are diagnostics. */
  readonly analysing: number;
}

async function longestWaits(client: WireClient, uri: string, text: string, language: string): Promise<Waits> {
  const longest = { arriving: 0, analysing: 0 };
  let phase: keyof Waits | null = 'arriving';
  void client
    .until(() => client.statuses.some((status) => status.uri === uri))
    .then(() => {
      phase = 'analysing';
    });
  client.open(uri, text, language);
  const done = client.diagnostics(uri).then(() => {
    phase = null;
  });
  for (;;) {
    const at: keyof Waits | null = phase;
    if (at === null) break;
    longest[at] = Math.max(longest[at], await hoverMs(client));
  }
  await done;
  client.close(uri);
  return longest;
}

async function hoverMs(client: WireClient): Promise<number> {
  const begin = performance.now();
  await client.hover(SMALL, 0, 0);
  return performance.now() - begin;
}
