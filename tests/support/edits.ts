import type { TextEdit } from '../../server/src/base/finding';

/** A text after some edits of it, which must not touch one another. */
export function edited(text: string, edits: readonly TextEdit[]): string {
  const sorted = [...edits].sort((a, b) => b.start - a.start);
  for (const [k, edit] of sorted.entries()) {
    if (edit.end < edit.start || (k > 0 && edit.end > sorted[k - 1]!.start))
      throw new Error('Edits touch one another.');
  }
  return sorted.reduce(
    (result, { start, end, text: piece }) => result.slice(0, start) + piece + result.slice(end),
    text,
  );
}
