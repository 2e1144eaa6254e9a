import { momentColumns } from './moments';
import type { AnalysisSettings } from './settings';
import type { System } from './system';

/** Which fragments of a new state are those of an old one, down to the last bit of all that their pairs rest on. */
export interface FragmentMatch {
  /** For each old fragment its number in the new state, −1 where it is gone or changed; ascending among those that stay. */
  readonly newOf: Int32Array;
  /** Old fragments that are gone, ascending. */
  readonly gone: readonly number[];
  /** New fragments that were not there before, ascending. */
  readonly fresh: readonly number[];
}

/**
 * Compares two states of a frame. Fragments are compared number by number where there are as many as before, else from both ends.
 * `null` where something else than fragments differs, so that no pair is the same. Linear, and cheap beside any pair.
 */
export function matchFragments(old: System, now: System): FragmentMatch | null {
  if (!haveSameSettings(old.settings, now.settings) || !haveSameCell(old, now)) return null;
  const comparison = new Comparison(old, now);
  const newOf = new Int32Array(old.count).fill(-1);
  const shift = now.count - old.count;
  let from = 0;
  let to = now.count;
  if (shift === 0) {
    for (let f = 0; f < now.count; f++) if (comparison.isSame(f, f)) newOf[f] = f;
  } else {
    const shorter = Math.min(old.count, now.count);
    while (from < shorter && comparison.isSame(from, from)) newOf[from] = from++;
    while (to - 1 >= from && to - 1 - shift >= from && comparison.isSame(to - 1 - shift, to - 1)) {
      to--;
      newOf[to - shift] = to;
    }
  }
  const gone: number[] = [];
  const stays = new Uint8Array(now.count);
  for (let f = 0; f < old.count; f++) {
    if (newOf[f]! < 0) gone.push(f);
    else stays[newOf[f]!] = 1;
  }
  const fresh: number[] = [];
  for (let f = 0; f < now.count; f++) if (!stays[f]) fresh.push(f);
  return { newOf, gone, fresh };
}

function haveSameSettings(a: AnalysisSettings, b: AnalysisSettings): boolean {
  return (
    a.temperatureK === b.temperatureK &&
    a.relativePermittivity === b.relativePermittivity &&
    a.centre === b.centre &&
    a.tolerance === b.tolerance &&
    a.cutoffA === b.cutoffA
  );
}

function haveSameCell({ cell: a }: System, { cell: b }: System): boolean {
  if (a === null || b === null) return a === b;
  return a.vectorsA.every((x, k) => x === b.vectorsA[k]) && a.periodic.every((x, k) => x === b.periodic[k]);
}

class Comparison {
  readonly #old: System;
  readonly #now: System;
  /** Columns of both states with how many entries a fragment, or an atom, has in each. */
  readonly #ofFragment: readonly (readonly [Columns, Columns, number])[];
  readonly #ofAtom: readonly (readonly [Columns, Columns, number])[];

  constructor(old: System, now: System) {
    this.#old = old;
    this.#now = now;
    const nowMoments = momentColumns(now.moments);
    const flags = ['usable', 'ownCharges', 'fitted', 'featureless', 'isIon', 'hasColumn'] as const;
    this.#ofFragment = [
      ...momentColumns(old.moments).map(([column, width], k) => [column, nowMoments[k]![0], width] as const),
      [old.moments.isAtom, now.moments.isAtom, 1],
      [old.doubtEA2, now.doubtEA2, 1],
      ...flags.map((flag) => [old[flag], now[flag], 1] as const),
    ];
    this.#ofAtom = [
      [old.element, now.element, 1],
      [old.ghost, now.ghost, 1],
      [old.localA, now.localA, 3],
      [old.columnE, now.columnE, 1],
      [old.fittedE, now.fittedE, 1],
    ];
  }

  isSame(f: number, g: number): boolean {
    const [start, otherStart] = [this.#old.starts[f]!, this.#now.starts[g]!];
    const atoms = this.#old.starts[f + 1]! - start;
    if (this.#now.starts[g + 1]! - otherStart !== atoms) return false;
    for (const [a, b, width] of this.#ofFragment) if (!areSame(a, width * f, b, width * g, width)) return false;
    for (const [a, b, width] of this.#ofAtom) {
      if (!areSame(a, width * start, b, width * otherStart, width * atoms)) return false;
    }
    return this.#old.chains.hasSamePartners(f, this.#now.chains, g);
  }
}

type Columns = Float64Array | Uint8Array;

/** Whether two pieces hold the same numbers; unknown ones are alike. */
function areSame(a: Columns, fromA: number, b: Columns, fromB: number, count: number): boolean {
  for (let k = 0; k < count; k++) {
    const x = a[fromA + k]!;
    const y = b[fromB + k]!;
    if (x !== y && !(Number.isNaN(x) && Number.isNaN(y))) return false;
  }
  return true;
}
