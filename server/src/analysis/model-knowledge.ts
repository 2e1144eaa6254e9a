import type { LibraryEntry, SourcedValue } from '../library/entry';
import type { LibraryMatch } from '../library/match';
import { firstPairOf } from '../model/close-pairs';
import type { FrameModel } from '../model/frame-model';
import { additivePolarizability } from '../physics/additive-polarizability';
import { DEBYE_E_A } from '../physics/constants';
import { type DipoleEstimate, estimateDipole } from '../physics/dipole-estimate';
import { COVALENT_RADIUS_A } from '../physics/elements';
import { fragmentGraph } from '../physics/fragment-graph';
import type { Knowledge } from './settings';

type Vector = readonly [number, number, number];

/** A dipole that the file does not give: published, or estimated from the geometry. */
export interface OfferedDipole {
  readonly source: 'library' | 'estimated';
  readonly sizeEA: number;
  /** Unit vector; `null` where nothing tells it. */
  readonly direction: Vector | null;
  /** Mean error of such a size, e·Å, and of such a direction, degrees (NaN where it is fixed by symmetry, or not known). */
  readonly sizeErrorEA: number;
  readonly angleErrorDeg: number;
  /** Where it comes from, for people. */
  readonly note: string;
}

/** Published gas-phase dipoles of one molecule differ by about this share between sources (tests/reference/library-values.test.ts). */
const LIBRARY_SPREAD = 0.03;
/** Estimates below this have no direction worth telling, e·Å. */
const DIRECTED_EA = 0.3 * DEBYE_E_A;
/** How many single bonds C, N, O and S form. */
const SINGLE_BONDS: ReadonlyMap<number, number> = new Map([
  [6, 4],
  [7, 3],
  [8, 2],
  [16, 2],
]);
/** Cosine of 150 degrees. */
const STRAIGHT_COSINE = -Math.sqrt(3) / 2;
/** A fragment of more atoms is not estimated while someone types. */
export const MOST_ESTIMATED_ATOMS = 300;

/** What is known of the fragments of one frame besides what the file says. */
export class ModelKnowledge {
  readonly #model: FrameModel;
  readonly #knowledge: Knowledge;
  /** 1 for a fragment that is cut from a chain: it is no molecule. */
  readonly #isCut: Uint8Array;
  readonly #hydrogensShown: boolean;
  readonly #notes = new Map<LibraryEntry, string>();

  constructor(model: FrameModel, knowledge: Knowledge) {
    this.#model = model;
    this.#knowledge = knowledge;
    this.#isCut = new Uint8Array(model.fragments.count);
    for (const atom of model.chainBonds) this.#isCut[model.fragments.ofAtom[atom]!] = 1;
    this.#hydrogensShown = model.tree.atoms.element.includes(1);
  }

  /** The library's entry for a whole fragment. @param chargeE its net charge where the file declares one */
  match(f: number, chargeE: number | null): LibraryMatch | null {
    const { library } = this.#knowledge;
    if (library === null || this.#isCut[f]) return null;
    const { atoms, residues } = this.#model.tree;
    const members = this.#members(f);
    if (members.length > MOST_ESTIMATED_ATOMS) return null;
    const residue = residues?.[atoms.residue?.[members[0]!] ?? -1];
    const elements = this.#elements(members);
    const bonds = this.#bondsWithin(f, members);
    // A lone atom is an ion only where its residue says so: silver clusters and sodium dimers are none.
    if (residue === undefined && members.length === 1) return null;
    if (residue === undefined && !elements.includes(1) && !this.#isSurelyBare(members, bonds)) return null;
    return library.match({
      elements,
      bonds,
      residueName: residue?.name ?? null,
      chargeE,
      hydrogensShown: this.#hydrogensShown || residue === undefined,
    });
  }

  /**
   * Whether a fragment without hydrogens has none to miss: atoms of C, N, O and S that have fewer neighbours than single bonds would give them
   * have bonds as short as multiple ones, and carbons with two neighbours are straight. The skeletons of methanol and formic acid are no
   * carbon monoxide and dioxide.
   */
  #isSurelyBare(members: Int32Array, bonds: readonly number[]): boolean {
    const { element } = this.#model.tree.atoms;
    const { positionA } = this.#model;
    const vector = (from: number, to: number) =>
      [0, 1, 2].map((a) => positionA[3 * members[to]! + a]! - positionA[3 * members[from]! + a]!);
    const neighbours = Array.from(members, (): number[] => []);
    for (let k = 0; k < bonds.length; k += 2) {
      neighbours[bonds[k]!]!.push(bonds[k + 1]!);
      neighbours[bonds[k + 1]!]!.push(bonds[k]!);
    }
    const isOpen = (atom: number) => neighbours[atom]!.length < (SINGLE_BONDS.get(element[members[atom]!]!) ?? 0);
    for (let k = 0; k < bonds.length; k += 2) {
      const [i, j] = [bonds[k]!, bonds[k + 1]!];
      const [z1, z2] = [element[members[i]!]!, element[members[j]!]!];
      if (!SINGLE_BONDS.has(z1) || !SINGLE_BONDS.has(z2) || !(isOpen(i) || isOpen(j))) continue;
      const share = Math.hypot(...vector(i, j)) / (COVALENT_RADIUS_A[z1]! + COVALENT_RADIUS_A[z2]!);
      const isOxygen = z1 === 8 && z2 === 8;
      const most = members.length === 2 ? (isOxygen ? 0.95 : 0.83) : isOxygen ? 1 : 0.93;
      if (!(share < most)) return false;
    }
    return neighbours.every(([first, second, ...others], atom) => {
      if (element[members[atom]!] !== 6 || first === undefined || second === undefined || others.length > 0)
        return true;
      const [a, b] = [vector(atom, first), vector(atom, second)];
      const dot = a.reduce((sum, component, k) => sum + component * b[k]!, 0);
      return dot / (Math.hypot(...a) * Math.hypot(...b)) <= STRAIGHT_COSINE;
    });
  }

  /** The dipole of a fragment as published for its kind, else as estimated; a sentence where there is none. */
  dipole(f: number, match: LibraryMatch | null, chargeE: number, centreA: Vector): OfferedDipole | string {
    const published = match?.entry.dipoleEA;
    if (match !== null && published) return this.#published(f, match, published, chargeE, centreA);
    const estimate = this.#estimate(f, chargeE, centreA);
    if (!estimate.ok) return estimate.reason;
    // A doubted one is off by half a debye and points anywhere.
    if (estimate.doubt !== null) return estimate.doubt;
    const [x, y, z] = estimate.dipoleEA;
    const size = Math.hypot(x, y, z);
    return {
      source: 'estimated',
      sizeEA: size,
      direction: size > 0 ? [x / size, y / size, z / size] : null,
      sizeErrorEA: estimate.sizeErrorD * DEBYE_E_A,
      angleErrorDeg: estimate.angleErrorDeg ?? Number.NaN,
      note: `estimated from the geometry (class: ${estimate.moleculeClass})`,
    };
  }

  #published(
    f: number,
    { entry, axis }: LibraryMatch,
    { value, source, fromUser }: SourcedValue,
    chargeE: number,
    centreA: Vector,
  ): OfferedDipole {
    const note = this.#noteOf(entry, source);
    // How far a user's own value is off only the user knows.
    const sizeErrorEA = fromUser ? Number.NaN : LIBRARY_SPREAD * value;
    const known = { source: 'library', sizeEA: value, sizeErrorEA, note } as const;
    const members = this.#members(f);
    const along = axis && this.#between(members, axis.before, axis.after);
    if (along !== null || value === 0) return { ...known, direction: along, angleErrorDeg: Number.NaN };
    const estimate = this.#estimate(f, chargeE, centreA);
    if (!estimate.ok || estimate.doubt !== null) return { ...known, direction: null, angleErrorDeg: Number.NaN };
    const [x, y, z] = estimate.dipoleEA;
    const size = Math.hypot(x, y, z);
    if (size < DIRECTED_EA) return { ...known, direction: null, angleErrorDeg: Number.NaN };
    return {
      ...known,
      direction: [x / size, y / size, z / size],
      angleErrorDeg: estimate.angleErrorDeg ?? Number.NaN,
      note: `${note}; direction estimated from the geometry`,
    };
  }

  /** Where an entry's dipole is from; one string for thousands of waters. */
  #noteOf(entry: LibraryEntry, source: string): string {
    let note = this.#notes.get(entry);
    if (note === undefined) {
      note = `${entry.name}: ${source}${entry.note === null ? '' : ` (${entry.note})`}`;
      this.#notes.set(entry, note);
    }
    return note;
  }

  /** The estimated direction of a dipole whose size is known; `null` where there is none. */
  direction(f: number, chargeE: number, centreA: Vector): Vector | null {
    const estimate = this.#estimate(f, chargeE, centreA);
    if (!estimate.ok || estimate.doubt !== null) return null;
    const [x, y, z] = estimate.dipoleEA;
    const size = Math.hypot(x, y, z);
    return size < DIRECTED_EA ? null : [x / size, y / size, z / size];
  }

  /** The polarizability volume of a fragment, Å³, as published or as a sum of published components; `null` where neither is known. */
  polarizability(f: number, match: LibraryMatch | null, chargeE: number): { valueA3: number; source: string } | null {
    const published = match?.entry.polarizabilityA3;
    if (published) return { valueA3: published.value, source: published.source };
    if (!this.#knowledge.estimates || this.#isCut[f]) return null;
    const members = this.#members(f);
    if (members.length > MOST_ESTIMATED_ATOMS) return null;
    const elements = this.#elements(members);
    if (elements.includes(0)) return null;
    const sum = additivePolarizability(
      fragmentGraph(members.length, elements, this.#positions(members)),
      elements,
      chargeE,
    );
    return sum.ok ? { valueA3: sum.polarizabilityA3, source: 'sum of components' } : null;
  }

  #estimate(f: number, chargeE: number, centreA: Vector): DipoleEstimate {
    if (!this.#knowledge.estimates) return { ok: false, reason: 'Estimates are switched off.' };
    if (this.#isCut[f]) return { ok: false, reason: 'It is cut from a chain.' };
    const members = this.#members(f);
    if (members.length > MOST_ESTIMATED_ATOMS) {
      return { ok: false, reason: `More than ${MOST_ESTIMATED_ATOMS} atoms are not estimated.` };
    }
    const elements = this.#elements(members);
    if (!elements.includes(1) && !this.#isSurelyBare(members, this.#bondsWithin(f, members))) {
      return { ok: false, reason: 'Hydrogens seem to be missing.' };
    }
    return estimateDipole(members.length, elements, this.#positions(members), chargeE, centreA);
  }

  #members(f: number): Int32Array {
    const { members, starts } = this.#model.fragments;
    return members.subarray(starts[f]!, starts[f + 1]!);
  }

  #elements(members: Int32Array): Uint8Array {
    const { element } = this.#model.tree.atoms;
    const elements = new Uint8Array(members.length);
    for (let k = 0; k < members.length; k++) elements[k] = element[members[k]!]!;
    return elements;
  }

  #positions(members: Int32Array): Float64Array {
    const { positionA } = this.#model;
    const positions = new Float64Array(3 * members.length);
    for (let k = 0; k < members.length; k++) {
      positions.set(positionA.subarray(3 * members[k]!, 3 * members[k]! + 3), 3 * k);
    }
    return positions;
  }

  /** Bonds inside a fragment as pairs of positions among its members. */
  #bondsWithin(f: number, members: Int32Array): number[] {
    const { pairs, fragments } = this.#model;
    const bonds: number[] = [];
    for (let k = 0; k < members.length; k++) {
      const atom = members[k]!;
      for (let n = firstPairOf(pairs, atom); n < pairs.count && pairs.first[n] === atom; n++) {
        const other = pairs.second[n]!;
        if (pairs.bonded[n] && fragments.ofAtom[other] === f) bonds.push(k, members.indexOf(other));
      }
    }
    return bonds;
  }

  /** Unit vector from the mean place of some atoms to that of others; `null` where the two coincide. */
  #between(members: Int32Array, before: readonly number[], after: readonly number[]): Vector | null {
    const { positionA } = this.#model;
    const mean = (places: readonly number[], a: number) =>
      places.reduce((sum, place) => sum + positionA[3 * members[place]! + a]!, 0) / places.length;
    const [x, y, z] = [0, 1, 2].map((a) => mean(after, a) - mean(before, a)) as [number, number, number];
    const length = Math.hypot(x, y, z);
    return length > 1e-6 ? [x / length, y / length, z / length] : null;
  }
}
