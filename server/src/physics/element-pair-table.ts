import { MAX_ATOMIC_NUMBER } from './elements';

/** The entry of elements z₁ and z₂ stands at this times z₁, plus z₂. */
export const ELEMENT_STRIDE = MAX_ATOMIC_NUMBER + 1;

/** A table over all pairs of elements (0 for ghosts and unknown ones), made when it is first asked for: at start no one waits for it. */
export function elementPairTable(entry: (z1: number, z2: number) => number): () => Float64Array {
  let table: Float64Array | undefined;
  return () => {
    if (table === undefined) {
      table = new Float64Array(ELEMENT_STRIDE * ELEMENT_STRIDE);
      for (let z1 = 0; z1 < ELEMENT_STRIDE; z1++) {
        for (let z2 = 0; z2 < ELEMENT_STRIDE; z2++) table[ELEMENT_STRIDE * z1 + z2] = entry(z1, z2);
      }
    }
    return table;
  };
}
