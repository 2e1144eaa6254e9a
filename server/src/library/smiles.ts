import { atomicNumberOf } from '../physics/elements';

/** A molecule by its connections: every atom and bond explicit, bond orders forgotten once the hydrogens are counted. */
export interface Molecule {
  /** Atomic numbers: the atoms in the order written, then the hydrogens that were not, in the order of their atoms. */
  readonly elements: readonly number[];
  /** Bonds as pairs of atoms, numbered from 0. */
  readonly bonds: readonly (readonly [number, number])[];
  /** Sum of the formal charges, e. */
  readonly chargeE: number;
}

/** A molecule read, or why and where (offset in the text) it could not be. */
export type SmilesResult =
  | { readonly ok: true; readonly molecule: Molecule }
  | { readonly ok: false; readonly at: number; readonly reason: string };

/** Bounds of what is tried, so that a hostile library stays cheap. */
const LONGEST = 300;
const MOST_ATOMS = 200;

/** Valences that hydrogens fill up in the organic subset (OpenSMILES specification, "Organic Subset"). */
const VALENCES: Readonly<Record<string, readonly number[]>> = {
  B: [3],
  C: [4],
  N: [3, 5],
  O: [2],
  P: [3, 5],
  S: [2, 4, 6],
  F: [1],
  Cl: [1],
  Br: [1],
  I: [1],
};

const BOND_ORDERS: Readonly<Record<string, number>> = { '-': 1, '=': 2, '#': 3, $: 4, ':': 1 };

/** What is part of SMILES but of no use here, and why. */
const REFUSED: Readonly<Record<string, string>> = {
  '/': 'Bond directions are not read: cis and trans have the same connections.',
  '\\': 'Bond directions are not read: cis and trans have the same connections.',
  '.': 'Its parts must be bonded; give each part an entry of its own.',
};

const ORGANIC = /Cl|Br|[BCNOPSFIbcnops]/y;
const BRACKET = /\[(\d+)?([A-Z][a-z]?|[bcnops]|se|as)(@{1,2})?(H\d?)?(\+{1,4}|-{1,4}|[+-]\d{1,2})?(?::\d+)?\]/y;
const RING = /%(\d\d)|(\d)/y;

interface WrittenAtom {
  readonly element: number;
  readonly symbol: string;
  readonly aromatic: boolean;
  /** Hydrogens written in a bracket; -1 outside one, where the valence tells. */
  readonly hydrogens: number;
  readonly chargeE: number;
  bondOrders: number;
}

class SmilesError extends Error {
  readonly at: number;

  constructor(at: number, message: string) {
    super(message);
    this.at = at;
  }
}

/**
 * Reads the part of OpenSMILES that a library of small molecules needs: the organic subset, bracket atoms, branches, ring
 * closures, bond orders and aromatic atoms. Isotopes, chirality and atom classes are passed over. Refused with a reason: the bond
 * directions / and \ (cis and trans have the same connections, by which entries are found), parts without a bond between them,
 * and wildcards. Never throws.
 */
export function readSmiles(text: string): SmilesResult {
  if (text.length > LONGEST) return { ok: false, at: LONGEST, reason: `It is longer than ${LONGEST} characters.` };
  try {
    return { ok: true, molecule: new SmilesReader(text).read() };
  } catch (error) {
    if (error instanceof SmilesError) return { ok: false, at: error.at, reason: error.message };
    throw error;
  }
}

class SmilesReader {
  readonly #text: string;
  readonly #atoms: WrittenAtom[] = [];
  readonly #bonds: [number, number][] = [];
  /** Atoms to go back to at the closing parentheses. */
  readonly #branches: number[] = [];
  readonly #rings = new Map<number, { readonly atom: number; readonly bond: string; readonly at: number }>();
  #at = 0;
  /** The atom that the next one is bonded to; -1 at the start. */
  #last = -1;
  /** The bond sign read before an atom or a ring number; '' where none is written. */
  #bond = '';

  constructor(text: string) {
    this.#text = text;
  }

  read(): Molecule {
    while (this.#at < this.#text.length) this.#step();
    if (this.#atoms.length === 0) throw new SmilesError(0, 'It names no atom.');
    if (this.#bond !== '') throw new SmilesError(this.#at, `The bond "${this.#bond}" leads nowhere.`);
    if (this.#branches.length > 0) throw new SmilesError(this.#at, 'A parenthesis is not closed.');
    for (const [number, { at }] of this.#rings) throw new SmilesError(at, `Ring ${number} is not closed.`);
    return this.#withHydrogens();
  }

  #step(): void {
    const char = this.#text[this.#at]!;
    if (char === '[') this.#addBracketAtom();
    else if (char === '(' || char === ')') this.#branch(char);
    else if (char in BOND_ORDERS) this.#openBond(char);
    else if (this.#matchHere(RING) !== null) this.#ringClosure();
    else this.#addOrganicAtom(char);
  }

  #openBond(char: string): void {
    if (this.#last < 0 || this.#bond !== '') throw new SmilesError(this.#at, `The bond "${char}" is out of place.`);
    this.#bond = char;
    this.#at++;
  }

  #addOrganicAtom(char: string): void {
    const symbol = this.#matchHere(ORGANIC)?.[0];
    if (symbol === undefined) throw new SmilesError(this.#at, REFUSED[char] ?? `"${char}" is not understood.`);
    const aromatic = symbol === symbol.toLowerCase();
    this.#addAtom({
      element: atomicNumberOf(symbol),
      symbol: aromatic ? symbol.toUpperCase() : symbol,
      aromatic,
      hydrogens: -1,
      chargeE: 0,
      bondOrders: 0,
    });
    this.#at += symbol.length;
  }

  #matchHere(pattern: RegExp): RegExpExecArray | null {
    pattern.lastIndex = this.#at;
    return pattern.exec(this.#text);
  }

  #addBracketAtom(): void {
    const match = this.#matchHere(BRACKET);
    if (match === null) throw new SmilesError(this.#at, 'This atom in brackets is not understood.');
    const [whole, , symbol, , hydrogens, charge] = match;
    const element = atomicNumberOf(symbol!);
    if (element === 0) throw new SmilesError(this.#at, `"${symbol}" is no element.`);
    this.#addAtom({
      element,
      symbol: symbol!,
      aromatic: symbol === symbol!.toLowerCase(),
      hydrogens: hydrogens === undefined ? 0 : Number(hydrogens.slice(1) || 1),
      chargeE: formalCharge(charge),
      bondOrders: 0,
    });
    this.#at += whole.length;
  }

  #addAtom(atom: WrittenAtom): void {
    if (this.#atoms.length === MOST_ATOMS) throw new SmilesError(this.#at, `It has more than ${MOST_ATOMS} atoms.`);
    this.#atoms.push(atom);
    const number = this.#atoms.length - 1;
    if (this.#last >= 0) this.#addBond(this.#last, number, this.#bond);
    this.#last = number;
    this.#bond = '';
  }

  #addBond(first: number, second: number, sign: string): void {
    const order = BOND_ORDERS[sign] ?? 1;
    this.#bonds.push([first, second]);
    this.#atoms[first]!.bondOrders += order;
    this.#atoms[second]!.bondOrders += order;
  }

  #branch(char: '(' | ')'): void {
    if (this.#last < 0 || this.#bond !== '') throw new SmilesError(this.#at, `"${char}" is out of place.`);
    if (char === '(') this.#branches.push(this.#last);
    else {
      if (this.#text[this.#at - 1] === '(') throw new SmilesError(this.#at, 'The parentheses hold no atom.');
      const back = this.#branches.pop();
      if (back === undefined) throw new SmilesError(this.#at, 'This parenthesis was never opened.');
      this.#last = back;
    }
    this.#at++;
  }

  #ringClosure(): void {
    const [whole, long, short] = this.#matchHere(RING)!;
    const number = Number(long ?? short);
    if (this.#last < 0) throw new SmilesError(this.#at, 'A ring number must follow an atom.');
    const open = this.#rings.get(number);
    if (open === undefined) this.#rings.set(number, { atom: this.#last, bond: this.#bond, at: this.#at });
    else {
      if (open.bond !== '' && this.#bond !== '' && open.bond !== this.#bond) {
        throw new SmilesError(this.#at, `Ring ${number} is opened and closed by different bonds.`);
      }
      const ends = [open.atom, this.#last];
      if (open.atom === this.#last || this.#bonds.some(([i, j]) => ends.includes(i) && ends.includes(j))) {
        throw new SmilesError(this.#at, `Ring ${number} closes on an atom that it is bonded to.`);
      }
      this.#addBond(open.atom, this.#last, this.#bond || open.bond);
      this.#rings.delete(number);
    }
    this.#bond = '';
    this.#at += whole.length;
  }

  #withHydrogens(): Molecule {
    const elements = this.#atoms.map(({ element }) => element);
    const bonds: [number, number][] = [...this.#bonds];
    for (const [number, atom] of this.#atoms.entries()) {
      const hydrogens = atom.hydrogens >= 0 ? atom.hydrogens : missingHydrogens(atom);
      for (let k = 0; k < hydrogens; k++) {
        bonds.push([number, elements.length]);
        elements.push(1);
      }
    }
    return { elements, bonds, chargeE: this.#atoms.reduce((sum, { chargeE }) => sum + chargeE, 0) };
  }
}

function formalCharge(text: string | undefined): number {
  if (text === undefined) return 0;
  const sign = text[0] === '+' ? 1 : -1;
  return sign * (/\d/.test(text) ? Number(text.slice(1)) : text.length);
}

/** Hydrogens that fill the valence of an atom written without brackets; an aromatic one spends a valence on the ring. */
function missingHydrogens({ symbol, aromatic, bondOrders }: WrittenAtom): number {
  const used = aromatic ? bondOrders + 1 : bondOrders;
  const valences = aromatic ? VALENCES[symbol]!.slice(0, 1) : VALENCES[symbol]!;
  const valence = valences.find((value) => value >= used);
  return valence === undefined ? 0 : valence - used;
}
