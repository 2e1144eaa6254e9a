import { ELEMENT_ROWS } from '../physics/element-table';
import { DEFAULT_VDW_RADIUS_A, VDW_RADIUS_A } from '../physics/elements';
import type { Completion } from './completion';

/** Elements that most files are made of, in the order in which they are offered. */
const COMMON = [1, 6, 7, 8, 9, 15, 16, 17, 35, 53];

const RADIUS_SOURCES = {
  B: 'Bondi 1964',
  M: 'Mantina et al. 2009',
  A: 'Alvarez 2013',
  '-': 'none is published',
} as const;

/** Element symbols for the first field of an atom line; those given first come first, then common ones. */
export function elementCompletions(before: string, after: string, first: readonly number[]): Completion[] {
  const word = /^\s*([A-Za-z]{0,2})$/.exec(before)?.[1];
  if (word === undefined || /^\S/.test(after)) return [];
  const all = Array.from(ELEMENT_ROWS, (_, index) => index + 1);
  return [...new Set([...first, ...COMMON, ...all])].map((z) => {
    const [symbol, name] = ELEMENT_ROWS[z - 1]!;
    return {
      label: symbol,
      kind: 'element',
      detail: name,
      documentation: elementDocumentation(z),
      insert: symbol,
      template: null,
      replaced: word.length,
    };
  });
}

function elementDocumentation(z: number): string {
  const [, name, , , radiusA, source] = ELEMENT_ROWS[z - 1]!;
  const radius = radiusA === null ? DEFAULT_VDW_RADIUS_A : VDW_RADIUS_A[z]!;
  return `**${name}**, atomic number ${z}\n\nVan der Waals radius ${radius.toFixed(2)} Å (${RADIUS_SOURCES[source]}).`;
}
