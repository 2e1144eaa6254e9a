import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import { listGroups, listItems } from '../../formats/annotation/lists';
import type { CoordinateTree } from '../../formats/tree';
import type { WrittenDipole } from '../../model/annotation';
import { dipoleUnitEA } from '../../physics/units';
import { axisAlong, type NamedAxis } from '../rewrite/axes';
import { CommentLine } from '../rewrite/comment-line';
import { significant } from '../rewrite/digits';
import { norm } from '../rewrite/vectors';
import { comparedWith } from './dipole-unit';
import { offered, type RemedyMaker } from './remedy';

/** An axis describes a direction within this, degrees. */
const WITHIN_DEG = 5;

/** Writes a vector of another orientation as its size and an axis, which follows the atoms. */
export const sizeAndAxis: RemedyMaker = ({ start }, { file, frame }) => {
  const { notes, fragments } = frame.model;
  const f = notes.findIndex(({ writtenDipole }) => writtenDipole?.span.start === start);
  const written = notes[f]?.writtenDipole;
  const dipoleEA = notes[f]?.dipoleEA;
  if (!written || !dipoleEA || notes.some((note, g) => g !== f && note.writtenDipole?.span.start === start)) return [];
  const axis = axisAlong(frame, f, comparedWith(frame, f), WITHIN_DEG);
  if (axis === null || fragments.count > 1000) return [];
  const scale = dipoleUnitEA(written.unit)!;
  const texts = written.items.map((item) => file.text.slice(item.start, item.end));
  const size = significant(norm(dipoleEA) / scale, texts, norm(dipoleEA) / scale);
  const title = `Give it as a size of ${size} along ${axis.text}, which follows the atoms`;
  const edits =
    file.language === 'pdb' ? inRemark(file, written, size, axis) : inComment(file, frame, f, written, size, axis);
  return offered(title, edits);
};

function inRemark(file: CoordinateTree, written: WrittenDipole, size: string, axis: NamedAxis): TextEdit[] | null {
  const remark = file.remarks.find(({ line }) => line === file.lines.lineAt(written.span.start));
  const entry = remark?.entries.find(({ value }) => value.start === written.span.start);
  if (entry === undefined || remark!.entries.some(({ key }) => key === 'axis' || key === 'dipole_size')) return null;
  return [{ start: entry.keySpan.start, end: entry.value.end, text: `dipole_size=${size} axis=${axis.text}` }];
}

function inComment(
  file: CoordinateTree,
  frame: FrameAnalysis,
  f: number,
  written: WrittenDipole,
  size: string,
  axis: NamedAxis,
): readonly TextEdit[] | string | null {
  const { count } = frame.model.fragments;
  const line = new CommentLine(file, frame.model.tree);
  for (const item of written.items) line.replace({ ...item, text: 'nan' });
  const numbers = (atoms: readonly number[]) => atoms.map((atom) => atom + 1).join(',');
  const values = [
    ['fragment_dipole_sizes', size, listItems],
    ['fragment_axes', `${numbers(axis.before)}>${numbers(axis.after)}`, listGroups],
  ] as const;
  for (const [key, value, split] of values) {
    const entry = line.entry(key);
    const items = entry === undefined ? null : split(file.text, entry);
    if (items === null) line.set(key, Array.from({ length: count }, (_, g) => (g === f ? value : 'nan')).join(' '));
    else if (items.length === count) line.replace({ ...items[f]!, text: value });
    else return null;
  }
  return line.edits();
}
