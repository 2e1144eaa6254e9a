import { NOTICEABLE_KT } from './advice';
import type { Pair } from './pair';
import type { System } from './system';

/** Why a pair is noted; 0 for one that is not. Pairs to compute that are neither near nor at the edge (they touch) bring no finding. */
export const NoteKind = { none: 0, clash: 1, near: 2, edge: 3, compute: 4 } as const;
export type NoteKind = (typeof NoteKind)[keyof typeof NoteKind];

/** What is to be said of an evaluated pair. */
export function noteOf({ kTKJPerMol }: System, { contact, regime, strengthKJPerMol, advice }: Pair): NoteKind {
  if (contact === 'clash') return NoteKind.clash;
  if (contact === 'bonded') return NoteKind.none;
  if (regime === 'near' && strengthKJPerMol > NOTICEABLE_KT * kTKJPerMol) return NoteKind.near;
  if (regime === 'edge') return NoteKind.edge;
  return advice === 'compute' ? NoteKind.compute : NoteKind.none;
}

const FIRST_ROOM = 64;

/** Pairs of note, as columns, in order of first and second fragment: millions of others need not be kept. */
export class PairNotes {
  count = 0;
  /** How many there are of each kind. */
  readonly #counts = new Int32Array(5);
  first: Int32Array;
  second: Int32Array;
  kind: Uint8Array;
  strengthKJPerMol: Float64Array;

  /** @param room for so many at first */
  constructor(room = FIRST_ROOM) {
    const size = Math.max(1, room);
    this.first = new Int32Array(size);
    this.second = new Int32Array(size);
    this.kind = new Uint8Array(size);
    this.strengthKJPerMol = new Float64Array(size);
  }

  add(first: number, second: number, kind: NoteKind, strengthKJPerMol: number): void {
    if (this.count === this.first.length) this.#grow();
    const at = this.count++;
    this.#counts[kind]!++;
    this.first[at] = first;
    this.second[at] = second;
    this.kind[at] = kind;
    this.strengthKJPerMol[at] = strengthKJPerMol;
  }

  /** How many notes are of a kind. */
  countOf(kind: NoteKind): number {
    return this.#counts[kind]!;
  }

  /** The next note of a kind, from `from` on, whose pair is stronger than a bound; −1 where there is none. */
  nextAbove(wanted: NoteKind, leastKJPerMol: number, from: number): number {
    const { count, kind, strengthKJPerMol } = this;
    for (let k = from; k < count; k++) if (kind[k] === wanted && strengthKJPerMol[k]! > leastKJPerMol) return k;
    return -1;
  }

  /** Puts the notes from `from` on, all of one first fragment, in order of the second. */
  sortRow(from: number): void {
    const { first, second, kind, strengthKJPerMol } = this;
    for (let k = from + 1; k < this.count; k++) {
      const [g, what, strength] = [second[k]!, kind[k]!, strengthKJPerMol[k]!];
      let at = k;
      for (; at > from && second[at - 1]! > g; at--) {
        first[at] = first[at - 1]!;
        second[at] = second[at - 1]!;
        kind[at] = kind[at - 1]!;
        strengthKJPerMol[at] = strengthKJPerMol[at - 1]!;
      }
      second[at] = g;
      kind[at] = what;
      strengthKJPerMol[at] = strength;
    }
  }

  /** The same notes in order of first and second fragment. */
  sorted(): PairNotes {
    const { first, second } = this;
    const order = Array.from({ length: this.count }, (_, k) => k);
    order.sort((a, b) => first[a]! - first[b]! || second[a]! - second[b]!);
    const sorted = new PairNotes();
    for (const k of order) sorted.take(this, k);
    return sorted;
  }

  /** Adds note `k` of another list. */
  take(from: PairNotes, k: number): void {
    this.add(from.first[k]!, from.second[k]!, from.kind[k] as NoteKind, from.strengthKJPerMol[k]!);
  }

  /**
   * Brings the notes up to date after some fragments have changed: those of pairs whose fragments both stay are kept under their new numbers
   * (−1: gone; ascending among those that stay), and `added` (ordered) is put in. Nothing is allocated unless the list grows.
   */
  change(newOf: Int32Array, added: PairNotes): void {
    const { first, second, kind, strengthKJPerMol } = this;
    let kept = 0;
    for (let k = 0; k < this.count; k++) {
      const f = newOf[first[k]!]!;
      const g = newOf[second[k]!]!;
      if (f < 0 || g < 0) {
        this.#counts[kind[k]!]!--;
        continue;
      }
      first[kept] = f;
      second[kept] = g;
      if (kept !== k) {
        kind[kept] = kind[k]!;
        strengthKJPerMol[kept] = strengthKJPerMol[k]!;
      }
      kept++;
    }
    this.count = kept;
    this.#merge(added);
  }

  /** Puts an ordered list without a pair in common in, from the end so that nothing is overwritten before it is moved. */
  #merge(added: PairNotes): void {
    while (this.first.length < this.count + added.count) this.#grow();
    const { first, second } = this;
    let from = this.count - 1;
    let next = added.count - 1;
    this.count += added.count;
    for (let kind = 0; kind < this.#counts.length; kind++) this.#counts[kind]! += added.#counts[kind]!;
    for (let at = this.count - 1; next >= 0; at--) {
      const isKept = from >= 0 && (first[from]! - added.first[next]! || second[from]! - added.second[next]!) > 0;
      if (isKept) this.#put(at, this, from--);
      else this.#put(at, added, next--);
    }
  }

  #put(at: number, { first, second, kind, strengthKJPerMol }: PairNotes, k: number): void {
    this.first[at] = first[k]!;
    this.second[at] = second[k]!;
    this.kind[at] = kind[k]!;
    this.strengthKJPerMol[at] = strengthKJPerMol[k]!;
  }

  #grow(): void {
    const room = 2 * this.first.length;
    const longer = <T extends Int32Array | Uint8Array | Float64Array>(from: T, to: T): T => {
      to.set(from);
      return to;
    };
    this.first = longer(this.first, new Int32Array(room));
    this.second = longer(this.second, new Int32Array(room));
    this.kind = longer(this.kind, new Uint8Array(room));
    this.strengthKJPerMol = longer(this.strengthKJPerMol, new Float64Array(room));
  }
}
