import type { AtomGraph } from './isomorphism';
import type { Molecule } from './smiles';

/** A value with where it was published. */
export interface SourcedValue {
  readonly value: number;
  readonly source: string;
  /** Whether it comes from the user's own file. */
  readonly fromUser: boolean;
}

/**
 * Direction of a dipole by atoms of the molecule, numbered from 0: from the mean position of `before` (the negative side) to that
 * of `after` (the positive side). Both hold every atom that symmetry cannot tell from another one in them.
 */
export interface LibraryAxis {
  readonly before: readonly number[];
  readonly after: readonly number[];
}

/** What is known of one kind of molecule or ion; `null` where nothing is. */
export interface LibraryEntry {
  readonly name: string;
  readonly otherNames: readonly string[];
  /** Names that PDB files give it as a residue, in capitals. */
  readonly residueNames: readonly string[];
  /** As it was written. */
  readonly smiles: string;
  readonly molecule: Molecule;
  readonly graph: AtomGraph;
  /** Size of the dipole, e·Å. */
  readonly dipoleEA: SourcedValue | null;
  readonly axis: LibraryAxis | null;
  /** Polarizability volume, Å³. */
  readonly polarizabilityA3: SourcedValue | null;
  /** Ionization energy, eV. */
  readonly ionizationEnergyEV: SourcedValue | null;
  /** What a reader should know before using the values, such as the conformer that they are of. */
  readonly note: string | null;
  /** Whether it, or a value of it, comes from the user's own file. */
  readonly fromUser: boolean;
}
