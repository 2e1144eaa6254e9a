import { readFileSync } from 'node:fs';
import type { LibraryEntry } from '../library/entry';
import { readLibrary } from '../library/user-library';
import { UsageError } from './input';

/** The entries of the user's files on top of others. Throws a {@link UsageError} that says where a file is wrong. */
export function withUserEntries(base: readonly LibraryEntry[], files: readonly string[]): readonly LibraryEntry[] {
  return files.reduce((entries, file) => {
    const { entries: more, problems } = readLibrary(jsonOf(file), entries);
    const [first] = problems;
    if (first !== undefined) throw new UsageError(`${file}: ${first.path || '/'}: ${first.message}`);
    return more;
  }, base);
}

function jsonOf(file: string): unknown {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch (error) {
    throw new UsageError(`${file}: ${(error as Error).message}`);
  }
}
