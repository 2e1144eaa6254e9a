import { bondCount, everyNeighbour, type FragmentGraph, inRing, someNeighbour } from './fragment-graph';

/**
 * Components of a molecule's mean polarizability, Å³, by element and hybridization (TE tetrahedral, TR trigonal, DI digonal, BR at the
 * fusion of aromatic rings, PI with its lone pair in a π system).
 * Source: K. J. Miller, J. Am. Chem. Soc. 112 (1990) 8533, table I (ahp); read in the table of a public program.
 */
const MILLER_A3 = {
  H: 0.387,
  F: 0.296,
  Cl: 2.315,
  Br: 3.013,
  I: 5.415,
  CTE: 1.061,
  CTR: 1.352,
  CBR: 1.896,
  CDI: 1.283,
  NTE: 0.964,
  NTR2: 1.03,
  NPI2: 1.09,
  NDI: 0.956,
  OTE: 0.637,
  OTR4: 0.569,
  OPI2: 0.274,
  STE: 3.0,
  STR4: 3.729,
  SPI2: 2.7,
  PTE: 1.538,
} as const;

/**
 * Components, Å³, that Miller does not have: what is left of a published molecular polarizability (CRC Handbook, section 10) after his
 * components: B of BF₃ (2.82), F on tetrahedral carbon of CF₄ (3.838; Miller's own is of aromatic fluorine), Si of SiH₄ (4.339), P of
 * PH₃ (4.237). From memory.
 */
const LEFT_OVER_A3 = new Map([
  [5, 1.932],
  [9, 0.694],
  [14, 2.791],
  [15, 3.076],
]);

/**
 * Closed-shell ions by atomic number: charge, e, and polarizability, Å³. Cations of groups 1, 2 and 13 are free ions: L. Pauling,
 * Proc. R. Soc. A 114 (1927) 181 (from memory). Anions, Zn, Ag and Cd are ions in crystals, as a neighbourhood of other charges makes
 * them: J. R. Tessman, A. H. Kahn, W. Shockley, Phys. Rev. 92 (1953) 890 (abstract read).
 */
const IONS = new Map<number, readonly [chargeE: number, polarizabilityA3: number]>([
  [3, [1, 0.029]],
  [4, [2, 0.008]],
  [9, [-1, 0.64]],
  [11, [1, 0.179]],
  [12, [2, 0.094]],
  [13, [3, 0.052]],
  [17, [-1, 2.96]],
  [19, [1, 0.83]],
  [20, [2, 0.47]],
  [30, [2, 0.8]],
  [35, [-1, 4.16]],
  [37, [1, 1.4]],
  [38, [2, 0.86]],
  [47, [1, 2.4]],
  [48, [2, 1.8]],
  [53, [-1, 6.43]],
  [55, [1, 2.42]],
  [56, [2, 1.55]],
]);

/** Polarizabilities of the noble gases, Å³: P. Schwerdtfeger, J. K. Nagle, Mol. Phys. 117 (2019) 1200 (update of 2023). */
const NOBLE_A3 = new Map([
  [2, 0.205],
  [10, 0.394],
  [18, 1.642],
  [36, 2.487],
  [54, 4.048],
]);

/** A polarizability by sum, or the reason why there is none. */
export type PolarizabilityEstimate =
  | { readonly ok: true; readonly polarizabilityA3: number; readonly source: 'components' | 'left over' | 'atom' }
  | { readonly ok: false; readonly reason: string };

/**
 * Mean polarizability volume of a molecule, Å³, as the sum of components of its atoms by element, number of bonds and neighbours; of a
 * lone ion or noble gas, its own published value. `source` is `left over` where a component is not Miller's own.
 *
 * Domain: neutral closed-shell molecules of H, B, C, N, O, F, Si, P, S, Cl, Br, I, and ions of these (the charge is not counted: anions
 * come out too small). Measured error: see tests/reference/outside-polarizability.test.ts. Cost: linear in the atoms.
 */
export function additivePolarizability(
  graph: FragmentGraph,
  elements: ArrayLike<number>,
  netChargeE: number,
): PolarizabilityEstimate {
  if (graph.count === 0) return { ok: false, reason: 'A fragment without atoms has no polarizability.' };
  if (graph.count === 1) return ofAtom(elements[0]!, netChargeE);
  let sum = 0;
  let leftOver = false;
  for (let i = 0; i < graph.count; i++) {
    const kind = componentOf(graph, elements, i);
    const own = kind === null ? LEFT_OVER_A3.get(elements[i]!) : MILLER_A3[kind];
    if (own === undefined) {
      return { ok: false, reason: `No published polarizability component for the element with number ${elements[i]}.` };
    }
    leftOver ||= kind === null;
    sum += own;
  }
  return { ok: true, polarizabilityA3: sum, source: leftOver ? 'left over' : 'components' };
}

function ofAtom(z: number, netChargeE: number): PolarizabilityEstimate {
  const noble = NOBLE_A3.get(z);
  if (noble !== undefined && Math.abs(netChargeE) < 0.1) return { ok: true, polarizabilityA3: noble, source: 'atom' };
  const ion = IONS.get(z);
  if (ion !== undefined && Math.abs(netChargeE - ion[0]) < 0.1) {
    return { ok: true, polarizabilityA3: ion[1], source: 'atom' };
  }
  return { ok: false, reason: 'No published polarizability for a lone atom of this element and charge.' };
}

/** Miller's component of one atom, or null where he has none. */
export function componentOf(
  graph: FragmentGraph,
  elements: ArrayLike<number>,
  atom: number,
): keyof typeof MILLER_A3 | null {
  const bonds = bondCount(graph, atom);
  const flat = (other: number) => isTrigonalCarbon(graph, elements, other);
  switch (elements[atom]) {
    case 1:
      return 'H';
    case 9:
      return someNeighbour(graph, atom, (other) => elements[other] === 6 && bondCount(graph, other) === 4) ? null : 'F';
    case 17:
      return 'Cl';
    case 35:
      return 'Br';
    case 53:
      return 'I';
    case 6:
      if (bonds >= 4) return 'CTE';
      if (bonds <= 2) return 'CDI';
      return everyNeighbour(graph, atom, (other) => flat(other) && inRing(graph, atom, other)) ? 'CBR' : 'CTR';
    case 7:
      if (bonds >= 4) return 'NTE';
      if (bonds === 3)
        return someNeighbour(graph, atom, (other) => isUnsaturated(graph, elements, other)) ? 'NPI2' : 'NTE';
      return bonds === 2 ? 'NTR2' : 'NDI';
    case 8:
      if (bonds >= 2) return everyNeighbour(graph, atom, flat) ? 'OPI2' : 'OTE';
      return 'OTR4';
    case 16:
      if (bonds >= 3) return 'STE';
      if (bonds === 2) return everyNeighbour(graph, atom, flat) ? 'SPI2' : 'STE';
      return 'STR4';
    case 15:
      return bonds >= 4 ? 'PTE' : null;
    default:
      return null;
  }
}

function isTrigonalCarbon(graph: FragmentGraph, elements: ArrayLike<number>, atom: number): boolean {
  return elements[atom] === 6 && bondCount(graph, atom) === 3;
}

/** A neighbour that takes a lone pair into its π system: trigonal or digonal carbon, doubly bonded nitrogen, terminal oxygen. */
function isUnsaturated(graph: FragmentGraph, elements: ArrayLike<number>, atom: number): boolean {
  const bonds = bondCount(graph, atom);
  if (elements[atom] === 6) return bonds <= 3;
  if (elements[atom] === 7) return bonds <= 2;
  return elements[atom] === 8 && bonds === 1;
}
