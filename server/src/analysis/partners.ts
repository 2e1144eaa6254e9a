import { NeighbourBuffer } from '../model/neighbour-buffer';
import { PointGrid } from '../model/point-grid';
import type { System } from './system';

/** Two ions belong to the list up to this many cutoffs. */
const ION_CUTOFFS = 3;
/** Contacts are found whatever the cutoff: no two atoms touch over a longer distance, Å. */
export const CONTACT_REACH_A = 7;
/** Each tier holds fragments of up to twice the extent of the one before, so that large ones do not widen the search for small. */
const FIRST_TIER_EXTENT_A = 4;

/** What a comparison of distances may be off by; whether a pair belongs to the list is decided exactly elsewhere. */
const ROUNDING = 1 + 1e-9;

interface Tier {
  readonly grid: PointGrid;
  readonly largestA: number;
}

/** Where a fragment was, and what it was, before it moved. */
export interface PlaceBefore {
  readonly centreA: readonly [number, number, number];
  readonly usable: number;
  readonly isIon: number;
}

/** Finds the partners of each fragment within the cutoff with cells, whatever the mixture of sizes. */
export class Partners {
  readonly #system: System;
  readonly #tiers: readonly Tier[];
  /** Ions once more: they see each other three times as far. */
  readonly #ionTiers: readonly Tier[];
  readonly #candidates = new NeighbourBuffer();
  readonly #found = new NeighbourBuffer();

  constructor(system: System) {
    this.#system = system;
    const reach = reachOf(system);
    this.#tiers = tiersOf(system, system.usable, reach);
    this.#ionTiers = tiersOf(
      system,
      system.isIon.map((isIon, f) => isIon & system.usable[f]!),
      ION_CUTOFFS * reach,
    );
  }

  /**
   * Takes note that a fragment, whose moments are written anew, was at another place before. Returns false where partners must be searched
   * for with a new object.
   */
  follow(f: number, before: PlaceBefore): boolean {
    const { usable, isIon, moments } = this.#system;
    if (usable[f] !== before.usable || isIon[f] !== before.isIon) return false;
    if (!usable[f]) return true;
    const { centreA, extentA } = moments;
    const now = [centreA[3 * f]!, centreA[3 * f + 1]!, centreA[3 * f + 2]!] as const;
    const tiers = [this.#tiers, ...(isIon[f] ? [this.#ionTiers] : [])].map((all) => {
      centreA.set(before.centreA, 3 * f);
      return all.find(({ grid, largestA }) => extentA[f]! <= largestA && grid.canMove(f, ...now));
    });
    for (const tier of tiers) {
      centreA.set(before.centreA, 3 * f);
      tier?.grid.move(f, ...now);
    }
    centreA.set(now, 3 * f);
    return !tiers.includes(undefined);
  }

  /** The partners of a fragment, ascending; with `onlyAfter` those of a larger number alone. */
  of(f: number, onlyAfter: boolean): Int32Array {
    const { index, count } = this.around(f, onlyAfter);
    return index.slice(0, count).sort();
  }

  /**
   * The same in no order, with the vectors from the centre of `f` to each (minimum image); valid until the next call. Some lie a little
   * beyond the cutoff: they are in the list only if they touch.
   */
  around(f: number, onlyAfter: boolean): NeighbourBuffer {
    const system = this.#system;
    this.#found.count = 0;
    if (!system.usable[f]) return this.#found;
    const reach = reachOf(system) + system.moments.extentA[f]!;
    const ion = system.isIon[f] === 1;
    this.#collect(this.#tiers, f, reach, onlyAfter, ion);
    if (ion) {
      const ionReach = ION_CUTOFFS * reachOf(system) + system.moments.extentA[f]!;
      this.#collect(this.#ionTiers, f, ionReach, onlyAfter, false);
    }
    return this.#found;
  }

  #collect(tiers: readonly Tier[], f: number, reachA: number, onlyAfter: boolean, leaveIons: boolean): void {
    const { isIon, moments } = this.#system;
    const found = this.#found;
    const candidates = this.#candidates;
    for (const { grid, largestA } of tiers) {
      grid.gather(f, (reachA + largestA) * ROUNDING, onlyAfter, candidates);
      const { index, vectorA } = candidates;
      for (let k = 0; k < candidates.count; k++) {
        const g = index[k]!;
        if (leaveIons && isIon[g] === 1) continue;
        const x = vectorA[3 * k]!;
        const y = vectorA[3 * k + 1]!;
        const z = vectorA[3 * k + 2]!;
        const within = (reachA + moments.extentA[g]!) * ROUNDING;
        if (x * x + y * y + z * z <= within * within) found.push(g, x, y, z);
      }
    }
  }
}

function reachOf(system: System): number {
  return Math.max(system.settings.cutoffA, CONTACT_REACH_A);
}

/** Grids of the fragments that are marked by 1, by extent. */
function tiersOf(system: System, isMember: Uint8Array, reachA: number): Tier[] {
  const { extentA, centreA } = system.moments;
  const members: Int32Array[] = [];
  const counts: number[] = [];
  for (let f = 0; f < system.count; f++) {
    if (isMember[f] !== 1) continue;
    const small = extentA[f]! <= FIRST_TIER_EXTENT_A;
    const tier = small ? 0 : Math.ceil(Math.log2(extentA[f]! / FIRST_TIER_EXTENT_A));
    members[tier] ??= new Int32Array(system.count);
    const count = counts[tier] ?? 0;
    members[tier][count] = f;
    counts[tier] = count + 1;
  }
  return members.flatMap((all, tier) => {
    const list = all.slice(0, counts[tier]);
    const largestA = list.reduce((most, f) => Math.max(most, extentA[f]!), 0);
    const grid = new PointGrid(centreA, list, (reachA + 2 * largestA) * ROUNDING * ROUNDING, system.cell);
    return { grid, largestA };
  });
}

/** Whether a pair belongs to the list by its distance alone. */
export function isWithinCutoff(system: System, f: number, g: number, distanceA: number): boolean {
  const { extentA } = system.moments;
  const cutoff = system.settings.cutoffA * (system.isIon[f] && system.isIon[g] ? ION_CUTOFFS : 1);
  return distanceA - extentA[f]! - extentA[g]! <= cutoff;
}
