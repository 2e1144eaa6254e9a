import type { TextEdit } from '../../base/finding';
import type { CoordinateTree, FrameTree } from '../../formats/tree';
import { findMedium } from '../../physics/media';
import { readQuantity } from '../../physics/quantity';
import { CommentLine } from './comment-line';
import { remarkInsertion } from './remark-lines';

export type FileSetting = 'temperature' | 'relative_permittivity';

/** What is wrong with a value for a setting of a file, in a sentence; `null` where it can be read. */
export function settingProblem(key: FileSetting, value: string): string | null {
  if (/["\\\r\n]/.test(value)) return 'A value holds no quotes and no line end.';
  if (key === 'temperature') {
    const temperature = readQuantity(value, 'temperatureK');
    if (!temperature.ok) return `"${value}" is no temperature. ${temperature.reason}`;
    return temperature.value > 0 ? null : 'The temperature must be above 0 K.';
  }
  if (findMedium(value) !== undefined) return null;
  const number = readQuantity(value, 'number');
  return number.ok && number.value >= 1 ? null : `"${value}" is no number from 1 up and no known medium.`;
}

/** Sets temperature or medium: in the comment line of a frame of an XYZ file, in a remark of a PDB file for all of it. */
export function fileSettingEdits(
  file: CoordinateTree,
  frame: FrameTree,
  key: FileSetting,
  value: string,
): readonly TextEdit[] | string {
  const plain = value.trim();
  const problem = settingProblem(key, plain);
  if (problem !== null) return problem;
  if (file.language !== 'pdb') {
    const line = new CommentLine(file, frame);
    line.set(key, plain);
    return line.edits();
  }
  const text = /^[^\s"'=,[\]{}]+$/.test(plain) ? plain : `"${plain}"`;
  const entry = file.remarks
    .filter(({ selector }) => selector === null)
    .flatMap(({ entries }) => entries)
    .find((candidate) => candidate.key === key);
  return entry === undefined ? [remarkInsertion(file, [`${key}=${text}`])] : [{ ...entry.value, text }];
}
