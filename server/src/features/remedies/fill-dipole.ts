import { atomAtLine } from '../../formats/reread';
import { type DipoleOffer, dipoleOffers, isZero } from '../rewrite/dipole-offers';
import { planDipoles } from '../rewrite/dipole-plan';
import { dipoleEdits, sizeWords } from '../rewrite/write-dipoles';
import { offered, type RemedyMaker } from './remedy';

/** Writes down the published or estimated dipole of the kind of fragment that has none. */
export const fillDipole: RemedyMaker = ({ start }, { file, frame }) => {
  const { model } = frame;
  const atom = atomAtLine(model.tree, file.lines.lineAt(start));
  const kind = model.formulas[model.fragments.ofAtom[atom] ?? -1];
  if (kind === undefined) return [];
  const offers = dipoleOffers(frame, (fragment) => model.formulas[fragment] === kind);
  const [first] = offers;
  if (first === undefined || (first.direction === null && !isZero(first))) return [];
  const plan = planDipoles(frame, offers, (f) => model.formulas[f]!);
  const along = plan.kinds[0]?.axis ? ` along ${plan.kinds[0].axis.text}` : '';
  const form = plan.vectors.length > 0 ? ', as a vector' : along;
  return offered(
    `Give ${kind} its ${sourceName(first)} dipole, ${sizeWords(first.sizeEA)}${form}`,
    dipoleEdits(file, frame, offers),
  );
};

function sourceName({ source }: DipoleOffer): string {
  return source === 'library' ? 'published' : 'estimated';
}
