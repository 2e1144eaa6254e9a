import { ELEMENT_STRIDE } from '../physics/element-pair-table';
import { vdwSums2A2 } from './contact';
import { CONTACT_REACH_A, isWithinCutoff } from './partners';
import { doubtAt, NEGLIGIBLE_KT } from './reference';
import type { System } from './system';

/** What a look at a pair tells. */
export const Sieved = {
  /** Not in the list. */
  outside: 0,
  /** In the list, apart, and the point dipole surely holds or has nothing to be measured by. */
  quiet: 1,
  /** Only evaluating it tells. */
  open: 2,
} as const;
export type Sieved = (typeof Sieved)[keyof typeof Sieved];

/** An error this near to its bound is left to the evaluation, which adds in another order. */
const SURE_SHARE = 0.99;

/**
 * Tells most pairs of a large frame apart without evaluating them: nothing is allocated, no angle taken, and only what the regime and the
 * contact rest on is computed. Where it is not sure it says so.
 */
export class PairSieve {
  readonly #system: System;
  readonly #vdwSum2A2 = vdwSums2A2();

  constructor(system: System) {
    this.#system = system;
  }

  /** Whether nothing can be said of a fragment's pairs but whether they touch. */
  #isBlind(f: number): boolean {
    const { featureless, moments } = this.#system;
    return featureless[f] === 1 || Number.isNaN(moments.dipoleEA[3 * f]!);
  }

  /** Looks at fragments `f` < `g`, both usable, with the vector between their centres (minimum image, Å). */
  look(f: number, g: number, x: number, y: number, z: number): Sieved {
    const system = this.#system;
    const { extentA } = system.moments;
    const distanceA = Math.sqrt(x * x + y * y + z * z);
    const extent1 = extentA[f]!;
    const extent2 = extentA[g]!;
    const mayTouch = distanceA - extent1 - extent2 <= CONTACT_REACH_A;
    if (!isWithinCutoff(system, f, g, distanceA)) return mayTouch ? Sieved.open : Sieved.outside;
    if (distanceA < 1e-6 || distanceA < Math.max(extent1, extent2) || system.chains.areBonded(f, g)) return Sieved.open;
    if (this.#isBlind(f) || this.#isBlind(g))
      return mayTouch && this.#touches(f, g, x, y, z) ? Sieved.open : Sieved.quiet;
    const charges =
      system.ownCharges[f] && system.ownCharges[g]
        ? system.columnE
        : system.fitted[f] && system.fitted[g]
          ? system.fittedE
          : null;
    if (charges === null) return Sieved.open;
    const reference = mayTouch ? this.#coulombOfApart(f, g, x, y, z, charges) : this.#coulomb(f, g, x, y, z, charges);
    let error = Math.abs(this.#point(f, g, x, y, z, distanceA) - reference);
    if (charges === system.fittedE) error += doubtAt(system, f, g, 'fitted', distanceA);
    const bound = Math.max(
      system.settings.tolerance * Math.abs(reference),
      (NEGLIGIBLE_KT * system.kTKJPerMol) / system.couplingKJA,
    );
    return error <= SURE_SHARE * bound ? Sieved.quiet : Sieved.open;
  }

  /** The point-dipole energy, e²/Å. */
  #point(f: number, g: number, x: number, y: number, z: number, r: number): number {
    const { chargeE, dipoleEA } = this.#system.moments;
    const ax = dipoleEA[3 * f]!;
    const ay = dipoleEA[3 * f + 1]!;
    const az = dipoleEA[3 * f + 2]!;
    const bx = dipoleEA[3 * g]!;
    const by = dipoleEA[3 * g + 1]!;
    const bz = dipoleEA[3 * g + 2]!;
    const q1 = chargeE[f]!;
    const q2 = chargeE[g]!;
    const m1 = (ax * x + ay * y + az * z) / r;
    const m2 = (bx * x + by * y + bz * z) / r;
    return (q1 * q2 + (q2 * m1 - q1 * m2 + (ax * bx + ay * by + az * bz - 3 * m1 * m2) / r) / r) / r;
  }

  /** Sum over the charges, e²/Å. */
  #coulomb(f: number, g: number, x: number, y: number, z: number, charges: Float64Array): number {
    const { starts, localA } = this.#system;
    const from = starts[g]!;
    const to = starts[g + 1]!;
    let sum = 0;
    for (let i = starts[f]!; i < starts[f + 1]!; i++) {
      const ox = x - localA[3 * i]!;
      const oy = y - localA[3 * i + 1]!;
      const oz = z - localA[3 * i + 2]!;
      let field = 0;
      for (let j = from; j < to; j++) {
        const dx = localA[3 * j]! + ox;
        const dy = localA[3 * j + 1]! + oy;
        const dz = localA[3 * j + 2]! + oz;
        field += charges[j]! / Math.sqrt(dx * dx + dy * dy + dz * dz);
      }
      sum += charges[i]! * field;
    }
    return sum;
  }

  /** The same where no atoms touch, else NaN. */
  #coulombOfApart(f: number, g: number, x: number, y: number, z: number, charges: Float64Array): number {
    const { starts, localA, element } = this.#system;
    const vdwSum2A2 = this.#vdwSum2A2;
    const from = starts[g]!;
    const to = starts[g + 1]!;
    let sum = 0;
    for (let i = starts[f]!; i < starts[f + 1]!; i++) {
      const ox = x - localA[3 * i]!;
      const oy = y - localA[3 * i + 1]!;
      const oz = z - localA[3 * i + 2]!;
      const row = ELEMENT_STRIDE * element[i]!;
      let field = 0;
      for (let j = from; j < to; j++) {
        const dx = localA[3 * j]! + ox;
        const dy = localA[3 * j + 1]! + oy;
        const dz = localA[3 * j + 2]! + oz;
        const r2 = dx * dx + dy * dy + dz * dz;
        if (r2 <= vdwSum2A2[row + element[j]!]!) return Number.NaN;
        field += charges[j]! / Math.sqrt(r2);
      }
      sum += charges[i]! * field;
    }
    return sum;
  }

  #touches(f: number, g: number, x: number, y: number, z: number): boolean {
    const { starts, localA, element } = this.#system;
    const vdwSum2A2 = this.#vdwSum2A2;
    for (let i = starts[f]!; i < starts[f + 1]!; i++) {
      const row = ELEMENT_STRIDE * element[i]!;
      for (let j = starts[g]!; j < starts[g + 1]!; j++) {
        const dx = localA[3 * j]! - localA[3 * i]! + x;
        const dy = localA[3 * j + 1]! - localA[3 * i + 1]! + y;
        const dz = localA[3 * j + 2]! - localA[3 * i + 2]! + z;
        if (dx * dx + dy * dy + dz * dz <= vdwSum2A2[row + element[j]!]!) return true;
      }
    }
    return false;
  }
}
