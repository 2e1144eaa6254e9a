import { builtInKnowledge } from '../../analysis/built-in-knowledge';
import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { ModelKnowledge, type OfferedDipole } from '../../analysis/model-knowledge';
import { ZERO_DIPOLE_EA } from '../../analysis/settings';
import { atomsOf } from '../../model/fragment-set';
import { vectorAt } from './vectors';

/** A dipole that a file does not give and that can be written down for one of its fragments. */
export interface DipoleOffer extends OfferedDipole {
  readonly fragment: number;
  /** Axis of a published dipole: atoms of the frame; `null` where none is known. */
  readonly axis: { readonly before: readonly number[]; readonly after: readonly number[] } | null;
}

/** What is known of molecules, whatever the settings allow to be used unasked: here it is asked for. */
export function fullKnowledge(frame: FrameAnalysis): ModelKnowledge {
  const all = builtInKnowledge({ library: true, estimates: true })!;
  return new ModelKnowledge(frame.model, { library: frame.knowledge?.library ?? all.library, estimates: true });
}

/** The net charge that a fragment is declared to have; `null` where that is not the file's word. */
export function declaredChargeE({ moments }: FrameAnalysis, fragment: number): number | null {
  const source = moments.chargeSource[fragment];
  return source === 'assumed' || source === 'library' ? null : moments.chargeE[fragment]!;
}

/** The published or estimated dipoles of those fragments, all or some, of which the file gives none. */
export function dipoleOffers(frame: FrameAnalysis, wants: (fragment: number) => boolean = () => true): DipoleOffer[] {
  const { model, moments, system } = frame;
  let known: ModelKnowledge | null = null;
  const offers: DipoleOffer[] = [];
  for (let f = 0; f < model.fragments.count; f++) {
    const source = moments.dipoleSource[f]!;
    const isOpen = source === 'library' || source === 'estimated' || source === 'none';
    if (!isOpen || !wants(f) || !model.usable[f] || moments.isAtom[f] || system.chains.isCut(f)) continue;
    known ??= fullKnowledge(frame);
    const match = known.match(f, declaredChargeE(frame, f));
    const charge = declaredChargeE(frame, f) ?? match?.entry.molecule.chargeE ?? 0;
    const offered = known.dipole(f, match, charge, vectorAt(moments.centreA, f));
    if (typeof offered === 'string' || !Number.isFinite(offered.sizeEA)) continue;
    const members = atomsOf(model.fragments, f);
    const atomsAt = (places: readonly number[]) => places.map((place) => members[place]!);
    const axis = match?.axis && { before: atomsAt(match.axis.before), after: atomsAt(match.axis.after) };
    offers.push({ ...offered, fragment: f, axis: (offered.source === 'library' && axis) || null });
  }
  return offers;
}

/** Whether a dipole is known to be zero. */
export function isZero({ sizeEA }: OfferedDipole): boolean {
  return sizeEA < ZERO_DIPOLE_EA;
}

/** In words where a dipole comes from. */
export function sourceWords({ source, note }: OfferedDipole): string {
  const plain = note.replace(/["\\]/g, "'").replace(/\s+/g, ' ');
  return source === 'library' ? `published (${plain})` : plain;
}
