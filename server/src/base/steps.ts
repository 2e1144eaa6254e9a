/** Work that pauses between its steps, so that others can be served meanwhile. */
export type Steps<T> = Generator<undefined, T>;

/** Does all steps at once. */
export function finish<T>(steps: Steps<T>): T {
  let step = steps.next();
  while (!step.done) step = steps.next();
  return step.value;
}

/** Calls `each` for every number from 0 up to `count`, pausing after every `stride` of them. */
export function* inStrides(count: number, stride: number, each: (index: number) => void): Steps<void> {
  for (let from = 0; from < count; from += stride) {
    const to = Math.min(count, from + stride);
    for (let index = from; index < to; index++) each(index);
    yield;
  }
}
