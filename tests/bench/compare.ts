import type { Measured, Reference } from './reference';
import { median, printTable, shown } from './table';

/** One kernel in up to three versions; each gives a result whose sum must be the same. */
export interface Case {
  readonly name: string;
  /** What the C reference is asked. */
  readonly c?: string;
  readonly ours: () => unknown;
  readonly sum: (result: unknown) => number;
  readonly naive?: () => unknown;
  readonly naiveSum?: (result: unknown) => number;
  /** Our time over C's, at most. */
  readonly goal?: number;
  /** Naive time over ours, at least. */
  readonly naiveGoal?: number;
}

export interface Row {
  readonly name: string;
  readonly atoms: number;
  readonly ours: number;
  readonly c: number | null;
  readonly naive: number | null;
  readonly goal: number | null;
  readonly naiveGoal: number | null;
  readonly agrees: boolean;
}

/** Naive versions slower than this run in every third round only, s. */
const SLOW_S = 0.5;
const WARM_UPS = 3;
/** Sums of energies may differ by their order of addition. */
const TOLERANCE = 1e-9;

/** Runs the versions of a case in turns. */
export async function compare(entry: Case, atoms: number, rounds: number, reference: Reference | null): Promise<Row> {
  const times = { ours: [] as number[], c: [] as number[], naive: [] as number[] };
  const sums: number[] = [];
  let naiveS = 0;
  for (let round = -WARM_UPS; round < rounds; round++) {
    if (entry.c !== undefined && reference !== null) take(await reference.run(entry.c), times.c);
    take(measure(entry.ours, entry.sum), times.ours);
    if (entry.naive !== undefined && (naiveS < SLOW_S || (round >= 0 && round % 3 === 0))) {
      naiveS = take(measure(entry.naive, entry.naiveSum ?? entry.sum), times.naive);
    }
    if (round < 0) for (const list of Object.values(times)) list.length = 0;
  }
  const [first = 0] = sums;
  const agrees = sums.every((sum) => Math.abs(sum - first) <= TOLERANCE * Math.max(1, Math.abs(first)));
  if (!agrees) console.error(`${entry.name}: results differ: ${[...new Set(sums)].join(', ')}`);
  return {
    name: entry.name,
    atoms,
    ours: median(times.ours)!,
    c: median(times.c),
    naive: median(times.naive),
    goal: entry.goal ?? null,
    naiveGoal: entry.naiveGoal ?? null,
    agrees,
  };

  function take({ seconds, checksum }: Measured, list: number[]): number {
    list.push(seconds);
    sums.push(checksum);
    return seconds;
  }
}

export function measure(work: () => unknown, sum: (result: unknown) => number): Measured {
  const begin = performance.now();
  const result = work();
  const seconds = (performance.now() - begin) / 1000;
  return { seconds, checksum: sum(result) };
}

export function showTable(rows: readonly Row[], rounds: number): void {
  console.log(`Medians of ${rounds} interleaved rounds, ms. Only the ratios of one run are worth quoting.`);
  const ms = (seconds: number | null) => (seconds === null ? '-' : (seconds * 1000).toFixed(1));
  const ratio = (a: number | null, b: number | null) => (a === null || b === null ? null : a / b);
  const table = rows.map((row) => {
    const toC = ratio(row.ours, row.c);
    const toNaive = ratio(row.naive, row.ours);
    const met = (row.goal === null || toC === null || toC <= row.goal) && (row.naiveGoal ?? 0) <= (toNaive ?? Infinity);
    const hasGoal = (row.goal !== null && toC !== null) || (row.naiveGoal !== null && toNaive !== null);
    return [
      row.name,
      String(row.atoms),
      ms(row.c),
      ms(row.ours),
      ms(row.naive),
      shown(toC),
      row.goal === null ? '' : `<= ${row.goal}`,
      shown(toNaive),
      row.naiveGoal === null ? '' : `>= ${row.naiveGoal}`,
      row.agrees ? (hasGoal ? (met ? 'met' : 'missed') : '') : 'RESULTS DIFFER',
    ];
  });
  printTable([['kernel', 'atoms', 'C', 'ours', 'naive', 'ours/C', 'goal', 'naive/ours', 'goal', ''], ...table]);
}
