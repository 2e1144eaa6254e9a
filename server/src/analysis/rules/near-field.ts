import type { FindingCode } from '../../base/catalogue';
import type { Related } from '../../base/finding';
import { NOTICEABLE_KT } from '../advice';
import { evaluatePair, type Pair } from '../pair';
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

/** Collects the pairs for which the point dipole does not hold, and reports them by fragment. */
export class NearField {
  readonly #context: RuleContext;
  readonly #near = new Map<number, Noted[]>();
  readonly #edge = new Map<number, Noted[]>();
  #nearPairs = 0;
  #edgePairs = 0;

  constructor(context: RuleContext) {
    this.#context = context;
  }

  add(pair: Pair): void {
    const { kTKJPerMol } = this.#context.frame.system;
    if (pair.contact === 'clash' || pair.contact === 'bonded') return;
    if (pair.regime === 'near' && pair.strengthKJPerMol > NOTICEABLE_KT * kTKJPerMol) {
      this.#nearPairs++;
      this.#keep(this.#near, pair);
    } else if (pair.regime === 'edge') {
      this.#edgePairs++;
      this.#keep(this.#edge, pair);
    }
  }

  #keep(lists: Map<number, Noted[]>, { first, second, strengthKJPerMol }: Pair): void {
    const noted: Noted = { first, second, strengthKJPerMol };
    for (const f of [first, second]) {
      if (f >= this.#context.ownFragments) continue;
      const list = lists.get(f);
      if (list === undefined) lists.set(f, [noted]);
      else keepWorst(list, noted);
    }
  }

  report(): void {
    this.#reportCode('near-field', this.#near);
    // A fragment that is told about a near partner is not told about the edge too.
    for (const f of this.#near.keys()) this.#edge.delete(f);
    this.#reportCode('edge-field', this.#edge);
  }

  #reportCode(code: FindingCode, lists: ReadonlyMap<number, Noted[]>): void {
    const context = this.#context;
    if (lists.size > MOST_FRAGMENTS) {
      this.#reportFrame(code, lists);
      return;
    }
    for (const [f, pairs] of lists) {
      const [worst, ...others] = [...pairs].sort(byStrength);
      const span = context.placeOf(f)!;
      context.findings.add(
        code,
        span,
        () => this.#sentence(worst!, f),
        () => ({ related: others.slice(0, MOST_RELATED).flatMap((pair) => this.#related(pair, f)) }),
      );
    }
  }

  #reportFrame(code: FindingCode, lists: ReadonlyMap<number, Noted[]>): void {
    const context = this.#context;
    const worst = [...new Set([...lists.values()].flat())].sort(byStrength);
    const where = code === 'near-field' ? 'does not hold' : 'is at its edge';
    context.findings.add(
      code,
      context.headSpan(),
      () =>
        `The point dipole ${where} for ${code === 'near-field' ? this.#nearPairs : this.#edgePairs} pairs of ${lists.size} fragments; the strongest: ${this.#sentence(worst[0]!, worst[0]!.first)}`,
      () => ({ related: worst.slice(0, MOST_RELATED).flatMap((pair) => this.#related(pair, pair.first)) }),
    );
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
    const known = Number.isNaN(pair.referenceKJPerMol) ? pair.energies.pointDipole : pair.referenceKJPerMol;
    const share = pair.errorKJPerMol / Math.abs(pair.referenceKJPerMol);
    const off = Number.isFinite(share) ? `, point dipole off by ${shown(100 * share, 2)} %` : '';
    return `${context.nameOf(first === f ? second : first)}: R ${shown(pair.distanceA)} Å, ${energy(known, kTKJPerMol)}${off}`;
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
    const share = pair.errorKJPerMol / Math.abs(pair.referenceKJPerMol);
    // What decides stands first: lists of problems cut the rest.
    const off = Number.isFinite(share) ? `Point dipole off by ${shown(100 * share, 2)} %` : 'Point dipole off';
    return (
      `${off}: ${names}; it gives ${shown(pair.energies.pointDipole)} kJ/mol, and ${BASIS_WORDS[pair.basis]} ` +
      `${pair.basis === 'extent' ? 'give' : 'gives'} ${energy(pair.referenceKJPerMol, kTKJPerMol)}.`
    );
  }
}

/** Adds a pair to a list that holds no more than a finding shows: the worst and ten others. */
function keepWorst(list: Noted[], noted: Noted): void {
  list.push(noted);
  if (list.length <= 4 * MOST_RELATED) return;
  list.sort(byStrength);
  list.length = MOST_RELATED + 1;
}

function byStrength(a: Noted, b: Noted): number {
  return b.strengthKJPerMol - a.strengthKJPerMol || a.first - b.first || a.second - b.second;
}

function energy(valueKJPerMol: number, kTKJPerMol: number): string {
  return `${shown(valueKJPerMol)} kJ/mol (${shown(Math.abs(valueKJPerMol) / kTKJPerMol, 2)} kT)`;
}
