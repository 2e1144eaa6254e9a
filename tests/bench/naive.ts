/** The kernels as one would first write them: strings split, an object an atom, maps of cells. */
export interface NaiveAtom {
  symbol: string;
  x: number;
  y: number;
  z: number;
}

export function parseXyzNaively(text: string): NaiveAtom[] {
  const lines = text.split('\n');
  const count = Number(lines[0]);
  return lines.slice(2, 2 + count).map((line) => {
    const [symbol, x, y, z] = line.trim().split(/\s+/);
    return { symbol: symbol!, x: Number(x), y: Number(y), z: Number(z) };
  });
}

export function parsePdbNaively(text: string): (NaiveAtom & { residue: string })[] {
  return text
    .split('\n')
    .filter((line) => line.startsWith('ATOM  ') || line.startsWith('HETATM'))
    .map((line) => ({
      symbol: line.slice(76, 78).trim(),
      x: Number(line.slice(30, 38).trim()),
      y: Number(line.slice(38, 46).trim()),
      z: Number(line.slice(46, 54).trim()),
      residue: line.slice(17, 27).trim(),
    }));
}

interface Point {
  x: number;
  y: number;
  z: number;
}

function cellsOf(points: readonly Point[], size: number): Map<string, number[]> {
  const cells = new Map<string, number[]>();
  for (const [i, { x, y, z }] of points.entries()) {
    const key = [x, y, z].map((c) => Math.floor(c / size)).join(',');
    if (!cells.has(key)) cells.set(key, []);
    cells.get(key)!.push(i);
  }
  return cells;
}

function forNear(points: readonly Point[], radius: number, visit: (i: number, j: number, r: number[]) => void): void {
  const cells = cellsOf(points, radius);
  for (const [key, members] of cells) {
    const [cx, cy, cz] = key.split(',').map(Number) as [number, number, number];
    for (const dx of [-1, 0, 1])
      for (const dy of [-1, 0, 1])
        for (const dz of [-1, 0, 1]) {
          for (const j of cells.get([cx + dx, cy + dy, cz + dz].join(',')) ?? []) {
            for (const i of members) {
              if (i >= j) continue;
              const [a, b] = [points[i]!, points[j]!];
              const r = [b.x - a.x, b.y - a.y, b.z - a.z];
              if (Math.hypot(...r) <= radius) visit(i, j, r);
            }
          }
        }
  }
}

const RADIUS: Record<string, number> = { H: 0.31, C: 0.76, N: 0.71, O: 0.66 };

/** The smallest atom of each atom's fragment. */
export function fragmentsNaively(atoms: readonly NaiveAtom[]): number[] {
  const partners = new Map<number, { atom: number; d: number }[]>();
  const join = (i: number, atom: number, d: number) => partners.set(i, [...(partners.get(i) ?? []), { atom, d }]);
  forNear(atoms, 1.92, (i, j, r) => {
    const d = Math.hypot(...r);
    if (d > RADIUS[atoms[i]!.symbol]! + RADIUS[atoms[j]!.symbol]! + 0.4) return;
    join(i, j, d);
    join(j, i, d);
  });
  const nearest = (i: number) => [...(partners.get(i) ?? [])].sort((a, b) => a.d - b.d)[0]?.atom;
  const keeps = (i: number, j: number) => atoms[i]!.symbol !== 'H' || nearest(i) === j;
  const labels = new Array<number>(atoms.length).fill(-1);
  for (let start = 0; start < atoms.length; start++) {
    if (labels[start] !== -1) continue;
    const queue = [start];
    while (queue.length > 0) {
      const i = queue.pop()!;
      labels[i] = start;
      for (const { atom: j } of partners.get(i) ?? []) {
        if (labels[j] === -1 && keeps(i, j) && keeps(j, i)) queue.push(j);
      }
    }
  }
  return labels;
}

const dot = (a: readonly number[], b: readonly number[]) => a.reduce((sum, c, k) => sum + c * b[k]!, 0);

export function dipoleSumNaively(points: readonly Point[], dipoles: readonly number[][], cutoff: number): number {
  let sum = 0;
  forNear(points, cutoff, (i, j, r) => {
    const length = Math.hypot(...r);
    const u = r.map((c) => c / length);
    const [p, q] = [dipoles[i]!, dipoles[j]!];
    sum += (dot(p, q) - 3 * dot(p, u) * dot(q, u)) / length ** 3;
  });
  return sum;
}

export interface Site {
  place: number[];
  charge: number;
  radius: number;
}

export function contactsNaively(pairs: Int32Array, fragments: readonly Site[][], centres: readonly number[][]): number {
  let total = 0;
  for (let k = 0; k < pairs.length; k += 2) {
    const [f, g] = [pairs[k]!, pairs[k + 1]!];
    const apart = centres[g]!.map((c, axis) => c - centres[f]![axis]!);
    let sum = 0;
    let best = Number.POSITIVE_INFINITY;
    for (const a of fragments[f]!) {
      for (const b of fragments[g]!) {
        const d = Math.hypot(...b.place.map((c, axis) => c + apart[axis]! - a.place[axis]!));
        sum += (a.charge * b.charge) / d;
        best = Math.min(best, d / (a.radius + b.radius));
      }
    }
    total += sum + best;
  }
  return total;
}
