/** A field of comma-separated values. */
export type Field = string | number | null;

/** A line of comma-separated values (RFC 4180); an empty field stands for null. */
export function csvLine(fields: readonly Field[]): string {
  return `${fields.map(quoted).join(',')}\n`;
}

function quoted(field: Field): string {
  if (field === null) return '';
  const text = String(field);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
