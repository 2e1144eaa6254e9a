import { scanNumber, skipBlanks, skipField } from '../../text/numbers';
import type { IndexedText } from '../../text/splice';
import { readSpecies } from '../species';
import { AtomFlag, type AtomReading, type FrameTree } from '../tree';
import { fieldOfAtom } from './atom-lines';
import { ColumnOp, type ColumnPlan } from './columns';

/** What of a frame is the same in every text that holds it. */
export type XyzFrameContent = Omit<FrameTree, 'fieldSpan' | 'readAtom' | 'inText'>;

/** A frame whose atom lines are read by a plan. */
export function xyzFrame(content: XyzFrameContent, { snapshot, lines }: IndexedText, plan: ColumnPlan): FrameTree {
  const { atoms } = content;
  return {
    ...content,
    fieldSpan: (atom, field) => fieldOfAtom(snapshot, lines, atoms.line[atom]!, plan, field),
    readAtom: (atom) => readAtomLine({ snapshot, lines }, atoms.line[atom]!, plan),
    inText: (text, newLines) => xyzFrame(content, { snapshot: text, lines: newLines }, plan),
  };
}

/** Symbol or number and three coordinates lead the line: then it reads as an atom whatever its numbers are. */
function isLedByAtom({ ops }: ColumnPlan): boolean {
  const isSpecies = ops[0] === ColumnOp.species || ops[0] === ColumnOp.atomicNumber;
  return isSpecies && ops[1] === ColumnOp.x && ops[2] === ColumnOp.y && ops[3] === ColumnOp.z;
}

/** Reads a line that has exactly the fields of the plan and all its numbers, else `null`. */
function readAtomLine({ snapshot, lines }: IndexedText, line: number, plan: ColumnPlan): AtomReading | null {
  const { bytes } = snapshot;
  const { ops } = plan;
  if (!isLedByAtom(plan)) return null;
  const end = lines.end(line);
  const position: [number, number, number] = [0, 0, 0];
  const dipole: [number, number, number] = [0, 0, 0];
  let charge: number | null = null;
  let rest = '';
  let at = skipBlanks(bytes, lines.starts[line]!, end);
  for (let column = 0; column < ops.length; column++) {
    const start = at;
    at = skipField(bytes, start, end);
    if (at === start) return null;
    const op = ops[column]!;
    const isNumber = (op >= ColumnOp.x && op <= ColumnOp.z) || op === ColumnOp.charge || op >= ColumnOp.dipoleX;
    const value = isNumber ? scanNumber(snapshot, start, at) : 0;
    if (!Number.isFinite(value)) return null;
    if (!isNumber) rest += `${snapshot.slice(start, at)} `;
    if (op === ColumnOp.species && (readSpecies(snapshot, start, at) >> 8) & AtomFlag.unknownElement) return null;
    if (op >= ColumnOp.x && op <= ColumnOp.z) position[(op - ColumnOp.x) as 0] = value;
    else if (op === ColumnOp.charge) charge = value;
    else if (op >= ColumnOp.dipoleX) dipole[(op - ColumnOp.dipoleX) as 0] = value;
    at = skipBlanks(bytes, at, end);
  }
  if (at < end) return null;
  return { positionA: position, chargeE: charge, dipoleEA: plan.hasDipole ? dipole : null, rest };
}
