import { FindingCollector } from '../base/finding';
import type { Snapshot } from '../text/snapshot';
import { AtomFlag, type CoordinateTree } from './tree';

const SAMPLE = 4096;

/** Whether the beginning of a text looks like a binary file: NUL bytes, or more than a tenth unprintable. */
function looksBinary(text: Snapshot): boolean {
  const end = Math.min(text.length, SAMPLE);
  let strange = 0;
  for (let i = 0; i < end; i++) {
    const unit = text.bytes[i]!;
    if (unit === 0) return true;
    if ((unit < 32 && unit !== 9 && unit !== 10 && unit !== 13 && unit !== 12) || unit === 0x80) strange++;
  }
  return strange > end / 10;
}

/** Completes a tree: of a text without a single readable atom it says what it is instead, and of a binary file only that. */
export function finishTree(tree: Omit<CoordinateTree, 'problems'>, problems: FindingCollector): CoordinateTree {
  if (tree.frames.some((frame) => frame.atoms.flags.some(isReadable))) return { ...tree, problems: problems.list() };
  const { text } = tree;
  const span = { start: 0, end: firstLineEnd(text) };
  if (looksBinary(text)) {
    const only = new FindingCollector();
    only.add('not-text', span, () => 'The file holds NUL bytes or mostly unprintable characters.');
    return { ...tree, frames: [], problems: only.list() };
  }
  problems.add('no-frame', span, () =>
    text.length === 0 ? 'The file is empty.' : 'No line of the file reads as an atom.',
  );
  const frames = tree.frames.filter((frame) => frame.atoms.count > 0);
  // Without a single atom line a count that is not kept is no cause of its own.
  const list = problems.list().filter((problem) => frames.length > 0 || problem.code !== 'count-wrong');
  return { ...tree, frames, problems: list };
}

function isReadable(flags: number): boolean {
  return (flags & (AtomFlag.unknownElement | AtomFlag.noPosition)) === 0;
}

function firstLineEnd(text: Snapshot): number {
  let end = 0;
  while (end < text.length && end < 200 && text.bytes[end] !== 10 && text.bytes[end] !== 13) end++;
  return end;
}
