/** Shapes shared by the independent second calculation. Internal units: angstrom, e, e·angstrom, kJ/mol, K. */

export type Vec = [number, number, number];
export type Matrix = [Vec, Vec, Vec];
export type Centre = 'mass' | 'geometry' | 'nuclear-charge';

export interface Options {
  temperatureK?: number;
  relativePermittivity?: number;
  centre?: Centre;
  tolerance?: number;
  cutoffA?: number;
  periodic?: boolean;
}

export interface Settings {
  temperatureK: number;
  relativePermittivity: number;
  centre: Centre;
  tolerance: number;
  cutoffA: number;
}

export interface Atom {
  /** Element symbol, or 'X' for a ghost. */
  symbol: string;
  /** What the file calls the atom: `C1`, ` CA `. */
  label: string;
  position: Vec;
  /** Value of the charge column, e. */
  charge: number | null;
  /** PDB formal charge (columns 79-80), e. */
  formal: number | null;
}

/** What a file says about one fragment; absent means not said. */
export interface Annotation {
  name?: string;
  chargeE?: number;
  dipole?: Vec;
  size?: number;
  /** Indices of the atoms before and after the `>`. */
  axis?: { from: number[]; to: number[] };
  polarizability?: number;
}

export interface ParsedFrame {
  atoms: Atom[];
  /** Cell vectors, or null where no cell is used. */
  cell: Vec[] | null;
  periodic: [boolean, boolean, boolean];
  /** Declared fragments; atoms in none of them are grouped by connectivity. */
  groups: number[][];
  /** Explicit covalent bonds between different declared fragments. */
  crossBonds: [number, number][];
  temperatureK: number | null;
  relativePermittivity: number | null;
  /** Annotations of the final fragments, in their order. */
  annotate(fragments: number[][]): Annotation[];
  /** Name where the annotation gives none. */
  defaultName(atoms: number[]): string;
}

export interface Fragment {
  number: number;
  name: string;
  /** 0-based indices into the frame. */
  atoms: number[];
  symbols: string[];
  /** Positions of the fragment made whole. */
  positions: Vec[];
  column: number[] | null;
  charge: number;
  chargeSource: string;
  centre: Vec;
  extent: number;
  dipole: Vec | null;
  dipoleSize: number | null;
  dipoleSource: string;
  chargesDipole: Vec | null;
  quadrupole: Matrix | null;
  polarizability: number | null;
}

export interface FragmentResult {
  fragment: number;
  name: string;
  atoms: number[];
  chargeE: number;
  centreA: Vec;
  extentA: number;
  dipoleD: Vec | null;
  dipoleNormD: number | null;
  dipoleSource: string;
  chargeSource: string;
  polarizabilityA3: number | null;
}

export interface EnergyResult {
  chargeCharge: number | null;
  chargeDipole: number | null;
  dipoleDipole: number | null;
  pointDipole: number | null;
  chargeQuadrupole: number | null;
  dipoleQuadrupole: number | null;
  quadrupoleQuadrupole: number | null;
  coulomb: number | null;
  induction: number | null;
  dispersion: number | null;
}

export interface ThermalResult {
  coupling: number | null;
  averageKJPerMol: number | null;
  freeEnergyKJPerMol: number | null;
  leadingKJPerMol: number | null;
  alignment: number | null;
  motion: string | null;
}

export interface ClosestResult {
  atoms: [number, number] | null;
  distanceA: number | null;
  contactRatio: number | null;
}

export interface PairResult {
  first: number;
  second: number;
  image: [number, number, number];
  distanceA: number;
  theta1Deg: number | null;
  theta2Deg: number | null;
  phiDeg: number | null;
  angularFactor: number | null;
  arrangement: string | null;
  energyKJPerMol: EnergyResult;
  thermal: ThermalResult;
  closest: ClosestResult;
  contact: string;
  regime: string | null;
  basis: string;
  referenceKJPerMol: number | null;
  errorKJPerMol: number | null;
  relativeError: number | null;
  validBeyondA: number | null;
  advice: string | null;
  /** Not part of the program's output: which results hang on a threshold met to within 1e-6. */
  doubts: Set<Doubt>;
}

/** 'listed': whether the pair is in the list at all; 'numbers': a decision that changes numbers, not only a word. */
export type Doubt =
  | 'listed'
  | 'numbers'
  | 'angles'
  | 'arrangement'
  | 'motion'
  | 'contact'
  | 'closest'
  | 'regime'
  | 'advice';

export interface FrameResult {
  frame: number;
  atomCount: number;
  fragments: FragmentResult[];
  pairs: PairResult[];
}
