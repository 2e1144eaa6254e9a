import type { Advice } from '../analysis/advice';
import type { Contact } from '../analysis/contact';
import { type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import type { Pair } from '../analysis/pair';
import type { Regime } from '../analysis/reference';
import { sortSteps } from '../base/sort-steps';
import type { Steps } from '../base/steps';
import type { FrameModel } from '../model/frame-model';
import { fragmentTitle } from './fragment-title';
import { known, type Maybe } from './records';

/** A row of the table of all pairs; fragments from 1. */
export interface PairRow {
  readonly first: number;
  readonly second: number;
  readonly names: readonly [string, string];
  readonly distanceA: Maybe;
  /** The reference, else the point estimate. */
  readonly energyKJPerMol: Maybe;
  readonly energyFrom: 'reference' | 'point' | null;
  readonly pointKJPerMol: Maybe;
  readonly strengthKJPerMol: number;
  readonly regime: Regime | null;
  readonly contact: Contact;
  readonly advice: Advice | null;
}

/** By what the table can be ordered. */
export const ROW_KEYS = ['pair', 'distance', 'energy', 'point', 'strength', 'regime', 'contact', 'advice'] as const;
export type RowKey = (typeof ROW_KEYS)[number];

/** Which rows are wanted, and in which order. */
export interface RowQuery {
  readonly key: RowKey;
  readonly descending: boolean;
  readonly advice: Advice | null;
  /** Part of the name of a fragment, or its number; empty for all. */
  readonly text: string;
}

/** In the order in which they matter. */
const REGIMES: readonly (Regime | null)[] = [null, 'far', 'edge', 'near'];
const CONTACTS: readonly Contact[] = ['bonded', 'apart', 'touching', 'clash'];
const ADVICE: readonly (Advice | null)[] = [null, 'accept', 'review', 'compute', 'repair'];

const PAIRS_A_STEP = 256;
const FIRST_ROOM = 1024;

/** All pairs of a frame as columns, small enough to keep by the hundred thousand. */
export class PairList {
  count = 0;
  readonly #model: FrameModel;
  #numbers = new Int32Array(2 * FIRST_ROOM);
  /** Distance, reference, point estimate, strength of each. */
  #values = new Float64Array(4 * FIRST_ROOM);
  /** Regime, contact, advice of each, as places in their lists. */
  #words = new Uint8Array(3 * FIRST_ROOM);

  private constructor(model: FrameModel) {
    this.#model = model;
  }

  /** Lists the pairs of a frame; `null` where there are more than `most`. */
  static *steps(frame: FrameAnalysis, most: number): Steps<PairList | null> {
    const list = new PairList(frame.model);
    for (const pair of pairsOf(frame)) {
      if (list.count === most) return null;
      list.#reserve();
      const at = list.count++;
      list.#numbers.set([pair.first, pair.second], 2 * at);
      const { referenceKJPerMol, energies, strengthKJPerMol, distanceA } = pair;
      list.#values.set([distanceA, referenceKJPerMol, energies.pointDipole, strengthKJPerMol], 4 * at);
      const words = [REGIMES.indexOf(pair.regime), CONTACTS.indexOf(pair.contact), ADVICE.indexOf(pair.advice)];
      list.#words.set(words, 3 * at);
      if (list.count % PAIRS_A_STEP === 0) yield;
    }
    return list;
  }

  #reserve(): void {
    if (2 * this.count < this.#numbers.length) return;
    const grown = <T extends Int32Array | Float64Array | Uint8Array>(from: T, to: T): T => {
      to.set(from);
      return to;
    };
    this.#numbers = grown(this.#numbers, new Int32Array(2 * this.#numbers.length));
    this.#values = grown(this.#values, new Float64Array(2 * this.#values.length));
    this.#words = grown(this.#words, new Uint8Array(2 * this.#words.length));
  }

  row(at: number): PairRow {
    const [distanceA, referenceKJPerMol, pointKJPerMol, strengthKJPerMol] = this.#values.subarray(4 * at, 4 * at + 4);
    return rowFrom(this.#model, {
      first: this.#numbers[2 * at]!,
      second: this.#numbers[2 * at + 1]!,
      distanceA: distanceA!,
      referenceKJPerMol: referenceKJPerMol!,
      pointKJPerMol: pointKJPerMol!,
      strengthKJPerMol: strengthKJPerMol!,
      regime: REGIMES[this.#words[3 * at]!]!,
      contact: CONTACTS[this.#words[3 * at + 1]!]!,
      advice: ADVICE[this.#words[3 * at + 2]!]!,
    });
  }

  /** The rows that a query wants, as places in the list, in its order; what is unknown comes last, ties as in the file. */
  *orderSteps({ key, descending, advice, text }: RowQuery): Steps<Int32Array> {
    const wanted = yield* this.#matching(advice, text.trim().toLowerCase());
    if (key === 'pair') return descending ? wanted.reverse() : wanted;
    const values = this.#keyColumn(key);
    const sign = descending ? -1 : 1;
    yield* sortSteps(wanted, (a, b) => {
      const [x, y] = [values(a), values(b)];
      if (Number.isNaN(x) || Number.isNaN(y)) return Number(Number.isNaN(x)) - Number(Number.isNaN(y)) || a - b;
      return sign * (x - y) || a - b;
    });
    return wanted;
  }

  *#matching(advice: Advice | null, text: string): Steps<Int32Array> {
    const places = new Int32Array(this.count);
    const code = ADVICE.indexOf(advice);
    const titles = text === '' ? null : new Map<number, boolean>();
    const matches = (f: number): boolean => {
      const seen = titles?.get(f);
      if (seen !== undefined) return seen;
      const isMatch = String(f + 1) === text || fragmentTitle(this.#model, f).toLowerCase().includes(text);
      titles?.set(f, isMatch);
      return isMatch;
    };
    let found = 0;
    for (let at = 0; at < this.count; at++) {
      if (at % (16 * PAIRS_A_STEP) === 0) yield;
      if (advice !== null && this.#words[3 * at + 2] !== code) continue;
      if (titles !== null && !matches(this.#numbers[2 * at]!) && !matches(this.#numbers[2 * at + 1]!)) continue;
      places[found++] = at;
    }
    return places.slice(0, found);
  }

  #keyColumn(key: Exclude<RowKey, 'pair'>): (at: number) => number {
    const values = this.#values;
    const words = this.#words;
    switch (key) {
      case 'distance':
        return (at) => values[4 * at]!;
      case 'energy':
        return (at) => (Number.isNaN(values[4 * at + 1]!) ? values[4 * at + 2]! : values[4 * at + 1]!);
      case 'point':
        return (at) => values[4 * at + 2]!;
      case 'strength':
        return (at) => values[4 * at + 3]!;
      case 'regime':
        return (at) => words[3 * at]!;
      case 'contact':
        return (at) => words[3 * at + 1]!;
      case 'advice':
        return (at) => words[3 * at + 2]!;
      default:
        // A key that another client made up orders nothing.
        return (at) => at;
    }
  }
}

/** A single pair as a row. */
export function pairRow(model: FrameModel, pair: Pair): PairRow {
  return rowFrom(model, { ...pair, pointKJPerMol: pair.energies.pointDipole });
}

type RowSource = Pick<
  Pair,
  'first' | 'second' | 'distanceA' | 'referenceKJPerMol' | 'strengthKJPerMol' | 'regime' | 'contact' | 'advice'
> & { readonly pointKJPerMol: number };

function rowFrom(model: FrameModel, source: RowSource): PairRow {
  const reference = known(source.referenceKJPerMol);
  const point = known(source.pointKJPerMol);
  const { first, second, strengthKJPerMol, regime, contact, advice } = source;
  return {
    first: first + 1,
    second: second + 1,
    names: [fragmentTitle(model, first), fragmentTitle(model, second)],
    distanceA: known(source.distanceA),
    energyKJPerMol: reference ?? point,
    energyFrom: reference !== null ? 'reference' : point !== null ? 'point' : null,
    pointKJPerMol: point,
    strengthKJPerMol,
    regime,
    contact,
    advice,
  };
}
