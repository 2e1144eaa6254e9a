import type { AtomBuilder } from '../atom-builder';

/** An atom that has an alternate-location letter. */
export interface AlternateAtom {
  readonly atom: number;
  /** Chain, number and insertion code: conformers of one place may differ even in residue name. */
  readonly site: string;
  readonly letter: string;
  readonly occupancy: number;
}

/**
 * Decides which alternate locations stay: at each site the letter with the highest total occupancy, the first met among equals.
 * Returns the atoms to leave out and the sites concerned.
 */
export function chooseAlternates(atoms: readonly AlternateAtom[]): { dropped: Set<number>; sites: number } {
  const totals = new Map<string, Map<string, number>>();
  for (const { site, letter, occupancy } of atoms) {
    const letters = totals.get(site) ?? new Map<string, number>();
    letters.set(letter, (letters.get(letter) ?? 0) + (Number.isNaN(occupancy) ? 0 : occupancy));
    totals.set(site, letters);
  }
  const chosen = new Map<string, string>();
  for (const [site, letters] of totals) {
    let best: string | undefined;
    for (const [letter, total] of letters) {
      if (best === undefined || total > letters.get(best)! + 1e-9) best = letter;
    }
    chosen.set(site, best!);
  }
  const dropped = new Set<number>();
  const sites = new Set<string>();
  for (const { atom, site, letter } of atoms) {
    if (chosen.get(site) === letter) continue;
    dropped.add(atom);
    sites.add(site);
  }
  return { dropped, sites: sites.size };
}

/** Removes atoms from a builder's columns, keeping the order of the rest. */
export function removeAtoms(atoms: AtomBuilder, dropped: ReadonlySet<number>): void {
  let kept = 0;
  for (let i = 0; i < atoms.count; i++) {
    if (dropped.has(i)) continue;
    atoms.element[kept] = atoms.element[i]!;
    atoms.flags[kept] = atoms.flags[i]!;
    atoms.positionA.copyWithin(3 * kept, 3 * i, 3 * i + 3);
    atoms.line[kept] = atoms.line[i]!;
    if (atoms.chargeE) atoms.chargeE[kept] = atoms.chargeE[i]!;
    if (atoms.formalE) atoms.formalE[kept] = atoms.formalE[i]!;
    kept++;
  }
  atoms.count = kept;
}
