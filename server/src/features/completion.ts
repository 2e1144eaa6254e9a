import { FINDING_CODES } from '../base/catalogue';
import { FILE_KEYS, FRAME_KEYS, SELECTED_KEYS } from '../formats/annotation/keys';
import type { Language } from '../formats/tree';
import { MEDIA } from '../physics/media';
import { DIPOLE_UNITS } from '../physics/units';
import { KEY_DOCS } from './key-docs';

/** A word that may stand at a place. */
export interface Completion {
  readonly label: string;
  readonly kind: 'key' | 'value';
  readonly detail: string;
  /** What is put in place of the word that is there: a key comes with its equals sign. */
  readonly insert: string;
  /** How many units before the place the word begins that is replaced. */
  readonly replaced: number;
}

const PERIODIC = ['true', 'false'];

/** The values that some keys take. */
const VALUES: Readonly<Record<string, () => readonly string[]>> = {
  dipole_unit: () => [...DIPOLE_UNITS.keys()],
  relative_permittivity: () => MEDIA.flatMap(({ name, otherNames }) => [name, ...otherNames]),
  silence: () => FINDING_CODES,
  periodic: () => PERIODIC,
  charge_column: () => ['occupancy', 'bfactor'],
};

const REMARK = /^REMARK {1,3}(?:[6-9]|[1-9]\d) /;

/**
 * The keys and values that may follow the beginning of a line: of a comment line in XYZ, of a REMARK in PDB. `isAnnotation` tells whether keys
 * may stand on the line at all.
 */
export function completionsAfter(before: string, language: Language, isAnnotation: boolean): Completion[] {
  if (!(language === 'pdb' ? REMARK.test(before) : isAnnotation)) return [];
  const value = /(\w+)=(?:"[^"]*?|)([^\s"=,]*)$/.exec(before);
  if (value !== null) {
    const [, key = '', word = ''] = value;
    return (VALUES[key]?.() ?? []).map((label) => ({
      label,
      kind: 'value',
      detail: `${key}`,
      insert: label,
      replaced: word.length,
    }));
  }
  const word = /(?:^|\s)(\w*)$/.exec(before)?.[1];
  if (word === undefined) return [];
  const given = new Set([...before.matchAll(/(\w+)=/g)].map(([, key]) => key));
  const keys = language === 'xyz' ? FRAME_KEYS : [...new Set<string>([...SELECTED_KEYS, ...FILE_KEYS])];
  return keys
    .filter((key) => !given.has(key))
    .map((label) => ({
      label,
      kind: 'key',
      detail: KEY_DOCS[label] ?? '',
      insert: `${label}=`,
      replaced: word.length,
    }));
}
