import { ELEMENT_ROWS } from './element-table';

/** Highest atomic number in the table. */
export const MAX_ATOMIC_NUMBER = ELEMENT_ROWS.length;

/** Van der Waals radius taken where none is published, Å (common practice, no source). */
export const DEFAULT_VDW_RADIUS_A = 2;

function column(pick: (row: (typeof ELEMENT_ROWS)[number]) => number | null, missing: number): Float64Array {
  return Float64Array.from([missing, ...ELEMENT_ROWS.map((row) => pick(row) ?? missing)]);
}

/** Standard atomic weight by atomic number, u; 0 at index 0 (ghosts and unknown elements). */
export const ATOMIC_WEIGHT_U = column((row) => row[2], 0);

/** Covalent radius by atomic number, Å; NaN where none is published. */
export const COVALENT_RADIUS_A = column((row) => row[3], Number.NaN);

/** Van der Waals radius by atomic number, Å; {@link DEFAULT_VDW_RADIUS_A} where none is published. */
export const VDW_RADIUS_A = column((row) => row[4], DEFAULT_VDW_RADIUS_A);

/** How an element takes part in bonds found by distance. */
export const BondClass = { nonMetal: 0, metal: 1, groupOneOrTwo: 2 } as const;

const GROUP_1 = [3, 11, 19, 37, 55, 87];
const GROUP_2 = [4, 12, 20, 38, 56, 88];
const GROUP_17 = [9, 17, 35, 53, 85, 117];
const NOBLE_GASES = [2, 10, 18, 36, 54, 86, 118];
const P_BLOCK_METALS = [13, 31, 49, 50, 81, 82, 83, 84, 113, 114, 115, 116];

/** {@link BondClass} by atomic number. Boron, Si, Ge, As, Sb, Te and At count as non-metals. */
export const BOND_CLASS = new Uint8Array(MAX_ATOMIC_NUMBER + 1);
for (let z = 1; z <= MAX_ATOMIC_NUMBER; z++) {
  const dOrFBlock = (z >= 21 && z <= 30) || (z >= 39 && z <= 48) || (z >= 57 && z <= 80) || (z >= 89 && z <= 112);
  if (dOrFBlock || P_BLOCK_METALS.includes(z)) BOND_CLASS[z] = BondClass.metal;
}
for (const z of [...GROUP_1, ...GROUP_2]) BOND_CLASS[z] = BondClass.groupOneOrTwo;

export function isMetal(z: number): boolean {
  return (BOND_CLASS[z] ?? 0) !== BondClass.nonMetal;
}

export function isNobleGas(z: number): boolean {
  return NOBLE_GASES.includes(z);
}

/** Charge of the usual monatomic ion of groups 1, 2 and 17, e; 0 for every other element (common practice, no source). */
export function usualIonCharge(z: number): number {
  if (GROUP_1.includes(z)) return 1;
  if (GROUP_2.includes(z)) return 2;
  return GROUP_17.includes(z) ? -1 : 0;
}

const BY_SYMBOL = new Map<string, number>();
for (const [index, row] of ELEMENT_ROWS.entries()) BY_SYMBOL.set(row[0].toLowerCase(), index + 1);

/** Atomic number of an element symbol written in any case, or 0 where there is no such element. */
export function atomicNumberOf(symbol: string): number {
  return BY_SYMBOL.get(symbol.toLowerCase()) ?? 0;
}

/** Symbol of an element; `X` for 0. */
export function symbolOf(z: number): string {
  return ELEMENT_ROWS[z - 1]?.[0] ?? 'X';
}

/** English name of an element (IUPAC spelling). */
export function elementName(z: number): string {
  return ELEMENT_ROWS[z - 1]?.[1] ?? 'unknown';
}
