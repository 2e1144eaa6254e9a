import { atomicNumberOf } from '../../physics/elements';
import type { PackedSpecies } from '../species';
import { AtomFlag } from '../tree';

/** Residues whose atom names are known to begin with the element (amino acids, nucleotides, water). */
const POLYMER_RESIDUES = new Set(
  (
    'ALA ARG ASN ASP CYS GLN GLU GLY HIS ILE LEU LYS MET PHE PRO SER THR TRP TYR VAL MSE SEC PYL ASX GLX ' +
    'HID HIE HIP CYX ASH GLH LYN ACE NME NH2 A C G U I DA DC DG DT DU DI HOH WAT DOD H2O TIP3 TIP SOL'
  ).split(' '),
);

const TWO_LETTERS_IN_POLYMERS = new Set(['SE']);

/**
 * Infers the element from an atom name where columns 77–78 are blank: the symbol is right-justified in columns 13–14, so a
 * name that begins in column 14 starts with a one-letter symbol, and one that begins in column 13 with a two-letter symbol, or is
 * a four-character hydrogen name (wwPDB format 3.30, ATOM record).
 *
 * @param name the four characters of columns 13–16
 */
export function elementFromName(name: string, residueName: string): PackedSpecies {
  const field = name.padEnd(4);
  const letters = field.replace(/[^A-Za-z]/g, '');
  if (letters === '') return AtomFlag.unknownElement << 8;
  const startsLate = field[0] === ' ' || /\d/.test(field[0]!);
  const polymer = POLYMER_RESIDUES.has(residueName);
  const two = field.slice(0, 2);
  if (!startsLate && /^[A-Za-z]{2}/.test(two)) {
    const fourCharacters = field.trim().length === 4;
    if (/^[Hh]/.test(two) && (fourCharacters || polymer)) return 1;
    const z = atomicNumberOf(two);
    if (z > 0 && (!polymer || TWO_LETTERS_IN_POLYMERS.has(two.toUpperCase()))) return z;
  }
  const first = letters[0]!;
  if (/^d$/i.test(first)) return 1 + (AtomFlag.deuterium << 8);
  const z = atomicNumberOf(first);
  return z > 0 ? z : AtomFlag.unknownElement << 8;
}
