import type { Steps } from '../base/steps';
import { type Cell, imageResult, minimumImage } from './cell';
import { CellLayout } from './cell-layout';
import type { NeighbourBuffer } from './neighbour-buffer';

/** Candidates a point may have on average before the points count as too dense to tell neighbours apart. */
const MOST_CANDIDATES_PER_POINT = 1500;
const ALWAYS_FEW_ENOUGH = 1e6;
/** Members that may leave their slots before the grid is to be made anew. */
const MOST_MOVED = 64;

/**
 * Points sorted into cells of about half a search radius, so that the neighbours of one are found among a few. Works in any
 * cell, periodic in any directions; points with a coordinate that is not finite are left out.
 */
export class PointGrid {
  readonly radiusA: number;
  readonly #cell: Cell | null;
  readonly #points: Float64Array;
  readonly #layout: CellLayout;
  readonly #starts: Int32Array;
  readonly #order: Int32Array;
  readonly #sorted: Float64Array;
  readonly #isPlain: boolean;
  readonly #image = imageResult();
  /** Members that have left their slots; they are tried one by one. */
  readonly #moved: number[] = [];
  /** By how many members more than its slots tell a cell holds. */
  readonly #drift = new Map<number, number>();
  #crowding = 0;
  readonly #stencil: number;
  readonly #memberCount: number;

  /** The same as the constructor, with pauses. */
  static *inSteps(
    pointsA: Float64Array,
    members: Int32Array | null,
    radiusA: number,
    cell: Cell | null,
  ): Steps<PointGrid> {
    const inside = finiteMembers(pointsA, members);
    yield;
    const layout = new CellLayout(pointsA, inside, radiusA, cell);
    yield;
    return new PointGrid(pointsA, inside, radiusA, cell, layout);
  }

  /**
   * @param members the points to sort in, or `null` for all; @param pointsA x y z of each point, Å
   * @param layout the cells, where they are laid out for these members already
   */
  constructor(
    pointsA: Float64Array,
    members: Int32Array | null,
    radiusA: number,
    cell: Cell | null,
    layout?: CellLayout,
  ) {
    this.radiusA = radiusA;
    this.#cell = cell;
    this.#points = pointsA;
    const inside = layout === undefined || members === null ? finiteMembers(pointsA, members) : members;
    this.#layout = layout ?? new CellLayout(pointsA, inside, radiusA, cell);
    this.#isPlain = cell === null && !this.#layout.hasClosedGaps;
    const [nx, ny, nz] = this.#layout.counts;
    const total = nx * ny * nz;
    const starts = new Int32Array(total + 1);
    const cells = new Int32Array(inside.length);
    this.#layout.cellsOf(inside, cells);
    for (let k = 0; k < inside.length; k++) starts[cells[k]! + 1]!++;
    for (let c = 0; c < total; c++) {
      this.#crowding += starts[c + 1]! * starts[c + 1]!;
      starts[c + 1]! += starts[c]!;
    }
    this.#stencil = [0, 1, 2].reduce(
      (product, k) => product * Math.min(2 * this.#layout.reachOf(k, radiusA) + 1, this.#layout.counts[k]!),
      1,
    );
    this.#memberCount = inside.length;
    this.#starts = starts;
    this.#order = new Int32Array(inside.length);
    this.#sorted = new Float64Array(3 * inside.length);
    const next = starts.slice(0, total);
    for (let k = 0; k < inside.length; k++) {
      const slot = next[cells[k]!]!++;
      const i = inside[k]!;
      this.#order[slot] = i;
      this.#sorted[3 * slot] = pointsA[3 * i]!;
      this.#sorted[3 * slot + 1] = pointsA[3 * i + 1]!;
      this.#sorted[3 * slot + 2] = pointsA[3 * i + 2]!;
    }
  }

  /** Whether there are so many candidates that a search would be as slow as trying all pairs. */
  get tooDense(): boolean {
    const most = Math.max(ALWAYS_FEW_ENOUGH, MOST_CANDIDATES_PER_POINT * this.#memberCount);
    return this.#crowding * this.#stencil > most;
  }

  /**
   * Whether a member may move to a place without the cells being laid out anew: then {@link move} leaves the grid as good as a fresh one,
   * and as crowded. Members at the rim of a direction that is not periodic may not, nor may many.
   */
  canMove(i: number, x: number, y: number, z: number): boolean {
    if (this.#moved.length >= MOST_MOVED || !Number.isFinite(x + y + z) || this.#slotOf(i) < 0) return false;
    return this.#layout.isSameWith(i, x, y, z);
  }

  /** Moves a member that {@link canMove} allowed to move; its coordinates in the array of points are written. */
  move(i: number, x: number, y: number, z: number): void {
    const slot = this.#slotOf(i);
    const occupied = (by: -1 | 1) => {
      this.#layout.count(i, by);
      const cell = this.#cellOf(i);
      const now = this.#occupants(cell) + by;
      this.#drift.set(cell, (this.#drift.get(cell) ?? 0) + by);
      this.#crowding += by * (2 * now - by);
    };
    occupied(-1);
    this.#points[3 * i] = x;
    this.#points[3 * i + 1] = y;
    this.#points[3 * i + 2] = z;
    occupied(1);
    if (slot >= this.#order.length) return;
    // What lies nowhere is near nothing.
    this.#sorted.fill(Number.NaN, 3 * slot, 3 * slot + 3);
    this.#moved.push(i);
  }

  #occupants(cell: number): number {
    return this.#starts[cell + 1]! - this.#starts[cell]! + (this.#drift.get(cell) ?? 0);
  }

  #cellOf(i: number): number {
    const [nx, ny] = this.#layout.counts;
    return this.#layout.place(0, i) + nx * (this.#layout.place(1, i) + ny * this.#layout.place(2, i));
  }

  /** Slot of a member; past the last one where it has left its own, and −1 where it is none. */
  #slotOf(i: number): number {
    if (this.#moved.includes(i)) return this.#order.length;
    const cell = this.#cellOf(i);
    for (let slot = this.#starts[cell]!; slot < this.#starts[cell + 1]!; slot++)
      if (this.#order[slot] === i) return slot;
    return -1;
  }

  /**
   * Finds all points within `radiusA` of point `i` (a member or not), itself left out, at their minimum image. With
   * `onlyAfter`, only those of a larger index.
   */
  gather(i: number, radiusA: number, onlyAfter: boolean, out: NeighbourBuffer): void {
    out.count = 0;
    const x = this.#points[3 * i]!;
    const y = this.#points[3 * i + 1]!;
    const z = this.#points[3 * i + 2]!;
    if (!Number.isFinite(x + y + z)) return;
    if (this.#isPlain) this.#gatherPlain(i, x, y, z, radiusA, onlyAfter, out);
    else this.#gatherWrapped(i, x, y, z, radiusA, onlyAfter, out);
    for (const j of this.#moved) this.#try(i, j, x, y, z, radiusA * radiusA, onlyAfter, out);
  }

  /** Adds a member that has left its slot, where it is within the radius. */
  #try(
    i: number,
    j: number,
    x: number,
    y: number,
    z: number,
    radius2: number,
    onlyAfter: boolean,
    out: NeighbourBuffer,
  ): void {
    if (onlyAfter ? j <= i : j === i) return;
    let dx = this.#points[3 * j]! - x;
    let dy = this.#points[3 * j + 1]! - y;
    let dz = this.#points[3 * j + 2]! - z;
    if (this.#cell !== null) {
      minimumImage(this.#cell, dx, dy, dz, this.#image);
      dx = this.#image.vectorA[0]!;
      dy = this.#image.vectorA[1]!;
      dz = this.#image.vectorA[2]!;
    }
    if (dx * dx + dy * dy + dz * dz <= radius2) out.push(j, dx, dy, dz);
  }

  #gatherWrapped(
    i: number,
    x: number,
    y: number,
    z: number,
    radiusA: number,
    onlyAfter: boolean,
    out: NeighbourBuffer,
  ): void {
    const [nx, ny] = this.#layout.counts;
    const [fromX, toX] = this.#layout.range(0, i, radiusA);
    const [fromY, toY] = this.#layout.range(1, i, radiusA);
    const [fromZ, toZ] = this.#layout.range(2, i, radiusA);
    const radius2 = radiusA * radiusA;
    for (let cz = fromZ; cz <= toZ; cz++) {
      const wz = this.#layout.wrap(2, cz);
      for (let cy = fromY; cy <= toY; cy++) {
        const base = nx * (this.#layout.wrap(1, cy) + ny * wz);
        // Runs of cells along x are contiguous; a periodic run is split where it wraps.
        let cx = fromX;
        while (cx <= toX) {
          const first = this.#layout.wrap(0, cx);
          const length = Math.min(toX - cx + 1, nx - first);
          const from = this.#starts[base + first]!;
          const to = this.#starts[base + first + length]!;
          this.#collect(i, x, y, z, radius2, onlyAfter, from, to, out);
          cx += length;
        }
      }
    }
  }

  /** The same without cell and without closed gaps, where nothing wraps. */
  #gatherPlain(
    i: number,
    x: number,
    y: number,
    z: number,
    radiusA: number,
    onlyAfter: boolean,
    out: NeighbourBuffer,
  ): void {
    const [nx, ny, nz] = this.#layout.counts;
    const rawX = Math.floor((x - this.#layout.origin[0]) * this.#layout.scale[0]);
    const rawY = Math.floor((y - this.#layout.origin[1]) * this.#layout.scale[1]);
    const rawZ = Math.floor((z - this.#layout.origin[2]) * this.#layout.scale[2]);
    const reachX = this.#layout.reachOf(0, radiusA);
    const reachY = this.#layout.reachOf(1, radiusA);
    const reachZ = this.#layout.reachOf(2, radiusA);
    const fromX = Math.max(0, rawX - reachX);
    const toX = Math.min(nx - 1, rawX + reachX);
    if (fromX > toX) return;
    const toY = Math.min(ny - 1, rawY + reachY);
    const toZ = Math.min(nz - 1, rawZ + reachZ);
    const radius2 = radiusA * radiusA;
    const starts = this.#starts;
    const sorted = this.#sorted;
    const order = this.#order;
    const above = onlyAfter ? i : -1;
    let count = 0;
    for (let cz = Math.max(0, rawZ - reachZ); cz <= toZ; cz++) {
      for (let cy = Math.max(0, rawY - reachY); cy <= toY; cy++) {
        const base = nx * (cy + ny * cz);
        const to = starts[base + toX + 1]!;
        let slot = starts[base + fromX]!;
        if (slot === to) continue;
        out.count = count;
        out.reserve(to - slot);
        const { index, vectorA } = out;
        // Every candidate is written, and the next one over it where it does not count.
        for (; slot < to; slot++) {
          const j = order[slot]!;
          const dx = sorted[3 * slot]! - x;
          const dy = sorted[3 * slot + 1]! - y;
          const dz = sorted[3 * slot + 2]! - z;
          index[count] = j;
          vectorA[3 * count] = dx;
          vectorA[3 * count + 1] = dy;
          vectorA[3 * count + 2] = dz;
          if (dx * dx + dy * dy + dz * dz <= radius2 && j > above && j !== i) count++;
        }
      }
    }
    out.count = count;
  }

  #collect(
    i: number,
    x: number,
    y: number,
    z: number,
    radius2: number,
    onlyAfter: boolean,
    from: number,
    to: number,
    out: NeighbourBuffer,
  ): void {
    const sorted = this.#sorted;
    const order = this.#order;
    const cell = this.#cell;
    // Up to this distance a difference as written is its own minimum image.
    const safe2 = cell === null ? Number.POSITIVE_INFINITY : cell.safeRadius2;
    for (let slot = from; slot < to; slot++) {
      const j = order[slot]!;
      if (onlyAfter ? j <= i : j === i) continue;
      let dx = sorted[3 * slot]! - x;
      let dy = sorted[3 * slot + 1]! - y;
      let dz = sorted[3 * slot + 2]! - z;
      let d2 = dx * dx + dy * dy + dz * dz;
      if (d2 > safe2) {
        minimumImage(cell!, dx, dy, dz, this.#image);
        dx = this.#image.vectorA[0]!;
        dy = this.#image.vectorA[1]!;
        dz = this.#image.vectorA[2]!;
        d2 = dx * dx + dy * dy + dz * dz;
      }
      if (d2 <= radius2) out.push(j, dx, dy, dz);
    }
  }
}

/** The members whose place is finite. */
function finiteMembers(pointsA: Float64Array, members: Int32Array | null): Int32Array {
  const total = members === null ? Math.floor(pointsA.length / 3) : members.length;
  const inside = new Int32Array(total);
  let count = 0;
  for (let k = 0; k < total; k++) {
    const i = members === null ? k : members[k]!;
    if (Number.isFinite(pointsA[3 * i]! + pointsA[3 * i + 1]! + pointsA[3 * i + 2]!)) inside[count++] = i;
  }
  return inside.subarray(0, count);
}
