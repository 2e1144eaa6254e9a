import type { FindingCollector } from '../../base/finding';
import { scanNumberInto, trimEnd } from '../../text/numbers';
import { AtomBuilder } from '../atom-builder';
import { readSpecies } from '../species';
import { AtomFlag, type AtomTable, type Residue } from '../tree';
import { type AlternateAtom, chooseAlternates, removeAtoms } from './alternates';
import { elementFromName } from './elements';
import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { decodeHybrid36 } from './hybrid36';
import { ResidueBuilder } from './residues';

const COORDINATES = [ATOM_COLUMNS.x, ATOM_COLUMNS.y, ATOM_COLUMNS.z] as const;
const COORDINATE_NAMES = ['x', 'y', 'z'] as const;
const BLANK = 32;
const MINUS = 45;
const POINT = 46;

/** An atom record before residues are made. */
interface Pending {
  readonly name: string;
  readonly altLoc: string;
  readonly rawKey: string;
  readonly segmentEnds: boolean;
}

/** Collects the ATOM and HETATM records of one model. */
export class ModelAtoms {
  readonly #columns: FixedColumns;
  readonly #problems: FindingCollector;
  readonly #chargeColumn: ColumnRange | null;
  readonly #atoms: AtomBuilder;
  readonly #pending: Pending[] = [];
  readonly #alternates: AlternateAtom[] = [];
  #segmentEnds = false;

  constructor(columns: FixedColumns, problems: FindingCollector, chargeColumn: ColumnRange | null) {
    this.#columns = columns;
    this.#problems = problems;
    this.#chargeColumn = chargeColumn;
    this.#atoms = new AtomBuilder(64, { charge: chargeColumn !== null, formal: true, residue: true });
  }

  get count(): number {
    return this.#atoms.count;
  }

  endSegment(): void {
    this.#segmentEnds = true;
  }

  read(line: number): void {
    const columns = this.#columns;
    const atoms = this.#atoms;
    const atom = atoms.next(line);
    const name = columns.raw(line, ATOM_COLUMNS.name);
    const altLoc = columns.trimmed(line, ATOM_COLUMNS.altLoc);
    const rawKey = columns.raw(line, [ATOM_COLUMNS.residueName[0], ATOM_COLUMNS.insertion[1]]);
    this.#pending.push({ name: name.trim(), altLoc, rawKey, segmentEnds: this.#segmentEnds });
    this.#segmentEnds = false;
    if (this.#readPosition(line, atom)) this.#readElement(line, atom, name);
    else this.#atoms.flags[atom]! |= AtomFlag.unknownElement;
    atoms.formalE![atom] = readFormalCharge(columns.trimmed(line, ATOM_COLUMNS.formalCharge));
    if (this.#chargeColumn !== null) this.#readCharge(line, atom, this.#chargeColumn);
    if (altLoc !== '') {
      const occupancy = columns.number(line, ATOM_COLUMNS.occupancy);
      const site = columns.raw(line, [ATOM_COLUMNS.chain[0], ATOM_COLUMNS.insertion[1]]);
      this.#alternates.push({ atom, site, letter: altLoc, occupancy });
    }
  }

  /** Reads x, y and z; false where the line is too short or shifted, so that nothing more need be said of it. */
  #readPosition(line: number, atom: number): boolean {
    const { text, lines } = this.#columns;
    const lineEnd = lines.end(line);
    const lineStart = lines.starts[line]!;
    if (lineEnd < lineStart + ATOM_COLUMNS.z[0] + 1) {
      this.#problems.add('field-missing', { start: lineStart, end: trimEnd(text.bytes, lineStart, lineEnd) }, () => {
        return 'The line ends before column 54, where z ends.';
      });
      this.#spoil(atom);
      return false;
    }
    if (this.#isShifted(lineStart, lineEnd)) {
      const start = lineStart + ATOM_COLUMNS.x[0];
      const span = { start, end: Math.min(lineStart + ATOM_COLUMNS.z[1], lineEnd) };
      this.#problems.add('columns-off', span, () => {
        return 'The coordinates do not stand in columns 31–38, 39–46 and 47–54.';
      });
      this.#spoil(atom);
      return false;
    }
    for (const [axis, range] of COORDINATES.entries()) {
      const { start, end } = this.#columns.span(line, range);
      const index = 3 * atom + axis;
      const { positionA } = this.#atoms;
      if (
        end > start &&
        scanNumberInto(text, start, end, positionA, index) === end &&
        Number.isFinite(positionA[index]!)
      ) {
        continue;
      }
      this.#atoms.flags[atom]! |= AtomFlag.noPosition;
      this.#problems.add('number-unreadable', { start, end }, () => {
        return `The ${COORDINATE_NAMES[axis]!} coordinate "${text.slice(start, end)}" is no finite number.`;
      });
    }
    if (this.#atoms.flags[atom]! & AtomFlag.noPosition) this.#spoil(atom);
    return true;
  }

  #spoil(atom: number): void {
    this.#atoms.flags[atom]! |= AtomFlag.noPosition;
    this.#atoms.positionA.fill(Number.NaN, 3 * atom, 3 * atom + 3);
  }

  /**
   * Whether numbers run over a column border. Two fields may touch (-100.123-200.456), but then the point stands in the
   * fifth place of its field, as the format has it, or the next one begins with its sign.
   */
  #isShifted(lineStart: number, lineEnd: number): boolean {
    const { bytes } = this.#columns.text;
    for (const [start, end] of COORDINATES) {
      const border = lineStart + end;
      if (border >= lineEnd) continue;
      const before = bytes[border - 1]!;
      const after = bytes[border]!;
      if (before === BLANK || after === BLANK || after === MINUS) continue;
      if (bytes[lineStart + start + 4] !== POINT) return true;
    }
    const first = lineStart + ATOM_COLUMNS.x[0];
    return bytes[first - 1] !== BLANK && bytes[first] !== BLANK && bytes[first] !== MINUS && bytes[first + 4] !== POINT;
  }

  #readElement(line: number, atom: number, name: string): void {
    const columns = this.#columns;
    const { start, end } = columns.span(line, ATOM_COLUMNS.element);
    // Old files have an identification and a line number there: digits are no symbol.
    const symbol = columns.trimmed(line, ATOM_COLUMNS.element);
    const written = symbol !== '' && !/^\d/.test(symbol);
    const UNKNOWN = AtomFlag.unknownElement << 8;
    let species = written ? readSpecies(columns.text, start, end) : UNKNOWN;
    if (species & UNKNOWN) {
      const residueName = columns.trimmed(line, ATOM_COLUMNS.residueName);
      const inferred = elementFromName(name, residueName);
      // A written symbol that is none is an error even where the name would do: the two contradict each other.
      if (!written) species = inferred;
    }
    this.#atoms.element[atom] = species & 255;
    this.#atoms.flags[atom]! |= species >> 8;
    if (species & UNKNOWN) {
      const span = symbol !== '' ? { start, end } : columns.span(line, ATOM_COLUMNS.name);
      this.#problems.add(
        'element-unknown',
        span,
        () => `"${columns.text.slice(span.start, span.end)}" names no element.`,
      );
    }
  }

  #readCharge(line: number, atom: number, range: ColumnRange): void {
    const value = this.#columns.number(line, range);
    this.#atoms.chargeE![atom] = value;
    if (Number.isFinite(value)) return;
    this.#atoms.chargeE![atom] = Number.NaN;
    this.#problems.add(
      'number-unreadable',
      this.#columns.span(line, range),
      () => 'The charge column holds no finite number.',
    );
  }

  /** Drops alternate locations, forms residues, and returns the table. */
  build(): { atoms: AtomTable; residues: Residue[]; alternateSites: number; firstAlternateLine: number } {
    let pending = this.#pending;
    let alternateSites = 0;
    let firstAlternateLine = -1;
    if (this.#alternates.length > 0) {
      const { dropped, sites } = chooseAlternates(this.#alternates);
      if (dropped.size > 0) {
        alternateSites = sites;
        firstAlternateLine = this.#atoms.line[dropped.values().next().value!]!;
        pending = pending.filter((_, i) => !dropped.has(i));
        removeAtoms(this.#atoms, dropped);
      }
    }
    const builder = new ResidueBuilder();
    for (const [atom, { name, altLoc, rawKey, segmentEnds }] of pending.entries()) {
      if (segmentEnds) builder.endSegment();
      this.#atoms.residue![atom] = builder.add(atom, name, altLoc, rawKey, () => parseKey(rawKey));
    }
    return { atoms: this.#atoms.build(), residues: builder.build(), alternateSites, firstAlternateLine };
  }
}

/** Splits columns 18–27. */
function parseKey(raw: string): { chain: string; name: string; number: number; insertion: string } {
  const field = raw.padEnd(10);
  return {
    name: field.slice(0, 4).trim(),
    chain: field.slice(4, 5).trim(),
    number: decodeHybrid36(field.slice(5, 9), 4),
    insertion: field.slice(9, 10).trim(),
  };
}

/** Reads columns 79–80: a digit and a sign in either order, a sign alone for one; NaN where blank or anything else. */
export function readFormalCharge(text: string): number {
  const match = /^(?:(\d)([+-])|([+-])(\d)|([+-]))$/.exec(text);
  if (match === null) return Number.NaN;
  const size = Number(match[1] ?? match[4] ?? 1);
  const sign = match[2] ?? match[3] ?? match[5];
  return sign === '-' ? -size : size;
}
