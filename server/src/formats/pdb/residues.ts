import type { Residue } from '../tree';

/** The parts of an atom record that tell which residue it belongs to. */
export interface ResidueKey {
  readonly chain: string;
  readonly name: string;
  readonly number: number;
  readonly insertion: string;
}

interface OpenResidue extends ResidueKey {
  readonly segment: number;
  readonly atomNames: string[];
  readonly atoms: number[];
  /** Name and alternate location of each atom, to tell a second residue of the same number from the first. */
  readonly seen: Set<string>;
}

/**
 * Groups the atoms of one model into residues. The key alone does not do: residue numbers wrap or overflow in large files, so a
 * residue also ends where an atom name comes a second time.
 */
export class ResidueBuilder {
  readonly #residues: OpenResidue[] = [];
  readonly #byKey = new Map<string, number>();
  #currentKey = '';
  #current = -1;
  #segment = 0;
  #lastChain: string | null = null;

  /** Ends the chain segment (TER). */
  endSegment(): void {
    this.#segment++;
    this.#current = -1;
    this.#currentKey = '';
  }

  /** Index of the residue that an atom belongs to, which is made where there is none. */
  add(atom: number, atomName: string, altLoc: string, rawKey: string, key: () => ResidueKey): number {
    const label = altLoc + atomName;
    let index = rawKey === this.#currentKey ? this.#current : (this.#byKey.get(rawKey) ?? -1);
    let residue = index < 0 ? undefined : this.#residues[index];
    if (residue === undefined || residue.seen.has(label)) {
      const parts = key();
      if (this.#lastChain !== null && parts.chain !== this.#lastChain) this.#segment++;
      this.#lastChain = parts.chain;
      residue = { ...parts, segment: this.#segment, atomNames: [], atoms: [], seen: new Set() };
      index = this.#residues.length;
      this.#residues.push(residue);
      this.#byKey.set(rawKey, index);
    }
    this.#currentKey = rawKey;
    this.#current = index;
    residue.seen.add(label);
    residue.atomNames.push(atomName);
    residue.atoms.push(atom);
    return index;
  }

  build(): Residue[] {
    return this.#residues.map(({ seen: _, ...residue }) => residue);
  }
}
