import { ATOMIC_WEIGHT_U, atomicNumberOf } from '../../../server/src/physics/elements';

/** Atoms as the physics takes them. */
export interface Geometry {
  readonly count: number;
  readonly elements: Uint8Array;
  readonly positionsA: Float64Array;
}

/** Reads atoms written as `symbol x y z; symbol x y z; …`. */
export function geometryOf(atoms: string): Geometry {
  const rows = atoms.split(';').map((atom) => atom.trim().split(/\s+/));
  return {
    count: rows.length,
    elements: Uint8Array.from(rows, (row) => atomicNumberOf(row[0]!)),
    positionsA: Float64Array.from(rows.flatMap((row) => row.slice(1).map(Number))),
  };
}

/** The atoms from number `from` up to `to`, not counting it. */
export function part({ elements, positionsA }: Geometry, from: number, to: number): Geometry {
  return { count: to - from, elements: elements.slice(from, to), positionsA: positionsA.slice(3 * from, 3 * to) };
}

export function massCentre({ count, elements, positionsA }: Geometry): [number, number, number] {
  const centre: [number, number, number] = [0, 0, 0];
  let mass = 0;
  for (let i = 0; i < count; i++) {
    const weight = ATOMIC_WEIGHT_U[elements[i]!]!;
    mass += weight;
    for (const a of [0, 1, 2] as const) centre[a] += weight * positionsA[3 * i + a]!;
  }
  return [centre[0] / mass, centre[1] / mass, centre[2] / mass];
}
