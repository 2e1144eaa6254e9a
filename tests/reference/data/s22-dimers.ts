import type { Atom } from './outside-program';

/**
 * Six dimers of the S22 set. Geometries: Jurečka, Šponer, Černý, Hobza, Phys. Chem. Chem. Phys. 8 (2006) 1985. Mass-centre distance
 * and shortest distance were had from them with another program (ASE masses). `closest` is the contact of the smallest ratio to
 * Bondi's radii, had by a few lines of NumPy.
 */
export interface Dimer {
  readonly name: string;
  /** Atoms of the first molecule. */
  readonly split: number;
  readonly centresA: number;
  readonly shortestA: number;
  readonly closest: { readonly atoms: readonly [number, number]; readonly distanceA: number; readonly ratio: number };
  readonly atoms: readonly Atom[];
}

export const S22_DIMERS: readonly Dimer[] = [
  {
    name: 'water dimer',
    split: 3,
    centresA: 2.909,
    shortestA: 1.9516,
    closest: { atoms: [3, 4], distanceA: 1.951585, ratio: 0.717495 },
    atoms: [
      ['O', -1.551007, -0.11452, 0],
      ['H', -1.934259, 0.762503, 0],
      ['H', -0.599677, 0.040712, 0],
      ['O', 1.350625, 0.111469, 0],
      ['H', 1.680398, -0.373741, -0.758561],
      ['H', 1.680398, -0.373741, 0.758561],
    ],
  },
  {
    name: 'ammonia dimer',
    split: 4,
    centresA: 3.2086,
    shortestA: 2.1493,
    closest: { atoms: [4, 7], distanceA: 2.14925, ratio: 0.895521 },
    atoms: [
      ['N', -1.578718, -0.046611, 0],
      ['H', -2.158621, 0.136396, -0.809565],
      ['H', -2.158621, 0.136396, 0.809565],
      ['H', -0.849471, 0.658193, 0],
      ['N', 1.578718, 0.046611, 0],
      ['H', 2.158621, -0.136396, -0.809565],
      ['H', 0.849471, -0.658193, 0],
      ['H', 2.158621, -0.136396, 0.809565],
    ],
  },
  {
    name: 'formic acid dimer',
    split: 5,
    centresA: 2.9926,
    shortestA: 1.6703,
    closest: { atoms: [3, 10], distanceA: 1.670324, ratio: 0.61409 },
    atoms: [
      ['C', -1.888896, -0.179692, 0],
      ['O', -1.49328, 1.073689, 0],
      ['O', -1.170435, -1.16659, 0],
      ['H', -2.979488, -0.258829, 0],
      ['H', -0.498833, 1.107195, 0],
      ['C', 1.888896, 0.179692, 0],
      ['O', 1.49328, -1.073689, 0],
      ['O', 1.170435, 1.16659, 0],
      ['H', 2.979488, 0.258829, 0],
      ['H', 0.498833, -1.107195, 0],
    ],
  },
  {
    name: 'methane dimer',
    split: 5,
    centresA: 3.7178,
    shortestA: 3.1606,
    closest: { atoms: [1, 6], distanceA: 3.718322, ratio: 1.093624 },
    atoms: [
      ['C', 0, -0.00014, 1.859161],
      ['H', -0.888551, 0.51306, 1.494685],
      ['H', 0.888551, 0.51306, 1.494685],
      ['H', 0, -1.026339, 1.494868],
      ['H', 0, 0.000089, 2.948284],
      ['C', 0, 0.00014, -1.859161],
      ['H', 0, -0.000089, -2.948284],
      ['H', -0.888551, -0.51306, -1.494685],
      ['H', 0.888551, -0.51306, -1.494685],
      ['H', 0, 1.026339, -1.494868],
    ],
  },
  {
    name: 'ethene–ethyne complex',
    split: 6,
    centresA: 4.4217,
    shortestA: 2.8318,
    closest: { atoms: [1, 9], distanceA: 2.831824, ratio: 0.976491 },
    atoms: [
      ['C', 0, -0.667578, -2.124659],
      ['C', 0, 0.667578, -2.124659],
      ['H', 0.923621, -1.232253, -2.126185],
      ['H', -0.923621, -1.232253, -2.126185],
      ['H', -0.923621, 1.232253, -2.126185],
      ['H', 0.923621, 1.232253, -2.126185],
      ['C', 0, 0, 2.900503],
      ['C', 0, 0, 1.69324],
      ['H', 0, 0, 0.627352],
      ['H', 0, 0, 3.963929],
    ],
  },
  {
    name: 'benzene–methane complex',
    split: 12,
    centresA: 3.7161,
    shortestA: 2.9764,
    closest: { atoms: [5, 16], distanceA: 2.976409, ratio: 1.026348 },
    atoms: [
      ['C', 1.393218, 0.036291, -0.63328],
      ['C', 0.728036, -1.188402, -0.633302],
      ['C', -0.66518, -1.224708, -0.63328],
      ['C', -1.393204, -0.036297, -0.633302],
      ['C', -0.728038, 1.188416, -0.63328],
      ['C', 0.665168, 1.224699, -0.633302],
      ['H', 2.474274, 0.064448, -0.631724],
      ['H', 1.292959, -2.110541, -0.63174],
      ['H', -1.181323, -2.175008, -0.631724],
      ['H', -2.474261, -0.064465, -0.63174],
      ['H', -1.292951, 2.11056, -0.631724],
      ['H', 1.181303, 2.175006, -0.63174],
      ['C', 0, 0, 3.08262],
      ['H', 0.586878, 0.838174, 3.446377],
      ['H', -1.019319, 0.089164, 3.446377],
      ['H', 0, 0, 1.99667],
      ['H', 0.432441, -0.927338, 3.446377],
    ],
  },
];
