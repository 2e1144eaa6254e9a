import { nearestWord } from '../annotation/meant';
import type { Residue, Selector } from '../tree';

/** Residues of a larger file are not searched for what was meant. */
const MOST_RESIDUES = 20000;

/**
 * The selector that one matching nothing is surely meant to be: one of its three parts differs from a residue that is there, and only one
 * such part does; the two others and `*` stay as they are. `null` where none or several are as near.
 */
export function nearestSelector(selector: Selector, residues: readonly Residue[]): string | null {
  if (residues.length > MOST_RESIDUES) return null;
  const wanted = partsOf(selector);
  const candidates = new Set<string>();
  for (const part of [0, 1, 2]) {
    if (wanted[part] === '*') continue;
    const others = [0, 1, 2].filter((k) => k !== part);
    const values = new Set<string>();
    for (const residue of residues) {
      const parts = partsOf(residue);
      if (others.every((k) => wanted[k] === '*' || wanted[k] === parts[k])) values.add(parts[part]!);
    }
    const value = valueFor(wanted[part]!, values, others.filter((k) => wanted[k] !== '*').length, part);
    if (value !== null) candidates.add(wanted.map((old, k) => (k === part ? value : old)).join(':'));
  }
  return candidates.size === 1 ? [...candidates][0]! : null;
}

/** The one value there is where two parts speak for it, else one that is nearly the same word. */
function valueFor(wanted: string, values: ReadonlySet<string>, agreeing: number, part: number): string | null {
  const only = values.size === 1 ? [...values][0]! : null;
  if (agreeing === 2 && only !== null) return only;
  const alike = [...values].find((value) => value.toLowerCase() === wanted.toLowerCase());
  if (alike !== undefined) return alike;
  // Of numbers and one-letter chains any other is a letter away.
  return part === 1 ? nearestWord(wanted, values) : null;
}

function partsOf({ chain, name, number, insertion }: Selector | Residue): [string, string, string] {
  return [
    chain === null ? '*' : chain === '' ? '_' : chain,
    name ?? '*',
    number === null || Number.isNaN(number) ? '*' : `${number}${insertion ?? ''}`,
  ];
}
