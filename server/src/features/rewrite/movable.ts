import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { CoordinateTree } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';

/** A fragment of more atoms is not moved as a whole by an edit. */
const MOST_ATOMS = 2000;
/** Columns of a PDB line that tell the residue. */
const RESIDUE_COLUMNS = [17, 27] as const;

/**
 * Whether all of a fragment can be moved by rewriting its lines: it is whole, not cut from a chain, and no line of it was left out.
 *
 * @param turning whether it is turned: then a line that holds its anisotropy would be left behind as well
 */
export function isMovable(
  file: CoordinateTree,
  { model, system }: FrameAnalysis,
  fragment: number,
  turning: boolean,
): boolean {
  const members = atomsOf(model.fragments, fragment);
  if (!model.usable[fragment] || members.length > MOST_ATOMS || system.chains.isCut(fragment)) return false;
  return (
    file.language !== 'pdb' ||
    !hasLinesLeftOut(file, model.tree.atoms.line, members, turning ? /^(?:ATOM|HETATM|ANISOU)/ : /^(?:ATOM|HETATM)/)
  );
}

/** Whether lines of the same residues stand beside those of some atoms: alternate locations, anisotropy. */
function hasLinesLeftOut(
  { text, lines }: CoordinateTree,
  lineOf: Uint32Array,
  members: Int32Array,
  records: RegExp,
): boolean {
  const own = new Set<number>();
  const residues = new Set<string>();
  const residueAt = (line: number) => {
    const start = lines.starts[line]!;
    return text.slice(start + RESIDUE_COLUMNS[0], Math.min(start + RESIDUE_COLUMNS[1], lines.end(line)));
  };
  for (const atom of members) {
    own.add(lineOf[atom]!);
    residues.add(residueAt(lineOf[atom]!));
  }
  const isLeftOut = (line: number) =>
    line >= 0 &&
    line < lines.count &&
    !own.has(line) &&
    records.test(text.slice(lines.starts[line]!, lines.starts[line]! + 6)) &&
    residues.has(residueAt(line));
  for (const line of own) if (isLeftOut(line - 1) || isLeftOut(line + 1)) return true;
  return false;
}
