import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import { listGroups, listItems, valueText } from '../../formats/annotation/lists';
import type { CoordinateTree } from '../../formats/tree';
import { sameElements } from '../../model/frame-model';
import { DEBYE_E_A } from '../../physics/constants';
import { dipoleUnitEA, standardDipoleUnit } from '../../physics/units';
import { CommentLine } from './comment-line';
import type { DipoleOffer } from './dipole-offers';
import { planDipoles } from './dipole-plan';
import { remarkInsertion, remarkSentence } from './remark-lines';
import { residuesOf, selectorOf, selectorsOfKind } from './selectors';

/** Vectors of more fragments are no list that anyone reads. */
const MOST_VECTORS = 1000;
/** Significant digits of what is written. */
const DIGITS = 6;

/** The edits that write dipoles into the file, each with its source, or the sentence that says why they cannot be written. */
export function dipoleEdits(
  file: CoordinateTree,
  frame: FrameAnalysis,
  offers: readonly DipoleOffer[],
): readonly TextEdit[] | string {
  if (file.language === 'pdb') return pdbDipoles(file, frame, offers);
  const line = new CommentLine(file, frame.model.tree);
  return addDipoles(line, file, frame, offers) ?? line.edits();
}

/** Puts dipoles into the keys of a comment line; a sentence where that cannot be. */
export function addDipoles(
  line: CommentLine,
  file: CoordinateTree,
  frame: FrameAnalysis,
  offers: readonly DipoleOffer[],
): string | null {
  const { model } = frame;
  const unitEntry = line.entry('dipole_unit');
  const unit = unitEntry === undefined ? 'D' : standardDipoleUnit(valueText(file.text, unitEntry));
  if (unit === undefined) return 'The unit of the dipoles in the file is not known.';
  const plan = planDipoles(frame, offers, (f) => model.formulas[f]!);
  const number = (valueEA: number) => numeral(valueEA, unit);
  const sizes = plan.kinds.map(({ kind, sizeEA }) => `${kind}:${number(sizeEA)}`);
  const axes = plan.kinds.flatMap(({ kind, axis, offers: [first] }) =>
    axis === null || model.notes[first!.fragment]!.axis !== null ? [] : [`${kind}:${axis.text}`],
  );
  for (const [key, items] of [
    ['kind_dipole_sizes', sizes],
    ['kind_axes', axes],
  ] as const) {
    if (items.length > 0) line.append(key, [...inherited(file, frame, line, key), ...items]);
  }
  if (plan.vectors.length > 0) {
    const problem = addVectors(line, file, frame, plan.vectors, number);
    if (problem !== null) return problem;
  }
  const sources = plan.sources.map(([kind, words]) => `${kind}: ${words}`);
  if (sources.length > 0) {
    const entry = line.entry('dipole_sources');
    const before = entry === undefined ? [] : [valueText(file.text, entry)];
    line.set('dipole_sources', [...before, ...sources].join('; '));
  }
  return null;
}

/** What a later frame takes from the first one as long as it does not give a key itself. */
function inherited(file: CoordinateTree, { index, model }: FrameAnalysis, line: CommentLine, key: string): string[] {
  const [first] = file.frames;
  if (index === 0 || line.entry(key) !== undefined || !sameElements(first!, model.tree)) return [];
  const entry = first!.entries.find((candidate) => candidate.key === key);
  return entry === undefined ? [] : listGroups(file.text, entry).map(({ start, end }) => file.text.slice(start, end));
}

function addVectors(
  line: CommentLine,
  file: CoordinateTree,
  { model }: FrameAnalysis,
  vectors: readonly DipoleOffer[],
  number: (valueEA: number) => string,
): string | null {
  const { count } = model.fragments;
  if (count > MOST_VECTORS) return `A list of the vectors of ${count} fragments is too long for a comment line.`;
  const entry = line.entry('fragment_dipoles');
  const items = entry === undefined ? [] : listItems(file.text, entry);
  if (entry !== undefined && items.length !== 3 * count)
    return 'fragment_dipoles does not have three numbers for each fragment.';
  const list = Array.from({ length: 3 * count }, () => 'nan');
  for (const offer of vectors) {
    for (const [a, text] of components(offer, number).entries()) {
      list[3 * offer.fragment + a] = text;
      if (entry !== undefined) line.replace({ ...items[3 * offer.fragment + a]!, text });
    }
  }
  if (entry === undefined) line.set('fragment_dipoles', list.join(' '));
  return null;
}

function components({ sizeEA, direction }: DipoleOffer, number: (valueEA: number) => string): string[] {
  return [0, 1, 2].map((a) => {
    const value = sizeEA * (direction?.[a as 0] ?? 0);
    // A component that rounding alone makes differ from zero.
    return Math.abs(value) < 1e-6 * sizeEA ? '0' : number(value);
  });
}

/** A dipole in a unit, as it is written. */
export function numeral(valueEA: number, unit: string): string {
  return String(Number((valueEA / dipoleUnitEA(unit)!).toPrecision(DIGITS)));
}

/** The remarks that give dipoles: a line a kind, and one for each vector; behind them the sources in words. */
function pdbDipoles(
  file: CoordinateTree,
  frame: FrameAnalysis,
  offers: readonly DipoleOffer[],
): readonly TextEdit[] | string {
  const remarks = dipoleRemarks(file, frame, offers);
  return typeof remarks === 'string' ? remarks : [remarkInsertion(file, remarks)];
}

/** The texts of those remarks. */
export function dipoleRemarks(
  file: CoordinateTree,
  frame: FrameAnalysis,
  offers: readonly DipoleOffer[],
): string[] | string {
  const nameOf = (f: number) =>
    residuesOf(frame, f)
      .map(({ name }) => name)
      .join('+');
  const plan = planDipoles(frame, offers, nameOf);
  const debye = (valueEA: number) => numeral(valueEA, 'D');
  const lines: string[] = [];
  const sources: string[] = [];
  for (const { kind, sizeEA, axis, offers: own } of plan.kinds) {
    const fragments = own.map(({ fragment }) => fragment);
    const selectors = kind.includes('+')
      ? fragments.map((f) => selectorOf(frame, f))
      : selectorsOfKind(frame, kind, fragments, (f) => frame.model.notes[f]!.dipoleEA !== null);
    for (const selector of selectors) {
      if (selector === null) return `${kind} cannot be named by a selector.`;
      const along = axis === null ? '' : ` axis=${atomNames(frame, own) ?? axis.text}`;
      lines.push(`fragment=${selector} dipole_size=${debye(sizeEA)}${along} dipole_unit=D`);
    }
  }
  const canHoldVectors = file.frames.length === 1;
  for (const offer of canHoldVectors ? plan.vectors : []) {
    const selector = selectorOf(frame, offer.fragment);
    if (selector === null) return `Fragment ${offer.fragment + 1} cannot be named by a selector.`;
    lines.push(`fragment=${selector} dipole="${components(offer, debye).join(' ')}" dipole_unit=D`);
  }
  const written = new Set([
    ...plan.kinds.map(({ kind }) => kind),
    ...(canHoldVectors ? plan.vectors : []).map(({ fragment }) => nameOf(fragment)),
  ]);
  for (const [kind, words] of plan.sources) {
    if (written.has(kind)) sources.push(...remarkSentence(`Dipole of ${kind}: ${words}.`));
  }
  if (lines.length === 0)
    return 'A vector would have to hold for all models of the file, which are oriented differently.';
  return [...lines, ...sources];
}

/** A published axis by atom names, where all fragments of a kind have the same; `null` elsewhere. */
function atomNames(frame: FrameAnalysis, offers: readonly DipoleOffer[]): string | null {
  const texts = new Set(
    offers.map(({ fragment, axis }) => {
      if (axis === null) return null;
      const names = new Map<number, string>();
      for (const { atoms, atomNames: all } of residuesOf(frame, fragment))
        for (const [k, atom] of atoms.entries()) names.set(atom, all[k]!);
      const side = (atoms: readonly number[]) => atoms.map((atom) => names.get(atom) ?? '');
      const both = [...side(axis.before), ...side(axis.after)];
      if (both.some((name) => !/^[A-Za-z0-9'*]+$/.test(name)) || new Set(both).size < both.length) return null;
      return `${side(axis.before).join(',')}>${side(axis.after).join(',')}`;
    }),
  );
  return texts.size === 1 ? [...texts][0]! : null;
}

/** A size for a title. */
export function sizeWords(sizeEA: number): string {
  return `${Number((sizeEA / DEBYE_E_A).toPrecision(3))} D`;
}
