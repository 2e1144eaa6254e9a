import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { Cell } from '../../model/cell';
import { imageResult, minimumImage } from '../../model/cell';
import { bondLimitA, CLASH_COVALENT, CLASH_RATIO, solidAtoms } from '../../model/close-pairs';
import { ELEMENT_STRIDE, elementPairTable } from '../../physics/element-pair-table';
import { COVALENT_RADIUS_A, isMetal, VDW_RADIUS_A } from '../../physics/elements';
import type { Vector } from './vectors';

/** The atoms around a place, seen from it. */
export interface Surroundings {
  readonly count: number;
  readonly element: Uint8Array;
  readonly positionA: Float64Array;
}

/** More atoms around one fragment are more than it can be moved among while someone waits. */
const MOST_ATOMS = 20000;
/** Images are taken up to this many cells away. */
const MOST_IMAGES = 3;

/**
 * All solid atoms within a distance of a point but those of one fragment, with their images in a cell; `null` where they are too many, or
 * too many images would have to be looked at.
 */
export function surroundingsOf(
  { model }: FrameAnalysis,
  fragment: number,
  centreA: Vector,
  reachA: number,
): Surroundings | null {
  const { tree, fragments, cell, positionA } = model;
  const element: number[] = [];
  const found: number[] = [];
  const images = cell === null ? [[0, 0, 0] as const] : imagesWithin(cell, reachA);
  if (images === null) return null;
  const nearest = imageResult();
  for (const atom of solidAtoms(tree.atoms)) {
    if (fragments.ofAtom[atom] === fragment) continue;
    let [x, y, z] = [0, 1, 2].map((a) => positionA[3 * atom + a]! - centreA[a as 0]) as [number, number, number];
    if (cell !== null) {
      minimumImage(cell, x, y, z, nearest);
      [x, y, z] = nearest.vectorA as unknown as [number, number, number];
    }
    for (const [dx, dy, dz] of images) {
      if ((x + dx) ** 2 + (y + dy) ** 2 + (z + dz) ** 2 > reachA * reachA) continue;
      element.push(tree.atoms.element[atom]!);
      found.push(x + dx, y + dy, z + dz);
    }
    if (element.length > MOST_ATOMS) return null;
  }
  return { count: element.length, element: Uint8Array.from(element), positionA: Float64Array.from(found) };
}

/** Lattice vectors that a nearest image may be shifted by and still lie within a distance. */
function imagesWithin(cell: Cell, reachA: number): Vector[] | null {
  const counts = cell.widthsA.map((width) => (Number.isFinite(width) ? Math.ceil(reachA / width) + 1 : 0));
  if (counts.some((count) => count > MOST_IMAGES)) return null;
  const shifts: Vector[] = [];
  const { reducedA: r } = cell;
  for (let i = -counts[0]!; i <= counts[0]!; i++) {
    for (let j = -counts[1]!; j <= counts[1]!; j++) {
      for (let k = -counts[2]!; k <= counts[2]!; k++) {
        shifts.push([0, 1, 2].map((a) => i * r[a]! + j * r[3 + a]! + k * r[6 + a]!) as unknown as Vector);
      }
    }
  }
  return shifts;
}

/** Sum of van der Waals radii, Å. */
const contacts = elementPairTable((z1, z2) => VDW_RADIUS_A[z1]! + VDW_RADIUS_A[z2]!);

const HYDROGEN_PARTNERS = new Set([7, 8, 9, 16, 17, 35, 53]);

/** The least distance at which two atoms of different fragments neither clash nor look bonded, Å. */
const leasts = elementPairTable((z1, z2) => {
  const lenient =
    isMetal(z1) || isMetal(z2) || (z1 === 1 && HYDROGEN_PARTNERS.has(z2)) || (z2 === 1 && HYDROGEN_PARTNERS.has(z1));
  const covalent = COVALENT_RADIUS_A[z1]! + COVALENT_RADIUS_A[z2]!;
  const clash = lenient ? CLASH_COVALENT * (covalent || 0) : CLASH_RATIO * (VDW_RADIUS_A[z1]! + VDW_RADIUS_A[z2]!);
  const bond = bondLimitA(z1, z2);
  return Number.isNaN(bond) ? clash : Math.max(bond, clash);
});

/** Slack for what a written coordinate is rounded by, Å. */
const ROUNDING_A = 2e-3;

/** A gap between barred stretches must be wider than what coordinates are rounded by, Å. */
const LEAST_GAP_A = 0.01;

/** What a distance computed by another way may differ by. */
const TINY_A = 1e-9;

/** Whether atoms at some places touch nothing around them. */
export function isClear(elements: ArrayLike<number>, positionA: ArrayLike<number>, around: Surroundings): boolean {
  return isApart(elements, positionA, around, contacts(), TINY_A);
}

/** Whether atoms at some places neither clash nor look bonded with anything around them. */
export function isFree(elements: ArrayLike<number>, positionA: ArrayLike<number>, around: Surroundings): boolean {
  return isApart(elements, positionA, around, leasts(), ROUNDING_A);
}

function isApart(
  elements: ArrayLike<number>,
  positionA: ArrayLike<number>,
  around: Surroundings,
  limits: Float64Array,
  slackA: number,
): boolean {
  for (let i = 0; i < elements.length; i++) {
    for (let j = 0; j < around.count; j++) {
      const x = positionA[3 * i]! - around.positionA[3 * j]!;
      const y = positionA[3 * i + 1]! - around.positionA[3 * j + 1]!;
      const z = positionA[3 * i + 2]! - around.positionA[3 * j + 2]!;
      const limit = limits[ELEMENT_STRIDE * elements[i]! + around.element[j]!]! + slackA;
      if (x * x + y * y + z * z < limit * limit) return false;
    }
  }
  return true;
}

/**
 * How far atoms must go along a unit vector until each touches nothing around them (distances of at least the sum of the van der Waals
 * radii), Å: 0 where they are there already, and exact. Every pair of atoms bars a stretch of the way; the answer is the first place that
 * no stretch covers.
 */
export function wayOut(
  elements: ArrayLike<number>,
  positionA: ArrayLike<number>,
  around: Surroundings,
  [ux, uy, uz]: Vector,
): number {
  const contact = contacts();
  const barred: [from: number, to: number][] = [];
  for (let i = 0; i < elements.length; i++) {
    for (let j = 0; j < around.count; j++) {
      const x = positionA[3 * i]! - around.positionA[3 * j]!;
      const y = positionA[3 * i + 1]! - around.positionA[3 * j + 1]!;
      const z = positionA[3 * i + 2]! - around.positionA[3 * j + 2]!;
      const limit = contact[ELEMENT_STRIDE * elements[i]! + around.element[j]!]!;
      const along = x * ux + y * uy + z * uz;
      const root = along * along - (x * x + y * y + z * z - limit * limit);
      if (root <= 0) continue;
      const half = Math.sqrt(root);
      if (half - along > 0) barred.push([-along - half, half - along]);
    }
  }
  barred.sort((a, b) => a[0] - b[0]);
  let free = 0;
  for (const [from, to] of barred) {
    if (from > free + LEAST_GAP_A) break;
    free = Math.max(free, to);
  }
  return free;
}
