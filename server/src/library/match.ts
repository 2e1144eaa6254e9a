import type { LibraryAxis, LibraryEntry } from './entry';
import { atomGraph, findMapping } from './isomorphism';

/** A fragment as far as the library looks at it. */
export interface FragmentShape {
  /** Atomic number of each of its atoms; 0 for a site that is no atom (a ghost), which is passed over. */
  readonly elements: ArrayLike<number>;
  /** Bonds inside it: pairs of positions in `elements`, one after the other. */
  readonly bonds: ArrayLike<number>;
  /** Name of its residue in a PDB file. */
  readonly residueName?: string | null;
  /** Its net charge where the file declares one, e: an entry of another charge is then another species. */
  readonly chargeE?: number | null;
  /** Whether the file shows hydrogens at all. Without them methanol has the connections of carbon monoxide. */
  readonly hydrogensShown?: boolean;
}

/** An entry found for a fragment. */
export interface LibraryMatch {
  readonly entry: LibraryEntry;
  /** By its connections, or by the name of its residue alone; the latter tells sizes, no directions. */
  readonly by: 'connections' | 'residue';
  /** Position in the fragment of each atom of the entry's molecule; `null` where only the name was compared. */
  readonly atoms: Int32Array | null;
  /** The entry's axis in positions of the fragment. */
  readonly axis: LibraryAxis | null;
}

/** How far a declared charge may be from an entry's, e. */
const CHARGE_TOLERANCE_E = 0.1;
/** Sites that are no atoms which a fragment may have besides its atoms (a five-site water has two). */
const MOST_GHOSTS = 8;
/** Patterns kept; past it the memory is begun anew. */
const MOST_KNOWN = 20_000;

/** What is known of a sequence of elements, and of the bonds that followed it. */
interface Pattern {
  readonly next: Map<number, Pattern>;
  /** The residue entry for a name, at the end of a sequence of elements. */
  residues: Map<string, LibraryEntry | null> | undefined;
  /** What connections tell, at the end of a sequence of bonds. */
  connected: readonly LibraryMatch[] | undefined;
  /** Matches by residue name, so that equal fragments get the same object. */
  named: Map<LibraryEntry, LibraryMatch> | undefined;
  /** Whether an entry is made of just these elements, at the end of a sequence of elements. */
  composed: boolean | undefined;
}

const BONDS_FOLLOW = -1;

/**
 * Finds the entries that fragments are. A fragment is looked at once for each sequence of elements and bonds; equal ones that
 * follow, thousands of waters, cost a few steps in a tree of such sequences.
 */
export class FragmentLibrary {
  readonly entries: readonly LibraryEntry[];
  readonly #byHash = new Map<number, LibraryEntry[]>();
  readonly #byResidue = new Map<string, LibraryEntry[]>();
  readonly #compositions = new Set<string>();
  readonly #mostAtoms: number;
  #root = newPattern();
  #known = 0;

  constructor(entries: readonly LibraryEntry[]) {
    this.entries = entries;
    let mostAtoms = 0;
    for (const entry of entries) {
      const { elements } = entry.molecule;
      mostAtoms = Math.max(mostAtoms, elements.length);
      this.#compositions.add(compositionOf(elements));
      append(this.#byHash, entry.graph.hash, entry);
      for (const name of entry.residueNames) append(this.#byResidue, name, entry);
    }
    this.#mostAtoms = mostAtoms;
  }

  /** The entry that a fragment is, or `null` where none is or several are. The same object comes back for equal fragments. */
  match(fragment: FragmentShape): LibraryMatch | null {
    const { elements, bonds } = fragment;
    if (elements.length === 0 || elements.length > this.#mostAtoms + MOST_GHOSTS) return null;
    if (this.#known > MOST_KNOWN) {
      this.#root = newPattern();
      this.#known = 0;
    }
    let pattern = this.#root;
    for (let k = 0; k < elements.length; k++) pattern = this.#follow(pattern, elements[k]!);
    pattern.composed ??= this.#compositions.has(compositionOf(realAtoms(elements)));
    const name = fragment.residueName?.toUpperCase();
    let named = name === undefined ? null : this.#namedEntry(pattern, name, elements);
    if (named !== null && contradicts(fragment.chargeE, named)) named = null;
    if (!pattern.composed) return named === null ? null : this.#namedMatch(pattern, named);
    const whole = pattern;
    pattern = this.#follow(pattern, BONDS_FOLLOW);
    for (let k = 0; k + 1 < bonds.length; k += 2) {
      pattern = this.#follow(pattern, bonds[k]! * (this.#mostAtoms + MOST_GHOSTS) + bonds[k + 1]!);
    }
    pattern.connected ??= this.#connectedMatches(elements, bonds);
    return this.#chosen(pattern.connected, named, whole, fragment);
  }

  #follow(pattern: Pattern, step: number): Pattern {
    let next = pattern.next.get(step);
    if (next === undefined) {
      next = newPattern();
      pattern.next.set(step, next);
      this.#known++;
    }
    return next;
  }

  #chosen(
    connected: readonly LibraryMatch[],
    named: LibraryEntry | null,
    whole: Pattern,
    { elements, chargeE, hydrogensShown }: FragmentShape,
  ): LibraryMatch | null {
    if (named !== null) {
      const same = connected.find(({ entry }) => entry === named);
      if (same !== undefined) return same;
      // A water with one hydrogen is no hydroxide where the file calls it water: the two contradict, and neither is taken.
      const incomplete =
        hydrogenCount(elements) > 0 && hydrogenCount(elements) < hydrogenCount(named.molecule.elements);
      return incomplete && connected.length > 0 ? null : this.#namedMatch(whole, named);
    }
    const fitting = connected.filter(({ entry }) => {
      const { molecule } = entry;
      if (chargeE !== undefined && chargeE !== null && Math.abs(chargeE - molecule.chargeE) > CHARGE_TOLERANCE_E)
        return false;
      return hydrogensShown !== false || molecule.elements.length === 1 || molecule.elements.includes(1);
    });
    return fitting.length === 1 ? fitting[0]! : null;
  }

  #connectedMatches(elements: ArrayLike<number>, bonds: ArrayLike<number>): LibraryMatch[] {
    const positions: number[] = [];
    const numberOf = new Map<number, number>();
    for (let k = 0; k < elements.length; k++) {
      if (elements[k] === 0) continue;
      numberOf.set(k, positions.length);
      positions.push(k);
    }
    const pairs = Array.from(bonds, (position) => numberOf.get(position) ?? -1);
    const graph = atomGraph(
      positions.map((position) => elements[position]!),
      pairs,
    );
    const found: LibraryMatch[] = [];
    for (const entry of this.#byHash.get(graph.hash) ?? []) {
      const mapping = findMapping(entry.graph, graph);
      if (mapping === null) continue;
      const atoms = mapping.map((atom) => positions[atom]!);
      const placed = (list: readonly number[]) => list.map((atom) => atoms[atom]!).sort((a, b) => a - b);
      const axis = entry.axis && { before: placed(entry.axis.before), after: placed(entry.axis.after) };
      found.push({ entry, by: 'connections', atoms, axis });
    }
    return found;
  }

  /** The entry of a residue name whose heavy atoms the fragment has, with no more hydrogens than it. */
  #namedEntry(pattern: Pattern, name: string, elements: ArrayLike<number>): LibraryEntry | null {
    pattern.residues ??= new Map();
    let entry = pattern.residues.get(name);
    if (entry === undefined) {
      const heavy = compositionOf(realAtoms(elements).filter((z) => z !== 1));
      const fitting = (this.#byResidue.get(name) ?? []).filter(
        ({ molecule }) =>
          compositionOf(molecule.elements.filter((z) => z !== 1)) === heavy &&
          hydrogenCount(elements) <= hydrogenCount(molecule.elements),
      );
      entry = fitting.length === 1 ? fitting[0]! : null;
      pattern.residues.set(name, entry);
      this.#known++;
    }
    return entry;
  }

  #namedMatch(pattern: Pattern, entry: LibraryEntry): LibraryMatch {
    pattern.named ??= new Map();
    let match = pattern.named.get(entry);
    if (match === undefined) {
      match = { entry, by: 'residue', atoms: null, axis: null };
      pattern.named.set(entry, match);
    }
    return match;
  }
}

function contradicts(chargeE: number | null | undefined, { molecule }: LibraryEntry): boolean {
  return typeof chargeE === 'number' && Math.abs(chargeE - molecule.chargeE) > CHARGE_TOLERANCE_E;
}

function newPattern(): Pattern {
  return { next: new Map(), residues: undefined, connected: undefined, named: undefined, composed: undefined };
}

function append<K, V>(map: Map<K, V[]>, key: K, value: V): void {
  const list = map.get(key);
  if (list === undefined) map.set(key, [value]);
  else list.push(value);
}

function realAtoms(elements: ArrayLike<number>): number[] {
  return Array.from(elements).filter((z) => z > 0);
}

function compositionOf(elements: readonly number[]): string {
  return [...elements].sort((a, b) => a - b).join();
}

function hydrogenCount(elements: ArrayLike<number>): number {
  let count = 0;
  for (let k = 0; k < elements.length; k++) if (elements[k] === 1) count++;
  return count;
}
