import type { FrameTree, Residue } from '../tree';
import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { decodeHybrid36 } from './hybrid36';

const CONECT_ATOM: ColumnRange = [6, 11];
const CONECT_PARTNERS: readonly ColumnRange[] = [
  [11, 16],
  [16, 21],
  [21, 26],
  [26, 31],
];
/** Columns of the two ends of a LINK record: atom name, residue name, chain, number, insertion code. */
const LINK_ENDS: readonly (readonly [ColumnRange, ColumnRange, ColumnRange, ColumnRange, ColumnRange])[] = [
  [
    [12, 16],
    [17, 21],
    [21, 22],
    [22, 26],
    [26, 27],
  ],
  [
    [42, 46],
    [47, 51],
    [51, 52],
    [52, 56],
    [56, 57],
  ],
];
/** Symmetry operators of the two ends. */
const LINK_SYMMETRY: readonly ColumnRange[] = [
  [59, 65],
  [66, 72],
];
const SERIAL_WIDTH = 5;
const AMBIGUOUS = -2;

/** The CONECT and LINK records of a file; they hold for every model. Source: wwPDB format 3.30, connectivity sections. */
export class ConnectionRecords {
  readonly #columns: FixedColumns;
  readonly #conect: number[] = [];
  /** Serials of CONECT records in pairs, decoded once for all models. */
  #serialPairs: number[] | null = null;
  readonly #link: number[] = [];

  constructor(columns: FixedColumns) {
    this.#columns = columns;
  }

  add(line: number): void {
    const isLink = this.#columns.raw(line, [0, 4]) === 'LINK';
    (isLink ? this.#link : this.#conect).push(line);
  }

  /** Declared bonds of a model, as pairs of atom indices. A serial that stands twice in the model names no atom. */
  bondsOf(frame: Pick<FrameTree, 'atoms' | 'residues'>): Int32Array {
    const bonds: number[] = [];
    if (this.#conect.length > 0) this.#readConect(this.#serials(frame), bonds);
    const byPlace = new Map<string, Residue>();
    if (this.#link.length > 0) for (const residue of frame.residues ?? []) byPlace.set(placeOf(residue), residue);
    for (const line of this.#link) {
      // A link to a symmetry mate bonds nothing within the file.
      const [here, there] = LINK_SYMMETRY.map((range) => this.#columns.trimmed(line, range));
      if (here !== there && here !== '' && there !== '') continue;
      const ends = LINK_ENDS.map((columns) => this.#linkedAtom(line, columns, byPlace));
      if (ends[0]! >= 0 && ends[1]! >= 0 && ends[0] !== ends[1]) bonds.push(ends[0]!, ends[1]!);
    }
    return Int32Array.from(bonds);
  }

  #serials(frame: Pick<FrameTree, 'atoms' | 'residues'>): Map<number, number> {
    const bySerial = new Map<number, number>();
    for (let atom = 0; atom < frame.atoms.count; atom++) {
      const serial = decodeHybrid36(this.#columns.raw(frame.atoms.line[atom]!, ATOM_COLUMNS.serial), SERIAL_WIDTH);
      if (!Number.isNaN(serial)) bySerial.set(serial, bySerial.has(serial) ? AMBIGUOUS : atom);
    }
    return bySerial;
  }

  #readConect(bySerial: ReadonlyMap<number, number>, bonds: number[]): void {
    this.#serialPairs ??= this.#decodeConect();
    for (let k = 0; k < this.#serialPairs.length; k += 2) {
      const atom = bySerial.get(this.#serialPairs[k]!) ?? -1;
      const partner = bySerial.get(this.#serialPairs[k + 1]!) ?? -1;
      if (atom >= 0 && partner >= 0 && partner !== atom) bonds.push(atom, partner);
    }
  }

  #decodeConect(): number[] {
    const pairs: number[] = [];
    for (const line of this.#conect) {
      const atom = decodeHybrid36(this.#columns.raw(line, CONECT_ATOM), SERIAL_WIDTH);
      for (const range of CONECT_PARTNERS) {
        const field = this.#columns.raw(line, range);
        if (field.trim() !== '') pairs.push(atom, decodeHybrid36(field.padStart(SERIAL_WIDTH), SERIAL_WIDTH));
      }
    }
    return pairs;
  }

  #linkedAtom(line: number, columns: (typeof LINK_ENDS)[number], byPlace: ReadonlyMap<string, Residue>): number {
    const [name, residueName, chain, number, insertion] = columns.map((range) =>
      this.#columns.trimmed(line, range),
    ) as [string, string, string, string, string];
    const place = { chain, name: residueName, number: decodeHybrid36(number.padStart(4), 4), insertion };
    const residue = byPlace.get(placeOf(place));
    const index = residue?.atomNames.indexOf(name) ?? -1;
    return index < 0 ? -1 : residue!.atoms[index]!;
  }
}

function placeOf(residue: Pick<Residue, 'chain' | 'name' | 'number' | 'insertion'>): string {
  return `${residue.chain}:${residue.name}:${residue.number}${residue.insertion}`;
}
