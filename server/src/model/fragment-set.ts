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
 * Makes a set from a label for each atom (a whole number not much above the number of atoms; −1: in no fragment): fragments are numbered by their first atom.
 * `isDeclared` tells it of a label.
 */
export function fragmentsFromLabels(
  labels: Int32Array,
  origin: FragmentOrigin,
  isDeclared: (label: number) => boolean,
): FragmentSet {
  let largest = -1;
  for (let i = 0; i < labels.length; i++) if (labels[i]! > largest) largest = labels[i]!;
  const numberOf = new Int32Array(largest + 1).fill(-1);
  const ofAtom = new Int32Array(labels.length);
  const declared = new Uint8Array(labels.length);
  const sizes = new Int32Array(labels.length);
  let count = 0;
  for (let i = 0; i < labels.length; i++) {
    const label = labels[i]!;
    if (label < 0) {
      ofAtom[i] = -1;
      continue;
    }
    let fragment = numberOf[label]!;
    if (fragment < 0) {
      fragment = count++;
      numberOf[label] = fragment;
      declared[fragment] = isDeclared(label) ? 1 : 0;
    }
    ofAtom[i] = fragment;
    sizes[fragment]!++;
  }
  const starts = new Int32Array(count + 1);
  for (let f = 0; f < count; f++) starts[f + 1] = starts[f]! + sizes[f]!;
  const members = new Int32Array(starts[count]!);
  const next = starts.slice();
  for (let i = 0; i < labels.length; i++) if (ofAtom[i]! >= 0) members[next[ofAtom[i]!]!++] = i;
  return { count, origin, ofAtom, starts, members, declared: declared.slice(0, count) };
}

/** Disjoint sets of whole numbers; the smallest member stands for each set, so labels come out canonical. */
export class UnionFind {
  readonly #parent: Int32Array;

  constructor(count: number) {
    this.#parent = new Int32Array(count);
    for (let i = 0; i < count; i++) this.#parent[i] = i;
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
