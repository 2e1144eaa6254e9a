import { scanCount } from '../../text/numbers';
import type { Residue } from '../tree';
import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { decodeHybrid36 } from './hybrid36';
import { atomsOfResidue, firstAtomOfResidue, type ResidueTable, segmentOfResidue } from './residues';

const BLANK = 32;

/** The residues of a model. @param lineOfAtom line of each atom */
export function residueList(columns: FixedColumns, lineOfAtom: Uint32Array, table: ResidueTable): readonly Residue[] {
  return Array.from({ length: table.count }, (_, index) => new TextResidue(columns, lineOfAtom, table, index));
}

/** A residue that reads its names in the text, and lists its atoms, when first asked. */
class TextResidue implements Residue {
  readonly #columns: FixedColumns;
  readonly #lineOfAtom: Uint32Array;
  readonly #table: ResidueTable;
  readonly #index: number;
  #chain: string | undefined;
  #name: string | undefined;
  #number: number | undefined;
  #insertion: string | undefined;
  #atomNames: readonly string[] | undefined;
  #atoms: readonly number[] | undefined;

  constructor(columns: FixedColumns, lineOfAtom: Uint32Array, table: ResidueTable, index: number) {
    this.#columns = columns;
    this.#lineOfAtom = lineOfAtom;
    this.#table = table;
    this.#index = index;
  }

  get chain(): string {
    this.#chain ??= this.#word(ATOM_COLUMNS.chain);
    return this.#chain;
  }

  get name(): string {
    this.#name ??= this.#word(ATOM_COLUMNS.residueName);
    return this.#name;
  }

  get number(): number {
    this.#number ??= residueNumber(this.#columns, this.#firstLine);
    return this.#number;
  }

  get insertion(): string {
    this.#insertion ??= this.#word(ATOM_COLUMNS.insertion);
    return this.#insertion;
  }

  get segment(): number {
    return segmentOfResidue(this.#table, this.#index);
  }

  get atomNames(): readonly string[] {
    this.#atomNames ??= this.atoms.map((atom) => this.#columns.word(this.#lineOfAtom[atom]!, ATOM_COLUMNS.name));
    return this.#atomNames;
  }

  get atoms(): readonly number[] {
    this.#atoms ??= atomsOfResidue(this.#table, this.#index);
    return this.#atoms;
  }

  get #firstLine(): number {
    return this.#lineOfAtom[firstAtomOfResidue(this.#table, this.#index)]!;
  }

  #word(range: ColumnRange): string {
    return this.#columns.word(this.#firstLine, range);
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
