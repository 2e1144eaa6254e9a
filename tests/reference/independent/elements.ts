/**
 * Element data of the independent calculation, typed in apart from the program's own tables.
 * Weights: IUPAC 2016 (Meija et al., Pure Appl. Chem. 88 (2016) 265), abridged values.
 * Covalent radii: Cordero et al., Dalton Trans. 2008, 2832 (C sp3, Fe low spin).
 * Van der Waals radii: Bondi, J. Phys. Chem. 68 (1964) 441; Ca: Mantina et al.,
 * J. Phys. Chem. A 113 (2009) 5806; Fe, Zn: Alvarez, Dalton Trans. 2013, 42, 8617.
 * Electrons of the Slater–Kirkwood formula: Halgren, J. Comput. Chem. 17 (1996) 520; of elements he does not give,
 * those outside the last noble-gas core (Fe 3d⁶ 4s², Zn 3d¹⁰ 4s²), of a noble gas its outer shell.
 */
export interface Element {
  z: number;
  weight: number;
  covalent: number;
  vdw: number;
  /** Electrons that take part in dispersion. */
  electrons: number;
  kind: 'nonmetal' | 'group 1 or 2' | 'other metal';
}

const ELEMENTS: Record<string, Element> = {
  H: { z: 1, weight: 1.008, covalent: 0.31, vdw: 1.2, electrons: 0.8, kind: 'nonmetal' },
  He: { z: 2, weight: 4.002602, covalent: 0.28, vdw: 1.4, electrons: 2, kind: 'nonmetal' },
  Li: { z: 3, weight: 6.94, covalent: 1.28, vdw: 1.82, electrons: 1, kind: 'group 1 or 2' },
  C: { z: 6, weight: 12.011, covalent: 0.76, vdw: 1.7, electrons: 2.49, kind: 'nonmetal' },
  N: { z: 7, weight: 14.007, covalent: 0.71, vdw: 1.55, electrons: 2.82, kind: 'nonmetal' },
  O: { z: 8, weight: 15.999, covalent: 0.66, vdw: 1.52, electrons: 3.15, kind: 'nonmetal' },
  F: { z: 9, weight: 18.998403163, covalent: 0.57, vdw: 1.47, electrons: 3.48, kind: 'nonmetal' },
  Na: { z: 11, weight: 22.98976928, covalent: 1.66, vdw: 2.27, electrons: 1, kind: 'group 1 or 2' },
  Mg: { z: 12, weight: 24.305, covalent: 1.41, vdw: 1.73, electrons: 2, kind: 'group 1 or 2' },
  P: { z: 15, weight: 30.973761998, covalent: 1.07, vdw: 1.8, electrons: 4.5, kind: 'nonmetal' },
  S: { z: 16, weight: 32.06, covalent: 1.05, vdw: 1.8, electrons: 4.8, kind: 'nonmetal' },
  Cl: { z: 17, weight: 35.45, covalent: 1.02, vdw: 1.75, electrons: 5.1, kind: 'nonmetal' },
  Ar: { z: 18, weight: 39.948, covalent: 1.06, vdw: 1.88, electrons: 8, kind: 'nonmetal' },
  K: { z: 19, weight: 39.0983, covalent: 2.03, vdw: 2.75, electrons: 1, kind: 'group 1 or 2' },
  Ca: { z: 20, weight: 40.078, covalent: 1.76, vdw: 2.31, electrons: 2, kind: 'group 1 or 2' },
  Fe: { z: 26, weight: 55.845, covalent: 1.32, vdw: 2.44, electrons: 8, kind: 'other metal' },
  Zn: { z: 30, weight: 65.38, covalent: 1.22, vdw: 2.39, electrons: 12, kind: 'other metal' },
  Br: { z: 35, weight: 79.904, covalent: 1.2, vdw: 1.85, electrons: 6, kind: 'nonmetal' },
  I: { z: 53, weight: 126.90447, covalent: 1.39, vdw: 1.98, electrons: 6.95, kind: 'nonmetal' },
};

/** A ghost centre: no mass, no bond, no contact. */
export const GHOST = 'X';

export function element(symbol: string): Element {
  const found = ELEMENTS[symbol];
  if (found === undefined) throw new Error(`the independent calculation has no element ${symbol}`);
  return found;
}

/** First field of an atom line: symbol in any case, symbol with a number, atomic number, ghost. */
export function readSymbol(field: string): string {
  if (/^\d+$/.test(field)) {
    for (const [symbol, data] of Object.entries(ELEMENTS)) if (data.z === Number(field)) return symbol;
    throw new Error(`the independent calculation has no element number ${field}`);
  }
  if (/^(x\d*|bq\d*|gh.*)$/i.test(field)) return GHOST;
  const letters = field.replace(/[^A-Za-z].*$/, '');
  const symbol = letters.charAt(0).toUpperCase() + letters.slice(1).toLowerCase();
  element(symbol);
  return symbol;
}

/** Hill order: carbon, hydrogen, then alphabetical; alphabetical throughout where there is no carbon. */
export function hillFormula(symbols: string[]): string {
  const counts = new Map<string, number>();
  for (const symbol of symbols) counts.set(symbol, (counts.get(symbol) ?? 0) + 1);
  const order = [...counts.keys()].sort();
  const leading = counts.has('C') ? ['C', 'H'].filter((symbol) => counts.has(symbol)) : [];
  const sorted = [...leading, ...order.filter((symbol) => !leading.includes(symbol))];
  return sorted.map((symbol) => symbol + (counts.get(symbol) === 1 ? '' : String(counts.get(symbol)))).join('');
}

/** The same composition however the formula is ordered: `NH3` and `H3N`. */
export function sameComposition(formula: string, symbols: string[]): boolean {
  const spelled: string[] = [];
  for (const [, symbol, count] of formula.matchAll(/([A-Z][a-z]?)(\d*)/g)) {
    for (let i = 0; i < (count === '' ? 1 : Number(count)); i++) spelled.push(symbol!);
  }
  return hillFormula(spelled) === hillFormula(symbols);
}
