import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { likelyLoneCharge } from '../../analysis/moments';
import type { TextEdit } from '../../base/finding';
import { listItems } from '../../formats/annotation/lists';
import { atomAtLine } from '../../formats/reread';
import type { CoordinateTree } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';
import { symbolOf } from '../../physics/elements';
import { CommentLine } from '../rewrite/comment-line';
import { remarkInsertion } from '../rewrite/remark-lines';
import { residuesOf, selectorsOfKind } from '../rewrite/selectors';
import { offered, type RemedyMaker } from './remedy';

/** A list of more fragments is not written for their ions. */
const MOST_LISTED = 2000;
const CHARGE_TOLERANCE_E = 0.05;

/** Gives all lone atoms of an element the charge that such ions usually have. */
export const ionCharge: RemedyMaker = ({ start }, { file, frame }) => {
  const { model, moments } = frame;
  const atom = atomAtLine(model.tree, file.lines.lineAt(start));
  const z = model.tree.atoms.element[atom] ?? 0;
  const ions = Array.from(model.formulas.keys()).filter(
    (f) =>
      likelyLoneCharge(model, f) !== 0 &&
      moments.chargeSource[f] === 'assumed' &&
      model.tree.atoms.element[atomsOf(model.fragments, f)[0]!] === z,
  );
  if (ions.length === 0 || upsetsTheTotal(frame, ions)) return [];
  const charge = likelyLoneCharge(model, ions[0]!);
  const usual = `${charge > 0 ? '+' : '−'}${Math.abs(charge)}`;
  const edits = file.language === 'pdb' ? byRemark(file, frame, ions, charge) : byList(file, frame, ions, charge);
  return offered(`Give ${symbolOf(z)} its usual charge, ${usual}`, edits);
};

/** Whether the charges would no longer add up to the total that is given, where they do now. */
function upsetsTheTotal({ model, moments }: FrameAnalysis, ions: readonly number[]): boolean {
  const total = model.frameNotes.totalChargeE?.value;
  if (total === undefined) return false;
  const before = moments.chargeE.reduce((sum, charge) => sum + charge, 0);
  const after = ions.reduce((sum, f) => sum + likelyLoneCharge(model, f), before);
  return Math.abs(after - total) > CHARGE_TOLERANCE_E && Math.abs(before - total) <= CHARGE_TOLERANCE_E;
}

function byList(
  file: CoordinateTree,
  { model }: FrameAnalysis,
  ions: readonly number[],
  charge: number,
): readonly TextEdit[] | string | null {
  const { count } = model.fragments;
  if (count > MOST_LISTED) return null;
  const line = new CommentLine(file, model.tree);
  const entry = line.entry('fragment_charges');
  if (entry !== undefined) {
    const items = listItems(file.text, entry);
    if (items.length !== count) return null;
    for (const f of ions) line.replace({ ...items[f]!, text: String(charge) });
  } else {
    const list = Array.from({ length: count }, () => 'nan');
    for (const f of ions) list[f] = String(charge);
    line.set('fragment_charges', list.join(' '));
  }
  return line.edits();
}

/** One remark for the residue name where all residues of it are such ions, else one for each. */
function byRemark(
  file: CoordinateTree,
  frame: FrameAnalysis,
  ions: readonly number[],
  charge: number,
): TextEdit[] | null {
  const byName = new Map<string, number[]>();
  for (const f of ions) {
    const name = residuesOf(frame, f)[0]?.name ?? '';
    const list = byName.get(name);
    if (list === undefined) byName.set(name, [f]);
    else list.push(f);
  }
  const selectors = new Set([...byName].flatMap(([name, own]) => selectorsOfKind(frame, name, own)));
  if (selectors.has(null) || selectors.size > MOST_LISTED) return null;
  return [
    remarkInsertion(
      file,
      [...selectors].map((selector) => `fragment=${selector} charge=${charge}`),
    ),
  ];
}
