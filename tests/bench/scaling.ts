import { measure } from './compare';
import { Reference } from './reference';
import { median, metOrMissed, printTable, shown } from './table';
import { textCases } from './text-cases';
import { type WaterBox, writeBox } from './water';

const CASES = ['XYZ from bytes', 'PDB from bytes', 'covalent fragments'];
const GOALS: Readonly<Record<string, number>> = { 'covalent fragments': 12 };

/**
 * The time for ten times the atoms over the time for them: 10 where work is in proportion to the atoms. More is caches that no longer
 * hold the data, which C feels too, or an algorithm that does not scale.
 */
export async function benchScaling(
  boxes: readonly [WaterBox, WaterBox],
  folder: string,
  program: string | null,
  rounds: number,
): Promise<void> {
  const sides = boxes.map((box, size) => ({
    cases: new Map(textCases(box).map((entry) => [entry.name, entry])),
    reference: program === null ? null : new Reference(program, writeBox(box, folder), false),
    ours: [] as number[],
    c: [] as number[],
    // The large box leaves caches and clocks cold for the small one, which the last of three runs no longer feels.
    runs: size === 0 ? 3 : 1,
  }));
  const rows: string[][] = [];
  for (const name of CASES) {
    for (const side of sides) side.ours.length = side.c.length = 0;
    for (let round = -1; round < rounds; round++) {
      for (const { cases, reference, ours, c, runs } of sides) {
        const entry = cases.get(name)!;
        // The C fragments work on the coordinates that C has parsed.
        if (entry.c === 'fragments' && round < 0) await reference?.run('xyz');
        const inC: number[] = [];
        const inOurs: number[] = [];
        for (let run = 0; run < runs; run++) {
          if (reference !== null) inC.push((await reference.run(entry.c!)).seconds * 1000);
        }
        for (let run = 0; run < runs; run++) inOurs.push(measure(entry.ours, entry.sum).seconds * 1000);
        if (round < 0) continue;
        c.push(...inC.slice(runs - 1));
        ours.push(...inOurs.slice(runs - 1));
      }
    }
    const [small, large] = sides.map(({ ours, c }) => ({ ours: median(ours)!, c: median(c) }));
    const ratio = large!.ours / small!.ours;
    const cRatio = large!.c === null || small!.c === null ? null : large!.c / small!.c;
    const goal = GOALS[name];
    const verdict = goal === undefined ? ['', ''] : [`<= ${goal}`, metOrMissed(ratio <= goal)];
    const ofC = [small!.c, large!.c, cRatio].map(shown);
    rows.push([name, shown(small!.ours), shown(large!.ours), shown(ratio), ...verdict, ...ofC]);
  }
  for (const { reference } of sides) reference?.close();
  console.log(
    `\nScaling: from ${boxes[0].atoms} to ${boxes[1].atoms} atoms, medians of ${rounds} interleaved rounds, ms.`,
  );
  printTable([['', 'small', 'large', 'large/small', 'goal', '', 'C small', 'C large', 'large/small'], ...rows]);
}
