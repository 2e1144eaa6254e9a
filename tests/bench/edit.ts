import type { Diagnostic } from 'vscode-languageserver-protocol';
import { WireClient } from '../wire/client';
import { EditedText } from '../wire/edited-text';
import { median, metOrMissed, printTable, quantile, shown } from './table';
import { mulberry, type WaterBox } from './water';

const EDITS_A_ROUND = 30;
/** The edits of one round end after this long, and rounds after this long (but not before the third), ms. */
const ROUND_MS = 2000;
const SESSION_MS = 60_000;

const OPEN_GOAL_MS = 1000;
const EDIT_GOAL_MS = 10;
const EDIT_GOAL_SHARE = 0.015;

/**
 * What a person waits after a keystroke: from sending an edit to having its diagnostics, with a real server process on the other side.
 * A full run is the opening of the same text; an edit of one atom should cost a small share of it. Naively, the whole text is sent for
 * each edit. False where an edited document and a fresh one do not get the same diagnostics.
 */
export async function benchEdit(box: WaterBox, rounds: number): Promise<boolean> {
  const rows: string[][] = [];
  let agrees = true;
  for (const language of ['xyz', 'pdb'] as const) {
    const times = await runSession(box[language], language, rounds);
    const full = median(times.full)!;
    const row = (name: string, list: number[], goal = '', met = '') => {
      const [middle, high] = [median(list)!, quantile(list, 0.95)!];
      const shares = [middle, high].map((value) => `${shown((100 * value) / full)} %`);
      rows.push([`${language} ${name}`, String(list.length), shown(middle), shown(high), ...shares, goal, met]);
    };
    row('open (a full run)', times.full, `median <= ${OPEN_GOAL_MS}`, metOrMissed(full <= OPEN_GOAL_MS));
    const high = quantile(times.edit, 0.95)!;
    const met = high <= EDIT_GOAL_MS && high <= EDIT_GOAL_SHARE * full;
    row('edit', times.edit, `p95 <= ${EDIT_GOAL_MS}, <= ${100 * EDIT_GOAL_SHARE} %`, metOrMissed(met));
    row('edit, naive', times.naive, '', times.agrees ? '' : 'RESULTS DIFFER');
    agrees &&= times.agrees;
  }
  console.log(`\nEdit: one digit of ${box.atoms} atoms to diagnostics over stdio, ms and as a share of a full run.`);
  console.log(`At most ${rounds} interleaved rounds a format, fewer where they take over ${SESSION_MS / 1000} s.`);
  printTable([['', 'times', 'median', 'p95', 'median', 'p95', 'goal', ''], ...rows]);
  return agrees;
}

interface Times {
  readonly full: number[];
  readonly edit: number[];
  readonly naive: number[];
  readonly agrees: boolean;
}

/** Each round opens the text as it is by then, makes one edit both ways, then further ones. */
async function runSession(start: string, language: string, rounds: number): Promise<Times> {
  const times = { full: [] as number[], edit: [] as number[], naive: [] as number[] };
  let agrees = true;
  const client = await WireClient.start();
  const text = new EditedText(start, mulberry(7));
  const uri = `file:///edited.${language}`;
  let version = 1;
  const editOnce = () => {
    const change = text.edit();
    return timed(client, uri, () => client.change(uri, ++version, [change]));
  };
  client.open(uri, text.text, language);
  let [, found] = await editOnce();
  const begin = performance.now();
  for (let round = 0; round < rounds && (round < 3 || performance.now() - begin < SESSION_MS); round++) {
    const fresh = `file:///fresh-${round}.${language}`;
    const full = await timed(client, fresh, () => client.open(fresh, text.text, language));
    agrees &&= areSame(found, full[1]);
    times.full.push(full[0]);
    const roundBegin = performance.now();
    for (let n = 0; n < EDITS_A_ROUND && performance.now() - roundBegin < ROUND_MS; n++) {
      const edit = await editOnce();
      times.edit.push(edit[0]);
      found = edit[1];
      if (n > 0) continue;
      const naive = await timed(client, fresh, () => client.change(fresh, 2, [{ text: text.text }]));
      times.naive.push(naive[0]);
      agrees &&= areSame(found, naive[1]);
      client.close(fresh);
    }
  }
  await client.stop();
  return { ...times, agrees };
}

/** From telling the server of something to the diagnostics of a document, ms, and these. */
async function timed(client: WireClient, uri: string, tell: () => void): Promise<[number, Diagnostic[]]> {
  const begin = performance.now();
  tell();
  const found = await client.diagnostics(uri);
  return [performance.now() - begin, found];
}

/** Whether two documents have the same diagnostics; related places name their document. */
function areSame(a: readonly Diagnostic[], b: readonly Diagnostic[]): boolean {
  const [one, other] = [a, b].map((list) => JSON.stringify(list).replace(/"uri":"[^"]*"/g, ''));
  return one === other;
}
