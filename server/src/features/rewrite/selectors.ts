import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { parseSelector, selectorMatches } from '../../formats/pdb/remarks';
import type { Residue } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';

/** More fragments are not named one by one. */
const MOST_LISTED = 2000;

/** The residues of a fragment. */
export function residuesOf({ model }: FrameAnalysis, fragment: number): Residue[] {
  const { tree, fragments } = model;
  const indices = new Set(Array.from(atomsOf(fragments, fragment), (atom) => tree.atoms.residue![atom]!));
  return [...indices].map((index) => tree.residues![index]!);
}

/** The selector of one residue; `null` where it would select another fragment as well, or cannot be written. */
export function selectorOf(frame: FrameAnalysis, fragment: number): string | null {
  const residue = residuesOf(frame, fragment)[0];
  if (residue === undefined) return null;
  const { chain, name, number, insertion } = residue;
  const text = `${chain || '_'}:${name}:${number}${insertion}`;
  const selector = /^[^\s"'=]+$/.test(text) ? parseSelector(text) : null;
  if (selector === null) return null;
  const matching = frame.model.tree.residues!.filter((other) => selectorMatches(selector, other));
  const own = residuesOf(frame, fragment);
  return matching.length > 0 && matching.every((other) => own.includes(other)) ? text : null;
}

/** The selector of all residues of a name; `null` where it cannot be written. */
export function kindSelector(name: string): string | null {
  const text = `*:${name}:*`;
  return /^[^\s"'=]+$/.test(name) && parseSelector(text)?.name === name ? text : null;
}

/**
 * Selectors of some fragments whose residues have one name: of the name, where it means no other fragment, else of each. A residue of that
 * name that is joined to others is another kind of fragment.
 *
 * @param isSettled whether what is written for the name does not matter to a fragment
 */
export function selectorsOfKind(
  frame: FrameAnalysis,
  name: string,
  own: readonly number[],
  isSettled: (fragment: number) => boolean = () => false,
): (string | null)[] {
  const { tree, fragments } = frame.model;
  const isOwn = new Set(own);
  const meansOthers = tree.residues!.some((residue) => {
    const f = residue.name === name ? fragments.ofAtom[residue.atoms[0] ?? -1] : undefined;
    return f !== undefined && !isOwn.has(f) && !isSettled(f);
  });
  if (!meansOthers) return [kindSelector(name)];
  return own.length > MOST_LISTED ? [null] : own.map((f) => selectorOf(frame, f));
}
