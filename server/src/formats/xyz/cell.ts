import type { FindingCollector } from '../../base/finding';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from '../annotation/entries';
import { itemNumber, listItems } from '../annotation/lists';
import { meantNumber, meantPeriodicity, replacement } from '../annotation/meant';
import { readBoolean } from '../annotation/values';
import type { FrameTree } from '../tree';

/** Reads `Lattice` (nine numbers: the cell vectors as rows; three: a box) and `pbc`; a cell without `pbc` is periodic. */
export function readCell(text: Snapshot, entries: readonly Entry[], problems: FindingCollector): FrameTree['cell'] {
  const periodic = readPeriodic(text, entries, problems);
  const lattice = entries.find((entry) => entry.key === 'Lattice');
  if (lattice === undefined) return null;
  const items = listItems(text, lattice);
  if (items.length !== 9 && items.length !== 3) {
    problems.add(
      'array-length',
      lattice.value,
      () => `Lattice has ${items.length} numbers; it needs nine (or three for a box).`,
    );
    return null;
  }
  const numbers = items.map((item) => itemNumber(text, item).value);
  const bad = numbers.findIndex((value) => Number.isNaN(value));
  if (bad >= 0) {
    const span = items[bad]!;
    problems.add(
      'number-unreadable',
      span,
      () => `"${text.slice(span.start, Math.min(span.end, span.start + 40))}" in Lattice is no finite number.`,
      () => replacement(span, meantNumber(text.slice(span.start, Math.min(span.end, span.start + 40)))),
    );
    return null;
  }
  const vectorsA = Float64Array.from(
    numbers.length === 9 ? numbers : [numbers[0]!, 0, 0, 0, numbers[1]!, 0, 0, 0, numbers[2]!],
  );
  return { vectorsA, periodic: periodic ?? [true, true, true], span: lattice.value };
}

function readPeriodic(
  text: Snapshot,
  entries: readonly Entry[],
  problems: FindingCollector,
): readonly [boolean, boolean, boolean] | null {
  const entry = entries.find((candidate) => candidate.key === 'pbc');
  if (entry === undefined) return null;
  const flags = listItems(text, entry).map((item) =>
    readBoolean(text.slice(item.start, Math.min(item.end, item.start + 8))),
  );
  if (flags.length !== 3 || flags.includes(undefined)) {
    const meant = meantPeriodicity(text.slice(entry.inner.start, Math.min(entry.inner.end, entry.inner.start + 40)));
    problems.add(
      'value-invalid',
      entry.value,
      () => 'pbc needs three flags, each T or F.',
      () => replacement(entry.value, meant === null ? null : `"${meant}"`),
    );
    return null;
  }
  return [flags[0] === true, flags[1] === true, flags[2] === true];
}
