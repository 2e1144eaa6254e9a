import type { FrameModel } from '../model/frame-model';

/** Atoms up to this many bonds apart make no contact. */
const CONTACT_BONDS = 3;

/**
 * Which fragments are parts of one covalent whole (polymer neighbours and the like), and how many bonds part their atoms. Fragments
 * and atoms are numbered as in the system: the second model after the first.
 */
export class ChainGraph {
  readonly #partners = new Map<number, Set<number>>();
  readonly #models: readonly FrameModel[];
  #adjacency: Map<number, number[]> | null = null;

  constructor(models: readonly FrameModel[]) {
    this.#models = models;
    let fragmentOffset = 0;
    for (const { chainBonds, fragments } of models) {
      for (let k = 0; k < chainBonds.length; k += 2) {
        const f = fragments.ofAtom[chainBonds[k]!]!;
        const g = fragments.ofAtom[chainBonds[k + 1]!]!;
        if (f < 0 || g < 0) continue;
        this.#link(f + fragmentOffset, g + fragmentOffset);
        this.#link(g + fragmentOffset, f + fragmentOffset);
      }
      fragmentOffset += fragments.count;
    }
  }

  #link(f: number, g: number): void {
    const known = this.#partners.get(f);
    if (known === undefined) this.#partners.set(f, new Set([g]));
    else known.add(g);
  }

  /** Whether two fragments share a covalent bond. */
  areBonded(f: number, g: number): boolean {
    return this.#partners.get(f)?.has(g) ?? false;
  }

  /** Whether fragment `f` has the partners of fragment `g` of another graph, whose fragments are numbered on by `g − f`. */
  hasSamePartners(f: number, other: ChainGraph, g: number): boolean {
    const own = this.#partners.get(f);
    const others = other.#partners.get(g);
    if (own === undefined || others === undefined) return own === others;
    if (own.size !== others.size) return false;
    for (const partner of own) if (!others.has(partner + g - f)) return false;
    return true;
  }

  /** Whether a fragment is cut from a chain. */
  isCut(f: number): boolean {
    return this.#partners.has(f);
  }

  /** Atoms (numbers from 1) at most three bonds from an atom, itself included. */
  near(atomNumber: number): Set<number> {
    this.#adjacency ??= this.#bonds();
    const seen = new Set([atomNumber]);
    let edge = [atomNumber];
    for (let step = 0; step < CONTACT_BONDS; step++) {
      const next: number[] = [];
      for (const atom of edge) {
        for (const other of this.#adjacency.get(atom) ?? []) {
          if (seen.has(other)) continue;
          seen.add(other);
          next.push(other);
        }
      }
      edge = next;
    }
    return seen;
  }

  #bonds(): Map<number, number[]> {
    const adjacency = new Map<number, number[]>();
    const join = (a: number, b: number) => {
      const list = adjacency.get(a);
      if (list === undefined) adjacency.set(a, [b]);
      else list.push(b);
    };
    let offset = 1;
    for (const { pairs, tree, chainBonds } of this.#models) {
      const both = (i: number, j: number) => {
        join(i + offset, j + offset);
        join(j + offset, i + offset);
      };
      for (let k = 0; k < pairs.count; k++) if (pairs.bonded[k]) both(pairs.first[k]!, pairs.second[k]!);
      for (const bonds of [tree.bonds, chainBonds]) {
        for (let k = 0; k < bonds.length; k += 2) both(bonds[k]!, bonds[k + 1]!);
      }
      offset += tree.atoms.count;
    }
    return adjacency;
  }
}
