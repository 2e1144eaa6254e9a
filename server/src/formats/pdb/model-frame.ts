import type { Span } from '../../base/span';
import { trimEnd } from '../../text/numbers';
import type { AtomField, AtomTable, FrameTree, Residue } from '../tree';
import { ATOM_COLUMNS, type FixedColumns } from './fields';
import { residueList } from './residue-list';
import type { ResidueTable } from './residues';

const NO_BONDS = new Int32Array(0);

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
  readonly #residueTable: ResidueTable;
  #residues: readonly Residue[] | null = null;

  constructor(
    columns: FixedColumns,
    index: number,
    firstLine: number,
    endLine: number,
    atoms: AtomTable,
    residueTable: ResidueTable,
    cell: FrameTree['cell'],
  ) {
    this.#columns = columns;
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
      return columns.span(line, [ATOM_COLUMNS.residueName[0], ATOM_COLUMNS.insertion[1]]);
    default:
      return columns.span(line, ATOM_COLUMNS[field]);
  }
}
