import { FindingCollector, type Fix } from '../base/finding';
import type { Span } from '../base/span';
import { finish, inStrides, type Steps } from '../base/steps';
import type { Entry } from '../formats/annotation/entries';
import { listGroups, listItems, listWords } from '../formats/annotation/lists';
import { meantCharge, nearestWord, replacement } from '../formats/annotation/meant';
import { AtomFlag, type FrameTree } from '../formats/tree';
import { dipoleUnitEA } from '../physics/units';
import type { Snapshot } from '../text/snapshot';
import { emptyNotes, type FragmentNotes, ValueReader, type WrittenDipole } from './annotation';
import { canonicalFormula } from './formula';
import { atomsOf, type FragmentSet } from './fragment-set';
import { XyzAxes } from './xyz-axes';

/** Longer lists are not completed by a fix. */
const MOST_FIXED_ENTRIES = 1000;
/** Fragments looked at between two pauses. */
const FRAGMENTS_A_STEP = 1024;
/** A longer formula, and one in a longer list, is not mended. */
const LONGEST_KIND = 40;
const LONGEST_LIST = 2000;

/** Keys of the first frame that hold for a later one which does not give them itself. */
export const INHERITED_KEYS = ['fragment_names', 'kind_dipole_sizes', 'kind_axes'];

/**
 * Binds the comment-line keys of an XYZ frame to its fragments. `first` is the first frame of the file where its names and kinds
 * hold for this one (same elements in the same order), else `null`.
 */
export function* annotateXyz(
  text: Snapshot,
  frame: FrameTree,
  set: FragmentSet,
  formulas: readonly string[],
  first: FrameTree | null,
  problems: FindingCollector,
): Steps<FragmentNotes[]> {
  const notes: FragmentNotes[] = [];
  yield* inStrides(set.count, FRAGMENTS_A_STEP, () => notes.push(emptyNotes()));
  const binder = new XyzBinder(new ValueReader(text, problems), frame, set, formulas, notes);
  yield* binder.bind(frame.entries, () => true);
  if (first !== null) {
    const own = new Set(frame.entries.map((entry) => entry.key));
    // What was wrong with these keys has been said at the first frame.
    const silent = new XyzBinder(new ValueReader(text, new FindingCollector()), frame, set, formulas, notes);
    yield* silent.bind(first.entries, (key) => INHERITED_KEYS.includes(key) && !own.has(key));
    if (set.origin === 'column' && frame.groups === null) silent.nameByGroups(first);
  }
  return notes;
}

/** Keys whose value has an entry for every fragment, in order. */
export const LISTED_KEYS: ReadonlySet<string> = new Set([
  'fragment_names',
  'fragment_charges',
  'fragment_polarizabilities',
  'fragment_dipoles',
  'fragment_dipole_sizes',
  'fragment_axes',
]);

/** The compositions that the keys of a comment line speak of. */
export function kindFormulas(text: Snapshot, entries: readonly Entry[]): string[] {
  const kinds = entries.filter(({ key }) => key === 'kind_dipole_sizes' || key === 'kind_axes');
  return kinds.flatMap((entry) =>
    listGroups(text, entry).flatMap(({ start, end }) => {
      const words = text.slice(start, end);
      return canonicalFormula(words.slice(0, Math.max(0, words.indexOf(':')))) ?? [];
    }),
  );
}

/** Binds the keys that speak of compositions to some fragments of a frame without {@link LISTED_KEYS}; their notes hold nothing yet. */
export function annotateSome(
  text: Snapshot,
  frame: FrameTree,
  set: FragmentSet,
  formulas: readonly string[],
  notes: FragmentNotes[],
  fragments: readonly number[],
  problems: FindingCollector,
): void {
  const binder = new XyzBinder(new ValueReader(text, problems), frame, set, formulas, notes, fragments);
  finish(binder.bind(frame.entries, (key) => key.startsWith('kind_')));
}

class XyzBinder {
  readonly #reader: ValueReader;
  readonly #frame: FrameTree;
  readonly #set: FragmentSet;
  readonly #formulas: readonly string[];
  readonly #notes: FragmentNotes[];
  readonly #axes: XyzAxes;
  /** The fragments to be looked at where they are not all. */
  readonly #some: readonly number[] | null;
  #byFormula: Map<string, number[]> | null = null;

  constructor(
    reader: ValueReader,
    frame: FrameTree,
    set: FragmentSet,
    formulas: readonly string[],
    notes: FragmentNotes[],
    some: readonly number[] | null = null,
  ) {
    this.#some = some;
    this.#reader = reader;
    this.#frame = frame;
    this.#set = set;
    this.#formulas = formulas;
    this.#notes = notes;
    this.#axes = new XyzAxes(reader, frame, set);
  }

  *bind(entries: readonly Entry[], wanted: (key: string) => boolean): Steps<void> {
    const entryOf = (key: string) => (wanted(key) ? entries.find((entry) => entry.key === key) : undefined);
    const unitEntry = entries.find((entry) => entry.key === 'dipole_unit');
    const unit = unitEntry === undefined ? 'D' : this.#reader.dipoleUnit(unitEntry);
    const each = (key: string, perFragment: number, assign: (f: number, items: Span[]) => void) => {
      const entry = entryOf(key);
      if (entry !== undefined) this.#distribute(entry, perFragment, assign);
    };
    if (wanted('fragment')) this.nameByGroups(this.#frame);
    const names = entryOf('fragment_names');
    if (names !== undefined) this.#bindNames(names);
    each('fragment_charges', 1, (f, [item]) => {
      this.#notes[f]!.chargeE = this.#reader.number(item!, 'charge', meantCharge);
    });
    each('fragment_polarizabilities', 1, (f, [item]) => {
      const value = this.#reader.number(item!, 'polarizability');
      if (value !== null && value < 0) this.#reader.invalid(item!, 'A polarizability cannot be negative.');
      else this.#notes[f]!.polarizabilityA3 = value;
    });
    if (unit !== null) {
      each('fragment_dipoles', 3, (f, items) => {
        const span = { start: items[0]!.start, end: items[2]!.end };
        const vector = this.#reader.vector(items, unit, span);
        if (vector === null) return;
        this.#notes[f]!.dipoleEA = vector.dipoleEA;
        this.#notes[f]!.writtenDipole = vector.written;
      });
      each('fragment_dipole_sizes', 1, (f, [item]) => this.#setSize(f, this.#sizeReader(item!, unit)));
      const sizes = entryOf('kind_dipole_sizes');
      if (sizes !== undefined) {
        yield* this.#bindKinds(sizes, (value) => {
          const read = this.#sizeReader(value, unit);
          return (f) => this.#setSize(f, read);
        });
      }
    }
    const axes = entryOf('fragment_axes');
    if (axes !== undefined) {
      const groups = listGroups(this.#reader.text, axes);
      if (this.#hasLength(axes, groups, 1)) {
        for (const [f, group] of groups.entries()) this.#notes[f]!.axis ??= this.#axes.byNumbers(group);
      }
    }
    const kindAxes = entryOf('kind_axes');
    if (kindAxes !== undefined) {
      yield* this.#bindKinds(kindAxes, (value) => {
        const axisOf = this.#axes.byNames(value);
        return (f) => {
          this.#notes[f]!.axis ??= axisOf(f);
        };
      });
    }
  }

  /** Takes the words of a fragment column as names, where there are none yet. */
  nameByGroups({ groups, atoms }: FrameTree): void {
    if (!groups?.areWords) return;
    for (const [f, note] of this.#notes.entries()) {
      const name = groups.names[atoms.group![atomsOf(this.#set, f)[0]!]!]!;
      if (!/^(?:[+-]?\d+)?$/.test(name)) note.name ??= name;
    }
  }

  #bindNames(entry: Entry): void {
    const words = listWords(this.#reader.text, entry);
    if (!this.#hasLength(entry, words, 1)) return;
    for (const [f, word] of words.entries()) {
      const name = this.#reader.text.slice(word.start, word.end);
      if (name.toLowerCase() !== 'nan') this.#notes[f]!.name = name;
    }
  }

  #distribute(entry: Entry, perFragment: number, assign: (f: number, items: Span[]) => void): void {
    const items = listItems(this.#reader.text, entry);
    if (!this.#hasLength(entry, items, perFragment)) return;
    for (let f = 0; f < this.#set.count; f++) assign(f, items.slice(f * perFragment, (f + 1) * perFragment));
  }

  #hasLength(entry: Entry, items: readonly Span[], perFragment: number): boolean {
    const needed = perFragment * this.#set.count;
    if (items.length === needed) return true;
    const { problems } = this.#reader;
    problems.add(
      'array-length',
      entry.value,
      () => {
        const each = perFragment === 1 ? '' : ` (${perFragment} for each)`;
        const fragments = `${this.#set.count} fragment${this.#set.count === 1 ? '' : 's'}`;
        return `${entry.key} has ${items.length} entries, and ${fragments} need ${needed}${each}.`;
      },
      () =>
        needed > MOST_FIXED_ENTRIES || this.#hasLooseArrow(items)
          ? {}
          : { fix: lengthFix(this.#reader.text, entry, items, needed) },
    );
    return false;
  }

  /** Whether blanks beside an arrow have made several entries of one axis. */
  #hasLooseArrow(items: readonly Span[]): boolean {
    return items.some(({ start, end }) => /^>|>$/.test(this.#reader.text.slice(start, end)));
  }

  #setSize(f: number, read: () => Size | null): void {
    const note = this.#notes[f]!;
    if (note.dipoleSizeEA !== null) return;
    const size = read();
    if (size === null) return;
    note.dipoleSizeEA = size.sizeEA;
    note.writtenSize = size.written;
  }

  /** Reads a size at the first call, for all fragments that it is given to. */
  #sizeReader(item: Span, unit: string): () => Size | null {
    let size: Size | null | undefined;
    return () => {
      if (size === undefined) size = this.#readSize(item, unit);
      return size;
    };
  }

  #readSize(item: Span, unit: string): Size | null {
    if (this.#reader.text.slice(item.start, item.end).toLowerCase() === 'nan') return null;
    const sizeEA = this.#reader.quantity(item, 'dipoleEA', 'dipole size', dipoleUnitEA(unit)!);
    if (sizeEA === null) return null;
    if (sizeEA < 0) return this.#reader.invalid(item, 'A dipole size cannot be negative; turn the axis round instead.');
    return { sizeEA, written: { items: [item], unit, span: item } };
  }

  /** Reads `FORMULA:VALUE` items and gives what is read of each value to the fragments of that composition. */
  *#bindKinds(entry: Entry, read: (value: Span) => (f: number) => void): Steps<void> {
    const { text, problems } = this.#reader;
    for (const group of listGroups(text, entry)) {
      const words = text.slice(group.start, group.end);
      const colon = words.indexOf(':');
      const formula = colon < 0 ? undefined : canonicalFormula(words.slice(0, colon));
      if (formula === undefined || colon === words.length - 1) {
        const place = { start: group.start, end: group.start + Math.max(0, colon) };
        const meant = colon > 0 && colon < words.length - 1 ? this.#nearestKind(words.slice(0, colon), entry) : null;
        this.#reader.invalid(
          group,
          `"${this.#reader.shown(group)}" in ${entry.key} is no FORMULA:VALUE.`,
          meant,
          place,
        );
        continue;
      }
      const value = { start: group.start + colon + 1, end: group.end };
      const matches = this.#ofKind(formula);
      const assign = read(value);
      yield* inStrides(matches.length, FRAGMENTS_A_STEP, (n) => assign(matches[n]!));
      // A fragment with a hole has another composition than was meant; the hole has been told.
      if (matches.length === 0 && !this.#hasHoles()) {
        const place = { start: group.start, end: group.start + colon };
        problems.add(
          'selector-unmatched',
          place,
          () => `No fragment of the frame has the composition ${formula}.`,
          () => replacement(place, this.#nearestKind(formula, entry)),
        );
      }
    }
  }

  /** The one composition of the frame that a formula nearly is, where the key does not speak of it yet. */
  #nearestKind(formula: string, entry: Entry): string | null {
    if (formula.length > LONGEST_KIND || entry.value.end - entry.value.start > LONGEST_LIST) return null;
    const meant = nearestWord(formula, new Set(this.#formulas));
    return meant === null || kindFormulas(this.#reader.text, [entry]).includes(meant) ? null : meant;
  }

  #hasHoles(): boolean {
    const unreadable = AtomFlag.unknownElement | AtomFlag.noPosition;
    return this.#frame.atoms.flags.some((flags) => (flags & unreadable) !== 0);
  }

  /** Fragments of a composition. */
  #ofKind(formula: string): readonly number[] {
    if (this.#byFormula === null) {
      this.#byFormula = new Map();
      for (const f of this.#some ?? this.#formulas.keys()) {
        const kind = this.#formulas[f]!;
        const list = this.#byFormula.get(kind);
        if (list === undefined) this.#byFormula.set(kind, [f]);
        else list.push(f);
      }
    }
    return this.#byFormula.get(formula) ?? [];
  }
}

interface Size {
  readonly sizeEA: number;
  readonly written: WrittenDipole;
}

/** Fills a list up with `nan`, or takes away what is too much; a bare value needs quotes to become a list. */
function lengthFix(source: Snapshot, entry: Entry, items: readonly Span[], needed: number): Fix {
  const surplus = items.length - needed;
  if (entry.form === 'bare') {
    const words = items.slice(0, needed).map(({ start, end }) => source.slice(start, end));
    while (words.length < needed) words.push('nan');
    const edits = [{ ...entry.value, text: `"${words.join(' ')}"` }];
    return { title: `Give ${needed} entries`, edits, drops: surplus > 0 };
  }
  if (surplus > 0) {
    const start = needed === 0 ? entry.inner.start : items[needed - 1]!.end;
    return {
      title: surplus === 1 ? 'Remove the last entry' : `Remove the last ${surplus} entries`,
      edits: [{ start, end: items[items.length - 1]!.end, text: '' }],
      drops: true,
    };
  }
  const at = items.length === 0 ? entry.inner.start : items[items.length - 1]!.end;
  const separator = entry.form === 'bracketed' ? ', ' : ' ';
  const missing = -surplus;
  const text = `${items.length === 0 ? '' : separator}${Array.from({ length: missing }, () => 'nan').join(separator)}`;
  return {
    title: missing === 1 ? 'Add one nan (not given)' : `Add nan ${missing} times (not given)`,
    edits: [{ start: at, end: at, text }],
  };
}
