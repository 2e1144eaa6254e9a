import type { Advice } from '../../server/src/analysis/advice';
import type { Contact } from '../../server/src/analysis/contact';
import type { Regime } from '../../server/src/analysis/reference';
import { csvLine, type Field } from '../../server/src/features/csv';
import { fixed, unitText } from '../../server/src/features/number-text';
import type { PairRecord } from '../../server/src/features/records';
import type { PanelAnswer } from '../../server/src/lsp/protocol';

/** How energies are written. */
export type Energies = Pick<PanelAnswer, 'unit' | 'unitsPerKJPerMol' | 'kTKJPerMol'>;

const MARKS: Readonly<Record<Advice, string>> = { accept: '○', review: '◐', compute: '●', repair: '✕' };

/** A mark beside the word, so that a column can be read without colour. */
export function adviceMark(advice: Advice | null): string {
  return advice === null ? '–' : MARKS[advice];
}

export const ADVICE_WORDS: Readonly<Record<Advice, string>> = {
  accept: 'the estimate may be used',
  review: 'look at it before you decide',
  compute: 'worth a quantum calculation',
  repair: 'mend the input first',
};

export const REGIME_WORDS: Readonly<Record<Regime, string>> = {
  far: 'the point dipole holds',
  edge: 'the point dipole is at its edge',
  near: 'the point dipole does not hold',
};

export const CONTACT_WORDS: Readonly<Record<Contact, string>> = {
  apart: 'apart',
  touching: 'touching',
  clash: 'clash',
  bonded: 'bonded',
};

/** Decimals that show an energy of about this size to a hundredth of kT or so. */
function decimals({ unitsPerKJPerMol, kTKJPerMol }: Energies): number {
  const thermal = unitsPerKJPerMol * kTKJPerMol;
  return Math.max(0, Math.min(4, 2 - Math.floor(Math.log10(thermal) + 1e-9)));
}

/** An energy without its unit. */
export function energyNumber(energies: Energies, energyKJPerMol: number | null): string {
  const { unitsPerKJPerMol } = energies;
  return fixed(energyKJPerMol === null ? null : energyKJPerMol * unitsPerKJPerMol, decimals(energies));
}

/** An energy with its unit. */
export function energyText(energies: Energies, energyKJPerMol: number | null): string {
  return `${energyNumber(energies, energyKJPerMol)} ${unitText(energies.unit)}`;
}

/** What the columns of a table of pairs mean, as far as their heads leave open. */
export function tableWords(energies: Energies): string {
  return `E and point in ${unitText(energies.unit)}; ~ is a point estimate without a reference.`;
}

/** The size of an energy beside kT. */
export function multipleOfKT({ kTKJPerMol }: Energies, energyKJPerMol: number): string {
  return `${fixed(Math.abs(energyKJPerMol) / kTKJPerMol, 1)} kT`;
}

/** The energy that a pair is judged by, kJ/mol: the reference, else the point estimate. */
export function energyOf(pair: PairRecord): number | null {
  return pair.referenceKJPerMol ?? pair.energyKJPerMol.pointDipole;
}

/** What the sign of an energy means. */
export function signWord(energyKJPerMol: number): string {
  return energyKJPerMol < 0 ? 'attractive' : energyKJPerMol > 0 ? 'repulsive' : 'neither attractive nor repulsive';
}

/** Rows as CSV, numbers with a plain minus sign. */
export function csv(rows: readonly (readonly Field[])[]): string {
  return rows.map(csvLine).join('');
}
