import { builtInEntries } from '../library/built-in';
import { FragmentLibrary } from '../library/match';
import type { Knowledge } from './settings';

let library: FragmentLibrary | undefined;

/** What the program knows of molecules without any file of the user's; the library is read at first need and shared. */
export function builtInKnowledge(allowed: {
  readonly library: boolean;
  readonly estimates: boolean;
}): Knowledge | null {
  if (!allowed.library && !allowed.estimates) return null;
  if (allowed.library) library ??= new FragmentLibrary(builtInEntries());
  return { library: allowed.library ? library! : null, estimates: allowed.estimates };
}
