import type { CoordinateTree, FrameTree } from '../formats/tree';

/** The frame that holds a line, or `undefined` between frames. */
export function frameAtLine(file: CoordinateTree, line: number): FrameTree | undefined {
  let low = 0;
  let high = file.frames.length - 1;
  while (low <= high) {
    const middle = (low + high) >> 1;
    const frame = file.frames[middle]!;
    if (line < frame.firstLine) high = middle - 1;
    else if (line >= frame.endLine) low = middle + 1;
    else return frame;
  }
  return undefined;
}

/** The frame (from 0) that an offset speaks of, −1 where it speaks of none. */
export function frameIndexAt(file: CoordinateTree, offset: number): number {
  const line = file.lines.lineAt(offset);
  const tree = frameAtLine(file, line);
  if (tree !== undefined) return tree.index;
  // A REMARK stands before the models; the first of them shows what it does.
  return file.frames.length > 0 && file.remarks.some((remark) => remark.line === line) ? 0 : -1;
}

/** The frame (from 0) that a cursor on a line means: the one around it, else the one before, else the first; −1 where there is none. */
export function frameIndexNear(file: CoordinateTree, line: number): number {
  const around = frameAtLine(file, line);
  if (around !== undefined) return around.index;
  const before = file.frames.filter(({ firstLine }) => firstLine <= line).length - 1;
  return file.frames.length === 0 ? -1 : Math.max(0, before);
}
