import { createUnitEvaluator, type EvaluatedValue, type UnitEvaluator } from './unit-evaluator';

/** What a quantity is asked to be; each is read into the unit that the program uses inside. */
export type Dimension = 'dipoleEA' | 'temperatureK' | 'lengthA' | 'volumeA3' | 'energyKJPerMol' | 'number';

/** A quantity read, or why it is none. */
export type QuantityResult =
  | { readonly ok: true; readonly value: number }
  | { readonly ok: false; readonly kind: 'syntax' | 'unit'; readonly reason: string };

/** Longest text that is tried; a quantity is a number and a unit or two. */
const LONGEST = 80;
const LARGEST_EXPONENT = 12;

/** Unit words that may be used, and the unit of the evaluator that each stands for. */
const UNIT_WORDS: ReadonlyMap<string, string> = new Map([
  ['D', 'pwDebye'],
  ['debye', 'pwDebye'],
  ['Debye', 'pwDebye'],
  ['e', 'pwCharge'],
  ['a0', 'pwBohr'],
  ['bohr', 'pwBohr'],
  ['Bohr', 'pwBohr'],
  ['angstrom', 'angstrom'],
  ['Angstrom', 'angstrom'],
  ['A', 'angstrom'],
  ['Å', 'angstrom'],
  ['pm', 'pm'],
  ['nm', 'nm'],
  ['cm', 'cm'],
  ['m', 'm'],
  ['C', 'C'],
  ['K', 'K'],
  ['degC', 'degC'],
  ['°C', 'degC'],
  ['degF', 'degF'],
  ['J', 'J'],
  ['kJ', 'kJ'],
  ['cal', 'pwCalorie'],
  ['kcal', 'pwKilocalorie'],
  ['mol', 'mol'],
  ['eV', 'pwElectronvoltPerMol'],
  ['meV', 'pwMillielectronvoltPerMol'],
  ['hartree', 'pwHartreePerMol'],
  ['mHartree', 'pwMillihartreePerMol'],
]);

/** The evaluator's unit in which each dimension is read, how large it is inside, and what `a.u.` means there. */
const TARGETS: Readonly<
  Record<Exclude<Dimension, 'number'>, { unit: string; atomic: string | null; unitsWanted: string }>
> = {
  dipoleEA: { unit: 'pwChargeAngstrom', atomic: 'pwAtomicDipole', unitsWanted: 'D, e*angstrom, a.u. or C*m' },
  temperatureK: { unit: 'K', atomic: null, unitsWanted: 'K or degC' },
  lengthA: { unit: 'angstrom', atomic: 'pwBohr', unitsWanted: 'angstrom, nm, pm or bohr' },
  volumeA3: { unit: 'angstrom^3', atomic: 'pwAtomicVolume', unitsWanted: 'angstrom^3 or a.u.' },
  energyKJPerMol: { unit: 'kJ/mol', atomic: 'pwHartreePerMol', unitsWanted: 'kJ/mol, kcal/mol, meV or hartree' },
};

type Value = EvaluatedValue;

let evaluator: UnitEvaluator | undefined;

/** Made at first need, since most files carry plain numbers alone. */
function theEvaluator(): UnitEvaluator {
  evaluator ??= createUnitEvaluator();
  return evaluator;
}

/**
 * Reads a number with an optional unit, such as `1.855`, `"1.855 D"`, `6.19e-30 C*m`, `25 degC`. A bare number is taken in the
 * unit of the dimension. Only numbers, the unit words above, + − * / ^ and parentheses are understood; the text never reaches a
 * general evaluator, and its length, nesting and exponents are bounded.
 *
 * @param dimension what it must be; the value comes back in the unit of its name
 * @param bareUnit size of one where no unit is written, in the unit of the dimension (default 1)
 */
export function readQuantity(text: string, dimension: Dimension, bareUnit = 1): QuantityResult {
  const plain = text.trim();
  if (plain.length > LONGEST) return { ok: false, kind: 'syntax', reason: 'It is too long for a number with a unit.' };
  const number = plainNumber(plain);
  if (!Number.isNaN(number)) {
    if (!Number.isFinite(number)) return { ok: false, kind: 'syntax', reason: 'It is not finite.' };
    return { ok: true, value: number * bareUnit };
  }
  if (dimension === 'number') return { ok: false, kind: 'syntax', reason: 'It is no number.' };
  const target = TARGETS[dimension];
  try {
    const value = new QuantityParser(plain, target.atomic).parse();
    if (typeof value === 'number') {
      return Number.isFinite(value)
        ? { ok: true, value: value * bareUnit }
        : { ok: false, kind: 'syntax', reason: 'It is not finite.' };
    }
    const inside = value.toNumber(target.unit);
    return Number.isFinite(inside)
      ? { ok: true, value: inside }
      : { ok: false, kind: 'syntax', reason: 'It is not finite.' };
  } catch (error) {
    if (error instanceof QuantityError) return { ok: false, kind: error.kind, reason: error.message };
    // The evaluator refuses units that do not fit together or are not of the dimension.
    return { ok: false, kind: 'unit', reason: `Its unit does not fit; use ${target.unitsWanted}.` };
  }
}

function plainNumber(text: string): number {
  return /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eEdD][+-]?\d+)?$/.test(text)
    ? Number(text.replace(/[dD]/, 'e'))
    : Number.NaN;
}

class QuantityError extends Error {
  readonly kind: 'syntax' | 'unit';

  constructor(kind: 'syntax' | 'unit', message: string) {
    super(message);
    this.kind = kind;
  }
}

const TOKEN =
  /\s*(?:(\d+\.?\d*(?:[eE][+-]?\d+)?|\.\d+(?:[eE][+-]?\d+)?)|(a\.u\.|[A-Za-zÅ°][A-Za-z0-9]*)|([-+*/^()·⋅]))/y;
const MOST_TOKENS = 40;
const DEEPEST = 8;

/** Recursive descent over the few tokens of a quantity; a blank between two factors multiplies them. */
class QuantityParser {
  readonly #tokens: string[] = [];
  readonly #atomic: string | null;
  readonly #math = theEvaluator();
  #at = 0;
  #depth = 0;

  constructor(text: string, atomic: string | null) {
    this.#atomic = atomic;
    TOKEN.lastIndex = 0;
    while (TOKEN.lastIndex < text.length) {
      const from = TOKEN.lastIndex;
      const match = TOKEN.exec(text);
      if (match === null) throw new QuantityError('syntax', `"${text.slice(from).trim()}" is no number or unit.`);
      this.#tokens.push(match[1] ?? match[2] ?? match[3]!);
      if (this.#tokens.length > MOST_TOKENS)
        throw new QuantityError('syntax', 'It is too long for a number with a unit.');
    }
  }

  parse(): Value {
    const value = this.#sum();
    if (this.#at < this.#tokens.length)
      throw new QuantityError('syntax', `"${this.#tokens[this.#at]}" is out of place.`);
    return value;
  }

  #sum(): Value {
    let value = this.#product();
    for (let token = this.#tokens[this.#at]; token === '+' || token === '-'; token = this.#tokens[this.#at]) {
      this.#at++;
      const right = this.#product();
      value = token === '+' ? this.#math.add(value, right) : this.#math.subtract(value, right);
    }
    return value;
  }

  #product(): Value {
    let value = this.#signed();
    for (;;) {
      const token = this.#tokens[this.#at];
      if (token === '*' || token === '·' || token === '⋅' || token === '/') {
        this.#at++;
        const right = this.#signed();
        value = token === '/' ? this.#math.divide(value, right) : this.#times(value, right);
      } else if (token !== undefined && !/^[-+^)]$/.test(token)) value = this.#times(value, this.#power());
      else return value;
    }
  }

  /** A bare temperature in °C or °F must be made at once: its zero is not at zero kelvin. */
  #times(left: Value, right: Value): Value {
    if (typeof left === 'number' && typeof right !== 'number') {
      const unit = right.formatUnits();
      if (unit === 'degC' || unit === 'degF') return this.#math.unit(left, unit);
    }
    return this.#math.multiply(left, right);
  }

  #signed(): Value {
    const token = this.#tokens[this.#at];
    if (token !== '-' && token !== '+') return this.#power();
    this.#at++;
    if (++this.#depth > DEEPEST) throw new QuantityError('syntax', 'It is nested too deeply.');
    const value = this.#signed();
    this.#depth--;
    return token === '-' ? this.#math.multiply(-1, value) : value;
  }

  #power(): Value {
    const base = this.#atom();
    if (this.#tokens[this.#at] !== '^') return base;
    this.#at++;
    const exponent = this.#signed();
    if (typeof exponent !== 'number' || !(Math.abs(exponent) <= LARGEST_EXPONENT)) {
      throw new QuantityError('syntax', `An exponent must be a number up to ${LARGEST_EXPONENT}.`);
    }
    return this.#math.pow(base, exponent);
  }

  #atom(): Value {
    const token = this.#tokens[this.#at++];
    if (token === undefined) throw new QuantityError('syntax', 'It ends too early.');
    if (/^[.\d]/.test(token)) return Number(token);
    if (token === '(') {
      if (++this.#depth > DEEPEST) throw new QuantityError('syntax', 'It is nested too deeply.');
      const value = this.#sum();
      this.#depth--;
      if (this.#tokens[this.#at++] !== ')') throw new QuantityError('syntax', 'A parenthesis is not closed.');
      return value;
    }
    if (!/^[A-Za-zÅ°]/.test(token)) throw new QuantityError('syntax', `"${token}" is out of place.`);
    const name = token === 'a.u.' || token === 'au' ? this.#atomic : UNIT_WORDS.get(token);
    if (name === undefined || name === null)
      throw new QuantityError('unit', `"${token}" is no unit that can be used here.`);
    return this.#math.unit(1, name);
  }
}
