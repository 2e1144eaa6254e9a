import type { Span } from '../base/span';
import { atomAtLine } from '../formats/reread';
import { atomsOf } from '../model/fragment-set';
import { runsOf } from './fragment-lines';
import { type Annotated, mentionAt, mentionsOf } from './mentions';

/** What the place under the cursor leads to. */
export interface Lead {
  /** What at the cursor it leads from. */
  readonly from: Span;
  /** Places it leads to, in the order of the text. */
  readonly places: readonly Span[];
}

/** A fragment as the cursor names it: its atoms, and what the annotation says of it. */
export interface Concern {
  readonly from: Span;
  readonly isAtom: boolean;
  readonly atomRuns: readonly Span[];
  readonly mentions: readonly Span[];
}

/** From an annotation to the atoms that it speaks of; from an atom to the annotation that speaks of its fragment. */
export function definitionAt(annotated: Annotated, offset: number): Lead | null {
  const concern = concernAt(annotated, offset);
  if (concern === null) return null;
  const places = concern.isAtom ? concern.mentions : concern.atomRuns;
  return places.length === 0 ? null : { from: concern.from, places };
}

/** The fragments that an offset speaks of: by an annotation, or as the line of one of their atoms. */
export function concernAt(annotated: Annotated, offset: number): Concern | null {
  const { file, model } = annotated;
  const mention = mentionAt(annotated, offset);
  if (mention !== null) {
    const { span, atoms, fragments } = mention;
    const others = fragments.length === 1 ? mentionsOf(annotated, fragments[0]!).map((entry) => entry.span) : [span];
    const named = atoms ?? fragments.flatMap((f) => [...atomsOf(model.fragments, f)]).sort((a, b) => a - b);
    return { from: span, isAtom: false, atomRuns: runsOf(model, named), mentions: others };
  }
  const atom = atomAtLine(model.tree, file.lines.lineAt(offset));
  const f = atom < 0 ? -1 : model.fragments.ofAtom[atom]!;
  if (f < 0) return null;
  return {
    from: model.tree.fieldSpan(atom, 'line'),
    isAtom: true,
    atomRuns: runsOf(model, atomsOf(model.fragments, f)),
    mentions: mentionsOf(annotated, f).map((entry) => entry.span),
  };
}
