import type { FrameAnalysis } from '../analysis/frame-analysis';
import { FINDING_CODES } from '../base/catalogue';
import { parseSelector, selectorMatches } from '../formats/pdb/remarks';
import type { Residue } from '../formats/tree';
import type { FragmentLibrary } from '../library/match';
import { canonicalFormula } from '../model/formula';
import { atomsOf } from '../model/fragment-set';
import { symbolOf } from '../physics/elements';
import { MEDIA } from '../physics/media';
import { DIPOLE_UNITS } from '../physics/units';
import type { Completion, CompletionPlace } from './completion';

/** A value that is being written. */
interface OpenValue {
  readonly key: string;
  /** What of it stands before the cursor. */
  readonly text: string;
  readonly isQuoted: boolean;
}

/** What is offered for one word. */
interface Offer {
  readonly label: string;
  readonly detail: string;
  readonly kind: Completion['kind'];
  readonly documentation?: string;
  readonly insert?: string;
}

const OPEN_VALUE = /\b(\w+)=(?:"([^"]*)|'([^']*)|\{([^}]*)|\[([^\]]*)|([^\s"'{[]*))$/;

/** What parts the words of a value from each other, by key; blanks, commas and `=` elsewhere. */
const WORD: Readonly<Record<string, RegExp>> = {
  fragment: /[^\s"]*$/,
  axis: /[^\s",>]*$/,
  fragment_axes: /[^\s",>]*$/,
  kind_axes: /[^\s",>:]*$/,
  kind_dipole_sizes: /[^\s",:]*$/,
};
const PLAIN_WORD = /[^\s",=]*$/;

type Offers = (value: OpenValue, place: CompletionPlace) => readonly Offer[];

const words =
  (list: () => Iterable<string>, detail: string): Offers =>
  () =>
    Array.from(list(), (label) => ({ label, detail, kind: 'value' }));

/** A unit stands behind a number, both in quotes. */
const units =
  (list: readonly string[]): Offers =>
  ({ text, isQuoted }) =>
    isQuoted && /^\s*[-+.\deE]+\s+\S*$/.test(text)
      ? list.map((label) => ({ label, detail: 'unit', kind: 'value' }))
      : [];

const DIPOLE_UNIT_WORDS = [...DIPOLE_UNITS.keys()];

const OFFERS: Readonly<Record<string, Offers>> = {
  dipole_unit: words(() => DIPOLE_UNIT_WORDS, 'dipole_unit'),
  relative_permittivity: () =>
    MEDIA.flatMap(({ name, otherNames, relativePermittivity }) =>
      [name, ...otherNames].map((label) => ({ label, detail: String(relativePermittivity), kind: 'value' as const })),
    ),
  silence: words(() => FINDING_CODES, 'silence'),
  periodic: words(() => ['true', 'false'], 'periodic'),
  charge_column: words(() => ['occupancy', 'bfactor'], 'charge_column'),
  temperature: units(['K', 'degC', 'degF']),
  dipole_size: units(DIPOLE_UNIT_WORDS),
  polarizability: units(['angstrom^3', 'a.u.']),
  fragment_names: namesForList,
  fragment_atoms: foundFragments,
  fragment_axes: atomsForAxis,
  kind_dipole_sizes: compositions,
  kind_axes: (value, place) => symbolsForKind(value) ?? compositions(value, place),
  fragment: selectors,
  axis: atomNames,
  name: namesForSelector,
};

/** What may be written as a value at a place; `null` where none is being written. */
export function valueCompletions(place: CompletionPlace): Completion[] | null {
  const value = openValue(place.before);
  if (value === null) return null;
  const { key, text } = value;
  // A key may be called like what every object has.
  const [word] = (Object.hasOwn(WORD, key) ? WORD[key]! : PLAIN_WORD).exec(text) ?? [''];
  const offers = Object.hasOwn(OFFERS, key) ? OFFERS[key]!(value, place) : [];
  return offers.map(({ label, detail, kind, documentation = '', insert = label }) => ({
    label,
    kind,
    detail,
    documentation,
    insert,
    template: null,
    replaced: word.length,
  }));
}

function openValue(before: string): OpenValue | null {
  const match = OPEN_VALUE.exec(before);
  if (match === null) return null;
  const [, key = '', ...forms] = match;
  const bare = forms[4];
  return { key, text: forms.find((form) => form !== undefined) ?? '', isQuoted: bare === undefined };
}

/** How many words or groups of a list are finished before the one that is being written. */
function finishedIn(text: string): number {
  return text.split(/\s+/).filter((word) => word !== '').length - (/\S$/.test(text) ? 1 : 0);
}

/** Words that a list takes as one. */
function listWord(name: string): string {
  return name.trim().replace(/[\s"',=[\]{}\\]+/g, '-');
}

function namesForList({ text }: OpenValue, { frame }: CompletionPlace): Offer[] {
  if (frame === null) return [];
  const { model } = frame;
  const f = finishedIn(text);
  if (f >= model.fragments.count) return [];
  const detail = `fragment ${f + 1}, ${model.formulas[f]}`;
  return uniqueNames([
    { name: model.names[f]!, detail },
    ...libraryNames(frame, model.formulas[f]!),
    ...model.names.map((name, g) => ({ name, detail: `fragment ${g + 1}` })),
  ]);
}

function namesForSelector(_: OpenValue, { frame, before, after }: CompletionPlace): Offer[] {
  if (frame === null) return [];
  const residues = selectedResidues(frame, `${before}${after}`);
  const formulas = new Set(residues.map(({ atoms }) => frame.model.fragments.ofAtom[atoms[0]!]!).filter((f) => f >= 0));
  return uniqueNames([...formulas].flatMap((f) => libraryNames(frame, frame.model.formulas[f]!)));
}

function uniqueNames(names: readonly { readonly name: string; readonly detail: string }[]): Offer[] {
  const offers = new Map<string, Offer>();
  for (const { name, detail } of names) {
    const label = listWord(name);
    if (label !== '' && !offers.has(label)) offers.set(label, { label, detail, kind: 'fragment' });
  }
  return [...offers.values()];
}

const libraryByFormula = new WeakMap<FragmentLibrary, Map<string, string[]>>();

/** Names of published molecules of a composition. */
function libraryNames({ knowledge }: FrameAnalysis, formula: string): { name: string; detail: string }[] {
  const library = knowledge?.library;
  if (library == null) return [];
  let byFormula = libraryByFormula.get(library);
  if (byFormula === undefined) {
    byFormula = new Map();
    for (const { name, molecule } of library.entries) {
      const counts = new Map<number, number>();
      for (const z of molecule.elements) counts.set(z, (counts.get(z) ?? 0) + 1);
      const own = canonicalFormula(Array.from(counts, ([z, n]) => `${symbolOf(z)}${n}`).join('')) ?? '';
      byFormula.set(own, [...(byFormula.get(own) ?? []), name]);
    }
    libraryByFormula.set(library, byFormula);
  }
  return (byFormula.get(formula) ?? []).map((name) => ({ name, detail: `published molecule ${formula}` }));
}

/** The fragments that bonds make, as one value. */
function foundFragments({ text }: OpenValue, { frame }: CompletionPlace): Offer[] {
  if (frame === null || text.trim() !== '' || frame.model.fragments.count > MOST_FOUND) return [];
  const { fragments } = frame.model;
  const groups = Array.from({ length: fragments.count }, (_, f) => rangesOfAtoms(atomsOf(fragments, f)));
  if (groups.length === 0) return [];
  return [{ label: groups.join(' '), detail: 'the fragments as they are now', kind: 'value' }];
}

const MOST_FOUND = 100;

/** Atom numbers of a fragment as ranges. */
function rangesOfAtoms(atoms: ArrayLike<number>): string {
  const ranges: string[] = [];
  for (let k = 0; k < atoms.length; ) {
    let end = k;
    while (end + 1 < atoms.length && atoms[end + 1] === atoms[end]! + 1) end++;
    ranges.push(end === k ? `${atoms[k]! + 1}` : `${atoms[k]! + 1}-${atoms[end]! + 1}`);
    k = end + 1;
  }
  return ranges.join(',');
}

function atomsForAxis({ text }: OpenValue, { frame }: CompletionPlace): Offer[] {
  if (frame === null) return [];
  const { fragments, tree } = frame.model;
  const f = finishedIn(text);
  if (f >= fragments.count) return [];
  return Array.from(atomsOf(fragments, f), (atom) => ({
    label: String(atom + 1),
    detail: `${symbolOf(tree.atoms.element[atom]!)} of fragment ${f + 1}`,
    kind: 'atom' as const,
  }));
}

function compositions({ text }: OpenValue, { frame }: CompletionPlace): Offer[] {
  if (frame === null || /:[^\s,]*$/.test(text)) return [];
  const given = new Set([...text.matchAll(/([^\s,:"]+):/g)].map(([, formula]) => canonicalFormula(formula!)));
  const counts = new Map<string, number>();
  for (const formula of frame.model.formulas) counts.set(formula, (counts.get(formula) ?? 0) + 1);
  return [...counts]
    .filter(([formula]) => !given.has(formula))
    .map(([formula, count]) => ({
      label: formula,
      detail: `${count} fragment${count === 1 ? '' : 's'}`,
      kind: 'fragment',
      insert: `${formula}:`,
    }));
}

/** The elements of the composition whose axis is being written; `null` where none is. */
function symbolsForKind({ text }: OpenValue): Offer[] | null {
  const formula = /([A-Z][A-Za-z0-9]*):[^\s:]*$/.exec(text)?.[1];
  if (formula === undefined || canonicalFormula(formula) === undefined) return null;
  const symbols = new Set(formula.match(/[A-Z][a-z]?/g) ?? []);
  return [...symbols].map((label) => ({ label, detail: `in ${formula}`, kind: 'element' }));
}

/** The residues that the selector of a line names; all of them where it has none. */
function selectedResidues({ model }: FrameAnalysis, line: string): readonly Residue[] {
  const written = /\bfragment="?([^\s"]+)/.exec(line)?.[1];
  const selector = written === undefined ? null : parseSelector(written);
  const residues = model.tree.residues ?? [];
  return selector === null ? [] : residues.filter((residue) => selectorMatches(selector, residue));
}

function atomNames(_: OpenValue, { frame, before, after }: CompletionPlace): Offer[] {
  if (frame === null) return [];
  const names = new Map<string, Offer>();
  for (const { atoms, atomNames: own, name: residue } of selectedResidues(frame, `${before}${after}`)) {
    for (const [k, label] of own.entries()) {
      if (label === '' || names.has(label)) continue;
      const symbol = symbolOf(frame.model.tree.atoms.element[atoms[k]!]!);
      names.set(label, { label, detail: `${symbol} of ${residue}`, kind: 'atom' });
    }
  }
  return [...names.values()];
}

/** Selectors of the residues of the file: of all with a name, of those in a chain, and of each one. */
function selectors(_: OpenValue, { frame }: CompletionPlace): Offer[] {
  const kinds = new Map<string, number>();
  const single = new Map<string, Offer>();
  for (const { chain, name, number, insertion } of frame?.model.tree.residues ?? []) {
    if (/\s/.test(name) || name === '') continue;
    const letter = chain === '' ? '_' : chain;
    for (const kind of [`*:${name}:*`, `${letter}:${name}:*`]) kinds.set(kind, (kinds.get(kind) ?? 0) + 1);
    if (Number.isNaN(number)) continue;
    const label = `${letter}:${name}:${number}${insertion}`;
    single.set(label, { label, detail: 'this fragment', kind: 'fragment' });
  }
  const several = Array.from(kinds, ([label, count]) => ({
    label,
    detail: `${count} residue${count === 1 ? '' : 's'}`,
    kind: 'fragment' as const,
  }));
  return [...several, ...single.values()];
}
