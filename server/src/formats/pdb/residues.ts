import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { arePlain, codeOfPlain, codeOfPlainCharacter, NameCodes } from './name-codes';
import { ResidueKeys } from './residue-keys';

/** Columns that tell which residue an atom belongs to. */
const KEY: ColumnRange = [ATOM_COLUMNS.residueName[0], ATOM_COLUMNS.insertion[1]];
/** Where the words begin that cover those ten columns: residue name; chain and number; the last two overlap. */
const KEY_WORD_0 = KEY[0];
const KEY_WORD_1 = ATOM_COLUMNS.chain[0];
const KEY_WORD_2 = KEY[1] - 4;
const KEY_END = KEY[1];
const NAME = ATOM_COLUMNS.name[0];
const ALT_LOC = ATOM_COLUMNS.altLoc[0];
/** A line end has at most this many characters. */
const LONGEST_LINE_END = 2;
/** Among more labels than this a set is faster than a look at each. */
const MANY_LABELS = 32;
/** First atom, number of atoms and segment of each residue. */
const STRIDE = 3;
const SCATTERED = -1;
const BLANK = 32;

/** The residues of one model in numbers; {@link residueList} makes them readable. */
export interface ResidueTable {
  readonly count: number;
  /** Per residue its first atom, or −1 where others stand between its atoms; its number of atoms; its segment. */
  readonly records: Int32Array;
  /** Atoms of the residues that are not one run of atoms. */
  readonly scattered: ReadonlyMap<number, readonly number[]>;
}

/**
 * Groups the atoms of one model into residues. The key alone does not do: residue numbers wrap or overflow in large files, so a
 * residue also ends where an atom name comes a second time. Lines are compared as words; a string is made only of a line that is
 * short, not plain ASCII, or has an alternate location.
 */
export class ResidueBuilder {
  readonly #columns: FixedColumns;
  readonly #view: DataView;
  readonly #starts: Uint32Array;
  readonly #codes = new NameCodes();
  #records: Int32Array = new Int32Array(STRIDE * 16);
  #count = 0;
  readonly #scattered = new Map<number, number[]>();
  /** Code of the label of each atom: its name, after its alternate location where it has one. */
  #labels: Int32Array;
  /** Labels of residues that have many. */
  readonly #labelSets = new Map<number, Set<number>>();
  readonly #byKey = new ResidueKeys();
  /** The same for keys that are not ten plain characters. */
  readonly #byText = new Map<string, number>();
  /** Key of the current line: three words, or else a text. */
  #key0 = 0;
  #key1 = 0;
  #key2 = 0;
  #keyText: string | null = '';
  #current = -1;
  #segment = 0;
  #hasSegmentEnded = false;
  #lastChain: number | null = null;

  /** @param capacity room for atoms at first */
  constructor(columns: FixedColumns, capacity: number) {
    this.#columns = columns;
    this.#view = columns.view;
    this.#starts = columns.lines.starts;
    this.#labels = new Int32Array(Math.max(1, capacity));
  }

  /** Ends the chain segment (TER) before the next atom. */
  endSegment(): void {
    this.#hasSegmentEnded = true;
  }

  /** Index of the residue that an atom belongs to, which is made where there is none. Atoms come in ascending order. */
  add(atom: number, line: number): number {
    const start = this.#starts[line]!;
    const isWhole =
      this.#starts[line + 1]! - start >= KEY_END + LONGEST_LINE_END || this.#columns.lines.end(line) - start >= KEY_END;
    const label = isWhole ? this.#labelAt(line, start) : this.#labelOf(line);
    let index = isWhole ? this.#findAt(line, start) : this.#findByText(line);
    if (this.#hasSegmentEnded) {
      this.#segment++;
      this.#hasSegmentEnded = false;
    }
    if (index < 0 || this.#hasLabel(index, label)) index = this.#open(line);
    this.#append(index, atom, label);
    this.#current = index;
    return index;
  }

  /** Code of the label in a line that is not short. */
  #labelAt(line: number, start: number): number {
    const name = this.#view.getInt32(start + NAME, true);
    const isPlain = arePlain(name) && this.#view.getUint8(start + ALT_LOC) === BLANK;
    return isPlain ? codeOfPlain(name) : this.#labelOf(line);
  }

  #labelOf(line: number): number {
    const columns = this.#columns;
    return this.#codes.ofText(columns.word(line, ATOM_COLUMNS.altLoc) + columns.word(line, ATOM_COLUMNS.name));
  }

  /** The residue of the key in a line that is not short, or −1. */
  #findAt(line: number, start: number): number {
    const view = this.#view;
    const key0 = view.getInt32(start + KEY_WORD_0, true);
    const key1 = view.getInt32(start + KEY_WORD_1, true);
    const key2 = view.getInt32(start + KEY_WORD_2, true);
    const isSame = key0 === this.#key0 && key1 === this.#key1 && key2 === this.#key2;
    if (isSame && this.#keyText === null) return this.#current;
    if (!arePlain(key0) || !arePlain(key1) || !arePlain(key2)) return this.#findByText(line);
    this.#key0 = key0;
    this.#key1 = key1;
    this.#key2 = key2;
    this.#keyText = null;
    return this.#byKey.find(key0, key1, key2);
  }

  #findByText(line: number): number {
    const key = this.#columns.raw(line, KEY);
    this.#keyText = key;
    // A line too short to have a key continues no residue across TER.
    if (key === '' && this.#hasSegmentEnded) return -1;
    return this.#byText.get(key) ?? -1;
  }

  #hasLabel(index: number, label: number): boolean {
    const set = this.#labelSets.size === 0 ? undefined : this.#labelSets.get(index);
    if (set !== undefined) return set.has(label);
    const first = this.#records[STRIDE * index]!;
    if (first === SCATTERED) return this.#scattered.get(index)!.some((atom) => this.#labels[atom] === label);
    const end = first + this.#records[STRIDE * index + 1]!;
    for (let atom = first; atom < end; atom++) if (this.#labels[atom] === label) return true;
    return false;
  }

  /** Makes a residue, which is from now on the one of the current key. */
  #open(line: number): number {
    // Of a key in words the chain is the first byte of the second one.
    const chain =
      this.#keyText === null
        ? codeOfPlainCharacter(this.#key1 & 255)
        : this.#codes.ofText(this.#columns.word(line, ATOM_COLUMNS.chain));
    if (this.#lastChain !== null && chain !== this.#lastChain) this.#segment++;
    this.#lastChain = chain;
    const index = this.#count++;
    if (STRIDE * this.#count > this.#records.length) this.#records = doubled(this.#records);
    this.#records[STRIDE * index + 2] = this.#segment;
    if (this.#keyText === null) this.#byKey.set(this.#key0, this.#key1, this.#key2, index);
    else this.#byText.set(this.#keyText, index);
    return index;
  }

  #append(index: number, atom: number, label: number): void {
    if (atom >= this.#labels.length) this.#labels = doubled(this.#labels);
    this.#labels[atom] = label;
    const records = this.#records;
    const first = records[STRIDE * index]!;
    const count = records[STRIDE * index + 1]!++;
    if (count === 0) records[STRIDE * index] = atom;
    else if (first === SCATTERED) this.#scattered.get(index)!.push(atom);
    else if (first + count !== atom) {
      this.#scattered.set(index, [...run(first, count), atom]);
      records[STRIDE * index] = SCATTERED;
    }
    if (count < MANY_LABELS) return;
    const set = this.#labelSets.get(index);
    if (set !== undefined) set.add(label);
    else
      this.#labelSets.set(index, new Set(atomsOfResidue(this.build(), index).map((member) => this.#labels[member]!)));
  }

  build(): ResidueTable {
    return { count: this.#count, records: this.#records, scattered: this.#scattered };
  }
}

export function firstAtomOfResidue({ records, scattered }: ResidueTable, index: number): number {
  const first = records[STRIDE * index]!;
  return first === SCATTERED ? scattered.get(index)![0]! : first;
}

/** The atoms of a residue, ascending. */
export function atomsOfResidue({ records, scattered }: ResidueTable, index: number): readonly number[] {
  return scattered.get(index) ?? run(records[STRIDE * index]!, records[STRIDE * index + 1]!);
}

export function segmentOfResidue({ records }: ResidueTable, index: number): number {
  return records[STRIDE * index + 2]!;
}

/** The whole numbers from `first` on. */
function run(first: number, count: number): number[] {
  return Array.from({ length: count }, (_, k) => first + k);
}

function doubled(array: Int32Array): Int32Array {
  const longer = new Int32Array(array.length * 2);
  longer.set(array);
  return longer;
}
