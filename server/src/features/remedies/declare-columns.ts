import type { CoordinateTree, FrameTree } from '../../formats/tree';
import { CommentLine } from '../rewrite/comment-line';
import { offered, type RemedyMaker } from './remedy';

/** Atomic charges are hardly larger, e, and those of a frame add up to a whole number within this. */
const LARGEST_CHARGE_E = 3;
const WHOLE_E = 0.05;
/** Fields past these are not declared. */
const MOST_FIELDS = 40;
const PLAIN = 'species:S:1:pos:R:3';

/** Says what the columns after z are: charges where they look so, and else something that is not interpreted. */
export const declareColumns: RemedyMaker = (_, { file, frame }) => {
  const { tree } = frame.model;
  const columns = furtherColumns(file, tree);
  if (columns === null) return [];
  const write = (properties: string) => {
    const line = new CommentLine(file, tree);
    line.set('Properties', properties);
    return line.edits();
  };
  const neutral = `${PLAIN}:${columns.map((column, k) => `column_${k + 5}:${typeOf(column)}:1`).join(':')}`;
  const asCharges = columns.length === 1 && lookLikeCharges(columns[0]!) ? write(`${PLAIN}:charge:R:1`) : null;
  return [
    ...offered('Declare the further column as atomic charges', asCharges),
    ...offered('Declare the further columns without a meaning', write(neutral)),
  ];
};

/** The fields after z by columns; `null` where the lines do not all have as many. */
function furtherColumns({ text, lines }: CoordinateTree, { atoms }: FrameTree): string[][] | null {
  const columns: string[][] = [];
  for (let i = 0; i < atoms.count; i++) {
    const line = atoms.line[i]!;
    const fields = text.slice(lines.starts[line]!, lines.end(line)).trim().split(/\s+/).slice(4);
    if (i === 0) for (let k = 0; k < fields.length; k++) columns.push([]);
    if (fields.length !== columns.length || fields.length === 0 || fields.length > MOST_FIELDS) return null;
    for (const [k, field] of fields.entries()) columns[k]!.push(field);
  }
  return columns.length === 0 ? null : columns;
}

function typeOf(column: readonly string[]): 'I' | 'R' | 'S' {
  if (column.every((field) => /^[+-]?\d+$/.test(field))) return 'I';
  return column.every((field) => Number.isFinite(numberIn(field))) ? 'R' : 'S';
}

function numberIn(field: string): number {
  return /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?$/.test(field) ? Number(field.replace(/[dD]/, 'e')) : Number.NaN;
}

function lookLikeCharges(column: readonly string[]): boolean {
  if (typeOf(column) !== 'R') return false;
  const charges = column.map(numberIn);
  const sum = charges.reduce((total, charge) => total + charge, 0);
  const isSmall = charges.every((charge) => Math.abs(charge) <= LARGEST_CHARGE_E);
  return isSmall && charges.some((charge) => charge !== 0) && Math.abs(sum - Math.round(sum)) <= WHOLE_E;
}
