import type { FindingCode } from '../../base/catalogue';
import type { Related } from '../../base/finding';
import { energyInUse, evaluatePair, type Pair } from '../pair';
import { NoteKind, type PairNotes } from '../pair-notes';
import type { Basis } from '../reference';
import { type RuleContext, shown } from './context';

/** Past this many fragments a frame gets one finding for all. */
const MOST_FRAGMENTS = 20;
const MOST_RELATED = 10;

const BASIS_WORDS: Readonly<Record<Basis, string>> = {
  charges: 'the Coulomb sum over the charges',
  fitted: 'the Coulomb sum over charges fitted to the dipole',
  extent: 'dipoles as long as the fragments',
  none: 'nothing',
};

/** A pair to speak of; it is evaluated again for its sentence, so that millions need not be kept whole. */
interface Noted {
  readonly first: number;
  readonly second: number;
  readonly strengthKJPerMol: number;
}

/** Reports the pairs for which the point dipole does not hold: by fragment where they are few, else once for the frame. */
export function reportNearField(context: RuleContext, notes: PairNotes): void {
  new NearField(context, notes).report();
}

class NearField {
  readonly #context: RuleContext;
  readonly #notes: PairNotes;
  /** 1 for each fragment of this file that takes part in a near pair; such a one is not told about the edge too. */
  readonly #isNear: Uint8Array;
  readonly #isAtEdge: Uint8Array;

  constructor(context: RuleContext, notes: PairNotes) {
    this.#context = context;
    this.#notes = notes;
    this.#isNear = new Uint8Array(context.ownFragments);
    this.#isAtEdge = new Uint8Array(context.ownFragments);
    const { count, kind, first, second } = notes;
    const concernedBy: Uint8Array[] = [];
    concernedBy[NoteKind.near] = this.#isNear;
    concernedBy[NoteKind.edge] = this.#isAtEdge;
    for (let k = 0; k < count; k++) {
      const concerned = concernedBy[kind[k]!];
      if (concerned === undefined) continue;
      // A fragment of a companion file lies past the end, where nothing is kept.
      concerned[first[k]!] = 1;
      concerned[second[k]!] = 1;
    }
    for (let f = 0; f < this.#isNear.length; f++) if (this.#isNear[f]) this.#isAtEdge[f] = 0;
  }

  report(): void {
    this.#reportCode('near-field', NoteKind.near, this.#isNear, this.#notes.countOf(NoteKind.near));
    this.#reportCode('edge-field', NoteKind.edge, this.#isAtEdge, this.#notes.countOf(NoteKind.edge));
  }

  #reportCode(code: FindingCode, kind: NoteKind, concerned: Uint8Array, pairs: number): void {
    let fragments = 0;
    for (let f = 0; f < concerned.length; f++) fragments += concerned[f]!;
    if (fragments === 0) return;
    if (fragments > MOST_FRAGMENTS) {
      this.#reportFrame(code, kind, concerned, `${pairs} pairs of ${fragments} fragments`);
      return;
    }
    const context = this.#context;
    for (let f = 0; f < concerned.length; f++) {
      if (!concerned[f]) continue;
      const only = new Uint8Array(concerned.length);
      only[f] = 1;
      const [worst, ...others] = this.#worst(kind, only);
      context.findings.add(
        code,
        context.placeOf(f)!,
        () => this.#sentence(worst!, f),
        () => ({
          related: others.flatMap((pair) => this.#related(pair, f)),
          pairs: [worst!, ...others].map(({ first, second }) => [first, second]),
        }),
      );
    }
  }

  #reportFrame(code: FindingCode, kind: NoteKind, concerned: Uint8Array, pairs: string): void {
    const context = this.#context;
    const worst = this.#worst(kind, concerned);
    const where = code === 'near-field' ? 'does not hold' : 'is at its edge';
    context.findings.add(
      code,
      context.headSpan(),
      () => `The point dipole ${where} for ${pairs}; the strongest: ${this.#sentence(worst[0]!, worst[0]!.first)}`,
      () => ({
        related: worst.slice(0, MOST_RELATED).flatMap((pair) => this.#related(pair, pair.first)),
        pairs: worst.map(({ first, second }) => [first, second]),
      }),
    );
  }

  /** The strongest pairs of a kind that the given fragments take part in, as many as a finding shows: one and ten others. */
  #worst(kind: NoteKind, concerned: Uint8Array): Noted[] {
    const notes = this.#notes;
    const { first, second, strengthKJPerMol } = notes;
    const worst: Noted[] = [];
    let least = Number.NEGATIVE_INFINITY;
    // Of equal ones the first stands, which has come already.
    for (let k = notes.nextAbove(kind, least, 0); k >= 0; k = notes.nextAbove(kind, least, k + 1)) {
      if (concerned[first[k]!] !== 1 && concerned[second[k]!] !== 1) continue;
      const noted = { first: first[k]!, second: second[k]!, strengthKJPerMol: strengthKJPerMol[k]! };
      let at = worst.length;
      while (at > 0 && worst[at - 1]!.strengthKJPerMol < noted.strengthKJPerMol) at--;
      worst.splice(at, 0, noted);
      if (worst.length <= MOST_RELATED) continue;
      worst.length = MOST_RELATED + 1;
      least = worst[MOST_RELATED]!.strengthKJPerMol;
    }
    return worst;
  }

  #related(pair: Noted, f: number): Related[] {
    const other = pair.first === f ? pair.second : pair.first;
    const span = this.#context.placeOf(other) ?? this.#context.placeOf(f);
    return span === null ? [] : [{ ...span, message: this.#inShort(pair, f) }];
  }

  /** A partner in a few words, for the list of related places. */
  #inShort({ first, second }: Noted, f: number): string {
    const context = this.#context;
    const pair = evaluatePair(context.frame.system, first, second);
    const { kTKJPerMol } = context.frame.system;
    const share = shareOff(pair);
    const off = share === null ? '' : `, point dipole off by ${share}`;
    return `${context.nameOf(first === f ? second : first)}: R ${shown(pair.distanceA)} Å, ${energy(energyInUse(pair), kTKJPerMol)}${off}`;
  }

  #sentence({ first, second }: Noted, f: number): string {
    const context = this.#context;
    const pair = evaluatePair(context.frame.system, first, second);
    const { kTKJPerMol } = context.frame.system;
    const other = pair.first === f ? pair.second : pair.first;
    const names = `${context.nameOf(f)} and ${context.nameOf(other)}, R = ${shown(pair.distanceA)} Å`;
    if (pair.enclosed) {
      return `${names}: one lies within the extent of the other, so only the Coulomb sum stands (${energy(pair.energies.coulomb, kTKJPerMol)}).`;
    }
    if (Number.isNaN(pair.referenceKJPerMol)) {
      return `${names}: the extents of the two overlap, so no reference can be given; the point dipole would say ${energy(pair.energies.pointDipole, kTKJPerMol)}.`;
    }
    // What decides stands first: lists of problems cut the rest.
    const share = shareOff(pair);
    const off = share === null ? 'Point dipole off' : `Point dipole off by ${share}`;
    return (
      `${off}: ${names}; it gives ${shown(pair.energies.pointDipole)} kJ/mol, and ${BASIS_WORDS[pair.basis]} ` +
      `${pair.basis === 'extent' ? 'give' : 'gives'} ${energy(pair.referenceKJPerMol, kTKJPerMol)}.`
    );
  }
}

/** Error of the point dipole as a share of the reference, with what that may be off by; `null` where there is none. */
function shareOff({ errorKJPerMol, doubtKJPerMol, referenceKJPerMol }: Pair): string | null {
  const [share, doubt] = [errorKJPerMol, doubtKJPerMol].map((value) => (100 * value) / Math.abs(referenceKJPerMol));
  if (!Number.isFinite(share)) return null;
  return doubt === 0 ? `${shown(share!, 2)} %` : `${shown(share!, 2)} ± ${shown(doubt!, 2)} %`;
}

function energy(valueKJPerMol: number, kTKJPerMol: number): string {
  return `${shown(valueKJPerMol)} kJ/mol (${shown(Math.abs(valueKJPerMol) / kTKJPerMol, 2)} kT)`;
}
