import { type Cell, imageResult, minimumImage } from './cell';

/** Neighbours of one point, as found by {@link PointGrid.gather}; reused from call to call. */
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

  #grow(): void {
    const index = new Int32Array(this.index.length * 2);
    index.set(this.index);
    this.index = index;
    const vectorA = new Float64Array(this.vectorA.length * 2);
    vectorA.set(this.vectorA);
    this.vectorA = vectorA;
  }
}

/** Cells are this fraction of the search radius: fewer candidates fall outside it. */
const CELLS_PER_RADIUS = 2;
const MOST_CELLS_PER_POINT = 4;
/** Candidates a point may have on average before the points count as too dense to tell neighbours apart. */
const MOST_CANDIDATES_PER_POINT = 1500;
const ALWAYS_FEW_ENOUGH = 1e6;

/**
 * Points sorted into cells of about half a search radius, so that the neighbours of one are found among a few. Works in any
 * cell, periodic in any directions; points with a coordinate that is not finite are left out.
 */
export class PointGrid {
  readonly radiusA: number;
  readonly #cell: Cell | null;
  readonly #points: Float64Array;
  readonly #counts: [number, number, number] = [1, 1, 1];
  /** Size of a cell along each direction, Å. */
  readonly #cellA: [number, number, number] = [1, 1, 1];
  /** Along a direction with wide gaps: the occupied slabs, and the place each takes once the gaps are closed up. */
  readonly #slabs: (Slabs | null)[] = [null, null, null];
  readonly #origin: [number, number, number] = [0, 0, 0];
  readonly #scale: [number, number, number] = [1, 1, 1];
  readonly #starts: Int32Array;
  readonly #order: Int32Array;
  readonly #sorted: Float64Array;
  readonly #image = imageResult();
  readonly #place: [number, number, number] = [0, 0, 0];
  /** Whether there are so many candidates that a search would be as slow as trying all pairs. */
  readonly tooDense: boolean;

  /** @param members the points to sort in, or `null` for all; @param pointsA x y z of each point, Å */
  constructor(pointsA: Float64Array, members: Int32Array | null, radiusA: number, cell: Cell | null) {
    this.radiusA = radiusA;
    this.#cell = cell;
    this.#points = pointsA;
    const all = members ?? Int32Array.from({ length: pointsA.length / 3 }, (_, i) => i);
    const inside = all.filter((i) => Number.isFinite(pointsA[3 * i]! + pointsA[3 * i + 1]! + pointsA[3 * i + 2]!));
    this.#layOut(inside);
    const [nx, ny, nz] = this.#counts;
    const total = nx * ny * nz;
    const starts = new Int32Array(total + 1);
    const cells = new Int32Array(inside.length);
    for (let k = 0; k < inside.length; k++) {
      this.#locate(inside[k]!);
      const c = this.#place[0] + nx * (this.#place[1] + ny * this.#place[2]);
      cells[k] = c;
      starts[c + 1]!++;
    }
    let crowding = 0;
    for (let c = 0; c < total; c++) {
      crowding += starts[c + 1]! * starts[c + 1]!;
      starts[c + 1]! += starts[c]!;
    }
    const stencil = [0, 1, 2].reduce(
      (product, k) => product * Math.min(2 * this.#reachOf(k, radiusA) + 1, this.#counts[k]!),
      1,
    );
    this.tooDense = crowding * stencil > Math.max(ALWAYS_FEW_ENOUGH, MOST_CANDIDATES_PER_POINT * inside.length);
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

  #fraction(i: number, k: number): number {
    const p = this.#points;
    if (this.#cell === null) return p[3 * i + k]!;
    const { inverse } = this.#cell;
    return p[3 * i]! * inverse[k]! + p[3 * i + 1]! * inverse[3 + k]! + p[3 * i + 2]! * inverse[6 + k]!;
  }

  #layOut(inside: Int32Array): void {
    const target = this.radiusA / CELLS_PER_RADIUS;
    for (let k = 0; k < 3; k++) {
      if (this.#cell?.periodic[k]) {
        const width = this.#cell.widthsA[k]!;
        this.#counts[k] = Math.max(1, Math.floor(width / target));
        this.#cellA[k] = width / this.#counts[k]!;
        this.#scale[k] = this.#counts[k]!;
        continue;
      }
      let low = Number.POSITIVE_INFINITY;
      let high = Number.NEGATIVE_INFINITY;
      for (const i of inside) {
        const f = this.#fraction(i, k);
        if (f < low) low = f;
        if (f > high) high = f;
      }
      this.#origin[k] = high >= low ? low : 0;
      this.#counts[k] = high > low ? Math.floor((high - low) / target) + 1 : 1;
      this.#cellA[k] = target;
      this.#scale[k] = 1 / target;
    }
    const most = Math.max(64, MOST_CELLS_PER_POINT * inside.length);
    if (this.#total() > most) for (let k = 0; k < 3; k++) this.#closeGaps(inside, k);
    // What is still too many cells is spread evenly: a coarser grid does.
    while (this.#total() > most) {
      const k = this.#counts.indexOf(Math.max(...this.#counts)) as 0 | 1 | 2;
      this.#counts[k] = Math.max(1, (this.#counts[k] + 1) >> 1);
      this.#cellA[k] *= 2;
      this.#scale[k] /= 2;
      if (this.#slabs[k]) this.#closeGaps(inside, k);
      else if (this.#cell?.periodic[k]) {
        this.#cellA[k] = this.#cell.widthsA[k]! / this.#counts[k];
        this.#scale[k] = this.#counts[k];
      }
    }
  }

  #total(): number {
    return this.#counts[0] * this.#counts[1] * this.#counts[2];
  }

  /** Closes up stretches without any point along one direction, so that one far atom does not make the grid coarse for all. */
  #closeGaps(inside: Int32Array, k: number): void {
    if (this.#cell?.periodic[k]) return;
    const occupied = new Set<number>();
    for (const i of inside) occupied.add(this.#raw(i, k));
    const raws = Float64Array.from(occupied).sort();
    const places = new Int32Array(raws.length);
    const widest = this.#reachOf(k, this.radiusA) + 1;
    for (let n = 1; n < raws.length; n++) places[n] = places[n - 1]! + Math.min(raws[n]! - raws[n - 1]!, widest);
    this.#slabs[k] = { raws, places };
    this.#counts[k] = places.length === 0 ? 1 : places[places.length - 1]! + 1;
  }

  #reachOf(k: number, radiusA: number): number {
    return Math.ceil(radiusA / this.#cellA[k]! - 1e-12);
  }

  /** Number of the slab that a point lies in along one direction, gaps and all; periodic ones count from 0. */
  #raw(i: number, k: number): number {
    const f = this.#fraction(i, k);
    const along = this.#cell?.periodic[k] ? f - Math.floor(f) : f - this.#origin[k]!;
    return Math.floor(along * this.#scale[k]!);
  }

  /** Finds the cell of a member. */
  #locate(i: number): void {
    for (let k = 0; k < 3; k++) {
      const raw = this.#raw(i, k);
      const slabs = this.#slabs[k];
      const place = slabs ? slabs.places[firstFrom(slabs.raws, raw)]! : raw;
      this.#place[k] = Math.max(0, Math.min(this.#counts[k]! - 1, place));
    }
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
    const [nx, ny] = this.#counts;
    const [fromX, toX] = this.#range(0, i, radiusA);
    const [fromY, toY] = this.#range(1, i, radiusA);
    const [fromZ, toZ] = this.#range(2, i, radiusA);
    const radius2 = radiusA * radiusA;
    for (let cz = fromZ; cz <= toZ; cz++) {
      const wz = this.#wrap(2, cz);
      for (let cy = fromY; cy <= toY; cy++) {
        const base = nx * (this.#wrap(1, cy) + ny * wz);
        // Runs of cells along x are contiguous; a periodic run is split where it wraps.
        let cx = fromX;
        while (cx <= toX) {
          const first = this.#wrap(0, cx);
          const length = Math.min(toX - cx + 1, nx - first);
          const from = this.#starts[base + first]!;
          const to = this.#starts[base + first + length]!;
          this.#collect(i, x, y, z, radius2, onlyAfter, from, to, out);
          cx += length;
        }
      }
    }
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
    for (let slot = from; slot < to; slot++) {
      const j = order[slot]!;
      if (onlyAfter ? j <= i : j === i) continue;
      let dx = sorted[3 * slot]! - x;
      let dy = sorted[3 * slot + 1]! - y;
      let dz = sorted[3 * slot + 2]! - z;
      if (cell !== null) {
        minimumImage(cell, dx, dy, dz, this.#image);
        dx = this.#image.vectorA[0]!;
        dy = this.#image.vectorA[1]!;
        dz = this.#image.vectorA[2]!;
      }
      if (dx * dx + dy * dy + dz * dz <= radius2) out.push(j, dx, dy, dz);
    }
  }

  /** Cells to look at around a point along one direction: all of them once where the reach would wrap onto itself. */
  #range(k: 0 | 1 | 2, i: number, radiusA: number): [number, number] {
    const count = this.#counts[k];
    const reach = this.#reachOf(k, radiusA);
    const raw = this.#raw(i, k);
    if (this.#cell?.periodic[k]) {
      const place = Math.max(0, Math.min(count - 1, raw));
      return 2 * reach + 1 >= count ? [0, count - 1] : [place - reach, place + reach];
    }
    const slabs = this.#slabs[k];
    if (!slabs) return [Math.max(0, raw - reach), Math.min(count - 1, raw + reach)];
    const from = firstFrom(slabs.raws, raw - reach);
    const to = firstFrom(slabs.raws, raw + reach + 1) - 1;
    return from > to ? [0, -1] : [slabs.places[from]!, slabs.places[to]!];
  }

  #wrap(k: 0 | 1 | 2, place: number): number {
    const count = this.#counts[k];
    return place < 0 ? place + count : place >= count ? place - count : place;
  }
}

/** The occupied slabs of one direction, ascending, and the places they are moved to. */
interface Slabs {
  readonly raws: Float64Array;
  readonly places: Int32Array;
}

/** Index of the first entry of an ascending list that is not below a value. */
function firstFrom(list: Float64Array, value: number): number {
  let low = 0;
  let high = list.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (list[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}
