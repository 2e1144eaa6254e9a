import type { LineIndex } from './lines';
import type { Snapshot } from './snapshot';

/** How the lines of a text end: as its first one does; a line feed where it has one line only. */
export function lineEndOf(text: Snapshot, lines: LineIndex): string {
  return text.slice(lines.end(0), lines.starts[1]!) || '\n';
}
