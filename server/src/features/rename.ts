import type { TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import { listWords } from '../formats/annotation/lists';
import { selectorMatches } from '../formats/pdb/remarks';
import { atomAtLine } from '../formats/reread';
import type { CoordinateTree, FrameTree } from '../formats/tree';
import { isBlank, skipBlanks, skipField } from '../text/numbers';
import { type Annotated, holds, itemsOfEntry, residuesOfFragment, spanAt } from './mentions';

/** A name that can be changed: what stands there now, and the edits that put another one. */
export interface Renaming {
  /** What at the cursor is marked while it is renamed. */
  readonly span: Span;
  readonly name: string;
  edits(name: string): TextEdit[];
  /** Why another name will not do; `null` where it will. */
  refusal(name: string): string | null;
}

export const NOTHING_TO_RENAME =
  'There is no fragment name here. Names stand in fragment_names, in a fragment column, and in name= of a REMARK.';
const LONGEST_NAME = 60;

/** The fragment name at an offset: in the annotation, or that of the fragment whose atom stands there. `null` where there is none. */
export function renamingAt(annotated: Annotated, offset: number): Renaming | null {
  const { file, model } = annotated;
  const written = nameEntryAt(annotated, offset);
  if (written !== null) return written;
  const atom = atomAtLine(model.tree, file.lines.lineAt(offset));
  const f = atom < 0 ? -1 : model.fragments.ofAtom[atom]!;
  if (f < 0) return null;
  const { groups, atoms } = model.tree;
  const column = groups?.areWords ? model.tree.fieldSpan(atom, 'group') : null;
  const own = file.language === 'pdb' ? nameOfResidues(annotated, f) : listedName(file, model.tree, f);
  const isOnColumn = column !== null && holds(column, offset);
  if (own !== null && !isOnColumn) return { ...own, span: model.tree.fieldSpan(atom, 'name') };
  if (column === null) return null;
  return renamedGroup(file, column, groups!.names[atoms.group![atom]!]!);
}

function nameEntryAt({ file, model }: Annotated, offset: number): Renaming | null {
  const line = file.lines.lineAt(offset);
  const remark = file.remarks.find((candidate) => candidate.line === line && candidate.selector !== null);
  const name = remark?.entries.find(({ key, value }) => key === 'name' && holds(value, offset));
  if (name !== undefined) return renamedSpan(file, name.inner, [name.inner]);
  const list = model.tree.entries.find(({ key }) => key === 'fragment_names');
  if (list === undefined || !holds(list.value, offset)) return null;
  const words = itemsOfEntry(file.text, list);
  const word = spanAt(words, offset);
  return word === undefined ? null : listedName(file, model.tree, words.indexOf(word));
}

/** The name that a list gives a fragment; other frames that give the same one at the same place are renamed with it. */
function listedName(file: CoordinateTree, tree: FrameTree, f: number): Renaming | null {
  const { text } = file;
  const wordOf = ({ entries }: FrameTree) => {
    const list = entries.find(({ key }) => key === 'fragment_names');
    return list === undefined ? undefined : listWords(text, list)[f];
  };
  // A frame that has no list of its own goes by that of the first.
  const holder = tree.entries.some(({ key }) => key === 'fragment_names') ? tree : file.frames[0]!;
  const span = wordOf(holder);
  if (span === undefined) return null;
  const name = text.slice(span.start, span.end);
  if (name.toLowerCase() === 'nan') return null;
  const places = file.frames.flatMap((frame) => {
    const word = wordOf(frame);
    return word !== undefined && text.slice(word.start, word.end) === name ? [word] : [];
  });
  return renamedSpan(file, span, places);
}

function nameOfResidues({ file, model }: Annotated, f: number): Renaming | null {
  const residues = residuesOfFragment(model, f);
  const name = model.notes[f]?.name;
  if (name == null) return null;
  for (const { selector, entries } of file.remarks) {
    if (selector === null || !residues.some((residue) => selectorMatches(selector, residue))) continue;
    const entry = entries.find(({ key }) => key === 'name');
    if (entry !== undefined && file.text.slice(entry.inner.start, entry.inner.end).trim() === name) {
      return renamedSpan(file, entry.inner, [entry.inner]);
    }
  }
  return null;
}

function renamedSpan({ text }: CoordinateTree, span: Span, places: readonly Span[]): Renaming {
  return {
    span,
    name: text.slice(span.start, span.end),
    refusal,
    edits: (name) => places.map((place) => ({ ...place, text: name })),
  };
}

/** Why a word cannot name a fragment in a list or a column; `null` where it can. */
function refusal(name: string): string | null {
  if (name === '') return 'A fragment name cannot be empty.';
  if (name.length > LONGEST_NAME) return `A fragment name has at most ${LONGEST_NAME} characters.`;
  if (/\s/.test(name)) return 'A fragment name cannot hold blanks: they part the names of a list.';
  const [wrong] = /["',=[\]{}\\]/.exec(name) ?? [];
  if (wrong !== undefined) return `A fragment name cannot hold ${wrong}, which has a meaning in the annotation.`;
  if (name.toLowerCase() === 'nan') return '"nan" stands for a name that is not given.';
  return null;
}

/** A value of the fragment column in every frame that has it: the fragment goes by it. */
function renamedGroup(file: CoordinateTree, span: Span, old: string): Renaming {
  const frames = file.frames.filter(({ groups }) => groups?.areWords && groups.names.includes(old));
  return {
    span,
    name: old,
    refusal: (name) => {
      const reason = refusal(name);
      if (reason !== null) return reason;
      if (/^[+-]?\d+$/.test(name)) return 'In a fragment column a number is no name.';
      const isTaken = name !== old && frames.some(({ groups }) => groups!.names.includes(name));
      return isTaken ? `There is a fragment "${name}" already; the two would become one.` : null;
    },
    edits: (name) => frames.flatMap((frame) => groupEdits(file, frame, old, name)),
  };
}

function groupEdits(file: CoordinateTree, frame: FrameTree, old: string, name: string): TextEdit[] {
  const { atoms } = frame;
  const index = frame.groups!.names.indexOf(old);
  const isRight = isAlignedRight(file, frame, index);
  const edits: TextEdit[] = [];
  for (let atom = 0; atom < atoms.count; atom++) {
    if (atoms.group![atom] !== index) continue;
    edits.push(fittedEdit(file, atoms.line[atom]!, frame.fieldSpan(atom, 'group'), name, isRight));
  }
  return edits;
}

/** Whether values of other lengths end in the same column and do not begin in the same. */
function isAlignedRight(file: CoordinateTree, frame: FrameTree, index: number): boolean {
  const { atoms } = frame;
  const columnsOf = (atom: number) => {
    const { start, end } = frame.fieldSpan(atom, 'group');
    const lineStart = file.lines.starts[atoms.line[atom]!]!;
    return { start: start - lineStart, end: end - lineStart };
  };
  const own = columnsOf(atoms.group!.indexOf(index));
  for (let atom = 0; atom < atoms.count; atom++) {
    if (atoms.group![atom] === index) continue;
    const other = columnsOf(atom);
    if (other.end - other.start !== own.end - own.start) return other.end === own.end;
  }
  return false;
}

/** Puts a word of another length in place of one, taking from or giving to the blanks beside it so that nothing else moves. */
function fittedEdit(
  file: CoordinateTree,
  line: number,
  { start, end }: Span,
  name: string,
  isRight: boolean,
): TextEdit {
  const { bytes } = file.text;
  const lineEnd = file.lines.end(line);
  if (isRight) {
    let from = start;
    while (from > file.lines.starts[line]! && isBlank(bytes[from - 1]!)) from--;
    // One blank stays before it.
    const room = end - from - 1;
    return { start: from + 1, end, text: name.padStart(room) };
  }
  const next = skipBlanks(bytes, end, lineEnd);
  const isLast = next === skipField(bytes, next, lineEnd);
  return isLast ? { start, end, text: name } : { start, end: next - 1, text: name.padEnd(next - 1 - start) };
}
