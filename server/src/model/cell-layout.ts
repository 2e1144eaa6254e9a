import type { Cell } from './cell';

/** Cells are this fraction of the search radius: fewer candidates fall outside it. */
const CELLS_PER_RADIUS = 2;
const MOST_CELLS_PER_POINT = 4;

/**
 * Cells of about half a search radius laid over points: how many there are along each direction, and in which one a point lies. Wide gaps
 * between points are closed up, and directions that a cell makes periodic wrap.
 */
export class CellLayout {
  readonly #radiusA: number;
  readonly #cell: Cell | null;
  readonly #points: Float64Array;
  readonly #inside: Int32Array;
  /** Whether there would be too many cells without looking for gaps: then the layout hangs on which slabs have points in them. */
  #isSparse = false;
  /** How many points each slab of a direction has, once that is asked for. */
  readonly #occupancy: (Map<number, number> | null)[] = [null, null, null];
  /** How many cells there are along each direction. */
  readonly counts: [number, number, number] = [1, 1, 1];
  /** Size of a cell along each direction, Å. */
  readonly #cellA: [number, number, number] = [1, 1, 1];
  /** Along a direction with wide gaps: the occupied slabs, and the place each takes once the gaps are closed up. */
  readonly #slabs: (Slabs | null)[] = [null, null, null];
  /** Where the cells of a direction begin, and how many there are to one unit of {@link fraction}. */
  readonly origin: [number, number, number] = [0, 0, 0];
  readonly scale: [number, number, number] = [1, 1, 1];
  /** Least and largest place of a member along each direction that is not periodic. */
  readonly #low: [number, number, number] = [0, 0, 0];
  readonly #high: [number, number, number] = [0, 0, 0];

  /** @param inside the points to lay cells over, all at finite places */
  constructor(pointsA: Float64Array, inside: Int32Array, radiusA: number, cell: Cell | null) {
    this.#radiusA = radiusA;
    this.#cell = cell;
    this.#points = pointsA;
    this.#inside = inside;
    this.#layOut(inside);
  }

  /** Whether wide gaps between points were closed up. */
  get hasClosedGaps(): boolean {
    return this.#slabs.some((slabs) => slabs !== null);
  }

  /** Where a point lies along one direction: Å, or a share of the cell's vector. */
  fraction(i: number, k: number): number {
    const p = this.#points;
    return this.fractionAt(p[3 * i]!, p[3 * i + 1]!, p[3 * i + 2]!, k);
  }

  /** The same of a place. */
  fractionAt(x: number, y: number, z: number, k: number): number {
    if (this.#cell === null) return k === 0 ? x : k === 1 ? y : z;
    const { inverse } = this.#cell;
    return x * inverse[k]! + y * inverse[3 + k]! + z * inverse[6 + k]!;
  }

  #layOut(inside: Int32Array): void {
    const target = this.#radiusA / CELLS_PER_RADIUS;
    for (let k = 0; k < 3; k++) {
      if (this.#cell?.periodic[k]) {
        const width = this.#cell.widthsA[k]!;
        this.counts[k] = Math.max(1, Math.floor(width / target));
        this.#cellA[k] = width / this.counts[k]!;
        this.scale[k] = this.counts[k]!;
        continue;
      }
      let low = Number.POSITIVE_INFINITY;
      let high = Number.NEGATIVE_INFINITY;
      for (let n = 0; n < inside.length; n++) {
        const f = this.fraction(inside[n]!, k);
        if (f < low) low = f;
        if (f > high) high = f;
      }
      this.#low[k as 0] = low;
      this.#high[k as 0] = high;
      this.origin[k] = high >= low ? low : 0;
      this.counts[k] = high > low ? Math.floor((high - low) / target) + 1 : 1;
      this.#cellA[k] = target;
      this.scale[k] = 1 / target;
    }
    const most = Math.max(64, MOST_CELLS_PER_POINT * inside.length);
    this.#isSparse = this.#total() > most;
    if (this.#isSparse) for (let k = 0; k < 3; k++) this.#closeGaps(inside, k);
    // What is still too many cells is spread evenly: a coarser grid does.
    while (this.#total() > most) {
      const k = this.counts.indexOf(Math.max(...this.counts)) as 0 | 1 | 2;
      this.counts[k] = Math.max(1, (this.counts[k] + 1) >> 1);
      this.#cellA[k] *= 2;
      this.scale[k] /= 2;
      if (this.#slabs[k]) this.#closeGaps(inside, k);
      else if (this.#cell?.periodic[k]) {
        this.#cellA[k] = this.#cell.widthsA[k]! / this.counts[k];
        this.scale[k] = this.counts[k];
      }
    }
  }

  /** Whether the cells would be laid out as they are if point `i` were at another place. */
  isSameWith(i: number, x: number, y: number, z: number): boolean {
    for (const k of [0, 1, 2] as const) {
      if (this.#cell?.periodic[k]) continue;
      const from = this.fraction(i, k);
      const to = this.fractionAt(x, y, z, k);
      // Points at the rim say where the cells begin and end.
      if (from <= this.#low[k] || from >= this.#high[k] || to < this.#low[k] || to > this.#high[k]) return false;
      if (!this.#isSparse) continue;
      const occupancy = this.#occupancyOf(k);
      const [left, entered] = [this.#slabOf(from, k), this.#slabOf(to, k)];
      if (left !== entered && (occupancy.get(left) === 1 || !occupancy.has(entered))) return false;
    }
    return true;
  }

  /** Takes note that a point is about to leave its place (−1), or has come to it (1). */
  count(i: number, by: -1 | 1): void {
    if (!this.#isSparse) return;
    for (const k of [0, 1, 2] as const) {
      if (this.#cell?.periodic[k]) continue;
      const occupancy = this.#occupancyOf(k);
      const slab = this.#raw(i, k);
      occupancy.set(slab, (occupancy.get(slab) ?? 0) + by);
    }
  }

  #occupancyOf(k: 0 | 1 | 2): Map<number, number> {
    let occupancy = this.#occupancy[k] ?? null;
    if (occupancy === null) {
      occupancy = new Map();
      for (let n = 0; n < this.#inside.length; n++) {
        const slab = this.#raw(this.#inside[n]!, k);
        occupancy.set(slab, (occupancy.get(slab) ?? 0) + 1);
      }
      this.#occupancy[k] = occupancy;
    }
    return occupancy;
  }

  #total(): number {
    return this.counts[0] * this.counts[1] * this.counts[2];
  }

  /** Closes up stretches without any point along one direction, so that one far atom does not make the grid coarse for all. */
  #closeGaps(inside: Int32Array, k: number): void {
    if (this.#cell?.periodic[k]) return;
    const raws = this.#occupied(inside, k as 0 | 1 | 2);
    const places = new Int32Array(raws.length);
    const widest = this.reachOf(k, this.#radiusA) + 1;
    for (let n = 1; n < raws.length; n++) places[n] = places[n - 1]! + Math.min(raws[n]! - raws[n - 1]!, widest);
    const last = raws.length - 1;
    this.counts[k] = last < 0 ? 1 : places[last]! + 1;
    // Without a gap that matters every slab keeps its place.
    this.#slabs[k] = last >= 0 && places[last] === raws[last] ? null : { raws, places };
  }

  /** The slabs with points in them, ascending. */
  #occupied(inside: Int32Array, k: 0 | 1 | 2): Float64Array {
    const isSmall = this.counts[k] <= 4 * inside.length;
    const seen = new Uint8Array(isSmall ? this.counts[k] : 0);
    const others = new Set<number>();
    for (let n = 0; n < inside.length; n++) {
      const raw = this.#raw(inside[n]!, k);
      if (raw < seen.length) seen[raw] = 1;
      else others.add(raw);
    }
    const low = new Float64Array(seen.length);
    let count = 0;
    for (let raw = 0; raw < seen.length; raw++) if (seen[raw] === 1) low[count++] = raw;
    return others.size === 0 ? low.slice(0, count) : Float64Array.from([...low.subarray(0, count), ...others]).sort();
  }

  /** How many cells a radius reaches over. */
  reachOf(k: number, radiusA: number): number {
    return Math.ceil(radiusA / this.#cellA[k]! - 1e-12);
  }

  /** Number of the slab that a point lies in along one direction, gaps and all; periodic ones count from 0. */
  #raw(i: number, k: number): number {
    const f = this.fraction(i, k);
    return this.#slabOf(f, k);
  }

  #slabOf(f: number, k: number): number {
    const along = this.#cell?.periodic[k] ? f - Math.floor(f) : f - this.origin[k]!;
    return Math.floor(along * this.scale[k]!);
  }

  /** Place of a member's cell along one direction. */
  place(k: 0 | 1 | 2, i: number): number {
    const raw = this.#raw(i, k);
    const slabs = this.#slabs[k] ?? null;
    const place = slabs === null ? raw : slabs.places[firstFrom(slabs.raws, raw)]!;
    return Math.max(0, Math.min(this.counts[k] - 1, place));
  }

  /** Writes the number of the cell of each point, x running fastest. */
  cellsOf(inside: Int32Array, out: Int32Array): void {
    const [nx, ny, nz] = this.counts;
    const p = this.#points;
    const isPlain = this.#cell === null && !this.hasClosedGaps;
    const [x0, y0, z0] = this.origin;
    const [sx, sy, sz] = this.scale;
    for (let k = 0; k < inside.length; k++) {
      const i = inside[k]!;
      if (isPlain) {
        const x = Math.min(nx - 1, Math.floor((p[3 * i]! - x0) * sx));
        const y = Math.min(ny - 1, Math.floor((p[3 * i + 1]! - y0) * sy));
        const z = Math.min(nz - 1, Math.floor((p[3 * i + 2]! - z0) * sz));
        out[k] = x + nx * (y + ny * z);
      } else out[k] = this.place(0, i) + nx * (this.place(1, i) + ny * this.place(2, i));
    }
  }

  /** Cells to look at around a point along one direction: all of them once where the reach would wrap onto itself. */
  range(k: 0 | 1 | 2, i: number, radiusA: number): [number, number] {
    const count = this.counts[k];
    const reach = this.reachOf(k, radiusA);
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

  /** Place of a cell counted on past the ends of a periodic direction. */
  wrap(k: 0 | 1 | 2, place: number): number {
    const count = this.counts[k];
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
