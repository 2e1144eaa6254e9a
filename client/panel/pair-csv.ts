import type { PairRow } from '../../server/src/features/pair-list';
import { csv } from './words';

const COLUMNS = [
  'distanceA',
  'energyKJPerMol',
  'energyFrom',
  'pointKJPerMol',
  'strengthKJPerMol',
  'regime',
  'contact',
  'advice',
] as const satisfies readonly (keyof PairRow)[];

/** Rows of a table of pairs as CSV; energies in kJ/mol. */
export function pairsCsv(rows: readonly PairRow[]): string {
  const head = ['first', 'second', 'firstName', 'secondName', ...COLUMNS];
  return csv([head, ...rows.map((row) => [row.first, row.second, ...row.names, ...COLUMNS.map((name) => row[name])])]);
}
