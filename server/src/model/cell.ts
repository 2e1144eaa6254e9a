/** A cell with one to three periodic directions, ready for minimum images. */
export interface Cell {
  /** Cell vectors as written, rows, Å; rows of directions that are not periodic are unit vectors normal to the others. */
  readonly vectorsA: Float64Array;
  readonly periodic: readonly [boolean, boolean, boolean];
  /** A shortest (Minkowski-reduced) basis of the same lattice, rows. */
  readonly reducedA: Float64Array;
  /** Inverse of {@link reducedA}: columns turn a vector into fractions of the reduced vectors. */
  readonly inverse: Float64Array;
  /** Reduced vectors as whole multiples of the written ones, rows. */
  readonly transform: Int32Array;
  /** Square of half the shortest lattice vector: a shorter difference is its own minimum image. */
  readonly safeRadius2: number;
  /** Distance between opposite faces along each reduced direction, Å; infinite where not periodic. */
  readonly widthsA: readonly [number, number, number];
}

/** Thinnest cell that is used, Å; a periodic direction below it holds no atom. */
const THINNEST_A = 1;
const LONGEST_A = 1e6;

type Row = [number, number, number];

function dot(a: Row, b: Row): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

function cross(a: Row, b: Row): Row {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

function normalized(a: Row): Row {
  const length = Math.sqrt(dot(a, a));
  return [a[0] / length, a[1] / length, a[2] / length];
}

function row(matrix: ArrayLike<number>, k: number): Row {
  return [matrix[3 * k]!, matrix[3 * k + 1]!, matrix[3 * k + 2]!];
}

/**
 * Prepares a cell. `vectorsA` holds the three vectors as rows; those of directions that are not periodic do not matter. Returns the
 * reason where the cell cannot be used: not finite, without volume, or thinner than 1 Å.
 */
export function createCell(vectorsA: ArrayLike<number>, periodic: readonly [boolean, boolean, boolean]): Cell | string {
  const rows = [row(vectorsA, 0), row(vectorsA, 1), row(vectorsA, 2)];
  const directions = [0, 1, 2].filter((k) => periodic[k]);
  for (const k of directions) {
    const length = Math.sqrt(dot(rows[k]!, rows[k]!));
    if (!Number.isFinite(length) || length > LONGEST_A)
      return 'A cell vector is not finite or longer than a million Å.';
    if (length < THINNEST_A) return `Cell vector ${k + 1} is ${length.toPrecision(3)} Å long.`;
  }
  if (!completeBasis(rows, directions)) return 'The cell vectors lie in one plane or line, so the cell has no volume.';
  const multiples: Row[] = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ];
  const reduced = rows.map((r): Row => [...r]);
  reduceBasis(reduced, multiples, directions);
  const inverse = invert(reduced);
  if (inverse === null) return 'The cell vectors lie in one plane or line, so the cell has no volume.';
  const widths = [0, 1, 2].map((k) => {
    if (!periodic[k]) return Number.POSITIVE_INFINITY;
    return 1 / Math.hypot(inverse[k]!, inverse[3 + k]!, inverse[6 + k]!);
  }) as [number, number, number];
  const thinnest = Math.min(...widths);
  if (thinnest < THINNEST_A) return `The cell is only ${thinnest.toPrecision(3)} Å thick.`;
  const shortest = Math.min(...directions.map((k) => Math.sqrt(dot(reduced[k]!, reduced[k]!))));
  return {
    vectorsA: Float64Array.from(rows.flat()),
    periodic,
    reducedA: Float64Array.from(reduced.flat()),
    inverse,
    transform: Int32Array.from(multiples.flat()),
    safeRadius2: (shortest / 2) ** 2,
    widthsA: widths,
  };
}

/** Replaces the vectors of directions that are not periodic by unit vectors normal to the periodic ones. */
function completeBasis(rows: Row[], directions: readonly number[]): boolean {
  const free = [0, 1, 2].filter((k) => !directions.includes(k));
  if (free.length === 1) {
    const normal = cross(rows[directions[0]!]!, rows[directions[1]!]!);
    if (!(dot(normal, normal) > 1e-12)) return false;
    rows[free[0]!] = normalized(normal);
  } else if (free.length === 2) {
    const axis = rows[directions[0]!]!;
    const other: Row = Math.abs(axis[0]) < 0.9 * Math.sqrt(dot(axis, axis)) ? [1, 0, 0] : [0, 1, 0];
    rows[free[0]!] = normalized(cross(axis, other));
    rows[free[1]!] = normalized(cross(axis, rows[free[0]!]!));
  }
  const volume = Math.abs(dot(rows[0]!, cross(rows[1]!, rows[2]!)));
  const scale = rows.reduce((product, r) => product * Math.sqrt(dot(r, r)), 1);
  return volume > 1e-9 * scale;
}

/**
 * Makes the periodic vectors as short as they can be (Minkowski reduction in up to three dimensions): while some vector can be
 * shortened by whole multiples of the others, shorten it. Source: P. Q. Nguyen and D. Stehlé, ACM Trans. Algorithms 5 (2009) 46.
 */
function reduceBasis(basis: Row[], multiples: Row[], directions: readonly number[]): void {
  const subtract = (k: number, other: number, times: number) => {
    for (let a = 0; a < 3; a++) {
      basis[k]![a as 0]! -= times * basis[other]![a as 0]!;
      multiples[k]![a as 0]! -= times * multiples[other]![a as 0]!;
    }
  };
  for (let round = 0; round < 200; round++) {
    let changed = false;
    for (const k of directions) {
      for (const other of directions) {
        if (other === k) continue;
        const times = Math.round(dot(basis[k]!, basis[other]!) / dot(basis[other]!, basis[other]!) - 1e-10);
        if (times === 0) continue;
        const before = dot(basis[k]!, basis[k]!);
        subtract(k, other, times);
        if (dot(basis[k]!, basis[k]!) < before * (1 - 1e-12)) changed = true;
        else subtract(k, other, -times);
      }
      const [first, second] = directions.filter((d) => d !== k);
      if (second === undefined) continue;
      for (const [p, q] of [
        [1, 1],
        [1, -1],
        [-1, 1],
        [-1, -1],
      ] as const) {
        const before = dot(basis[k]!, basis[k]!);
        subtract(k, first!, p);
        subtract(k, second, q);
        if (dot(basis[k]!, basis[k]!) < before * (1 - 1e-12)) {
          changed = true;
          break;
        }
        subtract(k, second, -q);
        subtract(k, first!, -p);
      }
    }
    if (!changed) return;
  }
}

function invert(rows: readonly Row[]): Float64Array | null {
  const [a, b, c] = rows as [Row, Row, Row];
  const volume = dot(a, cross(b, c));
  if (!Number.isFinite(volume) || volume === 0) return null;
  const columns = [cross(b, c), cross(c, a), cross(a, b)];
  const inverse = new Float64Array(9);
  for (let k = 0; k < 3; k++) for (let i = 0; i < 3; i++) inverse[3 * i + k] = columns[k]![i as 0]! / volume;
  return inverse;
}

/** Where {@link minimumImage} leaves its result. */
export interface ImageResult {
  /** The shortest of all periodic differences, Å. */
  readonly vectorA: Float64Array;
  /** Whole multiples of the written cell vectors that were added. */
  readonly image: Int32Array;
}

export function imageResult(): ImageResult {
  return { vectorA: new Float64Array(3), image: new Int32Array(3) };
}

const STEPS: readonly Row[] = [-1, 0, 1].flatMap((i) =>
  [-1, 0, 1].flatMap((j) => [-1, 0, 1].map((k): Row => [i, j, k])),
);

/**
 * The true minimum image of a difference, in skewed cells too: the written difference plus n₁a + n₂b + n₃c of least length. Where
 * the written difference is as short as any, it is kept. The nearest lattice point is reached by steps to neighbours, which
 * suffices because the relevant vectors of a reduced lattice have coefficients −1, 0 and 1.
 */
export function minimumImage(cell: Cell, dx: number, dy: number, dz: number, out: ImageResult): void {
  const { vectorA, image } = out;
  const written2 = dx * dx + dy * dy + dz * dz;
  vectorA[0] = dx;
  vectorA[1] = dy;
  vectorA[2] = dz;
  image[0] = 0;
  image[1] = 0;
  image[2] = 0;
  if (written2 <= cell.safeRadius2) return;
  const { inverse, reducedA, periodic, transform } = cell;
  let n0 = periodic[0] ? -Math.round(dx * inverse[0]! + dy * inverse[3]! + dz * inverse[6]!) : 0;
  let n1 = periodic[1] ? -Math.round(dx * inverse[1]! + dy * inverse[4]! + dz * inverse[7]!) : 0;
  let n2 = periodic[2] ? -Math.round(dx * inverse[2]! + dy * inverse[5]! + dz * inverse[8]!) : 0;
  let x = dx + n0 * reducedA[0]! + n1 * reducedA[3]! + n2 * reducedA[6]!;
  let y = dy + n0 * reducedA[1]! + n1 * reducedA[4]! + n2 * reducedA[7]!;
  let z = dz + n0 * reducedA[2]! + n1 * reducedA[5]! + n2 * reducedA[8]!;
  let best = x * x + y * y + z * z;
  for (let round = 0; best > cell.safeRadius2 && round < 50; round++) {
    let step: Row | null = null;
    for (const candidate of STEPS) {
      if (candidate.some((n, k) => n !== 0 && !periodic[k])) continue;
      const [i, j, k] = candidate;
      const px = x + i * reducedA[0]! + j * reducedA[3]! + k * reducedA[6]!;
      const py = y + i * reducedA[1]! + j * reducedA[4]! + k * reducedA[7]!;
      const pz = z + i * reducedA[2]! + j * reducedA[5]! + k * reducedA[8]!;
      const length2 = px * px + py * py + pz * pz;
      if (length2 < best * (1 - 1e-12)) {
        best = length2;
        step = candidate;
      }
    }
    if (step === null) break;
    const [i, j, k] = step;
    n0 += i;
    n1 += j;
    n2 += k;
    x += i * reducedA[0]! + j * reducedA[3]! + k * reducedA[6]!;
    y += i * reducedA[1]! + j * reducedA[4]! + k * reducedA[7]!;
    z += i * reducedA[2]! + j * reducedA[5]! + k * reducedA[8]!;
  }
  if (best >= written2 * (1 - 1e-12)) return;
  image[0] = n0 * transform[0]! + n1 * transform[3]! + n2 * transform[6]!;
  image[1] = n0 * transform[1]! + n1 * transform[4]! + n2 * transform[7]!;
  image[2] = n0 * transform[2]! + n1 * transform[5]! + n2 * transform[8]!;
  // From the written vectors, so that the result is the same to the last digits however the cell was reduced.
  const { vectorsA } = cell;
  vectorA[0] = dx + image[0]! * vectorsA[0]! + image[1]! * vectorsA[3]! + image[2]! * vectorsA[6]!;
  vectorA[1] = dy + image[0]! * vectorsA[1]! + image[1]! * vectorsA[4]! + image[2]! * vectorsA[7]!;
  vectorA[2] = dz + image[0]! * vectorsA[2]! + image[1]! * vectorsA[5]! + image[2]! * vectorsA[8]!;
}
