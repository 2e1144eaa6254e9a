import { AtomFlag, type AtomTable } from '../formats/tree';
import { symbolOf } from '../physics/elements';

/**
 * The formula of a set of atoms in the Hill system: carbon, hydrogen, then the rest by alphabet; all by alphabet without carbon.
 * Deuterium and tritium are D and T; ghosts and unknown elements do not count; `X` for a set without any other atom.
 * Source: E. A. Hill, J. Am. Chem. Soc. 22 (1900) 478.
 */
export function hillFormula(atoms: AtomTable, members: ArrayLike<number>): string {
  const counts = new Map<string, number>();
  for (let k = 0; k < members.length; k++) {
    const i = members[k]!;
    const z = atoms.element[i]!;
    if (z === 0) continue;
    const flags = atoms.flags[i]!;
    const symbol = flags & AtomFlag.deuterium ? 'D' : flags & AtomFlag.tritium ? 'T' : symbolOf(z);
    counts.set(symbol, (counts.get(symbol) ?? 0) + 1);
  }
  const symbols = [...counts.keys()].sort();
  const leading = counts.has('C') ? ['C', 'H'].filter((symbol) => counts.has(symbol)) : [];
  const ordered = [...leading, ...symbols.filter((symbol) => !leading.includes(symbol))];
  const text = ordered.map((symbol) => (counts.get(symbol) === 1 ? symbol : `${symbol}${counts.get(symbol)}`)).join('');
  return text === '' ? 'X' : text;
}
