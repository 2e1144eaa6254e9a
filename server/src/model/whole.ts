import { inStrides, type Steps } from '../base/steps';
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

/** Fragments placed between two pauses. */
const FRAGMENTS_A_STEP = 1024;

/**
 * Moves the atoms of each fragment by whole cell vectors so that bonded atoms stand side by side, starting from its first atom as
 * written. A member that no bond reaches goes to its image nearest to the members placed so far.
 */
export function* wholeSteps(
  atoms: AtomTable,
  set: FragmentSet,
  pairs: ClosePairs,
  cell: Cell | null,
): Steps<WholePositions> {
  const endless = new Uint8Array(set.count);
  if (cell === null) return { positionA: atoms.positionA, endless };
  const whole = { positionA: atoms.positionA.slice(), endless };
  const placer = new WholePlacer(atoms, set, pairs, cell, whole);
  yield;
  if (isNarrow(cell)) markSelfBonded(atoms, set, pairs, cell, endless);
  yield* inStrides(set.count, FRAGMENTS_A_STEP, (f) => placer.place(f));
  return whole;
}

/** Makes single fragments whole, into positions and marks that are there already. */
export class WholePlacer {
  readonly #atoms: AtomTable;
  readonly #set: FragmentSet;
  readonly #cell: Cell;
  readonly #whole: WholePositions;
  readonly #bonds: { readonly starts: Int32Array; readonly partners: Int32Array };
  readonly #placed: Uint8Array;
  readonly #image = imageResult();

  constructor(atoms: AtomTable, set: FragmentSet, pairs: ClosePairs, cell: Cell, whole: WholePositions) {
    this.#atoms = atoms;
    this.#set = set;
    this.#cell = cell;
    this.#whole = whole;
    this.#bonds = bondLists(atoms.count, set, pairs);
    this.#placed = new Uint8Array(atoms.count);
  }

  /** Places the atoms of a fragment, each of which belongs to it alone. */
  place(f: number): void {
    const { starts: memberStarts, members } = this.#set;
    const { starts, partners } = this.#bonds;
    const placed = this.#placed;
    const from = memberStarts[f]!;
    const to = memberStarts[f + 1]!;
    const order: number[] = [];
    for (let k = from; k < to; k++) {
      const start = members[k]!;
      if (placed[start] || (this.#atoms.flags[start]! & AtomFlag.noPosition) !== 0) continue;
      if (order.length > 0) {
        this.#putBeside(start, to - from <= NEAREST_SEARCH_LIMIT ? this.#nearest(start, order) : order[0]!);
      }
      placed[start] = 1;
      order.push(start);
      for (let at = order.length - 1; at < order.length; at++) {
        const atom = order[at]!;
        for (let n = starts[atom]!; n < starts[atom + 1]!; n++) {
          const other = partners[n]!;
          if (placed[other]) {
            if (this.#isFarFromBonded(atom, other)) this.#whole.endless[f] = 1;
            continue;
          }
          this.#putBeside(other, atom);
          placed[other] = 1;
          order.push(other);
        }
      }
    }
  }

  #putBeside(atom: number, beside: number): void {
    const { positionA } = this.#whole;
    this.#difference(this.#atoms.positionA, atom, beside);
    const { vectorA } = this.#image;
    for (let a = 0; a < 3; a++) positionA[3 * atom + a] = positionA[3 * beside + a]! + vectorA[a]!;
  }

  /** Leaves the shortest difference between an atom (of given positions) and a placed one. */
  #difference(positionA: Float64Array, atom: number, from: number): void {
    const placed = this.#whole.positionA;
    minimumImage(
      this.#cell,
      positionA[3 * atom]! - placed[3 * from]!,
      positionA[3 * atom + 1]! - placed[3 * from + 1]!,
      positionA[3 * atom + 2]! - placed[3 * from + 2]!,
      this.#image,
    );
  }

  #nearest(atom: number, order: readonly number[]): number {
    let best = order[0]!;
    let best2 = Number.POSITIVE_INFINITY;
    for (const other of order) {
      this.#difference(this.#atoms.positionA, atom, other);
      const [x, y, z] = this.#image.vectorA as unknown as [number, number, number];
      const length2 = x * x + y * y + z * z;
      if (length2 < best2) {
        best2 = length2;
        best = other;
      }
    }
    return best;
  }

  #isFarFromBonded(atom: number, other: number): boolean {
    const { positionA } = this.#whole;
    const x = positionA[3 * other]! - positionA[3 * atom]!;
    const y = positionA[3 * other + 1]! - positionA[3 * atom + 1]!;
    const z = positionA[3 * other + 2]! - positionA[3 * atom + 2]!;
    if (x * x + y * y + z * z <= this.#cell.safeRadius2) return false;
    this.#difference(positionA, other, atom);
    const { vectorA } = this.#image;
    return Math.hypot(x, y, z) > Math.hypot(vectorA[0]!, vectorA[1]!, vectorA[2]!) + IMAGE_STEP_A;
  }
}

/** Whether a cell is so narrow that an atom may be bonded to its own image, or to two images of a neighbour. */
export function isNarrow(cell: Cell): boolean {
  return shortSteps(cell).length > 0;
}

/** The shifts between images that are short enough for bonds across them. */
function shortSteps({ reducedA, periodic }: Cell): (readonly [number, number, number])[] {
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
  return steps;
}

/**
 * Marks fragments in a cell so narrow that an atom is bonded to its own image, or to two images of one neighbour: the list of close
 * pairs holds only the nearest image, so no ring of bonds would show it.
 */
function markSelfBonded(atoms: AtomTable, set: FragmentSet, pairs: ClosePairs, cell: Cell, endless: Uint8Array): void {
  const steps = shortSteps(cell);
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
