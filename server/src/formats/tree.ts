import type { Finding } from '../base/finding';
import type { Span } from '../base/span';
import type { LineIndex } from '../text/lines';
import type { Snapshot } from '../text/snapshot';
import type { Entry } from './annotation/entries';

/** The formats that are read. */
export type Language = 'xyz' | 'pdb';

/** What is known of an atom besides its element, as bits of {@link AtomTable.flags}. */
export const AtomFlag = {
  /** A site without nucleus: no mass, no bonds, no contact. */
  ghost: 1,
  /** The element could not be read. */
  unknownElement: 2,
  /** A coordinate could not be read or is not finite; the position is NaN. */
  noPosition: 4,
  deuterium: 8,
  tritium: 16,
} as const;

/** The atoms of a frame in the order of the file, as columns. */
export interface AtomTable {
  readonly count: number;
  /** Atomic number; 0 for ghosts and unknown elements. */
  readonly element: Uint8Array;
  /** Bits of {@link AtomFlag}. */
  readonly flags: Uint8Array;
  /** x y z of each, Å. */
  readonly positionA: Float64Array;
  /** Line of each in the file, from 0. */
  readonly line: Uint32Array;
  /** Partial charge of each, e, where the file has a charge column; NaN where one is unreadable. */
  readonly chargeE: Float64Array | null;
  /** Atomic dipole of each, x y z, e·Å, where the file has such columns. */
  readonly dipoleEA: Float64Array | null;
  /** Index into {@link FrameTree.groups} where the file has a fragment column. */
  readonly group: Int32Array | null;
  /** Formal charge of each, e (PDB columns 79–80); NaN where blank. */
  readonly formalE: Float64Array | null;
  /** Index into {@link FrameTree.residues} (PDB). */
  readonly residue: Int32Array | null;
}

/** A residue of a PDB model. */
export interface Residue {
  readonly chain: string;
  readonly name: string;
  readonly number: number;
  readonly insertion: string;
  /** Running number of the chain segment: rises at every TER and change of chain. */
  readonly segment: number;
  /** Names of its atoms, in the order of {@link atoms}. */
  readonly atomNames: readonly string[];
  /** Atom indices, ascending. */
  readonly atoms: readonly number[];
}

/** The parts of an atom line that can be pointed at; `name` is what names its fragment: the residue, or the element; `group` the fragment column. */
export type AtomField = 'line' | 'name' | 'element' | 'x' | 'y' | 'z' | 'charge' | 'group';

/** The numbers of one atom line, and all else of it. */
export interface AtomReading {
  readonly positionA: readonly [number, number, number];
  /** Where the file has such columns. */
  readonly chargeE: number | null;
  readonly dipoleEA: readonly [number, number, number] | null;
  /** The line without those numbers: where it is the same, so is everything but them. */
  readonly rest: string;
}

/** One frame (XYZ) or model (PDB) as read. */
export interface FrameTree {
  /** Running number from 0. */
  readonly index: number;
  /** First line: the count line, the MODEL record or the first atom. */
  readonly firstLine: number;
  /** Line after the last. */
  readonly endLine: number;
  /** The line that stands for the frame as a whole: XYZ comment line, MODEL record, or the first atom. */
  readonly headLine: number;
  readonly atoms: AtomTable;
  /** Values of the fragment column in order of first appearance, and whether they are words (names) or only numbers. */
  readonly groups: { readonly names: readonly string[]; readonly areWords: boolean } | null;
  /** Keys of the comment line. */
  readonly entries: readonly Entry[];
  /** Cell vectors as rows, Å, where given. */
  readonly cell: {
    readonly vectorsA: Float64Array;
    readonly periodic: readonly [boolean, boolean, boolean];
    readonly span: Span;
  } | null;
  readonly residues: readonly Residue[] | null;
  /** Declared bonds (CONECT, LINK): pairs of atom indices. */
  readonly bonds: Int32Array;
  /** Where a field of an atom stands. */
  fieldSpan(atom: number, field: AtomField): Span;
  /** The line of an atom as it stands in the text now; `null` where anything would have to be said of it. */
  readAtom(atom: number): AtomReading | null;
  /** The same frame in a later text, in which nothing but the numbers of its atoms differs. */
  inText(text: Snapshot, lines: LineIndex): FrameTree;
}

/** An annotation line of a PDB file: keys for the file, or for the fragments that a selector names. */
export interface RemarkAnnotation {
  readonly line: number;
  readonly selector: Selector | null;
  readonly selectorSpan: Span;
  readonly entries: readonly Entry[];
}

/** `chain:residue:number[insertion]`; `null` in a part stands for any. */
export interface Selector {
  readonly chain: string | null;
  readonly name: string | null;
  readonly number: number | null;
  readonly insertion: string | null;
}

/** A whole file as read: every frame, and every problem met while reading. */
export interface CoordinateTree {
  readonly language: Language;
  readonly text: Snapshot;
  readonly lines: LineIndex;
  readonly frames: readonly FrameTree[];
  /** Annotation lines of a PDB file, for all its models. */
  readonly remarks: readonly RemarkAnnotation[];
  readonly problems: readonly Finding[];
}
