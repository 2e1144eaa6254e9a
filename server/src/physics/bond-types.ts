import { bondCount, type FragmentGraph, someNeighbour } from './fragment-graph';

/**
 * What an atom gives to the bond-type dipole: electronegativity χ relative to hydrogen, hartree, and atomic dipole along each of its
 * bonds d, D, by element, number of bonds and, where that matters, neighbours.
 *
 * Own fit to the dipole vectors of the molecules of tests/reference/data/molecules.ts that are not held out, and of some ions there;
 * least absolute errors, drawn towards the values of an earlier fit to about 1,500 molecules where the data say little. K rests on that
 * earlier fit alone; C1, N1-N, N2-end, N4, O3, P2, P4, S3, S4, B and Li, Na rest on few molecules each.
 */
export const BOND_TYPES = {
  H: [0, 0],
  C1: [0.1245, -1.8317],
  C2: [0.1155, -0.7828],
  C3: [0.0862, -0.0147],
  'C3=O': [0.0991, 0.5852],
  C4: [0.069, 0],
  N1: [0.1745, -0.8861],
  'N1-N': [0.1648, -0.6581],
  N2: [0.1385, -0.7439],
  'N2-end': [0.1327, -0.3527],
  N3: [0.0479, -0.9988],
  'N3-flat': [-0.0456, -0.9038],
  'N3-O': [0.0785, -0.6278],
  N4: [-0.2407, 1.8685],
  O1: [0.1327, -0.9144],
  'O1-N': [0.1141, -1.1849],
  'O1-S': [0.1602, -0.5808],
  'O1-P': [0.1981, -0.7743],
  'O1-carboxylate': [0.4302, 3.739],
  O2: [0.0541, -1.062],
  'O2-C3': [0.0345, -0.9221],
  O3: [0.0493, -0.7001],
  F: [0.0835, -0.9812],
  Si: [0.0937, 0],
  P2: [0.0906, -0.0517],
  P3: [0.1056, 0.2331],
  P4: [0.084, 0.4129],
  S1: [0.1503, -0.2381],
  S2: [0.0887, -0.0641],
  S3: [0.1324, 0.8127],
  S4: [0.1153, 0.6445],
  Cl: [0.109, -0.0118],
  Br: [0.1061, 0.1224],
  I: [0.0955, 0.4181],
  B: [0.1355, 0],
  Li: [-3.0084, 0],
  Na: [-3.2735, 0],
  K: [-3.3288, 0],
} as const satisfies Readonly<Record<string, readonly [electronegativityAu: number, dipoleD: number]>>;

/** Name of a type of atom: element, number of bonds, and what sets it apart. */
export type BondType = keyof typeof BOND_TYPES;

const [C, N, O, S, P, B] = [6, 7, 8, 16, 15, 5];

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
      if (bonds === 3) return terminalOxygens(graph, elements, atom) > 0 ? 'C3=O' : 'C3';
      return bonds <= 1 ? 'C1' : bonds === 2 ? 'C2' : 'C4';
    case 7:
      return nitrogenType(graph, elements, atom, bonds);
    case 8:
      return oxygenType(graph, elements, atom, bonds);
    case 9:
      return 'F';
    case 11:
      return 'Na';
    case 14:
      return 'Si';
    case 15:
      return bonds <= 2 ? 'P2' : bonds === 3 ? 'P3' : 'P4';
    case 16:
      return bonds <= 1 ? 'S1' : bonds === 2 ? 'S2' : bonds === 3 ? 'S3' : 'S4';
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

function nitrogenType(graph: FragmentGraph, elements: ArrayLike<number>, atom: number, bonds: number): BondType {
  if (bonds >= 4) return 'N4';
  if (bonds === 3) {
    if (terminalOxygens(graph, elements, atom) > 0) return 'N3-O';
    return someNeighbour(graph, atom, (j) => takesLonePair(graph, elements, j)) ? 'N3-flat' : 'N3';
  }
  if (bonds === 2) {
    const end = (j: number) => (elements[j] === N || elements[j] === C) && bondCount(graph, j) === 1;
    return someNeighbour(graph, atom, end) ? 'N2-end' : 'N2';
  }
  return someNeighbour(graph, atom, (j) => elements[j] === N) ? 'N1-N' : 'N1';
}

function oxygenType(graph: FragmentGraph, elements: ArrayLike<number>, atom: number, bonds: number): BondType {
  if (bonds >= 3) return 'O3';
  const flat = (j: number) => elements[j] === C && bondCount(graph, j) === 3;
  if (bonds === 2) return someNeighbour(graph, atom, flat) ? 'O2-C3' : 'O2';
  if (someNeighbour(graph, atom, (j) => elements[j] === N)) return 'O1-N';
  if (someNeighbour(graph, atom, (j) => elements[j] === S)) return 'O1-S';
  if (someNeighbour(graph, atom, (j) => elements[j] === P)) return 'O1-P';
  const carboxylate = (j: number) => flat(j) && terminalOxygens(graph, elements, j) === 2;
  return someNeighbour(graph, atom, carboxylate) ? 'O1-carboxylate' : 'O1';
}

/** Carbon with two or three bonds, or boron: what an amino nitrogen beside it flattens for. */
function takesLonePair(graph: FragmentGraph, elements: ArrayLike<number>, atom: number): boolean {
  const bonds = bondCount(graph, atom);
  return elements[atom] === B || (elements[atom] === C && (bonds === 2 || bonds === 3));
}

function terminalOxygens(graph: FragmentGraph, elements: ArrayLike<number>, atom: number): number {
  let count = 0;
  for (let k = graph.start[atom]!; k < graph.start[atom + 1]!; k++) {
    const other = graph.neighbours[k]!;
    if (elements[other] === O && bondCount(graph, other) === 1) count++;
  }
  return count;
}
