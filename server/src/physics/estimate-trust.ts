import { BOND_CLASS, BondClass } from './elements';
import { bondCount, everyNeighbour, type FragmentGraph, someNeighbour } from './fragment-graph';

const [H, B, C, N, O, F, SI, P, S, CL, BR, I] = [1, 5, 6, 7, 8, 9, 14, 15, 16, 17, 35, 53];
const HALOGENS = [F, CL, BR, I];
const IONIC = [3, 11, 19];

/** Smallest angle, degrees, of a carbon with two bonds, and smallest sum of angles of one with three, that needs no more bonds. */
const LINEAR_DEG = 140;
const FLAT_DEG = 340;

/**
 * Why a dipole estimate of this molecule is not to be trusted, in a sentence; null where nothing known speaks against it.
 *
 * The kinds are those that came out wrong by every scheme tried: multiple bonds between two unlike non-metals alone (CO, CS, SiO),
 * chains N–N–X (N₂O, azides, diazo), ozone, nitrosyl halides, isocyanides with hydrogen, boron and silicon short of bonds, ketenes, dative
 * bonds, hypervalent halogens, fragments in several pieces. Cost: linear in the bonds.
 */
export function reasonForDoubt(graph: FragmentGraph, elements: ArrayLike<number>, netChargeE: number): string | null {
  const { count } = graph;
  const is = (atom: number, ...list: number[]) => list.includes(elements[atom]!);
  const bonds = (atom: number) => bondCount(graph, atom);
  if (!isConnected(graph)) return 'The fragment is in several pieces, and no charge passes between them.';
  if (count === 2 && elements[0] !== elements[1]) {
    const both = [0, 1].every(
      (atom) => BOND_CLASS[elements[atom]!] === BondClass.nonMetal && !is(atom, H, ...HALOGENS),
    );
    if (both)
      return 'Two unlike non-metals in a multiple bond share their charge in a way no simple scheme gets right.';
    if (is(0, B) || is(1, B)) return 'A boron with one bond is beyond the scheme.';
  }
  for (let i = 0; i < count; i++) {
    if (is(i, N) && bonds(i) === 2 && someNeighbour(graph, i, (j) => is(j, N) && bonds(j) === 1)) {
      return 'A chain of nitrogens (N₂O, azide, diazo compound) is beyond the scheme.';
    }
    if (is(i, N) && someNeighbour(graph, i, (j) => is(j, ...HALOGENS))) {
      if (someNeighbour(graph, i, (j) => is(j, O))) return 'A nitrosyl or nitryl halide is beyond the scheme.';
    }
    if (is(i, O) && bonds(i) >= 2 && someNeighbour(graph, i, (j) => is(j, O) && bonds(j) === 1)) {
      return 'Ozone and what is built like it is beyond the scheme.';
    }
    if (is(i, SI) && bonds(i) < 4) return 'A silicon with fewer than four bonds is beyond the scheme.';
    if (is(i, B) && bonds(i) !== 3) return 'A boron with other than three bonds is beyond the scheme.';
    if (is(i, C) && bonds(i) === 2 && everyNeighbour(graph, i, (j) => is(j, C, O) && bonds(j) !== 2)) {
      if (someNeighbour(graph, i, (j) => is(j, O) && bonds(j) === 1)) return 'A ketene is beyond the scheme.';
    }
    if (
      is(i, C) &&
      bonds(i) === 1 &&
      someNeighbour(graph, i, (j) => is(j, N) && someNeighbour(graph, j, (k) => is(k, H)))
    ) {
      return 'Hydrogen isocyanide is beyond the scheme.';
    }
    if (is(i, O) && bonds(i) >= 3 && netChargeE < 0.5) {
      return 'An oxygen with three bonds and no charge to go with them: molecules that touch, or a wrong charge.';
    }
    if (is(i, ...HALOGENS) && bonds(i) > 1) return 'A halogen with more than one bond is beyond the scheme.';
    if (is(i, S) && bonds(i) >= 4 && everyNeighbour(graph, i, (j) => is(j, ...HALOGENS))) {
      return 'A hypervalent sulfur halide is beyond the scheme.';
    }
    if (is(i, P) && bonds(i) > 4) return 'A phosphorus with more than four bonds is beyond the scheme.';
    if (is(i, N) && bonds(i) >= 4 && netChargeE < 0.5)
      return 'A nitrogen with four bonds and no charge to go with them (dative bond, zwitterion).';
  }
  return null;
}

/**
 * Whether a carbon has fewer bonds than its shape asks for: one with two bonds at an angle, one with three that are not in a plane, one
 * with a single bond to carbon. Hydrogens are then missing from the file, or it is a carbene or an ion of carbon.
 */
export function lacksHydrogens(graph: FragmentGraph, elements: ArrayLike<number>, positionsA: Float64Array): boolean {
  for (let i = 0; i < graph.count; i++) {
    if (elements[i] !== C) continue;
    const bonds = bondCount(graph, i);
    if (bonds === 1 && someNeighbour(graph, i, (j) => elements[j] === C || elements[j] === H)) return true;
    if (bonds === 2 && sumOfAnglesDeg(graph, i, positionsA) < LINEAR_DEG) return true;
    if (bonds === 3 && sumOfAnglesDeg(graph, i, positionsA) < FLAT_DEG) return true;
  }
  return false;
}

function sumOfAnglesDeg(graph: FragmentGraph, atom: number, positionsA: Float64Array): number {
  let sum = 0;
  const end = graph.start[atom + 1]!;
  for (let k = graph.start[atom]!; k < end; k++) {
    for (let l = graph.start[atom]!; l < k; l++) {
      let dot = 0;
      let one = 0;
      let two = 0;
      for (let a = 0; a < 3; a++) {
        const x = positionsA[3 * graph.neighbours[k]! + a]! - positionsA[3 * atom + a]!;
        const y = positionsA[3 * graph.neighbours[l]! + a]! - positionsA[3 * atom + a]!;
        dot += x * y;
        one += x * x;
        two += y * y;
      }
      sum += (Math.acos(Math.max(-1, Math.min(1, dot / Math.sqrt(one * two)))) * 180) / Math.PI;
    }
  }
  return sum;
}

function isConnected(graph: FragmentGraph): boolean {
  const seen = new Uint8Array(graph.count);
  const stack = [0];
  seen[0] = 1;
  let reached = 1;
  while (stack.length > 0) {
    const atom = stack.pop()!;
    for (let k = graph.start[atom]!; k < graph.start[atom + 1]!; k++) {
      const other = graph.neighbours[k]!;
      if (seen[other]) continue;
      seen[other] = 1;
      reached++;
      stack.push(other);
    }
  }
  return reached === graph.count;
}

/** The class of molecule that the error of an estimate goes by. */
export type MoleculeClass =
  | 'ionic'
  | 'ion'
  | 'bromine or iodine'
  | 'nitrile'
  | 'carbonyl'
  | 'sulfur or phosphorus'
  | 'halocarbon'
  | 'amine'
  | 'water, alcohol, ether'
  | 'hydrocarbon'
  | 'other';

/** Class of a molecule: the first of the list that it has a group of. */
export function moleculeClass(graph: FragmentGraph, elements: ArrayLike<number>, netChargeE: number): MoleculeClass {
  const { count } = graph;
  const has = (test: (atom: number) => boolean): boolean => {
    for (let i = 0; i < count; i++) if (test(i)) return true;
    return false;
  };
  const is = (atom: number, ...list: number[]) => list.includes(elements[atom]!);
  const bonds = (atom: number) => bondCount(graph, atom);
  if (has((i) => is(i, ...IONIC))) return 'ionic';
  if (Math.abs(netChargeE) > 0.1) return 'ion';
  if (has((i) => is(i, BR, I))) return 'bromine or iodine';
  if (has((i) => !is(i, H, C, N, O, F, P, S, CL))) return 'other';
  const carbon = has((i) => is(i, C));
  if (has((i) => is(i, N) && bonds(i) === 1 && someNeighbour(graph, i, (j) => is(j, C)))) return 'nitrile';
  if (has((i) => is(i, O) && bonds(i) === 1 && someNeighbour(graph, i, (j) => is(j, C)))) return 'carbonyl';
  if (has((i) => is(i, P, S))) return 'sulfur or phosphorus';
  if (has((i) => is(i, F, CL))) return carbon ? 'halocarbon' : 'other';
  if (has((i) => is(i, N)))
    return has((i) => is(i, N) && bonds(i) < 3) || !onlyAmines(graph, elements) ? 'other' : 'amine';
  if (has((i) => is(i, O))) return has((i) => is(i, O) && bonds(i) < 2) ? 'other' : 'water, alcohol, ether';
  return carbon ? 'hydrocarbon' : 'other';
}

function onlyAmines(graph: FragmentGraph, elements: ArrayLike<number>): boolean {
  for (let i = 0; i < graph.count; i++) {
    if (elements[i] === N && someNeighbour(graph, i, (j) => elements[j] === O)) return false;
  }
  return true;
}
