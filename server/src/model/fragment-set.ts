/** What made the fragments of a frame. */
export type FragmentOrigin = 'column' | 'list' | 'bonds' | 'residues';

/** The fragments of a frame, numbered by their first atom. */
export interface FragmentSet {
  readonly count: number;
  readonly origin: FragmentOrigin;
  /** Fragment of each atom; −1 for an atom that belongs to none. */
  readonly ofAtom: Int32Array;
  /** Atoms of fragment f are `members[starts[f]..starts[f + 1])`, ascending. */
  readonly starts: Int32Array;
  readonly members: Int32Array;
  /** Whether a fragment was declared (column, list or residue) rather than found by bonds. */
  readonly declared: Uint8Array;
}

/** Atoms of one fragment, ascending (a view, not a copy). */
export function atomsOf(set: FragmentSet, fragment: number): Int32Array {
  return set.members.subarray(set.starts[fragment]!, set.starts[fragment + 1]!);
}

/**
 * Makes a set from a label for each atom (any whole number; −1: in no fragment): fragments are numbered by their first atom.
 * `isDeclared` tells it of a label.
 */
export function fragmentsFromLabels(
  labels: Int32Array,
  origin: FragmentOrigin,
  isDeclared: (label: number) => boolean,
): FragmentSet {
  const numberOf = new Map<number, number>();
  const ofAtom = new Int32Array(labels.length);
  const sizes: number[] = [];
  const declared: number[] = [];
  for (let i = 0; i < labels.length; i++) {
    const label = labels[i]!;
    if (label < 0) {
      ofAtom[i] = -1;
      continue;
    }
    let fragment = numberOf.get(label);
    if (fragment === undefined) {
      fragment = sizes.length;
      numberOf.set(label, fragment);
      sizes.push(0);
      declared.push(isDeclared(label) ? 1 : 0);
    }
    ofAtom[i] = fragment;
    sizes[fragment]!++;
  }
  const starts = new Int32Array(sizes.length + 1);
  for (let f = 0; f < sizes.length; f++) starts[f + 1] = starts[f]! + sizes[f]!;
  const members = new Int32Array(starts[sizes.length]!);
  const next = starts.slice();
  for (let i = 0; i < labels.length; i++) if (ofAtom[i]! >= 0) members[next[ofAtom[i]!]!++] = i;
  return { count: sizes.length, origin, ofAtom, starts, members, declared: Uint8Array.from(declared) };
}

/** Disjoint sets of whole numbers; the smallest member stands for each set, so labels come out canonical. */
export class UnionFind {
  readonly #parent: Int32Array;

  constructor(count: number) {
    this.#parent = Int32Array.from({ length: count }, (_, i) => i);
  }

  find(i: number): number {
    const parent = this.#parent;
    let at = i;
    while (parent[at] !== at) {
      parent[at] = parent[parent[at]!]!;
      at = parent[at]!;
    }
    return at;
  }

  union(i: number, j: number): void {
    const a = this.find(i);
    const b = this.find(j);
    if (a < b) this.#parent[b] = a;
    else if (b < a) this.#parent[a] = b;
  }
}
