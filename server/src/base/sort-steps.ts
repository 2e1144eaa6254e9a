import type { Steps } from './steps';

/** Items sorted or merged between two pauses. */
const RUN = 2048;

/** Sorts in place: short runs first, which are then merged, with pauses. */
export function* sortSteps(items: Int32Array, compare: (a: number, b: number) => number): Steps<void> {
  for (let from = 0; from < items.length; from += RUN) {
    items.subarray(from, from + RUN).sort(compare);
    yield;
  }
  const merged = new Int32Array(items.length);
  for (let width = RUN; width < items.length; width *= 2) {
    for (let from = 0; from < items.length; from += 2 * width) {
      yield* mergeSteps(items, merged, from, from + width, from + 2 * width, compare);
    }
    items.set(merged);
    yield;
  }
}

function* mergeSteps(
  from: Int32Array,
  to: Int32Array,
  start: number,
  middle: number,
  end: number,
  compare: (a: number, b: number) => number,
): Steps<void> {
  const [firstEnd, secondEnd] = [Math.min(middle, from.length), Math.min(end, from.length)];
  let [a, b] = [start, firstEnd];
  for (let at = start; at < secondEnd; at++) {
    const takesFirst = b >= secondEnd || (a < firstEnd && compare(from[a]!, from[b]!) <= 0);
    to[at] = takesFirst ? from[a++]! : from[b++]!;
    if (at % RUN === 0) yield;
  }
}
