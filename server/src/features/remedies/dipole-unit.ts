import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import type { CoordinateTree } from '../../formats/tree';
import type { WrittenDipole } from '../../model/annotation';
import { DEBYE_E_A } from '../../physics/constants';
import { DIPOLE_UNITS } from '../../physics/units';
import { CommentLine } from '../rewrite/comment-line';
import { norm, type Vector, vectorAt } from '../rewrite/vectors';
import { offered, type RemedyMaker } from './remedy';

/** Two factors are the same within this share. */
const SAME_SHARE = 0.07;
/** Smaller dipoles tell nothing of their unit, e·Å. */
const SMALLEST_EA = 0.3 * DEBYE_E_A;

/** Names the unit that the numbers are in, where all dipoles that it holds for are off by the factor between that and the one named. */
export const nameUnit: RemedyMaker = ({ start }, { file, frame }) => {
  const { notes } = frame.model;
  const f = notes.findIndex((note) => (note.writtenDipole ?? note.writtenSize)?.span.start === start);
  const written = notes[f]?.writtenDipole ?? notes[f]?.writtenSize;
  if (!written) return [];
  const units = [...DIPOLE_UNITS.keys()].filter(
    (unit) => unit !== written.unit && holdsForAll(file, frame, written, unit),
  );
  if (units.length !== 1) return [];
  return offered(`Set dipole_unit to ${units[0]}`, unitEdits(file, frame, written, units[0]!));
};

/** The dipole that one of the file is compared with: of its charges, else the published or estimated one. */
export function comparedWith({ moments }: FrameAnalysis, f: number): Vector {
  const hasCharges = !Number.isNaN(moments.columnChargeE[f]!);
  return vectorAt(hasCharges ? moments.columnDipoleEA : moments.expectedEA, f);
}

function holdsForAll(file: CoordinateTree, frame: FrameAnalysis, written: WrittenDipole, unit: string): boolean {
  const { notes } = frame.model;
  const scale = DIPOLE_UNITS.get(unit)! / DIPOLE_UNITS.get(written.unit)!;
  return notes.every((note, f) => {
    const own = note.writtenDipole ?? note.writtenSize;
    if (own === null || !sharesUnit(file, written, own)) return true;
    const size = frame.moments.dipoleNormEA[f]!;
    const compared = norm(comparedWith(frame, f));
    if (size < SMALLEST_EA * Math.min(1, 1 / scale) && compared < SMALLEST_EA) return true;
    return Math.abs((scale * size) / compared - 1) <= SAME_SHARE;
  });
}

/** Whether two dipoles take their unit from one place: a comment line; a remark. A number with a unit behind it has its own. */
function sharesUnit({ text, lines, language }: CoordinateTree, a: WrittenDipole, b: WrittenDipole): boolean {
  const hasOwn = b.items.some(({ start, end }) => !/^[+-]?[\d.]+(?:[eEdD][+-]?\d+)?$/.test(text.slice(start, end)));
  if (hasOwn) return false;
  return language !== 'pdb' || lines.lineAt(a.span.start) === lines.lineAt(b.span.start);
}

function unitEdits(
  file: CoordinateTree,
  frame: FrameAnalysis,
  written: WrittenDipole,
  unit: string,
): readonly TextEdit[] | string {
  if (file.language !== 'pdb') {
    const line = new CommentLine(file, frame.model.tree);
    line.set('dipole_unit', unit);
    return line.edits();
  }
  const remark = file.remarks.find(({ line }) => line === file.lines.lineAt(written.span.start));
  const entry = remark?.entries.find(({ key }) => key === 'dipole_unit');
  if (entry !== undefined) return [{ ...entry.value, text: unit }];
  const { end } = written.span;
  return [{ start: end, end, text: ` dipole_unit=${unit}` }];
}
