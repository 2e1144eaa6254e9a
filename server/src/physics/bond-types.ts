import { bondCount, type FragmentGraph } from './fragment-graph';

/**
 * What an atom gives to the bond-type dipole: electronegativity χ relative to hydrogen, hartree, and atomic dipole along each bond d, D,
 * by element and number of bonds.
 */
export const BOND_TYPES = {
  H: [0, 0],
  C1: [0.0798, -0.6756],
  C2: [0.0798, -0.6756],
  C3: [0.0784, -0.3308],
  C4: [0.0729, 0],
  N1: [0.1749, -0.6975],
  N2: [0.1505, -0.4829],
  N3: [0.046, -0.9519],
  N4: [-0.3837, 0],
  O1: [0.1446, -0.8463],
  O2: [0.0634, -0.9012],
  F: [0.0715, -0.8777],
  Si: [0.1034, 0],
  P2: [0.0797, 0],
  P3: [0.101, 0.3018],
  P4: [-0.0248, 0],
  S1: [0.1403, 0.1419],
  S2: [0.0777, -0.1155],
  S3: [0.1751, 0],
  Cl: [0.0892, -0.212],
  Br: [0.007, 0.5865],
  I: [-0.0283, 0],
  B: [0.1212, 0],
  Li: [-2.9668, 0],
  Na: [-3.2999, 0],
  K: [-3.3288, 0],
} as const satisfies Readonly<Record<string, readonly [electronegativityAu: number, dipoleD: number]>>;

/** Name of a type of atom: element and number of bonds. */
export type BondType = keyof typeof BOND_TYPES;

/** Type of one atom, or null where its element has no parameters. */
export function bondTypeOf(graph: FragmentGraph, elements: ArrayLike<number>, atom: number): BondType | null {
  const bonds = bondCount(graph, atom);
  switch (elements[atom]) {
    case 1:
      return 'H';
    case 3:
      return 'Li';
    case 5:
      return 'B';
    case 6:
      return bonds <= 1 ? 'C1' : bonds === 2 ? 'C2' : bonds === 3 ? 'C3' : 'C4';
    case 7:
      return bonds <= 1 ? 'N1' : bonds === 2 ? 'N2' : bonds === 3 ? 'N3' : 'N4';
    case 8:
      return bonds <= 1 ? 'O1' : 'O2';
    case 9:
      return 'F';
    case 11:
      return 'Na';
    case 14:
      return 'Si';
    case 15:
      return bonds <= 2 ? 'P2' : bonds === 3 ? 'P3' : 'P4';
    case 16:
      return bonds <= 1 ? 'S1' : bonds === 2 ? 'S2' : 'S3';
    case 17:
      return 'Cl';
    case 19:
      return 'K';
    case 35:
      return 'Br';
    case 53:
      return 'I';
    default:
      return null;
  }
}
