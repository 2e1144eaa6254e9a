import { readQuantity } from '../physics/quantity';
import { DIPOLE_UNITS, energyUnitsPerKJPerMol } from '../physics/units';
import type { LibraryAxis, LibraryEntry, SourcedValue } from './entry';
import { type AtomGraph, atomGraph, equivalentAtoms, findMapping } from './isomorphism';
import { type LibraryProblem, ProblemList } from './problems';
import { type Molecule, readSmiles } from './smiles';

/** A library read: its usable entries, and what of the file could not be used. */
export interface ReadLibrary {
  readonly entries: readonly LibraryEntry[];
  readonly problems: readonly LibraryProblem[];
}

/** Most entries of one file; what follows is left out. */
const MOST_ENTRIES = 2000;
const ELECTRONVOLT_PER_KJ_PER_MOL = energyUnitsPerKJPerMol('meV', 1) / 1000;
const FILE_KEYS = ['$schema', 'comment', 'sources', 'molecules'];
const ENTRY_KEYS = [
  'name',
  'otherNames',
  'residueNames',
  'smiles',
  'dipole',
  'axis',
  'polarizability',
  'ionizationEnergy',
  'note',
];

/** The three quantities of an entry: how each is read and what a plain number of it means. */
const QUANTITIES = {
  dipole: { dimension: 'dipoleEA', bareUnit: DIPOLE_UNITS.get('D')!, scale: 1, zeroAllowed: true },
  polarizability: { dimension: 'volumeA3', bareUnit: 1, scale: 1, zeroAllowed: false },
  ionizationEnergy: {
    dimension: 'energyKJPerMol',
    bareUnit: 1 / ELECTRONVOLT_PER_KJ_PER_MOL,
    scale: ELECTRONVOLT_PER_KJ_PER_MOL,
    zeroAllowed: false,
  },
} as const;

/**
 * Reads a library file that has been parsed as JSON, on top of `base`. An entry that names a molecule of the base (by name or by
 * SMILES) overrides the values it gives and keeps the others; any other entry is new. What cannot be used is left out and told,
 * each with the JSON Pointer (RFC 6901) of its place. Never throws, whatever `data` is.
 *
 * Plain numbers are debye, Å³ and eV; texts carry a unit, as in "6.19e-30 C*m". Atoms of an axis are numbered from 1 in the order
 * of the SMILES, hydrogens that it leaves out after the others, in the order of their atoms.
 */
export function readLibrary(data: unknown, base: readonly LibraryEntry[], fromUser = true): ReadLibrary {
  const problems = new ProblemList();
  const file = problems.object(data, '', FILE_KEYS, 'The library');
  if (file === null) return { entries: base, problems: problems.list };
  const sources = problems.texts(file.sources, '/sources');
  const reader = new EntryReader(base, sources, fromUser, problems);
  if (!Array.isArray(file.molecules)) problems.add('/molecules', 'It must be a list of molecules.');
  else {
    for (const [index, item] of file.molecules.slice(0, MOST_ENTRIES).entries())
      reader.read(item, `/molecules/${index}`);
    if (file.molecules.length > MOST_ENTRIES) {
      problems.add(
        `/molecules/${MOST_ENTRIES}`,
        `A library may have ${MOST_ENTRIES} molecules; the others are left out.`,
      );
    }
  }
  return { entries: reader.entries, problems: problems.list };
}

class EntryReader {
  readonly entries: LibraryEntry[];
  readonly #sources: ReadonlyMap<string, string>;
  readonly #fromUser: boolean;
  readonly #problems: ProblemList;
  /** Places of the entries already read from this file, to tell a second one of the same molecule. */
  readonly #places = new Map<LibraryEntry, string>();
  readonly #byName = new Map<string, LibraryEntry>();
  readonly #byHash = new Map<number, LibraryEntry[]>();

  constructor(
    base: readonly LibraryEntry[],
    sources: ReadonlyMap<string, string>,
    fromUser: boolean,
    problems: ProblemList,
  ) {
    this.entries = [...base];
    this.#sources = sources;
    this.#fromUser = fromUser;
    this.#problems = problems;
    for (const entry of base) this.#index(entry);
  }

  read(item: unknown, path: string): void {
    const fields = this.#problems.object(item, path, ENTRY_KEYS, 'A molecule');
    if (fields === null) return;
    const identity = this.#identify(fields, path);
    if (identity === null) return;
    const { name, known } = identity;
    const earlier = known === undefined ? undefined : this.#places.get(known);
    if (earlier !== undefined) {
      this.#problems.add(path, `The molecule stands at ${earlier} already; the first one is used.`);
      return;
    }
    // What is not given, or cannot be used, stays as it is known.
    const given = <T>(key: string, read: (value: unknown, path: string) => T | undefined, otherwise: T): T => {
      const value = key in fields ? read(fields[key], `${path}/${key}`) : undefined;
      return value === undefined ? otherwise : value;
    };
    const list = (value: unknown, at: string) => this.#problems.textList(value, at);
    const quantity = (kind: keyof typeof QUANTITIES) =>
      given(kind, (value, at) => this.#quantity(value, at, kind), known?.[FIELDS[kind]] ?? null);
    const axis = given<LibraryAxis | null | undefined>(
      'axis',
      (value, at) => this.#axis(value, at, identity.graph),
      undefined,
    );
    // A known axis goes with the numbering of the known SMILES.
    const drawing = axis === undefined && known !== undefined ? known : identity;
    const entry: LibraryEntry = {
      name,
      otherNames: given('otherNames', list, known?.otherNames ?? []),
      residueNames: given('residueNames', list, known?.residueNames ?? []).map((text) => text.toUpperCase()),
      smiles: drawing.smiles,
      molecule: drawing.molecule,
      graph: drawing.graph,
      dipoleEA: quantity('dipole'),
      axis: axis === undefined ? (known?.axis ?? null) : axis,
      polarizabilityA3: quantity('polarizability'),
      ionizationEnergyEV: quantity('ionizationEnergy'),
      note: given('note', (value, at) => this.#problems.textOrNull(value, at), known?.note ?? null),
      fromUser: this.#fromUser,
    };
    if (known === undefined) this.entries.push(entry);
    else this.entries[this.entries.indexOf(known)] = entry;
    this.#forget(known);
    this.#index(entry);
    this.#places.set(entry, path);
  }

  #index(entry: LibraryEntry): void {
    for (const name of [entry.name, ...entry.otherNames]) this.#byName.set(name.toLowerCase(), entry);
    const { hash } = entry.graph;
    this.#byHash.set(hash, [...(this.#byHash.get(hash) ?? []), entry]);
  }

  #forget(entry: LibraryEntry | undefined): void {
    if (entry === undefined) return;
    const { hash } = entry.graph;
    this.#byHash.set(
      hash,
      this.#byHash.get(hash)!.filter((other) => other !== entry),
    );
    for (const name of [entry.name, ...entry.otherNames]) this.#byName.delete(name.toLowerCase());
  }

  /** Which molecule an entry speaks of: a known one, by name or SMILES, or a new one. */
  #identify(fields: Readonly<Record<string, unknown>>, path: string) {
    const name = 'name' in fields ? this.#problems.text(fields.name, `${path}/name`) : undefined;
    const smiles = 'smiles' in fields ? this.#problems.text(fields.smiles, `${path}/smiles`) : undefined;
    if (name === null || smiles === null) return null;
    const named = name === undefined ? undefined : this.#byName.get(name.toLowerCase());
    if (smiles === undefined) {
      if (named !== undefined) return { ...named, name: named.name, known: named };
      const reason =
        name === undefined
          ? 'A molecule needs a name or a SMILES.'
          : `"${name}" is not in the library; a new molecule needs a SMILES.`;
      this.#problems.add(path, reason);
      return null;
    }
    const result = readSmiles(smiles);
    if (!result.ok) {
      this.#problems.add(`${path}/smiles`, `It cannot be read from character ${result.at + 1} on. ${result.reason}`);
      return null;
    }
    const { molecule } = result;
    const graph = atomGraph(molecule.elements, molecule.bonds.flat());
    const drawn = this.#find(molecule, graph);
    if (named !== undefined && named !== drawn) {
      this.#problems.add(
        `${path}/smiles`,
        `"${name}" is the name of another molecule, whose SMILES is ${named.smiles}.`,
      );
      return null;
    }
    if (drawn === undefined && name === undefined) {
      this.#problems.add(path, 'A new molecule needs a name.');
      return null;
    }
    return { name: name ?? drawn!.name, smiles, molecule, graph, known: drawn };
  }

  #find(molecule: Molecule, graph: AtomGraph): LibraryEntry | undefined {
    const alike = this.#byHash.get(graph.hash) ?? [];
    return alike.find(
      (entry) => entry.molecule.chargeE === molecule.chargeE && findMapping(entry.graph, graph) !== null,
    );
  }

  /** A quantity, `null` where it is taken away, `undefined` where it cannot be used. */
  #quantity(value: unknown, path: string, kind: keyof typeof QUANTITIES): SourcedValue | null | undefined {
    if (value === null) return null;
    if (typeof value !== 'object' || Array.isArray(value)) {
      const number = this.#number(value, path, kind);
      return number === undefined ? undefined : this.#sourced(number, '');
    }
    const fields = this.#problems.object(value, path, ['value', 'source'], 'A quantity');
    const number = this.#number(fields?.value, `${path}/value`, kind);
    const source = fields !== null && 'source' in fields ? this.#problems.text(fields.source, `${path}/source`) : null;
    if (number === undefined) return undefined;
    return this.#sourced(number, this.#sources.get(source ?? '') ?? source ?? '');
  }

  #sourced(value: number, source: string): SourcedValue {
    const fromUser = this.#fromUser;
    return { value, source: source === '' && fromUser ? 'a library file of your own' : source, fromUser };
  }

  #number(value: unknown, path: string, kind: keyof typeof QUANTITIES): number | undefined {
    const { dimension, bareUnit, scale, zeroAllowed } = QUANTITIES[kind];
    if (typeof value !== 'number' && typeof value !== 'string') {
      this.#problems.add(path, 'It must be a number, or a text with a number and a unit.');
      return undefined;
    }
    const result = readQuantity(String(value), dimension, bareUnit);
    if (!result.ok) {
      this.#problems.add(path, `"${String(value).slice(0, 40)}" is no quantity that can be used. ${result.reason}`);
      return undefined;
    }
    if (result.value > 0 || (zeroAllowed && result.value === 0)) return result.value * scale;
    const turn = 'A dipole has a size; swap "before" and "after" to turn it round.';
    this.#problems.add(path, kind === 'dipole' ? turn : 'It must be above 0.');
    return undefined;
  }

  /** An axis, `null` where it is taken away, `undefined` where it cannot be used. */
  #axis(value: unknown, path: string, graph: AtomGraph): LibraryAxis | null | undefined {
    if (value === null) return null;
    const fields = this.#problems.object(value, path, ['before', 'after'], 'An axis');
    if (fields === null) return undefined;
    const count = graph.elements.length;
    const before = this.#problems.atomList(fields.before, `${path}/before`, count);
    const after = this.#problems.atomList(fields.after, `${path}/after`, count);
    if (before === null || after === null) return undefined;
    const axis = { before: equivalentAtoms(graph, before), after: equivalentAtoms(graph, after) };
    if (axis.before.join() !== axis.after.join()) return axis;
    this.#problems.add(path, 'Its two ends cannot be told apart in this molecule, so they give no direction.');
    return undefined;
  }
}

const FIELDS = {
  dipole: 'dipoleEA',
  polarizability: 'polarizabilityA3',
  ionizationEnergy: 'ionizationEnergyEV',
} as const;
