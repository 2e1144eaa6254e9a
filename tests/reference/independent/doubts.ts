import type { Doubt } from './types.js';

/** Thresholds met to within this fraction are decided by rounding: two right programs may differ. */
const CLOSE = 1e-6;

/** Decides comparisons and remembers which results hang on a close one. */
export class Decisions {
  readonly doubts = new Set<Doubt>();

  /** value ≤ bound */
  atMost(value: number, bound: number, ...affected: Doubt[]): boolean {
    this.note(value, bound, affected);
    return value <= bound;
  }

  /** value < bound */
  below(value: number, bound: number, ...affected: Doubt[]): boolean {
    this.note(value, bound, affected);
    return value < bound;
  }

  private note(value: number, bound: number, affected: Doubt[]): void {
    if (Math.abs(value - bound) > CLOSE * Math.max(Math.abs(value), Math.abs(bound))) return;
    for (const doubt of affected) this.doubts.add(doubt);
  }
}
