import { NeighbourBuffer, PointGrid } from '../model/point-grid';
import type { System } from './system';

/** Two ions belong to the list up to this many cutoffs. */
const ION_CUTOFFS = 3;
/** Contacts are found whatever the cutoff: no two atoms touch over a longer distance, Å. */
const CONTACT_REACH_A = 7;
/** Each tier holds fragments of up to twice the extent of the one before, so that large ones do not widen the search for small. */
const FIRST_TIER_EXTENT_A = 4;

interface Tier {
  readonly grid: PointGrid;
  readonly largestA: number;
}

/** Finds the partners of each fragment within the cutoff with cells, whatever the mixture of sizes. */
export class Partners {
  readonly #system: System;
  readonly #tiers: readonly Tier[];
  /** Ions once more: they see each other three times as far. */
  readonly #ionTiers: readonly Tier[];
  readonly #buffer = new NeighbourBuffer();

  constructor(system: System) {
    this.#system = system;
    const all = Int32Array.from({ length: system.count }, (_, f) => f).filter((f) => system.usable[f] === 1);
    const reach = reachOf(system);
    this.#tiers = tiersOf(system, all, reach);
    this.#ionTiers = tiersOf(
      system,
      all.filter((f) => system.isIon[f] === 1),
      ION_CUTOFFS * reach,
    );
  }

  /**
   * The partners of a fragment, ascending; with `onlyAfter` those of a larger number alone. Some lie a little beyond the cutoff:
   * they are in the list only if they touch.
   */
  of(f: number, onlyAfter: boolean): number[] {
    const system = this.#system;
    const found: number[] = [];
    if (!system.usable[f]) return found;
    const { extentA } = system.moments;
    const reach = reachOf(system) + extentA[f]!;
    const ion = system.isIon[f] === 1;
    this.#collect(this.#tiers, f, reach, onlyAfter, (g, d) => {
      if (!(ion && system.isIon[g]) && d <= reach + extentA[g]!) found.push(g);
    });
    if (ion) {
      const ionReach = ION_CUTOFFS * reachOf(system) + extentA[f]!;
      this.#collect(this.#ionTiers, f, ionReach, onlyAfter, (g, d) => {
        if (d <= ionReach + extentA[g]!) found.push(g);
      });
    }
    return found.sort((a, b) => a - b);
  }

  #collect(
    tiers: readonly Tier[],
    f: number,
    reachA: number,
    onlyAfter: boolean,
    visit: (g: number, d: number) => void,
  ): void {
    const buffer = this.#buffer;
    for (const { grid, largestA } of tiers) {
      grid.gather(f, reachA + largestA, onlyAfter, buffer);
      for (let k = 0; k < buffer.count; k++) {
        const d = Math.hypot(buffer.vectorA[3 * k]!, buffer.vectorA[3 * k + 1]!, buffer.vectorA[3 * k + 2]!);
        visit(buffer.index[k]!, d);
      }
    }
  }
}

function reachOf(system: System): number {
  return Math.max(system.settings.cutoffA, CONTACT_REACH_A);
}

function tiersOf(system: System, members: Int32Array, reachA: number): Tier[] {
  const { extentA, centreA } = system.moments;
  const tierOf = (f: number) => Math.max(0, Math.ceil(Math.log2(extentA[f]! / FIRST_TIER_EXTENT_A)));
  const byTier = new Map<number, number[]>();
  for (const f of members) {
    const tier = tierOf(f);
    const list = byTier.get(tier);
    if (list === undefined) byTier.set(tier, [f]);
    else list.push(f);
  }
  return [...byTier.values()].map((list) => {
    const largestA = list.reduce((most, f) => Math.max(most, extentA[f]!), 0);
    const grid = new PointGrid(centreA, Int32Array.from(list), reachA + 2 * largestA, system.cell);
    return { grid, largestA };
  });
}

/** Whether a pair belongs to the list by its distance alone. */
export function isWithinCutoff(system: System, f: number, g: number, distanceA: number): boolean {
  const { extentA } = system.moments;
  const cutoff = system.settings.cutoffA * (system.isIon[f] && system.isIon[g] ? ION_CUTOFFS : 1);
  return distanceA - extentA[f]! - extentA[g]! <= cutoff;
}
