import { scanCount } from '../../text/numbers';
import type { Residue } from '../tree';
import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { decodeHybrid36 } from './hybrid36';

interface OpenResidue extends Residue {
  atomNames: string[];
  atoms: number[];
}

/** Columns that tell which residue an atom belongs to. */
const KEY: ColumnRange = [ATOM_COLUMNS.residueName[0], ATOM_COLUMNS.insertion[1]];
/** Among more labels than this a set is faster than a look at each. */
const MANY_LABELS = 32;
const BLANK = 32;

/**
 * Groups the atoms of one model into residues. The key alone does not do: residue numbers wrap or overflow in large files, so a
 * residue also ends where an atom name comes a second time.
 */
export class ResidueBuilder {
  readonly #columns: FixedColumns;
  readonly #residues: OpenResidue[] = [];
  readonly #byKey = new Map<string, number>();
  /** Name and alternate location of each atom of residues that are large or have alternates; elsewhere the names do. */
  readonly #labels = new Map<number, Set<string>>();
  /** Atoms of the current residue not yet moved into it: arrays of their final size cost a fraction of growing ones. */
  readonly #newNames: string[] = [];
  readonly #newAtoms: number[] = [];
  #currentLine = -1;
  #current = -1;
  #segment = 0;
  #lastChain: string | null = null;

  constructor(columns: FixedColumns) {
    this.#columns = columns;
  }

  /** Ends the chain segment (TER). */
  endSegment(): void {
    this.#segment++;
    this.#currentLine = -1;
  }

  /** Index of the residue that an atom belongs to, which is made where there is none. */
  add(atom: number, line: number): number {
    const columns = this.#columns;
    const atomName = columns.word(line, ATOM_COLUMNS.name);
    const altLoc = columns.word(line, ATOM_COLUMNS.altLoc);
    const label = altLoc === '' ? atomName : altLoc + atomName;
    const continues = this.#currentLine >= 0 && columns.areSame(line, this.#currentLine, KEY);
    const rawKey = continues ? '' : columns.raw(line, KEY);
    // A line too short to have a key continues no residue across TER.
    const isKnown = rawKey !== '' || this.#currentLine >= 0;
    let index = continues ? this.#current : ((isKnown ? this.#byKey.get(rawKey) : undefined) ?? -1);
    if (index < 0 || this.#hasLabel(index, label)) {
      index = this.#residues.length;
      const residue = this.#open(line);
      this.#residues.push(residue);
      this.#byKey.set(continues ? columns.raw(line, KEY) : rawKey, index);
    }
    this.#currentLine = line;
    if (index !== this.#current) this.#moveNew();
    this.#current = index;
    const residue = this.#residues[index]!;
    const labels = this.#labels.size === 0 ? undefined : this.#labels.get(index);
    if (labels !== undefined) labels.add(label);
    else if (altLoc !== '' || residue.atoms.length + this.#newAtoms.length >= MANY_LABELS) {
      this.#labels.set(index, new Set([...residue.atomNames, ...this.#newNames, label]));
    }
    this.#newNames.push(atomName);
    this.#newAtoms.push(atom);
    return index;
  }

  #moveNew(): void {
    if (this.#newAtoms.length === 0) return;
    const residue = this.#residues[this.#current]!;
    residue.atomNames = residue.atomNames.concat(this.#newNames);
    residue.atoms = residue.atoms.concat(this.#newAtoms);
    this.#newNames.length = 0;
    this.#newAtoms.length = 0;
  }

  #hasLabel(index: number, label: string): boolean {
    const labels = this.#labels.size === 0 ? undefined : this.#labels.get(index);
    if (labels !== undefined) return labels.has(label);
    const isNew = index === this.#current && this.#newNames.includes(label);
    return isNew || this.#residues[index]!.atomNames.includes(label);
  }

  #open(line: number): OpenResidue {
    const columns = this.#columns;
    const chain = columns.word(line, ATOM_COLUMNS.chain);
    if (this.#lastChain !== null && chain !== this.#lastChain) this.#segment++;
    this.#lastChain = chain;
    return {
      chain,
      name: columns.word(line, ATOM_COLUMNS.residueName),
      number: residueNumber(columns, line),
      insertion: columns.word(line, ATOM_COLUMNS.insertion),
      segment: this.#segment,
      atomNames: [],
      atoms: [],
    };
  }

  build(): Residue[] {
    this.#moveNew();
    return this.#residues;
  }
}

function residueNumber(columns: FixedColumns, line: number): number {
  const [from, to] = ATOM_COLUMNS.residueNumber;
  const { bytes } = columns.text;
  let start = columns.lines.starts[line]! + from;
  const end = start + to - from;
  while (start < end && bytes[start] === BLANK) start++;
  const count = end <= columns.lines.end(line) ? scanCount(bytes, start, end) : -1;
  return count >= 0 ? count : decodeHybrid36(columns.raw(line, [from, to]).padEnd(to - from), to - from);
}
