import { COVALENT_RADIUS_A } from './elements';

/** Bonds of one fragment as neighbour lists: the neighbours of atom i are `neighbours[start[i]]` to `neighbours[start[i + 1] − 1]`. */
export interface FragmentGraph {
  readonly count: number;
  readonly start: Uint32Array;
  readonly neighbours: Uint32Array;
  /** Both atoms of each bond, the smaller number first. */
  readonly bonds: Uint32Array;
}

/** Two atoms are bonded up to this many times the sum of their covalent radii. */
const REACH = 1.3;

/** Hydrogen, lithium, sodium, potassium. */
const HYDROGEN = 1;
const LONE_PARTNER = [3, 11, 19];

/**
 * Bonds of a fragment by distance: d < 1.3 (r_i + r_j), Cordero's covalent radii; no bond between two hydrogens unless they are the
 * whole fragment; a hydrogen keeps its nearest neighbour alone; Li, Na and K hold on to their nearest atom alone.
 *
 * This is the graph that the estimates of dipole and polarizability were fitted with; it is not the program's connectivity, which
 * tells one molecule from the next. Cost: n²/2 distances.
 */
export function fragmentGraph(count: number, elements: ArrayLike<number>, positionsA: Float64Array): FragmentGraph {
  const first: number[] = [];
  const second: number[] = [];
  const nearest = new Int32Array(count).fill(-1);
  const nearestSquare = new Float64Array(count).fill(Number.POSITIVE_INFINITY);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < i; j++) {
      const bothHydrogen = elements[i] === HYDROGEN && elements[j] === HYDROGEN;
      if (bothHydrogen && count > 2) continue;
      const x = positionsA[3 * i]! - positionsA[3 * j]!;
      const y = positionsA[3 * i + 1]! - positionsA[3 * j + 1]!;
      const z = positionsA[3 * i + 2]! - positionsA[3 * j + 2]!;
      const square = x * x + y * y + z * z;
      if (square < nearestSquare[i]!) {
        nearestSquare[i] = square;
        nearest[i] = j;
      }
      if (square < nearestSquare[j]!) {
        nearestSquare[j] = square;
        nearest[j] = i;
      }
      const reach = REACH * (COVALENT_RADIUS_A[elements[i]!]! + COVALENT_RADIUS_A[elements[j]!]!);
      if (square < reach * reach) {
        first.push(j);
        second.push(i);
      }
    }
  }
  const single = (i: number) => elements[i] === HYDROGEN || LONE_PARTNER.includes(elements[i]!);
  const kept: number[] = [];
  for (let k = 0; k < first.length; k++) {
    const [i, j] = [first[k]!, second[k]!];
    if ((single(i) && nearest[i] !== j) || (single(j) && nearest[j] !== i)) continue;
    kept.push(i, j);
  }
  for (let i = 0; i < count; i++) {
    const j = nearest[i]!;
    if (!LONE_PARTNER.includes(elements[i]!) || j < 0) continue;
    const [low, high] = i < j ? [i, j] : [j, i];
    let known = false;
    for (let k = 0; k < kept.length; k += 2) known ||= kept[k] === low && kept[k + 1] === high;
    if (!known) kept.push(low, high);
  }
  return withNeighbours(count, Uint32Array.from(kept));
}

function withNeighbours(count: number, bonds: Uint32Array): FragmentGraph {
  const start = new Uint32Array(count + 1);
  for (const atom of bonds) start[atom + 1]!++;
  for (let i = 0; i < count; i++) start[i + 1]! += start[i]!;
  const neighbours = new Uint32Array(bonds.length);
  const next = start.slice();
  for (let k = 0; k < bonds.length; k += 2) {
    const [i, j] = [bonds[k]!, bonds[k + 1]!];
    neighbours[next[i]!++] = j;
    neighbours[next[j]!++] = i;
  }
  return { count, start, neighbours, bonds };
}

/** How many bonds an atom has. */
export function bondCount(graph: FragmentGraph, atom: number): number {
  return graph.start[atom + 1]! - graph.start[atom]!;
}

/** Whether some neighbour of `atom` passes the test. */
export function someNeighbour(graph: FragmentGraph, atom: number, test: (neighbour: number) => boolean): boolean {
  for (let k = graph.start[atom]!; k < graph.start[atom + 1]!; k++) if (test(graph.neighbours[k]!)) return true;
  return false;
}

/** Whether all neighbours of `atom` pass the test. */
export function everyNeighbour(graph: FragmentGraph, atom: number, test: (neighbour: number) => boolean): boolean {
  return !someNeighbour(graph, atom, (neighbour) => !test(neighbour));
}

/** Whether the bond between two neighbours closes a ring of at most `most` atoms. Cost: the atoms within `most` bonds. */
export function inRing(graph: FragmentGraph, from: number, to: number, most = 7): boolean {
  const seen = new Set([from]);
  let edge = [from];
  for (let step = 1; step < most && edge.length > 0; step++) {
    const next: number[] = [];
    for (const atom of edge) {
      for (let k = graph.start[atom]!; k < graph.start[atom + 1]!; k++) {
        const other = graph.neighbours[k]!;
        if (seen.has(other) || (atom === from && other === to)) continue;
        if (other === to) return true;
        seen.add(other);
        next.push(other);
      }
    }
    edge = next;
  }
  return false;
}
