import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import { AtomFlag, type CoordinateTree } from '../../formats/tree';
import { imageResult, minimumImage } from '../../model/cell';
import { atomsOf } from '../../model/fragment-set';
import { VDW_RADIUS_A } from '../../physics/elements';
import { coordinateEdits, decimalsOf } from './coordinates';
import { isMovable } from './movable';
import { isClear, type Surroundings, surroundingsOf, wayOut } from './surroundings';
import { norm, scaledBy, type Vector, vectorAt } from './vectors';

/** A fragment is moved no farther, Å. */
const FARTHEST_A = 10;
/** The largest sum of two van der Waals radii. */
const LARGEST_CONTACT_A = 2 * VDW_RADIUS_A.reduce((most, radius) => Math.max(most, radius), 0);

/** A fragment to be moved: how far, and the edits. */
export interface Move {
  readonly fragment: number;
  readonly distanceA: number;
  edits(): readonly TextEdit[];
}

/**
 * Moves one of two fragments (the one of fewer atoms, of equal ones the later) away from the other along the line of their centres until no
 * atom of it touches any other fragment. All its atoms are moved by the same written numbers, so it stays what it is. `null` where
 * neither can go: cut from a chain, not free within 10 Å, or out of its columns.
 */
export function moveApart(file: CoordinateTree, frame: FrameAnalysis, f: number, g: number): Move | null {
  const { starts } = frame.model.fragments;
  const sizeOf = (fragment: number) => starts[fragment + 1]! - starts[fragment]!;
  const later = Math.max(f, g);
  const [first, second] = sizeOf(f) === sizeOf(g) ? [later, f + g - later] : sizeOf(f) < sizeOf(g) ? [f, g] : [g, f];
  return moveFrom(file, frame, first, second) ?? moveFrom(file, frame, second, first);
}

/** Moves a fragment away from another. */
export function moveFrom(file: CoordinateTree, frame: FrameAnalysis, fragment: number, from: number): Move | null {
  const { model, moments } = frame;
  if (!isMovable(file, frame, fragment, false) || !model.usable[from]) return null;
  const centre = vectorAt(moments.centreA, fragment);
  const reach = FARTHEST_A + moments.extentA[fragment]! + LARGEST_CONTACT_A;
  const around = surroundingsOf(frame, fragment, centre, reach);
  if (around === null) return null;
  const members = atomsOf(model.fragments, fragment);
  const solid = Array.from(members).filter((atom) => (model.tree.atoms.flags[atom]! & AtomFlag.ghost) === 0);
  const elements = solid.map((atom) => model.tree.atoms.element[atom]!);
  const placesA = solid.flatMap((atom) => [0, 1, 2].map((a) => model.positionA[3 * atom + a]! - centre[a as 0]));
  const direction = away(frame, fragment, from);
  const decimals = decimalsOf(file, model.tree, members);
  const shift = roundedShift(elements, placesA, around, direction, decimals);
  if (shift === null) return null;
  const edits = coordinateEdits(file, model.tree, members, repeated(shift, members.length), decimals);
  return edits === null ? null : { fragment, distanceA: norm(shift), edits: () => edits };
}

/** Unit vector from one centre to another; along z where they coincide. */
function away({ moments, model }: FrameAnalysis, fragment: number, from: number): Vector {
  const [x, y, z] = [0, 1, 2].map(
    (a) => moments.centreA[3 * fragment + a]! - moments.centreA[3 * from + a]!,
  ) as unknown as Vector;
  const image = imageResult();
  if (model.cell !== null) minimumImage(model.cell, x, y, z, image);
  else image.vectorA.set([x, y, z]);
  const way = vectorAt(image.vectorA, 0);
  const distance = norm(way);
  return distance > 1e-6 ? scaledBy(way, 1 / distance) : [0, 0, 1];
}

/** The way out in numbers as they will be written; a little farther where rounding would leave a contact. */
function roundedShift(
  elements: readonly number[],
  placesA: readonly number[],
  around: Surroundings,
  direction: Vector,
  decimals: number,
): Vector | null {
  const step = 10 ** -decimals;
  const distance = wayOut(elements, placesA, around, direction);
  for (let k = 0; k < 20; k++) {
    const far = distance + k * step;
    if (far === 0 || far > FARTHEST_A) return null;
    const shift = scaledBy(direction, far).map((value) => Number(value.toFixed(decimals))) as unknown as Vector;
    const moved = placesA.map((value, index) => value + shift[(index % 3) as 0]);
    if (isClear(elements, moved, around)) return shift;
  }
  return null;
}

function repeated(shift: Vector, times: number): Float64Array {
  const all = new Float64Array(3 * times);
  for (let k = 0; k < times; k++) all.set(shift, 3 * k);
  return all;
}
