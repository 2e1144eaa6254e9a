import type { Span } from '../base/span';
import type { Entry } from '../formats/annotation/entries';
import { listGroups, listItems, listWords } from '../formats/annotation/lists';
import { selectorMatches } from '../formats/pdb/remarks';
import type { CoordinateTree, FrameTree, RemarkAnnotation, Residue, Selector } from '../formats/tree';
import { INHERITED_KEYS, LISTED_KEYS } from '../model/annotate-xyz';
import { canonicalFormula } from '../model/formula';
import { atomsInRanges, rangesOf } from '../model/fragment-list';
import { atomsOf } from '../model/fragment-set';
import { type FrameModel, sameElements } from '../model/frame-model';
import { atomicNumberOf } from '../physics/elements';
import type { Snapshot } from '../text/snapshot';

/** A piece of an annotation that speaks of fragments of a frame, or of some of their atoms. */
export interface Mention {
  readonly span: Span;
  readonly key: string;
  /** From 0, ascending. */
  readonly fragments: readonly number[];
  /** The atoms it names one by one (from 0, ascending); `null` where it speaks of the fragments as a whole. */
  readonly atoms: readonly number[] | null;
}

/** Where and of what frame an annotation is asked about. */
export interface Annotated {
  readonly file: CoordinateTree;
  readonly model: FrameModel;
}

/** Keys whose items are told apart by blanks, so that a comma stays within one. */
const GROUPED_KEYS: ReadonlySet<string> = new Set([
  'fragment_atoms',
  'fragment_axes',
  'kind_dipole_sizes',
  'kind_axes',
]);

/** The items of a list key, one for each thing that it speaks of: a vector is one item. Empty for any other key. */
export function itemsOfEntry(text: Snapshot, entry: Entry): Span[] {
  const { key } = entry;
  if (key === 'fragment_names') return listWords(text, entry);
  if (GROUPED_KEYS.has(key)) return listGroups(text, entry);
  if (!LISTED_KEYS.has(key)) return [];
  const items = listItems(text, entry);
  if (key !== 'fragment_dipoles') return items;
  const vectors: Span[] = [];
  for (let k = 0; k < items.length; k += 3) {
    vectors.push({ start: items[k]!.start, end: items[Math.min(k + 2, items.length - 1)]!.end });
  }
  return vectors;
}

/** Whether an offset lies in a span, or right behind it. */
export function holds({ start, end }: Span, offset: number): boolean {
  return offset >= start && offset <= end;
}

/** Of spans side by side the one that holds an offset; behind one and at the start of the next the next. */
export function spanAt<T extends Span>(spans: readonly T[], offset: number): T | undefined {
  let found: T | undefined;
  for (const span of spans) {
    if (span.start > offset) break;
    if (holds(span, offset)) found = span;
  }
  return found;
}

/** What the annotation at an offset speaks of; `null` where it speaks of no fragment. */
export function mentionAt({ file, model }: Annotated, offset: number): Mention | null {
  const line = file.lines.lineAt(offset);
  const remark = file.remarks.find((candidate) => candidate.line === line);
  if (remark !== undefined) return mentionInRemark({ file, model }, remark, offset);
  const entry = model.tree.entries.find(({ value }) => holds(value, offset));
  if (entry === undefined || isRepeated(model.tree.entries, entry)) return null;
  const items = itemsOfEntry(file.text, entry);
  const span = spanAt(items, offset);
  return span === undefined ? null : mentionOfItem({ file, model }, entry, items.indexOf(span), span, offset);
}

/** Of a key given twice the first counts. */
function isRepeated(entries: readonly Entry[], entry: Entry): boolean {
  return entries.find(({ key }) => key === entry.key) !== entry;
}

function mentionOfItem(
  { file, model }: Annotated,
  { key }: Entry,
  index: number,
  span: Span,
  offset: number,
): Mention | null {
  const { text } = file;
  const { fragments, formulas } = model;
  if (key.startsWith('kind_')) {
    const formula = kindOf(text, span);
    const kind = [...formulas.keys()].filter((f) => formulas[f] === formula);
    return kind.length === 0 ? null : { span, key, fragments: kind, atoms: null };
  }
  if (key === 'fragment_atoms') {
    const group = rangesIn(model, text, span);
    const f = groupFragment(model, text, span);
    const range = spanAt(
      group.map((entry) => ({ ...entry.span, ...entry })),
      offset,
    );
    if (range !== undefined) return ofAtoms(model, range.span, key, atomsInRanges([range]));
    return f < 0 ? null : { span, key, fragments: [f], atoms: null };
  }
  if (key === 'fragment_axes') {
    const named = spanAt(
      sidesOf(text, span).flatMap((side) => rangesIn(model, text, side).map((entry) => ({ ...entry.span, ...entry }))),
      offset,
    );
    if (named !== undefined) return ofAtoms(model, named.span, key, atomsInRanges([named]));
  }
  return index < fragments.count ? { span, key, fragments: [index], atoms: null } : null;
}

function ofAtoms({ fragments }: FrameModel, span: Span, key: string, atoms: readonly number[]): Mention | null {
  const of = new Set(atoms.map((atom) => fragments.ofAtom[atom]!).filter((f) => f >= 0));
  return atoms.length === 0 ? null : { span, key, fragments: [...of].sort((a, b) => a - b), atoms };
}

/** The composition that an item `H2O:…` speaks of. */
function kindOf(text: Snapshot, { start, end }: Span): string | undefined {
  const words = text.slice(start, end);
  return canonicalFormula(words.slice(0, Math.max(0, words.indexOf(':'))));
}

/** The numbers and ranges of a group that are atoms of the frame. */
function rangesIn({ tree }: FrameModel, text: Snapshot, group: Span) {
  return rangesOf(text, group).filter(({ from, to }) => from >= 1 && to >= from && to <= tree.atoms.count);
}

/** The fragment that a group of atom numbers makes: that of its first atom, −1 where it has none. */
function groupFragment(model: FrameModel, text: Snapshot, group: Span): number {
  const [first] = rangesIn(model, text, group);
  return first === undefined ? -1 : model.fragments.ofAtom[first.from - 1]!;
}

/** Both sides of an axis. */
export function sidesOf(text: Snapshot, { start, end }: Span): Span[] {
  const mark = text.slice(start, end).indexOf('>');
  if (mark < 0) return [{ start, end }];
  return [
    { start, end: start + mark },
    { start: start + mark + 1, end },
  ];
}

function mentionInRemark({ file, model }: Annotated, remark: RemarkAnnotation, offset: number): Mention | null {
  const { selector, selectorSpan, entries } = remark;
  if (selector === null) return null;
  const fragments = selectedFragments(model, selector);
  if (fragments.length === 0) return null;
  if (holds(selectorSpan, offset)) return { span: selectorSpan, key: 'fragment', fragments, atoms: null };
  const entry = entries.find(({ value }) => holds(value, offset));
  if (entry === undefined) return null;
  const { key, inner, value } = entry;
  const name = key === 'axis' ? spanAt(namesOfAxis(file.text, inner), offset) : undefined;
  if (name === undefined) return { span: value, key, fragments, atoms: null };
  const atoms = fragments.flatMap((f) => atomsNamed(model, f, file.text.slice(name.start, name.end)));
  return { span: name, key, fragments, atoms: atoms.sort((a, b) => a - b) };
}

/** The atom names of an axis. */
export function namesOfAxis({ bytes }: Snapshot, { start, end }: Span): Span[] {
  const names: Span[] = [];
  const parts = (unit: number) => unit === 0x2c || unit === 0x3e || unit === 0x20;
  for (let i = start; i < end; ) {
    while (i < end && parts(bytes[i]!)) i++;
    const from = i;
    while (i < end && !parts(bytes[i]!)) i++;
    if (i > from) names.push({ start: from, end: i });
  }
  return names;
}

/** The fragments of a PDB model that a selector names. */
export function selectedFragments({ tree, fragments }: FrameModel, selector: Selector): number[] {
  const found = new Set<number>();
  for (const residue of tree.residues ?? []) {
    if (!selectorMatches(selector, residue)) continue;
    for (const atom of residue.atoms) if (fragments.ofAtom[atom]! >= 0) found.add(fragments.ofAtom[atom]!);
  }
  return [...found].sort((a, b) => a - b);
}

/** Residues that a fragment is made of. */
export function residuesOfFragment({ tree, fragments }: FrameModel, f: number): Residue[] {
  if (tree.residues === null) return [];
  const indices = new Set(Array.from(atomsOf(fragments, f), (atom) => tree.atoms.residue![atom]!));
  return [...indices].map((index) => tree.residues![index]!);
}

/** Atoms of a fragment by their name in the residue, else by element, as an axis takes them. */
function atomsNamed(model: FrameModel, f: number, name: string): number[] {
  const members = residuesOfFragment(model, f).flatMap(({ atoms, atomNames }) =>
    atoms.map((atom, k) => ({ atom, isIt: atomNames[k] === name })),
  );
  const exact = members.filter(({ isIt }) => isIt);
  if (exact.length > 0) return exact.map(({ atom }) => atom);
  const z = atomicNumberOf(name);
  return z === 0 ? [] : members.filter(({ atom }) => model.tree.atoms.element[atom] === z).map(({ atom }) => atom);
}

/** Everything in the annotation that speaks of a fragment, in the order of the text. */
export function mentionsOf({ file, model }: Annotated, f: number): Mention[] {
  const mentions = file.language === 'pdb' ? remarksOf({ file, model }, f) : listedOf({ file, model }, f);
  return mentions.sort((a, b) => a.span.start - b.span.start);
}

function listedOf({ file, model }: Annotated, f: number): Mention[] {
  const { text } = file;
  const mentions: Mention[] = [];
  for (const entry of entriesFor(file, model)) {
    const { key } = entry;
    const items = itemsOfEntry(text, entry);
    const own = LISTED_KEYS.has(key)
      ? items.slice(f, f + 1)
      : key === 'fragment_atoms'
        ? items.filter((item) => groupFragment(model, text, item) === f)
        : items.filter((item) => kindOf(text, item) === model.formulas[f]);
    for (const span of own) mentions.push({ span, key, fragments: [f], atoms: null });
  }
  return mentions;
}

/** The list keys that hold for a frame: its own, and those of the first frame that it does not give itself. */
function entriesFor(file: CoordinateTree, { tree, fragments }: FrameModel): Entry[] {
  const own = new Map<string, Entry>();
  for (const entry of tree.entries) if (!own.has(entry.key)) own.set(entry.key, entry);
  const first: FrameTree = file.frames[0]!;
  if (tree.index > 0 && sameElements(first, tree)) {
    const passedOn = [...INHERITED_KEYS, ...(fragments.origin === 'list' ? ['fragment_atoms'] : [])];
    for (const entry of first.entries) {
      if (passedOn.includes(entry.key) && !own.has(entry.key)) own.set(entry.key, entry);
    }
  }
  return [...own.values()];
}

/** The REMARK lines whose selector names a fragment, each as a whole. */
function remarksOf({ file, model }: Annotated, f: number): Mention[] {
  const residues = residuesOfFragment(model, f);
  return file.remarks.flatMap(({ selector, selectorSpan, entries }) => {
    if (selector === null || !residues.some((residue) => selectorMatches(selector, residue))) return [];
    const start = Math.min(selectorSpan.start, ...entries.map(({ keySpan }) => keySpan.start));
    const end = Math.max(selectorSpan.end, ...entries.map(({ value }) => value.end));
    return [{ span: { start, end }, key: 'fragment', fragments: [f], atoms: null }];
  });
}
