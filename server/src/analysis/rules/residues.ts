import type { Residue } from '../../formats/tree';
import type { RuleContext } from './context';

/**
 * Heavy atoms of the standard amino acids besides the backbone N, CA, C, O.
 * Source: wwPDB Chemical Component Dictionary, atom names of the components (https://www.wwpdb.org/data/ccd).
 */
const SIDE_CHAINS: Readonly<Record<string, string>> = {
  ALA: 'CB',
  ARG: 'CB CG CD NE CZ NH1 NH2',
  ASN: 'CB CG OD1 ND2',
  ASP: 'CB CG OD1 OD2',
  CYS: 'CB SG',
  GLN: 'CB CG CD OE1 NE2',
  GLU: 'CB CG CD OE1 OE2',
  GLY: '',
  HIS: 'CB CG ND1 CD2 CE1 NE2',
  ILE: 'CB CG1 CG2 CD1',
  LEU: 'CB CG CD1 CD2',
  LYS: 'CB CG CD CE NZ',
  MET: 'CB CG SD CE',
  PHE: 'CB CG CD1 CD2 CE1 CE2 CZ',
  PRO: 'CB CG CD',
  SER: 'CB OG',
  THR: 'CB OG1 CG2',
  TRP: 'CB CG CD1 CD2 NE1 CE2 CE3 CZ2 CZ3 CH2',
  TYR: 'CB CG CD1 CD2 CE1 CE2 CZ OH',
  VAL: 'CB CG1 CG2',
};

const TEMPLATES: ReadonlyMap<string, readonly string[]> = new Map(
  Object.entries(SIDE_CHAINS).map(([name, atoms]) => [name, `N CA C O ${atoms}`.trim().split(' ')]),
);

const WATERS = new Set(['HOH', 'WAT', 'DOD', 'H2O', 'TIP3', 'TIP', 'SOL']);

/** Reports standard residues without some of their heavy atoms, and residues and waters without any hydrogen. */
export function reportResidues(context: RuleContext): void {
  const { tree } = context.frame.model;
  if (tree.residues === null) return;
  let bare = 0;
  let firstBare: Residue | null = null;
  for (const residue of tree.residues) {
    const template = TEMPLATES.get(residue.name);
    if (template !== undefined) reportMissing(context, residue, template);
    if (template === undefined && !WATERS.has(residue.name)) continue;
    if (residue.atoms.some((atom) => tree.atoms.element[atom] === 1)) continue;
    bare++;
    firstBare ??= residue;
  }
  if (firstBare === null || !context.isNews('hydrogens')) return;
  const place = firstBare;
  context.findings.add('hydrogens-missing', tree.fieldSpan(place.atoms[0]!, 'line'), () => {
    const many = bare === 1 ? 'One residue or water has' : `${bare} residues and waters have`;
    return `${many} no hydrogen atom, the first of them ${label(place)}.`;
  });
}

function reportMissing(context: RuleContext, residue: Residue, template: readonly string[]): void {
  const missing = template.filter((name) => !residue.atomNames.includes(name));
  // The last residue of a chain may write its carboxylate oxygens in other names.
  if (missing.length === 0 || (missing.length === 1 && missing[0] === 'O' && residue.atomNames.includes('OXT'))) return;
  if (!context.isNews(`missing ${label(residue)}`)) return;
  const { tree } = context.frame.model;
  context.findings.add('atoms-missing', tree.fieldSpan(residue.atoms[0]!, 'line'), () => {
    return `${label(residue)} has no ${missing.join(', ')}.`;
  });
}

function label({ chain, name, number, insertion }: Residue): string {
  return `${chain || '_'}:${name}:${number}${insertion}`;
}
