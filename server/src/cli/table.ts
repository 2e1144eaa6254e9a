/** A column of a text table. */
export interface Column {
  readonly title: string;
  readonly align: 'left' | 'right';
}

/** Lays out rows under titles, columns as wide as their widest cell, two blanks between them, no blanks at line ends. */
export function textTable(columns: readonly Column[], rows: readonly (readonly string[])[], indent = '  '): string {
  const widths = columns.map(({ title }, k) =>
    rows.reduce((width, row) => Math.max(width, [...row[k]!].length), [...title].length),
  );
  const line = (cells: readonly string[]) =>
    (
      indent +
      cells
        .map((cell, k) => {
          const padding = ' '.repeat(widths[k]! - [...cell].length);
          return columns[k]!.align === 'left' ? cell + padding : padding + cell;
        })
        .join('  ')
    ).trimEnd();
  return [line(columns.map(({ title }) => title)), ...rows.map(line)].map((text) => `${text}\n`).join('');
}
