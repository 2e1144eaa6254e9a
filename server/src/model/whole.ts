import { AtomFlag, type AtomTable } from '../formats/tree';
import { type Cell, imageResult, minimumImage } from './cell';
import { bondLimitA, type ClosePairs } from './close-pairs';
import type { FragmentSet } from './fragment-set';

/** Positions with every fragment made whole across the periodic boundary. */
export interface WholePositions {
  readonly positionA: Float64Array;
  /** 1 for a fragment that is bonded to its own image and so has no end. */
  readonly endless: Uint8Array;
}

/** A step between images of one atom longer than this shows an endless fragment, Å. */
const IMAGE_STEP_A = 0.5;
/** No covalent bond is longer, Å. */
const LONGEST_BOND_A = 4;
/** Fragments up to this size place an unbonded member beside its nearest placed one; larger ones beside the first. */
const NEAREST_SEARCH_LIMIT = 200;

/**
 * Moves the atoms of each fragment by whole cell vectors so that bonded atoms stand side by side, starting from its first atom as
 * written. A member that no bond reaches goes to its image nearest to the members placed so far.
 */
export function makeWhole(atoms: AtomTable, set: FragmentSet, pairs: ClosePairs, cell: Cell | null): WholePositions {
  const endless = new Uint8Array(set.count);
  if (cell === null) return { positionA: atoms.positionA, endless };
  const positionA = atoms.positionA.slice();
  const neighbours = bondLists(atoms.count, set, pairs);
  const placed = new Uint8Array(atoms.count);
  const image = imageResult();
  const placeBeside = (atom: number, beside: number) => {
    const difference = [0, 1, 2].map((a) => atoms.positionA[3 * atom + a]! - positionA[3 * beside + a]!);
    minimumImage(cell, difference[0]!, difference[1]!, difference[2]!, image);
    for (let a = 0; a < 3; a++) positionA[3 * atom + a] = positionA[3 * beside + a]! + image.vectorA[a]!;
    placed[atom] = 1;
  };
  const isPlaceable = (atom: number) => (atoms.flags[atom]! & AtomFlag.noPosition) === 0;
  markSelfBonded(atoms, set, pairs, cell, endless);
  for (let f = 0; f < set.count; f++) {
    const members = set.members.subarray(set.starts[f]!, set.starts[f + 1]!);
    const order: number[] = [];
    for (const start of members) {
      if (placed[start] || !isPlaceable(start)) continue;
      if (order.length > 0) {
        placeBeside(start, members.length <= NEAREST_SEARCH_LIMIT ? nearest(start, order) : order[0]!);
      }
      placed[start] = 1;
      const queue = [start];
      order.push(start);
      for (let at = 0; at < queue.length; at++) {
        const atom = queue[at]!;
        for (let k = neighbours.starts[atom]!; k < neighbours.starts[atom + 1]!; k++) {
          const other = neighbours.partners[k]!;
          if (placed[other]) {
            if (isFarFromBonded(atom, other)) endless[f] = 1;
            continue;
          }
          placeBeside(other, atom);
          queue.push(other);
          order.push(other);
        }
      }
    }
  }
  return { positionA, endless };

  function nearest(atom: number, order: readonly number[]): number {
    let best = order[0]!;
    let best2 = Number.POSITIVE_INFINITY;
    for (const other of order) {
      const d = [0, 1, 2].map((a) => atoms.positionA[3 * atom + a]! - positionA[3 * other + a]!);
      minimumImage(cell!, d[0]!, d[1]!, d[2]!, image);
      const length2 = image.vectorA[0]! ** 2 + image.vectorA[1]! ** 2 + image.vectorA[2]! ** 2;
      if (length2 < best2) {
        best2 = length2;
        best = other;
      }
    }
    return best;
  }

  function isFarFromBonded(atom: number, other: number): boolean {
    const d = [0, 1, 2].map((a) => positionA[3 * other + a]! - positionA[3 * atom + a]!);
    minimumImage(cell!, d[0]!, d[1]!, d[2]!, image);
    return Math.hypot(...d) > Math.hypot(...image.vectorA) + IMAGE_STEP_A;
  }
}

/**
 * Marks fragments in a cell so narrow that an atom is bonded to its own image, or to two images of one neighbour: the list of close
 * pairs holds only the nearest image, so no ring of bonds would show it.
 */
function markSelfBonded(atoms: AtomTable, set: FragmentSet, pairs: ClosePairs, cell: Cell, endless: Uint8Array): void {
  const { reducedA, periodic } = cell;
  const steps: (readonly [number, number, number])[] = [];
  for (const i of periodic[0] ? [-1, 0, 1] : [0]) {
    for (const j of periodic[1] ? [-1, 0, 1] : [0]) {
      for (const k of periodic[2] ? [-1, 0, 1] : [0]) {
        if (i === 0 && j === 0 && k === 0) continue;
        const shift = [0, 1, 2].map((a) => i * reducedA[a]! + j * reducedA[3 + a]! + k * reducedA[6 + a]!);
        if (Math.hypot(...shift) < 2 * LONGEST_BOND_A) steps.push(shift as unknown as [number, number, number]);
      }
    }
  }
  if (steps.length === 0) return;
  const bonds = (z1: number, z2: number, x: number, y: number, z: number) => Math.hypot(x, y, z) <= bondLimitA(z1, z2);
  const image = imageResult();
  for (let i = 0; i < atoms.count; i++) {
    const f = set.ofAtom[i]!;
    const z = atoms.element[i]!;
    if (f >= 0 && z > 0 && steps.some((shift) => bonds(z, z, ...shift))) endless[f] = 1;
  }
  for (let k = 0; k < pairs.count; k++) {
    const [i, j] = [pairs.first[k]!, pairs.second[k]!];
    const f = set.ofAtom[i]!;
    if (!pairs.bonded[k] || f < 0 || f !== set.ofAtom[j]) continue;
    const d = [0, 1, 2].map((a) => atoms.positionA[3 * j + a]! - atoms.positionA[3 * i + a]!);
    minimumImage(cell, d[0]!, d[1]!, d[2]!, image);
    const [x, y, z] = image.vectorA as unknown as [number, number, number];
    if (steps.some((shift) => bonds(atoms.element[i]!, atoms.element[j]!, x + shift[0], y + shift[1], z + shift[2]))) {
      endless[f] = 1;
    }
  }
}

/** Bonds within fragments as lists per atom. */
function bondLists(count: number, set: FragmentSet, pairs: ClosePairs): { starts: Int32Array; partners: Int32Array } {
  const starts = new Int32Array(count + 1);
  const inside = (k: number) =>
    pairs.bonded[k] === 1 &&
    set.ofAtom[pairs.first[k]!]! === set.ofAtom[pairs.second[k]!]! &&
    set.ofAtom[pairs.first[k]!]! >= 0;
  for (let k = 0; k < pairs.count; k++) {
    if (!inside(k)) continue;
    starts[pairs.first[k]! + 1]!++;
    starts[pairs.second[k]! + 1]!++;
  }
  for (let i = 0; i < count; i++) starts[i + 1]! += starts[i]!;
  const partners = new Int32Array(starts[count]!);
  const next = starts.slice();
  for (let k = 0; k < pairs.count; k++) {
    if (!inside(k)) continue;
    partners[next[pairs.first[k]!]!++] = pairs.second[k]!;
    partners[next[pairs.second[k]!]!++] = pairs.first[k]!;
  }
  return { starts, partners };
}
