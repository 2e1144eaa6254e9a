import { AtomFlag, type AtomTable } from '../formats/tree';
import { atomicNumberOf, symbolOf } from '../physics/elements';

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
  return counts.size === 0 ? 'X' : hillText(counts);
}

/** Element counts as text: carbon, hydrogen, then the rest by alphabet; all by alphabet without carbon. */
function hillText(counts: ReadonlyMap<string, number>): string {
  const leading = counts.has('C') ? ['C', 'H'].filter((symbol) => counts.has(symbol)) : [];
  const rest = [...counts.keys()].filter((symbol) => !leading.includes(symbol)).sort();
  return [...leading, ...rest]
    .map((symbol) => (counts.get(symbol) === 1 ? symbol : `${symbol}${counts.get(symbol)}`))
    .join('');
}

/** What is known of the sequences of atoms that begin alike. */
interface Branch {
  formula: string | undefined;
  readonly next: Map<number, Branch>;
}

/** Longer sequences of atoms are seldom met twice. */
const LONGEST_KNOWN = 24;

/** Finds the formulas of many fragments of few kinds: each sequence of elements is counted once. */
export class FormulaBook {
  readonly #root: Branch = { formula: undefined, next: new Map() };

  formulaOf(atoms: AtomTable, members: ArrayLike<number>): string {
    if (members.length > LONGEST_KNOWN) return hillFormula(atoms, members);
    let branch = this.#root;
    for (let k = 0; k < members.length; k++) {
      const atom = members[k]!;
      const key = (atoms.element[atom]! << 8) | atoms.flags[atom]!;
      let next = branch.next.get(key);
      if (next === undefined) {
        next = { formula: undefined, next: new Map() };
        branch.next.set(key, next);
      }
      branch = next;
    }
    branch.formula ??= hillFormula(atoms, members);
    return branch.formula;
  }
}

const LONGEST_FORMULA = 60;

/**
 * Brings a formula into the Hill order that fragments are named by, so that `CH3OH` and `CH4O` name the same kind. `undefined` where
 * it is no formula of elements and counts.
 */
export function canonicalFormula(formula: string): string | undefined {
  if (formula.length > LONGEST_FORMULA || !/^(?:[A-Z][a-z]?\d{0,5})+$/.test(formula)) return undefined;
  const counts = new Map<string, number>();
  for (const [, letters, digits] of formula.matchAll(/([A-Z][a-z]?)(\d*)/g)) {
    const isotope = letters === 'D' || letters === 'T';
    const z = isotope ? 1 : atomicNumberOf(letters!);
    const count = digits === '' ? 1 : Number(digits);
    if (z === 0) return undefined;
    const symbol = isotope ? letters! : symbolOf(z);
    if (count > 0) counts.set(symbol, (counts.get(symbol) ?? 0) + count);
  }
  return hillText(counts);
}
