import data from './entries.json';
import type { LibraryEntry } from './entry';
import { readLibrary } from './user-library';

let entries: readonly LibraryEntry[] | undefined;

/** The entries that come with the program, read at first need from a file of the form that users write. */
export function builtInEntries(): readonly LibraryEntry[] {
  entries ??= readLibrary(data, [], false).entries;
  return entries;
}
