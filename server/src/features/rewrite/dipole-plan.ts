import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { axisVector, elementAxes, type NamedAxis } from './axes';
import { type DipoleOffer, isZero, sourceWords } from './dipole-offers';
import { angleDeg } from './vectors';

/** A kind of fragment with one dipole for all: a size, and an axis that its direction follows. */
export interface KindDipole {
  /** Composition, or residue name. */
  readonly kind: string;
  readonly offers: readonly DipoleOffer[];
  readonly sizeEA: number;
  /** By elements; `null` where the dipole is zero, or has no known direction. */
  readonly axis: NamedAxis | null;
}

/** How dipoles are to be written down: by kinds where one axis describes all of a kind, else as vectors. */
export interface DipolePlan {
  readonly kinds: readonly KindDipole[];
  readonly vectors: readonly DipoleOffer[];
  /** Each kind with where its dipole comes from. */
  readonly sources: readonly (readonly [kind: string, words: string])[];
}

/** An axis must have the direction of the dipole within this, degrees. */
const AXIS_DEG = 1;

/** Sorts offers by the kind of their fragments and decides for each kind how it is written. */
export function planDipoles(
  frame: FrameAnalysis,
  offers: readonly DipoleOffer[],
  kindOf: (fragment: number) => string,
): DipolePlan {
  const byKind = new Map<string, DipoleOffer[]>();
  for (const offer of offers) {
    const kind = kindOf(offer.fragment);
    const list = byKind.get(kind);
    if (list === undefined) byKind.set(kind, [offer]);
    else list.push(offer);
  }
  const kinds: KindDipole[] = [];
  const vectors: DipoleOffer[] = [];
  const sources: [string, string][] = [];
  for (const [kind, all] of byKind) {
    const isWhole = isWholeKind(frame, all, (f) => kindOf(f) === kind);
    const sized = isWhole ? kindDipole(frame, kind, all) : null;
    const directed = all.filter((offer) => offer.direction !== null || isZero(offer));
    if (sized !== null) kinds.push(sized);
    else vectors.push(...directed);
    const told = sized === null ? directed : all;
    for (const words of new Set(told.map(sourceWords))) sources.push([kind, words]);
  }
  return { kinds, vectors, sources };
}

/** Whether what is written for a kind speaks of nothing but these fragments, and of those that have a vector of their own. */
function isWholeKind(
  { model }: FrameAnalysis,
  offers: readonly DipoleOffer[],
  isOfKind: (fragment: number) => boolean,
): boolean {
  const offered = new Set(offers.map(({ fragment }) => fragment));
  return model.notes.every((note, f) => offered.has(f) || note.dipoleEA !== null || !isOfKind(f));
}

/** One size and axis for all fragments of a kind, where their dipole is the published one of one molecule. */
function kindDipole(frame: FrameAnalysis, kind: string, offers: readonly DipoleOffer[]): KindDipole | null {
  const [first] = offers;
  const { sizeEA } = first!;
  const isOne = offers.every(
    (offer) => offer.source === 'library' && offer.note === first!.note && offer.sizeEA === sizeEA,
  );
  if (!isOne) return null;
  if (isZero(first!) || offers.every(({ direction }) => direction === null))
    return { kind, offers, sizeEA, axis: null };
  const fitting = elementAxes(frame, first!.fragment).filter(({ text }) => {
    return offers.every(({ fragment, direction }) => {
      const own = elementAxes(frame, fragment).find((candidate) => candidate.text === text);
      return own !== undefined && direction !== null && angleDeg(axisVector(frame, own), direction) <= AXIS_DEG;
    });
  });
  const elements = (atoms: readonly number[] = []) =>
    [...new Set(atoms.map((atom) => frame.model.tree.atoms.element[atom]))].sort().join();
  const haveSameElements = (a: readonly number[], b: readonly number[] | undefined) => elements(a) === elements(b);
  const published = fitting.find(
    ({ before, after }) => haveSameElements(before, first!.axis?.before) && haveSameElements(after, first!.axis?.after),
  );
  const axis = published ?? fitting[0];
  return axis === undefined ? null : { kind, offers, sizeEA, axis };
}
