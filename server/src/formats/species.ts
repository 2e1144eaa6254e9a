import { atomicNumberOf, MAX_ATOMIC_NUMBER, symbolOf } from '../physics/elements';
import { scanCount } from '../text/numbers';
import type { Snapshot } from '../text/snapshot';
import { AtomFlag } from './tree';

/** Element and flags of one word, packed: atomic number + 256·flags. */
export type PackedSpecies = number;

const LOWER_CASE = 32;
const LETTER_A = 97;

/** Atomic number by one letter, or two: index 27·first + second, second 0 for none. */
const BY_LETTERS = new Uint8Array(27 * 27);
for (let z = 1; z <= MAX_ATOMIC_NUMBER; z++) {
  const symbol = symbolOf(z).toLowerCase();
  BY_LETTERS[27 * (symbol.charCodeAt(0) - LETTER_A) + (symbol.length > 1 ? symbol.charCodeAt(1) - LETTER_A + 1 : 0)] =
    z;
}

const GHOST = AtomFlag.ghost << 8;
const UNKNOWN = AtomFlag.unknownElement << 8;

function letterIndex(unit: number): number {
  const index = (unit | LOWER_CASE) - LETTER_A;
  return index >= 0 && index < 26 && unit < 128 ? index : -1;
}

/**
 * Reads the first field of an atom line: an element symbol in any case, perhaps with a number or mark (`C1`, `O_2`, `Fe2+`); an
 * atomic number; D or T; a ghost (`X`, `Bq`, `Gh…`, 0). Anything else is an unknown element.
 */
export function readSpecies(snapshot: Snapshot, start: number, end: number): PackedSpecies {
  const { bytes } = snapshot;
  const first = letterIndex(bytes[start]!);
  if (first >= 0) {
    if (end === start + 1) {
      const z = BY_LETTERS[27 * first]!;
      if (z > 0) return z;
    } else {
      const second = letterIndex(bytes[start + 1]!);
      if (second >= 0 && end === start + 2) {
        const z = BY_LETTERS[27 * first + second + 1]!;
        if (z > 0) return z;
      }
    }
    return readLabel(end - start > 32 ? '' : snapshot.slice(start, end));
  }
  const z = scanCount(bytes, start, end);
  if (z === 0) return GHOST;
  return z > 0 && z <= MAX_ATOMIC_NUMBER ? z : UNKNOWN;
}

/** Atomic number of a symbol of one letter, or of two; 0 for anything else. `second` is a blank where there is none. */
export function symbolNumber(first: number, second: number): number {
  const high = (first | LOWER_CASE) - LETTER_A;
  if (high < 0 || high > 25 || first > 127) return 0;
  if (second === LOWER_CASE) return BY_LETTERS[27 * high]!;
  const low = (second | LOWER_CASE) - LETTER_A;
  return low < 0 || low > 25 || second > 127 ? 0 : BY_LETTERS[27 * high + low + 1]!;
}

function readLabel(label: string): PackedSpecies {
  if (/^(?:x|xx|bq)(?:[^a-z].*)?$/i.test(label) || /^(?:bq|gh)/i.test(label)) return GHOST;
  const letters = /^([a-z]+)(?:[^a-z].*)?$/i.exec(label)?.[1] ?? '';
  if (/^d$/i.test(letters)) return 1 + (AtomFlag.deuterium << 8);
  if (/^t$/i.test(letters)) return 1 + (AtomFlag.tritium << 8);
  const z = atomicNumberOf(letters);
  return z > 0 ? z : UNKNOWN;
}

/** The symbol an unknown word probably stands for: its longest beginning that is a symbol, or ''. */
export function likelySymbol(word: string): string {
  for (const length of [2, 1]) {
    const z = atomicNumberOf(word.slice(0, length));
    if (z > 0 && z <= 103 && /^[A-Z]/i.test(word)) return symbolOf(z);
  }
  return '';
}
