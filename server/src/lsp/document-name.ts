/** The name of a document without its folder, from its address; one that cannot be decoded stays as it stands. */
export function documentName(uri: string): string {
  const path = uri.replace(/[?#].*$/s, '');
  let decoded = path;
  try {
    decoded = decodeURIComponent(path);
  } catch {
    // A stray percent sign: the address is the name.
  }
  return (
    decoded
      .replace(/^[a-z][\w+.-]*:/i, '')
      .split(/[/\\]/)
      .at(-1) || 'document'
  );
}
