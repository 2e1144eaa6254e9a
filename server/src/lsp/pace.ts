import type { Steps } from '../base/steps';

/** Lets other work run; the platform's way of going on in a later turn. */
export type Turn = () => Promise<void>;

/** How the platform waits and tells time (ms). */
export interface Clock {
  readonly turn: Turn;
  readonly now: () => number;
}

/** Work goes on for this long before others get a turn, ms. A question takes a few turns to be read, answered and sent. */
const SLICE_MS = 3;

/** Thrown where a run is no longer wanted. */
export class Outdated extends Error {}

/** Does long work in slices: others get a turn in between, and after it the work is given up where nobody wants it any more. */
export class Pace {
  readonly #clock: Clock;
  readonly #isWanted: () => boolean;
  #sliceStart: number;

  constructor(clock: Clock, isWanted: () => boolean) {
    this.#clock = clock;
    this.#isWanted = isWanted;
    this.#sliceStart = clock.now();
  }

  /** Gives others a turn. Throws {@link Outdated} where the work is given up. */
  async rest(): Promise<void> {
    await this.#clock.turn();
    if (!this.#isWanted()) throw new Outdated();
    this.#sliceStart = this.#clock.now();
  }

  async finish<T>(steps: Steps<T>): Promise<T> {
    let step = steps.next();
    while (!step.done) {
      if (this.#clock.now() - this.#sliceStart > SLICE_MS) await this.rest();
      step = steps.next();
    }
    return step.value;
  }
}
