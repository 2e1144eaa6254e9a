/**
 * A graph of atoms by element and connection, its neighbours laid out flat: those of atom i are
 * `neighbours[starts[i]..starts[i + 1])`.
 */
export interface AtomGraph {
  readonly elements: Uint8Array;
  readonly starts: Int32Array;
  readonly neighbours: Int32Array;
  /** A number for each atom, the same for two atoms, in one graph or two, that their surroundings do not tell apart. */
  readonly colours: Int32Array;
  /** A number for the graph, the same whatever the order of its atoms. */
  readonly hash: number;
}

/** Makes a graph from elements and a flat list of bonded pairs; a bond told twice counts once, one to itself not at all. */
export function atomGraph(elements: ArrayLike<number>, pairs: ArrayLike<number>): AtomGraph {
  const count = elements.length;
  const seen = new Set<number>();
  for (let k = 0; k + 1 < pairs.length; k += 2) {
    const low = Math.min(pairs[k]!, pairs[k + 1]!);
    const high = Math.max(pairs[k]!, pairs[k + 1]!);
    if (low !== high && low >= 0 && high < count) seen.add(low * count + high);
  }
  const starts = new Int32Array(count + 1);
  for (const pair of seen) {
    starts[Math.floor(pair / count) + 1]!++;
    starts[(pair % count) + 1]!++;
  }
  for (let i = 0; i < count; i++) starts[i + 1]! += starts[i]!;
  const neighbours = new Int32Array(2 * seen.size);
  const next = starts.slice();
  for (const pair of seen) {
    const [i, j] = [Math.floor(pair / count), pair % count];
    neighbours[next[i]!++] = j;
    neighbours[next[j]!++] = i;
  }
  const graph = { elements: Uint8Array.from(elements), starts, neighbours };
  const colours = refinedColours(graph);
  let hash = count;
  for (const colour of colours) hash = (hash + scrambled(colour)) | 0;
  return { ...graph, colours, hash };
}

/** Spreads a whole number over 32 bits (the finalizer of MurmurHash3, in the public domain). */
function scrambled(value: number): number {
  let bits = value;
  bits = Math.imul(bits ^ (bits >>> 16), 0x85ebca6b);
  bits = Math.imul(bits ^ (bits >>> 13), 0xc2b2ae35);
  return bits ^ (bits >>> 16);
}

/**
 * Colours of atoms by repeated refinement: an atom's next colour comes from its own and those of its neighbours in any order,
 * until no more atoms are told apart. Source: B. Weisfeiler and A. Leman, Nauchno-Tekh. Inf. 2 (1968) 12.
 */
function refinedColours(graph: Pick<AtomGraph, 'elements' | 'starts' | 'neighbours'>): Int32Array {
  const { elements, starts, neighbours } = graph;
  let colours = Int32Array.from(elements, scrambled);
  let kinds = new Set(colours).size;
  for (;;) {
    const refined = colours.map((colour, i) => {
      let around = 0;
      for (let k = starts[i]!; k < starts[i + 1]!; k++) around = (around + scrambled(colours[neighbours[k]!]!)) | 0;
      return scrambled((Math.imul(colour, 31) + around + starts[i + 1]! - starts[i]!) | 0);
    });
    const refinedKinds = new Set(refined).size;
    colours = refined;
    if (refinedKinds <= kinds) return colours;
    kinds = refinedKinds;
  }
}

/** Trials after which the search for a mapping gives up; molecules need about one an atom. */
const MOST_TRIALS = 5_000;

/**
 * A mapping of the atoms of `from` onto those of `to` that keeps elements and bonds, or `null` where there is none (or none was
 * found within the bound). `pinned` asks that one atom goes to a certain other.
 */
export function findMapping(from: AtomGraph, to: AtomGraph, pinned?: readonly [number, number]): Int32Array | null {
  const count = from.elements.length;
  if (from.hash !== to.hash || count !== to.elements.length || from.neighbours.length !== to.neighbours.length)
    return null;
  const order = searchOrder(from, pinned?.[0] ?? 0);
  const image = new Int32Array(count).fill(-1);
  const taken = new Uint8Array(count);
  let trials = 0;

  const fits = (atom: number, target: number): boolean => {
    if (taken[target] === 1 || from.colours[atom] !== to.colours[target]) return false;
    if (from.elements[atom] !== to.elements[target]) return false;
    if (pinned !== undefined && pinned[0] === atom && pinned[1] !== target) return false;
    for (let k = from.starts[atom]!; k < from.starts[atom + 1]!; k++) {
      const mapped = image[from.neighbours[k]!]!;
      if (mapped >= 0 && !areBonded(to, target, mapped)) return false;
    }
    return true;
  };
  const extend = (depth: number): boolean => {
    if (depth === count) return true;
    const atom = order[depth]!;
    for (let target = 0; target < count; target++) {
      if (!fits(atom, target)) continue;
      if (++trials > MOST_TRIALS) return false;
      image[atom] = target;
      taken[target] = 1;
      if (extend(depth + 1)) return true;
      image[atom] = -1;
      taken[target] = 0;
    }
    return false;
  };
  return extend(0) ? image : null;
}

function areBonded(graph: AtomGraph, i: number, j: number): boolean {
  for (let k = graph.starts[i]!; k < graph.starts[i + 1]!; k++) if (graph.neighbours[k] === j) return true;
  return false;
}

/** Atoms in an order in which each follows one that it is bonded to, as far as the graph hangs together. */
function searchOrder(graph: AtomGraph, first: number): number[] {
  const count = graph.elements.length;
  const order: number[] = [];
  const listed = new Uint8Array(count);
  for (let start = first, tried = 0; tried <= count; start = tried++) {
    if (start >= count || listed[start] === 1) continue;
    listed[start] = 1;
    for (let at = order.push(start) - 1; at < order.length; at++) {
      for (let k = graph.starts[order[at]!]!; k < graph.starts[order[at]! + 1]!; k++) {
        const neighbour = graph.neighbours[k]!;
        if (listed[neighbour] === 1) continue;
        listed[neighbour] = 1;
        order.push(neighbour);
      }
    }
  }
  return order;
}

/** All atoms that some mapping of the graph onto itself puts in the place of one of `atoms`, ascending. */
export function equivalentAtoms(graph: AtomGraph, atoms: readonly number[]): number[] {
  const found = new Set(atoms);
  for (const atom of atoms) {
    for (let other = 0; other < graph.elements.length; other++) {
      if (found.has(other) || graph.colours[other] !== graph.colours[atom]) continue;
      if (findMapping(graph, graph, [atom, other]) !== null) found.add(other);
    }
  }
  return [...found].sort((a, b) => a - b);
}
