import { imageResult, minimumImage } from '../model/cell';
import { NeighbourBuffer, PointGrid } from '../model/point-grid';
import type { System } from './system';

/** Two ions belong to the list up to this many cutoffs. */
const ION_CUTOFFS = 3;
/** Contacts are found whatever the cutoff: no two atoms touch over a longer distance, Å. */
const CONTACT_REACH_A = 7;
/** Fragments of a larger extent are looked through one by one, so that they do not widen the search for all others, Å. */
const BIG_EXTENT_A = 10;

/** Finds the partners of each fragment within the cutoff; linear in the fragments while these are small. */
export class Partners {
  readonly #system: System;
  readonly #all: Int32Array;
  readonly #big: Int32Array;
  readonly #small: PointGrid;
  readonly #ions: PointGrid;
  readonly #smallExtentA: number;
  readonly #ionExtentA: number;
  readonly #buffer = new NeighbourBuffer();

  constructor(system: System) {
    this.#system = system;
    const { extentA, centreA } = system.moments;
    const all = Int32Array.from({ length: system.count }, (_, f) => f).filter((f) => system.usable[f] === 1);
    const small = all.filter((f) => extentA[f]! <= BIG_EXTENT_A);
    const ions = all.filter((f) => system.isIon[f] === 1);
    const largest = (members: Int32Array) => members.reduce((most, f) => Math.max(most, extentA[f]!), 0);
    this.#all = all;
    this.#big = all.filter((f) => extentA[f]! > BIG_EXTENT_A);
    this.#smallExtentA = largest(small);
    this.#ionExtentA = largest(ions);
    const reach = Math.max(system.settings.cutoffA, CONTACT_REACH_A);
    this.#small = new PointGrid(centreA, small, reach + 2 * this.#smallExtentA, system.cell);
    this.#ions = new PointGrid(centreA, ions, ION_CUTOFFS * reach + 2 * this.#ionExtentA, system.cell);
  }

  /**
   * The partners of a fragment, ascending; with `onlyAfter` those of a larger number alone. Some lie a little beyond the cutoff:
   * they are in the list only if they touch.
   */
  of(f: number, onlyAfter: boolean): number[] {
    const system = this.#system;
    if (!system.usable[f]) return [];
    const { extentA } = system.moments;
    const { cutoffA } = system.settings;
    const reach = Math.max(cutoffA, CONTACT_REACH_A);
    const found: number[] = [];
    const ion = system.isIon[f] === 1;
    const isBig = extentA[f]! > BIG_EXTENT_A;
    const candidates = isBig ? this.#all : this.#big;
    for (const g of candidates) {
      if (onlyAfter ? g <= f : g === f) continue;
      if (ion && system.isIon[g]) continue;
      if (centreDistance(system, f, g) <= reach + extentA[f]! + extentA[g]!) found.push(g);
    }
    if (!isBig) {
      this.#collect(this.#small, f, reach + extentA[f]! + this.#smallExtentA, onlyAfter, (g, d) => {
        if (!(ion && system.isIon[g]) && d <= reach + extentA[f]! + extentA[g]!) found.push(g);
      });
    }
    if (ion) {
      const ionReach = ION_CUTOFFS * reach;
      this.#collect(this.#ions, f, ionReach + extentA[f]! + this.#ionExtentA, onlyAfter, (g, d) => {
        if (d <= ionReach + extentA[f]! + extentA[g]!) found.push(g);
      });
    }
    return found.sort((a, b) => a - b);
  }

  #collect(
    grid: PointGrid,
    f: number,
    radiusA: number,
    onlyAfter: boolean,
    visit: (g: number, d: number) => void,
  ): void {
    const buffer = this.#buffer;
    grid.gather(f, radiusA, onlyAfter, buffer);
    for (let k = 0; k < buffer.count; k++) {
      const d = Math.hypot(buffer.vectorA[3 * k]!, buffer.vectorA[3 * k + 1]!, buffer.vectorA[3 * k + 2]!);
      visit(buffer.index[k]!, d);
    }
  }
}

/** Whether a pair belongs to the list by its distance alone. */
export function isWithinCutoff(system: System, f: number, g: number, distanceA: number): boolean {
  const { extentA } = system.moments;
  const cutoff = system.settings.cutoffA * (system.isIon[f] && system.isIon[g] ? ION_CUTOFFS : 1);
  return distanceA - extentA[f]! - extentA[g]! <= cutoff;
}

const IMAGE = imageResult();

function centreDistance(system: System, f: number, g: number): number {
  const { centreA } = system.moments;
  const d = [0, 1, 2].map((a) => centreA[3 * g + a]! - centreA[3 * f + a]!) as [number, number, number];
  if (system.cell === null) return Math.hypot(...d);
  minimumImage(system.cell, ...d, IMAGE);
  return Math.hypot(...IMAGE.vectorA);
}
