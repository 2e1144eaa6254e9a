import type { FindingCollector } from '../../base/finding';
import { scanNumberInto, skipBlanks, trimEnd } from '../../text/numbers';
import { meantNumber, replacement } from '../annotation/meant';
import { AtomBuilder } from '../atom-builder';
import { readSpecies, symbolNumber } from '../species';
import { AtomFlag, type AtomTable } from '../tree';
import { type AlternateAtom, chooseAlternates, removeAtoms } from './alternates';
import { readCoordinates } from './coordinate';
import { elementFromName } from './elements';
import { ATOM_COLUMNS, type ColumnRange, type FixedColumns } from './fields';
import { ResidueBuilder, type ResidueTable } from './residues';

const COORDINATES = [ATOM_COLUMNS.x, ATOM_COLUMNS.y, ATOM_COLUMNS.z] as const;
const COORDINATE_NAMES = ['x', 'y', 'z'] as const;
/** First columns as constants of their own: in a loop over lines that look-up counts. */
const ALT_LOC = ATOM_COLUMNS.altLoc[0];
const X = ATOM_COLUMNS.x[0];
const ELEMENT = ATOM_COLUMNS.element[0];
const FORMAL_CHARGE = ATOM_COLUMNS.formalCharge[0];
/** A plain line reaches at least to its element. */
const PLAIN_LENGTH = ATOM_COLUMNS.element[1];
const LF = 10;
const CR = 13;
const BLANK = 32;
const MINUS = 45;
const POINT = 46;
const LETTER_M = 77;
const LETTER_T = 84;
/** The first four letters of the names of the records of atoms, as words. */
const ATOM_WORD = 0x4d4f5441;
const HETA_WORD = 0x41544548;

/** Collects the ATOM and HETATM records of one model. */
export class ModelAtoms {
  readonly #columns: FixedColumns;
  readonly #problems: FindingCollector;
  readonly #chargeColumn: ColumnRange | null;
  readonly #atoms: AtomBuilder;
  readonly #alternates: AlternateAtom[] = [];
  /** Atoms before which a chain segment ends. */
  readonly #segmentStarts = new Set<number>();
  readonly #residues: ResidueBuilder;

  /** @param capacity room for atoms at first */
  constructor(columns: FixedColumns, problems: FindingCollector, chargeColumn: ColumnRange | null, capacity: number) {
    this.#columns = columns;
    this.#problems = problems;
    this.#chargeColumn = chargeColumn;
    this.#atoms = new AtomBuilder(capacity, { charge: chargeColumn !== null, formal: true, residue: true });
    this.#residues = new ResidueBuilder(columns, capacity);
  }

  get count(): number {
    return this.#atoms.count;
  }

  endSegment(): void {
    this.#segmentStarts.add(this.#atoms.count);
    this.#residues.endSegment();
  }

  /**
   * Reads lines from `line` on while each is an atom's as the format has it: coordinates in their columns, an element symbol, no
   * alternate location and no formal charge. Returns the first line that it leaves to others; of an atom, to {@link read}. Nearly
   * all lines of a large file are of this kind.
   */
  readPlainLines(line: number): number {
    const { text, lines, view } = this.#columns;
    const { bytes } = text;
    const { starts } = lines;
    const atoms = this.#atoms;
    let next = line;
    for (; next < lines.count; next++) {
      const start = starts[next]!;
      if (starts[next + 1]! - start < PLAIN_LENGTH || !isAtomRecord(view, start)) break;
      atoms.reserve();
      const { positionA, count } = atoms;
      if (!readCoordinates(view, start + X, positionA, 3 * count)) break;
      // A line end is no letter: with an element the line reaches to column 78.
      const z = elementAt(bytes, start + ELEMENT);
      if (z === 0 || bytes[start + ALT_LOC] !== BLANK) break;
      if (!isBlankToEnd(bytes, start + FORMAL_CHARGE)) break;
      atoms.element[count] = z;
      atoms.line[count] = next;
      atoms.formalE![count] = Number.NaN;
      atoms.count = count + 1;
      if (this.#chargeColumn !== null) this.#readCharge(next, count, this.#chargeColumn);
      atoms.residue![count] = this.#residues.add(count, next);
    }
    return next;
  }

  /** Reads one ATOM or HETATM record as the next atom; what cannot be read is reported and marked in its flags. */
  read(line: number): void {
    const columns = this.#columns;
    const atoms = this.#atoms;
    const atom = atoms.next(line);
    if (this.#readPosition(line, atom)) this.#readElement(line, atom);
    else this.#atoms.flags[atom]! |= AtomFlag.unknownElement;
    const formal = columns.word(line, ATOM_COLUMNS.formalCharge);
    atoms.formalE![atom] = formal === '' ? Number.NaN : readFormalCharge(formal);
    if (this.#chargeColumn !== null) this.#readCharge(line, atom, this.#chargeColumn);
    const altLoc = columns.word(line, ATOM_COLUMNS.altLoc);
    if (altLoc !== '') {
      const occupancy = columns.number(line, ATOM_COLUMNS.occupancy);
      const site = columns.raw(line, [ATOM_COLUMNS.chain[0], ATOM_COLUMNS.insertion[1]]);
      this.#alternates.push({ atom, site, letter: altLoc, occupancy });
    }
    atoms.residue![atom] = this.#residues.add(atom, line);
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
    const { positionA } = this.#atoms;
    for (let axis = 0; axis < 3; axis++) {
      const range = COORDINATES[axis]!;
      const index = 3 * atom + axis;
      const last = lineStart + range[1];
      const first = skipBlanks(text.bytes, lineStart + range[0], last);
      // The bulk: a number that ends with its columns.
      if (last <= lineEnd && scanNumberInto(text, first, last, positionA, index) === last) {
        if (Number.isFinite(positionA[index]!)) continue;
      }
      const { start, end } = this.#columns.span(line, range);
      if (
        end > start &&
        scanNumberInto(text, start, end, positionA, index) === end &&
        Number.isFinite(positionA[index]!)
      ) {
        continue;
      }
      this.#atoms.flags[atom]! |= AtomFlag.noPosition;
      this.#problems.add(
        'number-unreadable',
        { start, end },
        () => `The ${COORDINATE_NAMES[axis]!} coordinate "${text.slice(start, end)}" is no finite number.`,
        () => {
          const meant = meantNumber(text.slice(start, end));
          // In fixed columns it must not be shorter or longer.
          return replacement({ start, end }, meant?.length === end - start ? meant : null);
        },
      );
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
    for (let axis = 0; axis < 3; axis++) {
      const [start, end] = COORDINATES[axis]!;
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

  #readElement(line: number, atom: number): void {
    const columns = this.#columns;
    const lineStart = columns.lines.starts[line]!;
    const { bytes } = columns.text;
    const z = elementAt(bytes, lineStart + ATOM_COLUMNS.element[0]);
    if (z > 0 && lineStart + ATOM_COLUMNS.element[1] <= columns.lines.end(line)) {
      this.#atoms.element[atom] = z;
      return;
    }
    const { start, end } = columns.span(line, ATOM_COLUMNS.element);
    // Old files have an identification and a line number there: digits are no symbol.
    const symbol = columns.trimmed(line, ATOM_COLUMNS.element);
    const written = symbol !== '' && !/^\d/.test(symbol);
    const UNKNOWN = AtomFlag.unknownElement << 8;
    let species = written ? readSpecies(columns.text, start, end) : UNKNOWN;
    if (species & UNKNOWN) {
      const residueName = columns.trimmed(line, ATOM_COLUMNS.residueName);
      const inferred = elementFromName(columns.raw(line, ATOM_COLUMNS.name), residueName);
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

  /** Drops alternate locations, and returns the table. */
  build(): { atoms: AtomTable; residues: ResidueTable; alternateSites: number; firstAlternateLine: number } {
    const chosen = this.#alternates.length > 0 ? chooseAlternates(this.#alternates) : null;
    if (chosen === null || chosen.dropped.size === 0) {
      const residues = this.#residues.build();
      return { atoms: this.#atoms.build(), residues, alternateSites: 0, firstAlternateLine: -1 };
    }
    const firstAlternateLine = this.#atoms.line[chosen.dropped.values().next().value!]!;
    const residues = this.#regroup(chosen.dropped);
    return { atoms: this.#atoms.build(), residues, alternateSites: chosen.sites, firstAlternateLine };
  }

  /** Removes atoms and forms residues of the rest anew. */
  #regroup(dropped: ReadonlySet<number>): ResidueTable {
    const total = this.#atoms.count;
    removeAtoms(this.#atoms, dropped);
    const { residue, line } = this.#atoms;
    const builder = new ResidueBuilder(this.#columns, this.#atoms.count);
    let atom = 0;
    for (let i = 0; i < total; i++) {
      if (this.#segmentStarts.has(i)) builder.endSegment();
      if (dropped.has(i)) continue;
      residue![atom] = builder.add(atom, line[atom]!);
      atom++;
    }
    return builder.build();
  }
}

/** Whether a line begins with ATOM and a blank, or HETATM. */
function isAtomRecord(view: DataView, start: number): boolean {
  const four = view.getInt32(start, true);
  if (four === ATOM_WORD) return view.getUint8(start + 4) === BLANK;
  return four === HETA_WORD && view.getUint8(start + 4) === LETTER_T && view.getUint8(start + 5) === LETTER_M;
}

/** Atomic number by the symbol in two columns, right- or left-justified; 0 for anything else. */
function elementAt(bytes: Uint8Array, start: number): number {
  const first = bytes[start]!;
  const second = bytes[start + 1]!;
  return first === BLANK ? symbolNumber(second, BLANK) : symbolNumber(first, second);
}

/** Whether two columns are blank, as far as the line goes. */
function isBlankToEnd(bytes: Uint8Array, start: number): boolean {
  const first = bytes[start]!;
  return isLineEnd(first) || (first === BLANK && (bytes[start + 1] === BLANK || isLineEnd(bytes[start + 1]!)));
}

function isLineEnd(unit: number): boolean {
  return unit === LF || unit === CR;
}

/** Reads columns 79–80: a digit and a sign in either order, a sign alone for one; NaN where blank or anything else. */
export function readFormalCharge(text: string): number {
  const match = /^(?:(\d)([+-])|([+-])(\d)|([+-]))$/.exec(text);
  if (match === null) return Number.NaN;
  const size = Number(match[1] ?? match[4] ?? 1);
  const sign = match[2] ?? match[3] ?? match[5];
  return sign === '-' ? -size : size;
}
