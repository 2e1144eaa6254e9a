import type { FindingDetail } from '../../base/finding';
import type { Span } from '../../base/span';
import { findMedium, MEDIA } from '../../physics/media';
import { type Dimension, readQuantity } from '../../physics/quantity';
import { standardDipoleUnit } from '../../physics/units';
import { editDistance } from './keys';

/**
 * What a value that cannot be read is surely meant to be; `null` where that is not clear. Nothing here guesses a number: only the way
 * it is written is put right.
 */

/** The remedy that writes what was meant; none where that is not clear. */
export function replacement(span: Span, meant: string | null | undefined): FindingDetail {
  if (meant === null || meant === undefined || meant === '') return {};
  return { fix: { title: `Replace by ${meant}`, edits: [{ start: span.start, end: span.end, text: meant }] } };
}

/** The one word of a list that another is nearest to, or `null` where none is near or two are equally near. */
export function nearestWord(word: string, words: Iterable<string>): string | null {
  const allowed = word.length < 4 ? 1 : 2;
  let best: string | null = null;
  let bestDistance = allowed + 1;
  let isTie = false;
  for (const candidate of words) {
    const distance = editDistance(word.toLowerCase(), candidate.toLowerCase(), allowed);
    if (distance > allowed || distance > bestDistance || distance >= candidate.length) continue;
    isTie = distance === bestDistance && best?.toLowerCase() !== candidate.toLowerCase();
    if (distance < bestDistance) best = candidate;
    bestDistance = distance;
  }
  return isTie ? null : best;
}

const MINUS_SIGNS = /[−–]/g;
const PLAIN = /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eEdD][+-]?\d+)?$/;

/** A number written with a decimal comma, a typographic minus, its sign behind, or one of some units behind. */
export function meantNumber(text: string, units: readonly string[] = []): string | null {
  let meant = text.replace(MINUS_SIGNS, '-').trim();
  for (const unit of units) {
    if (!meant.endsWith(unit)) continue;
    meant = meant.slice(0, -unit.length).trimEnd();
    break;
  }
  if (/^[+-]?\d+,\d+$/.test(meant)) meant = meant.replace(',', '.');
  const behind = /^(\d+(?:\.\d*)?)([+-])$/.exec(meant);
  if (behind !== null) meant = `${behind[2] === '-' ? '-' : ''}${behind[1]}`;
  return meant !== text && PLAIN.test(meant) ? meant : null;
}

/** A charge, which may have its unit behind it. */
export function meantCharge(text: string): string | null {
  return meantNumber(text, ['e']);
}

const MULTIPLICITIES = ['singlet', 'doublet', 'triplet', 'quartet', 'quintet', 'sextet', 'septet'];

/** The multiplicity that is meant, by its word or its number; `null` where that is not sure. */
export function meantMultiplicity(text: string): string | null {
  const index = MULTIPLICITIES.indexOf(nearestWord(text.trim(), MULTIPLICITIES) ?? '');
  return index >= 0 ? String(index + 1) : meantNumber(text);
}

const FLAGS: ReadonlyMap<string, string> = new Map([
  ['on', 'true'],
  ['off', 'false'],
  ['y', 'true'],
  ['n', 'false'],
  ['.true.', 'true'],
  ['.false.', 'false'],
]);

/** `true` or `false`, whichever is meant; `null` where that is not sure. */
export function meantFlag(text: string): string | null {
  const word = text.trim().toLowerCase();
  const near = nearestWord(word, ['true', 'false']);
  return FLAGS.get(word) ?? (word.length > 2 ? near : null);
}

/** The number or the medium that is meant; `null` where that is not sure. */
export function meantPermittivity(text: string): string | null {
  const number = meantNumber(text);
  if (number !== null) return Number(number) >= 1 ? number : null;
  const words = text.trim().replace(/[\s_]+/g, '-');
  if (words.length < 4 || /^[\d.+-]/.test(words)) return null;
  const names = MEDIA.flatMap(({ name, otherNames }) => [name, ...otherNames]);
  const meant = nearestWord(words, names);
  return meant !== null && findMedium(meant) !== undefined ? meant : null;
}

const DIPOLE_UNIT_WORDS = ['D', 'debye', 'e*angstrom', 'a.u.', 'e*bohr', 'C*m', 'coulomb*metre'];

/** The standard spelling of a dipole unit that is nearly written so. */
export function meantDipoleUnit(text: string): string | null {
  const meant = nearestWord(text.trim().replace(/[·⋅ ]/g, '*'), DIPOLE_UNIT_WORDS);
  return meant === null ? null : (standardDipoleUnit(meant) ?? null);
}

/** Unit words of a quantity, those first that say what is usual. */
const UNITS: Readonly<Partial<Record<Dimension, readonly string[]>>> = {
  dipoleEA: ['D', 'debye', 'angstrom', 'bohr', 'a.u.', 'C', 'm', 'e'],
  temperatureK: ['K', 'degC', 'degF'],
  volumeA3: ['angstrom', 'bohr', 'nm', 'pm', 'a.u.'],
};

const OTHER_WORDS: Readonly<Partial<Record<Dimension, ReadonlyMap<string, string>>>> = {
  temperatureK: new Map([
    ['kelvin', 'K'],
    ['kelvins', 'K'],
    ['celsius', 'degC'],
    ['c', 'degC'],
    ['fahrenheit', 'degF'],
    ['f', 'degF'],
  ]),
};

const UNIT_WORD = /a\.u\.?|[A-Za-zÅ°][A-Za-z0-9]*/g;

/** A quantity with its unit words put right; what the whole then says is read once more. */
export function meantQuantity(text: string, dimension: Dimension): string | null {
  const number = meantNumber(text);
  if (number !== null) return number;
  const words = UNITS[dimension] ?? [];
  const meant = text.replace(UNIT_WORD, (word, at: number) => {
    // An exponent is no unit.
    if (/^[eEdD]\d*$/.test(word) && /[\d.]$/.test(text.slice(0, at))) return word;
    const other = OTHER_WORDS[dimension]?.get(word.toLowerCase());
    return other ?? (words.includes(word) ? word : (nearestWord(word, words) ?? word));
  });
  return meant !== text && readQuantity(meant, dimension).ok ? meant : null;
}

/** An axis with an arrow of another form, or one that points the other way. */
export function meantAxis(text: string): string | null {
  const meant = text.replace(/\s*(?:[-=]+>|→)\s*/, '>');
  if (meant !== text) return /^[^<>]+>[^<>]+$/.test(meant) ? meant : null;
  const turned = /^\s*([^<>\s]+?)\s*(?:<-*|←)\s*([^<>\s]+)\s*$/.exec(text);
  return turned === null ? null : `${turned[2]}>${turned[1]}`;
}

/** A selector with other marks between its parts, or without its chain. */
export function meantSelector(text: string): string | null {
  const parts = text.trim().split(/[:/.,;|]+/);
  const isPlace = (part: string | undefined) => part !== undefined && /^(?:\*|-?\d+[A-Za-z]?)$/.test(part);
  const isName = (part: string | undefined) => part !== undefined && /^(?:\*|[A-Za-z0-9]{1,4})$/.test(part);
  if (parts.length === 3 && isName(parts[1]) && isPlace(parts[2]) && parts[0] !== '') return parts.join(':');
  return parts.length === 2 && isName(parts[0]) && isPlace(parts[1]) ? `*:${parts.join(':')}` : null;
}

const TRUE_WORDS = /^(?:t|true|y|yes|on|1|p|periodic)$/;
const FALSE_WORDS = /^(?:f|false|n|no|off|0)$/;

/** Periodic directions as one flag for all, in other words for true and false, or by the letters of the periodic ones. */
export function meantPeriodicity(text: string): string | null {
  const words = text.toLowerCase().match(/[^\s,[\]{}"']+/g) ?? [];
  if (words.length === 1 && words[0] !== '' && /^x?y?z?$/.test(words[0]!)) {
    return ['x', 'y', 'z'].map((axis) => (words[0]!.includes(axis) ? 'T' : 'F')).join(' ');
  }
  const flags = words.map((word) => (TRUE_WORDS.test(word) ? 'T' : FALSE_WORDS.test(word) ? 'F' : '?'));
  if (flags.includes('?')) return null;
  if (flags.length === 1) return [flags[0], flags[0], flags[0]].join(' ');
  return flags.length === 3 ? flags.join(' ') : null;
}

const CHARGE_COLUMN_WORDS: ReadonlyMap<string, string> = new Map([
  ['occupancy', 'occupancy'],
  ['occ', 'occupancy'],
  ['bfactor', 'bfactor'],
  ['b-factor', 'bfactor'],
  ['b_factor', 'bfactor'],
  ['tempfactor', 'bfactor'],
  ['beta', 'bfactor'],
]);

/** The column of a PDB file that is meant; `null` where that is not sure. */
export function meantChargeColumn(text: string): string | null {
  const word = text.trim().toLowerCase();
  const near = CHARGE_COLUMN_WORDS.get(word) ?? nearestWord(word, ['occupancy', 'bfactor']);
  return near ?? (/^\d{1,3}\s*[:–.]+\s*\d{1,3}$/.test(word) ? word.replace(/\s*[:–.]+\s*/, '-') : null);
}
