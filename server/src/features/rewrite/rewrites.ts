import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { Finding, TextEdit } from '../../base/finding';
import { atomAtLine } from '../../formats/reread';
import type { CoordinateTree } from '../../formats/tree';
import { type EnergyUnit, energyUnitsPerKJPerMol } from '../../physics/units';
import { fragmentWords } from '../remedies/remedy';
import { addDipolesEdits } from './add-dipoles';
import { headerEdits } from './insert-header';
import { moveFrom } from './move-fragment';
import { turnTowardStrongest } from './turn-fragment';

/** What a rewriting does, as editors tell kinds of it apart. */
export const REWRITE_KINDS = ['turn', 'move', 'header', 'dipoles'] as const;
export type RewriteKind = (typeof REWRITE_KINDS)[number];

/** A change that acts on a result: it is looked at before it is made. */
export interface Rewrite {
  readonly kind: RewriteKind;
  readonly title: string;
  edits(): readonly TextEdit[];
}

/** A frame of more fragments is annotated only where that is asked for by name. */
const MOST_FRAGMENTS = 2000;

/** The rewritings at an offset: of the fragment that stands there, and of the frame where its head does. */
export function rewritesAt(
  file: CoordinateTree,
  frame: FrameAnalysis,
  findings: readonly Finding[],
  offset: number,
  unit: EnergyUnit,
  wants: (kind: RewriteKind) => boolean,
): Rewrite[] {
  const rewrites: Rewrite[] = [];
  const fragment = fragmentAt(file, frame, offset);
  if (fragment >= 0 && wants('turn')) rewrites.push(...turns(file, frame, fragment, unit));
  if (fragment >= 0 && wants('move')) rewrites.push(...moves(file, frame, findings, fragment));
  if (isAtHead(file, frame, offset) && frame.model.fragments.count <= MOST_FRAGMENTS) {
    if (wants('header')) rewrites.push(...whole('header', 'Insert an annotated header', headerEdits(file, frame)));
    if (wants('dipoles')) {
      rewrites.push(
        ...whole('dipoles', 'Add dipoles for all fragments from the best source', addDipolesEdits(file, frame)),
      );
    }
  }
  return rewrites;
}

/** The fragment of the atom line or of the annotation at an offset, −1 where there is none. */
function fragmentAt(file: CoordinateTree, { model }: FrameAnalysis, offset: number): number {
  const atom = atomAtLine(model.tree, file.lines.lineAt(offset));
  if (atom >= 0) return model.fragments.ofAtom[atom]!;
  const holds = (span: { start: number; end: number } | undefined) =>
    span !== undefined && offset >= span.start && offset <= span.end;
  return model.notes.findIndex(
    ({ writtenDipole, writtenSize, axis }) =>
      holds(writtenDipole?.span) || holds(writtenSize?.span) || holds(axis?.span),
  );
}

function isAtHead(file: CoordinateTree, { model }: FrameAnalysis, offset: number): boolean {
  const line = file.lines.lineAt(offset);
  const { firstLine, headLine, index } = model.tree;
  if (line === firstLine || line === headLine) return true;
  return index === 0 && file.remarks.some((remark) => remark.line === line);
}

function turns(file: CoordinateTree, frame: FrameAnalysis, fragment: number, unit: EnergyUnit): Rewrite[] {
  const turn = turnTowardStrongest(file, frame, fragment);
  if (turn === null) return [];
  const per = energyUnitsPerKJPerMol(unit, frame.system.kTKJPerMol);
  const [before, after] = [turn.beforeKJPerMol, turn.afterKJPerMol].map((energy) => numeral(energy * per));
  const names = `${fragmentWords(frame, fragment)} to its most attractive orientation toward ${fragmentWords(frame, turn.partner)}`;
  return [{ kind: 'turn', title: `Turn ${names} (${before} → ${after} ${unit})`, edits: turn.edits }];
}

function numeral(value: number): string {
  return value.toPrecision(3).replace('-', '−');
}

function moves(file: CoordinateTree, frame: FrameAnalysis, findings: readonly Finding[], fragment: number): Rewrite[] {
  const { firstLine, endLine } = frame.model.tree;
  const [from, to] = [file.lines.starts[firstLine]!, file.lines.starts[endLine]!];
  const clash = findings.find(
    ({ code, start, pairs }) =>
      code === 'clash' && start >= from && start < to && pairs?.some((pair) => pair.includes(fragment)),
  );
  const [f, g] = clash?.pairs?.[0] ?? [-1, -1];
  if (f < 0) return [];
  const move = moveFrom(file, frame, fragment, f === fragment ? g : f);
  if (move === null) return [];
  const title = `Move ${fragmentWords(frame, fragment)} ${move.distanceA.toFixed(2)} Å out of the clash`;
  return [{ kind: 'move', title, edits: move.edits }];
}

function whole(kind: RewriteKind, title: string, edits: readonly TextEdit[] | string): Rewrite[] {
  return typeof edits === 'string' ? [] : [{ kind, title, edits: () => edits }];
}
