import { atomicNumberOf, symbolOf } from '../physics/elements';

/**
 * Brings a formula into the Hill order that fragments are named by, so that `CH3OH` and `CH4O` name the same kind. `undefined` where
 * it is no formula of elements and counts.
 */
export function canonicalFormula(formula: string): string | undefined {
  if (formula.length > 60 || !/^(?:[A-Z][a-z]?\d{0,5})+$/.test(formula)) return undefined;
  const counts = new Map<string, number>();
  for (const [, letters, digits] of formula.matchAll(/([A-Z][a-z]?)(\d*)/g)) {
    const isotope = letters === 'D' || letters === 'T';
    const z = isotope ? 1 : atomicNumberOf(letters!);
    if (z === 0) return undefined;
    const symbol = isotope ? letters! : symbolOf(z);
    counts.set(symbol, (counts.get(symbol) ?? 0) + (digits === '' ? 1 : Number(digits)));
  }
  const leading = counts.has('C') ? ['C', 'H'].filter((symbol) => counts.has(symbol)) : [];
  const rest = [...counts.keys()].filter((symbol) => !leading.includes(symbol)).sort();
  return [...leading, ...rest]
    .filter((symbol) => counts.get(symbol)! > 0)
    .map((symbol) => (counts.get(symbol) === 1 ? symbol : `${symbol}${counts.get(symbol)}`))
    .join('');
}
