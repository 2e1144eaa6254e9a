import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { atomAtLine } from '../../formats/reread';
import { axisVector, elementAxes, type NamedAxis } from '../rewrite/axes';
import { CommentLine } from '../rewrite/comment-line';
import { declaredChargeE, fullKnowledge } from '../rewrite/dipole-offers';
import { angleDeg, type Vector, vectorAt } from '../rewrite/vectors';
import { offered, type RemedyMaker } from './remedy';

/** An axis must have a published direction within this, and an estimated one within that, degrees. */
const PUBLISHED_DEG = 1;
const ESTIMATED_DEG = 10;

/** Gives a dipole that has a size alone the axis of its kind, as published or as estimated from the geometry. */
export const giveAxis: RemedyMaker = ({ start }, { file, frame }) => {
  const { model } = frame;
  const f = model.fragments.ofAtom[atomAtLine(model.tree, file.lines.lineAt(start))] ?? -1;
  const kind = model.formulas[f];
  const written = model.notes[f]?.writtenSize;
  if (kind === undefined || !written) return [];
  const alike = Array.from(model.formulas.keys()).filter((g) => model.formulas[g] === kind && lacksDirection(frame, g));
  const found = commonAxis(frame, alike);
  if (found === null) return [];
  const { axis, isPublished } = found;
  const title = `Give ${kind} the axis ${axis.text}${isPublished ? '' : ', as estimated from the geometry'}`;
  if (file.language === 'pdb') {
    const end = written.span.end;
    return offered(title, [{ start: end, end, text: ` axis=${axis.text}` }]);
  }
  const line = new CommentLine(file, model.tree);
  line.append('kind_axes', [`${kind}:${axis.text}`]);
  return offered(title, line.edits());
};

function lacksDirection({ moments, model }: FrameAnalysis, f: number): boolean {
  return moments.dipoleNormEA[f]! > 0 && Number.isNaN(moments.dipoleEA[3 * f]!) && model.notes[f]!.axis === null;
}

/** The plainest axis that has the known direction in each of some fragments; `null` where there is none. */
function commonAxis(
  frame: FrameAnalysis,
  fragments: readonly number[],
): { axis: NamedAxis; isPublished: boolean } | null {
  const known = fullKnowledge(frame);
  const { moments } = frame;
  let isPublished = true;
  const directions = fragments.map((f): Vector | null => {
    const match = known.match(f, declaredChargeE(frame, f));
    const charge = declaredChargeE(frame, f) ?? match?.entry.molecule.chargeE ?? 0;
    const offer = known.dipole(f, match, charge, vectorAt(moments.centreA, f));
    const isExact = typeof offer !== 'string' && offer.source === 'library' && match?.axis !== null;
    isPublished &&= isExact;
    if (typeof offer !== 'string' && offer.direction !== null) return offer.direction;
    return known.direction(f, charge, vectorAt(moments.centreA, f));
  });
  const within = isPublished ? PUBLISHED_DEG : ESTIMATED_DEG;
  const fits = (text: string, n: number) => {
    const own = elementAxes(frame, fragments[n]!).find((candidate) => candidate.text === text);
    const direction = directions[n];
    return own !== undefined && direction != null && angleDeg(axisVector(frame, own), direction) <= within;
  };
  const axis = elementAxes(frame, fragments[0] ?? -1).find(({ text }) => fragments.every((_, n) => fits(text, n)));
  return axis === undefined ? null : { axis, isPublished };
}
