/** A table in Markdown. */
export function markdownTable(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]) => `| ${cells.join(' | ')} |`;
  return [line(head), line(head.map(() => '---')), ...rows.map(line)].join('\n');
}

/** Prints a table where the environment asks for it: `POLEWISE_TABLES=1 npx vitest run tests/reference/outside-`. */
export function printIfAsked(title: string, table: () => string): void {
  const { POLEWISE_TABLES: asked } = process.env;
  if (asked !== undefined) process.stdout.write(`\n${title}\n\n${table()}\n`);
}
