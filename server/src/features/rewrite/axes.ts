import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { AtomFlag } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';
import { symbolOf } from '../../physics/elements';
import { angleDeg, type Vector } from './vectors';

/** An axis by element symbols, with the atoms of one fragment at its two ends. */
export interface NamedAxis {
  /** As it is written: `O>H`, `C>O,H`. */
  readonly text: string;
  readonly before: readonly number[];
  readonly after: readonly number[];
}

/** Fragments of more elements have no axis by elements that anyone would write. */
const MOST_ELEMENTS = 4;

/** All axes of a fragment by the elements at their ends, the plainest first. */
export function elementAxes({ model }: FrameAnalysis, fragment: number): NamedAxis[] {
  const { atoms } = model.tree;
  const byElement = new Map<number, number[]>();
  for (const atom of atomsOf(model.fragments, fragment)) {
    if (atoms.flags[atom]! & (AtomFlag.ghost | AtomFlag.unknownElement)) continue;
    const z = atoms.element[atom]!;
    const list = byElement.get(z);
    if (list === undefined) byElement.set(z, [atom]);
    else list.push(atom);
  }
  const elements = [...byElement.keys()];
  if (elements.length < 2 || elements.length > MOST_ELEMENTS) return [];
  const sides: number[][] = [];
  for (let bits = 1; bits < 1 << elements.length; bits++) sides.push(elements.filter((_, k) => bits & (1 << k)));
  const named = (side: readonly number[]) => side.map((z) => symbolOf(z)).join(',');
  return sides
    .flatMap((before) =>
      sides.filter((after) => !after.some((z) => before.includes(z))).map((after) => [before, after]),
    )
    .sort(([a, b], [c, d]) => a!.length + b!.length - c!.length - d!.length)
    .map(([before, after]) => ({
      text: `${named(before!)}>${named(after!)}`,
      before: before!.flatMap((z) => byElement.get(z)!),
      after: after!.flatMap((z) => byElement.get(z)!),
    }));
}

/** The direction of an axis; it has no length where its ends coincide. */
export function axisVector({ model }: FrameAnalysis, { before, after }: Pick<NamedAxis, 'before' | 'after'>): Vector {
  const mean = (atoms: readonly number[], a: number) =>
    atoms.reduce((sum, atom) => sum + model.positionA[3 * atom + a]!, 0) / atoms.length;
  return [0, 1, 2].map((a) => mean(after, a) - mean(before, a)) as unknown as Vector;
}

/** The plainest axis by elements that has some direction within an angle, in degrees; `null` where none has. */
export function axisAlong(
  frame: FrameAnalysis,
  fragment: number,
  direction: Vector,
  withinDeg: number,
): NamedAxis | null {
  const fits = (axis: NamedAxis) => angleDeg(axisVector(frame, axis), direction) <= withinDeg;
  return elementAxes(frame, fragment).find(fits) ?? null;
}
