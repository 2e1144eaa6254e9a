/** Neighbours of one point, as a grid of points finds them; reused from call to call. */
export class NeighbourBuffer {
  count = 0;
  index = new Int32Array(256);
  /** Differences from the point asked about to each neighbour (minimum image), x y z, Å. */
  vectorA = new Float64Array(768);

  push(index: number, x: number, y: number, z: number): void {
    if (this.count === this.index.length) this.#grow();
    const at = this.count++;
    this.index[at] = index;
    this.vectorA[3 * at] = x;
    this.vectorA[3 * at + 1] = y;
    this.vectorA[3 * at + 2] = z;
  }

  /** Makes room for so many more. */
  reserve(more: number): void {
    while (this.count + more > this.index.length) this.#grow();
  }

  #grow(): void {
    const index = new Int32Array(this.index.length * 2);
    index.set(this.index);
    this.index = index;
    const vectorA = new Float64Array(this.vectorA.length * 2);
    vectorA.set(this.vectorA);
    this.vectorA = vectorA;
  }
}
