/** A pair of a frame; fragments from 1. */
export interface PairNumbers {
  readonly first: number;
  readonly second: number;
}

/** A pair of a file; frame and fragments from 1. */
export interface PairPlace extends PairNumbers {
  readonly frame: number;
}
