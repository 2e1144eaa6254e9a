export function median(list: readonly number[]): number | null {
  if (list.length === 0) return null;
  const sorted = [...list].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/** The value that a share of the list does not exceed. */
export function quantile(list: readonly number[], share: number): number | null {
  const sorted = [...list].sort((a, b) => a - b);
  return sorted[Math.max(0, Math.ceil(share * sorted.length) - 1)] ?? null;
}

export const shown = (value: number | null) =>
  value === null ? '-' : value < 10 ? value.toFixed(2) : value < 100 ? value.toFixed(1) : value.toFixed(0);

export const metOrMissed = (met: boolean) => (met ? 'met' : 'missed');

export function printTable(table: readonly (readonly string[])[]): void {
  const widths = table[0]!.map((_, column) => Math.max(...table.map((row) => row[column]!.length)));
  for (const row of table) {
    const cells = row.map((cell, column) => (column === 0 ? cell.padEnd(widths[0]!) : cell.padStart(widths[column]!)));
    console.log(cells.join('  ').trimEnd());
  }
}
