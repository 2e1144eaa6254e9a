import { type Case, compare, type Row, showTable } from './compare';
import { pairCases } from './pairs';
import { Reference } from './reference';
import { textCases } from './text-cases';
import { type WaterBox, writeBox } from './water';

/** The kernels beside C and naive versions, of those named; false where versions disagree. */
export async function benchKernels(
  boxes: readonly WaterBox[],
  folder: string,
  program: string | null,
  rounds: number,
  isWanted: (name: string) => boolean,
): Promise<boolean> {
  const rows: Row[] = [];
  for (const box of boxes) {
    const data = writeBox(box, folder);
    const withPairs = box === boxes[0];
    const cases: Case[] = [...textCases(box), ...(withPairs ? pairCases(box, data) : [])];
    const reference = program === null ? null : new Reference(program, data, withPairs);
    for (const entry of cases) {
      if (!isWanted(entry.name)) continue;
      // The C fragments work on the coordinates that C has parsed.
      if (entry.c === 'fragments') await reference?.run('xyz');
      rows.push(await compare(entry, box.atoms, rounds, reference));
    }
    reference?.close();
  }
  showTable(rows, rounds);
  return rows.every((row) => row.agrees);
}
