import { finish, inStrides, type Steps } from '../base/steps';
import { AtomFlag, type AtomTable } from '../formats/tree';
import { ELEMENT_STRIDE, elementPairTable } from '../physics/element-pair-table';
import { BOND_CLASS, BondClass, COVALENT_RADIUS_A, VDW_RADIUS_A } from '../physics/elements';
import type { Cell } from './cell';
import { NeighbourBuffer } from './neighbour-buffer';
import { PointGrid } from './point-grid';

/** Allowance on the sum of covalent radii of two non-metals, Å (common practice, no source). */
const NON_METAL_ALLOWANCE_A = 0.4;
/** Allowance between a metal and a non-metal, Å (common practice, no source). */
const METAL_ALLOWANCE_A = 0.3;
/** Two neighbours share a proton when their distances differ by no more than this factor. */
export const SHARED_PROTON_RATIO = 1.1;
/** Contact ratio below which an ordinary pair of atoms clashes. */
export const CLASH_RATIO = 0.55;
/** Share of the sum of covalent radii below which a close-lying pair clashes. */
export const CLASH_COVALENT = 0.75;

/** Pairs of atoms so close that they may be bonded, clash or coincide; i < j, in order of i then j. */
export interface ClosePairs {
  readonly count: number;
  readonly first: Int32Array;
  readonly second: Int32Array;
  readonly distanceA: Float64Array;
  /** 1 where the pair is covalently bonded by the rule of distances. */
  readonly bonded: Uint8Array;
  /** Whether the atoms are too dense for the search; the list is then empty. */
  readonly tooDense: boolean;
}

/** Longest covalent bond between two elements, Å; NaN where they are never bonded by distance. */
export function bondLimitA(z1: number, z2: number): number {
  const class1 = BOND_CLASS[z1]!;
  const class2 = BOND_CLASS[z2]!;
  if (class1 === BondClass.groupOneOrTwo || class2 === BondClass.groupOneOrTwo) return Number.NaN;
  if (class1 === BondClass.metal && class2 === BondClass.metal) return Number.NaN;
  const allowance = class1 === class2 ? NON_METAL_ALLOWANCE_A : METAL_ALLOWANCE_A;
  return COVALENT_RADIUS_A[z1]! + COVALENT_RADIUS_A[z2]! + allowance;
}

/** Largest distance that matters between two elements: a bond or a clash, Å. */
function closeLimitA(z1: number, z2: number): number {
  const covalent = COVALENT_RADIUS_A[z1]! + COVALENT_RADIUS_A[z2]!;
  const clash = Math.max(CLASH_RATIO * (VDW_RADIUS_A[z1]! + VDW_RADIUS_A[z2]!), CLASH_COVALENT * (covalent || 0));
  const bond = bondLimitA(z1, z2);
  return Number.isNaN(bond) ? clash : Math.max(bond, clash);
}

const closeLimits = elementPairTable(closeLimitA);
/** Squares a little above those limits: what lies beyond needs no exact distance. */
const surelyBeyond = elementPairTable((z1, z2) => closeLimitA(z1, z2) ** 2 * (1 + 1e-12));
const bondLimits = elementPairTable(bondLimitA);

/** Whether an element can share a proton with another: N, O, F. */
export function sharesProton(z: number): boolean {
  return z === 7 || z === 8 || z === 9;
}

/** Atoms that can have bonds and contacts: of a known element, at a known place. */
export function solidAtoms(atoms: AtomTable): Int32Array {
  const barred = AtomFlag.ghost | AtomFlag.unknownElement | AtomFlag.noPosition;
  const solid = new Int32Array(atoms.count);
  let count = 0;
  for (let i = 0; i < atoms.count; i++) if ((atoms.flags[i]! & barred) === 0) solid[count++] = i;
  return solid.subarray(0, count);
}

/** Atoms looked at between two pauses. */
const ATOMS_A_STEP = 2048;

/**
 * Finds the close pairs of a frame with cells, and decides which are bonds: d ≤ c_i + c_j + 0.4 Å between non-metals
 * (c: Cordero 2008), + 0.3 Å between a non-metal and a metal outside groups 1 and 2, which are never bonded by distance. A hydrogen
 * keeps its nearest neighbour alone, unless two N, O or F neighbours lie within 10 % of each other (shared proton).
 */
export function findClosePairs(atoms: AtomTable, positionA: Float64Array, cell: Cell | null): ClosePairs {
  return finish(closePairSteps(atoms, positionA, cell));
}

/** The same with pauses. */
export function* closePairSteps(atoms: AtomTable, positionA: Float64Array, cell: Cell | null): Steps<ClosePairs> {
  const members = solidAtoms(atoms);
  yield;
  const grid = yield* PointGrid.inSteps(positionA, members, searchRadiusA(atoms, members), cell);
  yield;
  if (grid.tooDense) return { ...NO_PAIRS, tooDense: true };
  const list = new ClosePairList(atoms.count + (atoms.count >> 1));
  const search = new ClosePairSearch(atoms, grid);
  yield* inStrides(members.length, ATOMS_A_STEP, (s) => search.addPartners(members[s]!, true, list));
  const pairs = list.build();
  yield;
  markBonds(atoms, pairs);
  return pairs;
}

/** The solid atoms of a frame in cells as wide as its elements need. */
export function closePairGrid(atoms: AtomTable, positionA: Float64Array, cell: Cell | null): PointGrid {
  const solid = solidAtoms(atoms);
  return new PointGrid(positionA, solid, searchRadiusA(atoms, solid), cell);
}

/** The widest distance that matters between two of the elements that there are, Å. */
function searchRadiusA(atoms: AtomTable, solid: Int32Array): number {
  const isPresent = new Uint8Array(ELEMENT_STRIDE);
  for (let k = 0; k < solid.length; k++) isPresent[atoms.element[solid[k]!]!] = 1;
  const present = [...isPresent.keys()].filter((z) => isPresent[z] === 1);
  const limitsA = closeLimits();
  let radius = 0.1;
  for (const z1 of present) for (const z2 of present) radius = Math.max(radius, limitsA[ELEMENT_STRIDE * z1 + z2]!);
  return radius;
}

/** Close pairs as they are found, in columns that grow. */
export class ClosePairList {
  count = 0;
  first: Int32Array;
  second: Int32Array;
  distanceA: Float64Array;

  constructor(room: number) {
    this.first = new Int32Array(Math.max(64, room));
    this.second = new Int32Array(this.first.length);
    this.distanceA = new Float64Array(this.first.length);
  }

  reserve(more: number): void {
    if (this.count + more <= this.first.length) return;
    const room = 2 * this.first.length + more;
    this.first = extended(this.first, new Int32Array(room));
    this.second = extended(this.second, new Int32Array(room));
    this.distanceA = extended(this.distanceA, new Float64Array(room));
  }

  /** The list as it stands; which pairs are bonds is not decided yet. */
  build(): ClosePairs {
    const { count } = this;
    return {
      count,
      first: this.first.slice(0, count),
      second: this.second.slice(0, count),
      distanceA: this.distanceA.slice(0, count),
      bonded: new Uint8Array(count),
      tooDense: false,
    };
  }
}

/** Finds the close partners of single atoms. */
export class ClosePairSearch {
  readonly #element: Uint8Array;
  readonly #grid: PointGrid;
  readonly #limitsA = closeLimits();
  readonly #surelyBeyondA2 = surelyBeyond();
  readonly #buffer = new NeighbourBuffer();

  constructor(atoms: AtomTable, grid: PointGrid) {
    this.#element = atoms.element;
    this.#grid = grid;
  }

  /** Adds the partners of an atom to the end of a list, in order of their number; with `onlyAfter`, those of a larger number alone. */
  addPartners(i: number, onlyAfter: boolean, list: ClosePairList): void {
    const buffer = this.#buffer;
    const element = this.#element;
    const limitsA = this.#limitsA;
    const surelyBeyondA2 = this.#surelyBeyondA2;
    this.#grid.gather(i, this.#grid.radiusA, onlyAfter, buffer);
    list.reserve(buffer.count);
    const { index, vectorA } = buffer;
    const { first, second, distanceA } = list;
    const begin = list.count;
    let count = begin;
    const row = ELEMENT_STRIDE * element[i]!;
    for (let k = 0; k < buffer.count; k++) {
      const j = index[k]!;
      const x = vectorA[3 * k]!;
      const y = vectorA[3 * k + 1]!;
      const z = vectorA[3 * k + 2]!;
      const elements = row + element[j]!;
      if (x * x + y * y + z * z > surelyBeyondA2[elements]!) continue;
      const d = Math.hypot(x, y, z);
      if (d > limitsA[elements]!) continue;
      // Kept in order of j: few partners, so an insertion is cheapest.
      let at = count;
      while (at > begin && second[at - 1]! > j) {
        second[at] = second[at - 1]!;
        distanceA[at] = distanceA[at - 1]!;
        at--;
      }
      second[at] = j;
      distanceA[at] = d;
      first[count++] = i;
    }
    list.count = count;
  }
}

function extended<T extends Int32Array | Float64Array>(from: T, to: T): T {
  to.set(from);
  return to;
}

const NO_PAIRS: ClosePairs = {
  count: 0,
  first: new Int32Array(0),
  second: new Int32Array(0),
  distanceA: new Float64Array(0),
  bonded: new Uint8Array(0),
  tooDense: false,
};

/** Where in an ordered list the pairs of a first atom begin. */
export function firstPairOf({ first, count }: ClosePairs, atom: number): number {
  let low = 0;
  let high = count;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (first[middle]! < atom) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Decides which close pairs are bonds. */
export function markBonds(atoms: AtomTable, pairs: ClosePairs): void {
  const { element } = atoms;
  const limitsA = bondLimits();
  const nearest = new Int32Array(atoms.count).fill(-1);
  const nearestA = new Float64Array(atoms.count).fill(Number.POSITIVE_INFINITY);
  const offer = (hydrogen: number, partner: number, d: number) => {
    if (d >= nearestA[hydrogen]!) return;
    nearest[hydrogen] = partner;
    nearestA[hydrogen] = d;
  };
  const inReach = (k: number) => {
    const limit = limitsA[ELEMENT_STRIDE * element[pairs.first[k]!]! + element[pairs.second[k]!]!]!;
    return pairs.distanceA[k]! <= limit;
  };
  for (let k = 0; k < pairs.count; k++) {
    if (!inReach(k)) continue;
    const i = pairs.first[k]!;
    const j = pairs.second[k]!;
    if (element[i] === 1) offer(i, j, pairs.distanceA[k]!);
    if (element[j] === 1) offer(j, i, pairs.distanceA[k]!);
  }
  const keeps = (hydrogen: number, partner: number, d: number) => {
    if (element[hydrogen] !== 1) return true;
    const best = nearest[hydrogen]!;
    if (best === partner) return true;
    const shared = sharesProton(element[partner]!) && sharesProton(element[best]!);
    return shared && d <= SHARED_PROTON_RATIO * nearestA[hydrogen]!;
  };
  for (let k = 0; k < pairs.count; k++) {
    if (!inReach(k)) continue;
    const i = pairs.first[k]!;
    const j = pairs.second[k]!;
    const d = pairs.distanceA[k]!;
    if (keeps(i, j, d) && keeps(j, i, d)) pairs.bonded[k] = 1;
  }
}
