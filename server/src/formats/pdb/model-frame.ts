import { FindingCollector } from '../../base/finding';
import type { Span } from '../../base/span';
import type { LineIndex } from '../../text/lines';
import { trimEnd } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { AtomField, AtomReading, AtomTable, FrameTree, Residue } from '../tree';
import { ModelAtoms } from './atoms';
import { ATOM_COLUMNS, type ColumnRange, FixedColumns } from './fields';
import { residueList } from './residue-list';
import type { ResidueTable } from './residues';

const NO_BONDS = new Int32Array(0);
const BLANK = 32;

/** One model of a PDB file as read. Its residues become objects when first asked for: most uses of a large file need few of them. */
export class ModelFrame implements FrameTree {
  readonly index: number;
  readonly firstLine: number;
  readonly endLine: number;
  readonly atoms: AtomTable;
  readonly groups = null;
  readonly entries = [];
  readonly cell: FrameTree['cell'];
  /** Set when the whole file is read: CONECT and LINK hold for every model. */
  bonds: Int32Array = NO_BONDS;
  readonly #columns: FixedColumns;
  readonly #chargeColumn: ColumnRange | null;
  readonly #residueTable: ResidueTable;
  #residues: readonly Residue[] | null = null;

  constructor(
    columns: FixedColumns,
    chargeColumn: ColumnRange | null,
    index: number,
    firstLine: number,
    endLine: number,
    atoms: AtomTable,
    residueTable: ResidueTable,
    cell: FrameTree['cell'],
  ) {
    this.#columns = columns;
    this.#chargeColumn = chargeColumn;
    this.index = index;
    this.firstLine = firstLine;
    this.endLine = endLine;
    this.atoms = atoms;
    this.#residueTable = residueTable;
    this.cell = cell;
  }

  get headLine(): number {
    return this.firstLine;
  }

  get residues(): readonly Residue[] {
    this.#residues ??= residueList(this.#columns, this.atoms.line, this.#residueTable);
    return this.#residues;
  }

  fieldSpan(atom: number, field: AtomField): Span {
    return fieldOf(this.#columns, this.atoms.line[atom]!, field);
  }

  readAtom(atom: number): AtomReading | null {
    return readAtomLine(this.#columns, this.#chargeColumn, this.atoms.line[atom]!);
  }

  inText(text: Snapshot, lines: LineIndex): ModelFrame {
    const frame = new ModelFrame(
      new FixedColumns(text, lines),
      this.#chargeColumn,
      this.index,
      this.firstLine,
      this.endLine,
      this.atoms,
      this.#residueTable,
      this.cell,
    );
    frame.bonds = this.bonds;
    frame.#residues = this.#residues;
    return frame;
  }
}

/** Reads an atom line of which nothing has to be said, else `null`. */
function readAtomLine(columns: FixedColumns, chargeColumn: ColumnRange | null, line: number): AtomReading | null {
  const { text, lines } = columns;
  const start = lines.starts[line]!;
  // Which of two alternates stays may hang on a column that is read as a charge.
  if (text.bytes[start + ATOM_COLUMNS.altLoc[0]] !== BLANK) return null;
  // Where the charge stands among the last columns they are no longer told apart.
  if (chargeColumn !== null && chargeColumn[1] > ATOM_COLUMNS.element[0]) return null;
  const problems = new FindingCollector();
  const model = new ModelAtoms(columns, problems, chargeColumn, 1);
  model.read(line);
  const { atoms } = model.build();
  if (problems.list().length > 0 || atoms.flags[0] !== 0) return null;
  const whole = text.slice(start, lines.end(line));
  const [from, to] = chargeColumn ?? [ATOM_COLUMNS.z[1], ATOM_COLUMNS.z[1]];
  const [x, y, z] = atoms.positionA as unknown as [number, number, number];
  return {
    positionA: [x, y, z],
    chargeE: atoms.chargeE === null ? null : atoms.chargeE[0]!,
    dipoleEA: null,
    rest: `${whole.slice(0, ATOM_COLUMNS.x[0])}|${whole.slice(ATOM_COLUMNS.z[1], from)}|${whole.slice(to)}`,
  };
}

function fieldOf(columns: FixedColumns, line: number, field: AtomField): Span {
  const { bytes } = columns.text;
  switch (field) {
    case 'line': {
      const start = columns.lines.starts[line]!;
      return { start, end: trimEnd(bytes, start, columns.lines.end(line)) };
    }
    case 'element': {
      const written = columns.span(line, ATOM_COLUMNS.element);
      return columns.trimmed(line, ATOM_COLUMNS.element) === '' ? columns.span(line, ATOM_COLUMNS.name) : written;
    }
    case 'charge':
      return columns.span(line, ATOM_COLUMNS.formalCharge);
    case 'name':
    case 'group':
      return columns.span(line, [ATOM_COLUMNS.residueName[0], ATOM_COLUMNS.insertion[1]]);
    default:
      return columns.span(line, ATOM_COLUMNS[field]);
  }
}
