/** How much a finding weighs. */
export type Severity = 'error' | 'warning' | 'information' | 'hint';

export const SEVERITIES: readonly Severity[] = ['error', 'warning', 'information', 'hint'];

/** One kind of finding: the stable code's severity, what it means and what to do. */
export interface CatalogueEntry {
  readonly severity: Severity;
  /** What is wrong, in a few words. */
  readonly title: string;
  /** Why it is reported; for the documentation. */
  readonly meaning: string;
  /** What to do; the last sentence of every message. */
  readonly remedy: string;
}

/**
 * Every finding there is, by its stable code. The README's page of findings and the rules of the code-scanning report are made
 * from this table, and so is the last sentence of every message.
 */
export const CATALOGUE = {
  'no-frame': {
    severity: 'error',
    title: 'No coordinates',
    meaning: 'The file holds no atom that can be read: it is empty, cut short, or no coordinate file.',
    remedy: 'Give a file in the XYZ, extended XYZ or PDB format.',
  },
  'not-text': {
    severity: 'error',
    title: 'Not a text file',
    meaning: 'The file holds NUL bytes or is mostly unprintable: an image, an archive or another binary file.',
    remedy: 'Give a file in the XYZ, extended XYZ or PDB format.',
  },
  'count-wrong': {
    severity: 'error',
    title: 'Atom count wrong',
    meaning: 'The count line and the number of atom lines of the frame differ. The frame is read by its lines.',
    remedy: 'Correct the count, or restore the missing lines.',
  },
  'number-unreadable': {
    severity: 'error',
    title: 'Number unreadable',
    meaning:
      'A field that must hold a finite decimal number holds something else. The atom is left out of the analysis.',
    remedy: 'Write a decimal number.',
  },
  'field-missing': {
    severity: 'error',
    title: 'Field missing',
    meaning: 'An atom line ends before all its fields are given, or is blank.',
    remedy: 'Complete the line or remove it.',
  },
  'element-unknown': {
    severity: 'error',
    title: 'Unknown element',
    meaning: 'The first field (PDB: columns 77–78, else the atom name) names no element and no ghost atom.',
    remedy: 'Write an element symbol, an atomic number, or X for a ghost atom.',
  },
  'columns-off': {
    severity: 'error',
    title: 'Columns off',
    meaning:
      'The columns are not where the format puts them: a `Properties` value that does not describe the atom lines, or a PDB line whose numbers straddle the fixed columns.',
    remedy: 'Put every field into its columns.',
  },
  'array-length': {
    severity: 'error',
    title: 'Array of the wrong length',
    meaning:
      'A list does not have one entry (three for vectors, nine for a cell) for each thing it describes. The key is ignored.',
    remedy: 'Give one entry for each; `nan` stands for "not given".',
  },
  'value-invalid': {
    severity: 'error',
    title: 'Value not allowed',
    meaning: 'A key of ours has a value outside its range or of the wrong kind. The key is ignored.',
    remedy: 'Correct the value or remove the key.',
  },
  'unit-unknown': {
    severity: 'error',
    title: 'Unknown unit',
    meaning: 'A unit is none of those that the quantity can be given in. The quantity is ignored.',
    remedy: 'Give a unit of the quantity: D, e*angstrom, a.u. or C*m for dipoles, K or degC for temperatures.',
  },
  'selector-unmatched': {
    severity: 'error',
    title: 'Selector matches nothing',
    meaning:
      'A REMARK annotation selects a fragment (chain:residue:number), or a kind_* key a composition, that is not there.',
    remedy: 'Name what the file holds; in a selector `*` matches any part and `_` a blank chain.',
  },
  'key-repeated': {
    severity: 'error',
    title: 'Key given twice',
    meaning: 'The same key is given twice for the same frame or fragment. The first one is used.',
    remedy: 'Remove one of the two.',
  },
  'fragments-overlap': {
    severity: 'error',
    title: 'Fragments overlap',
    meaning: 'An atom is listed in two fragments. It stays in the first.',
    remedy: 'List every atom once.',
  },
  'cell-unusable': {
    severity: 'error',
    title: 'Cell unusable',
    meaning:
      'The cell has no volume, is not finite, or is thinner than any atom in a periodic direction. The frame is treated as not periodic.',
    remedy: 'Correct the cell vectors, or switch the periodic direction off.',
  },
  'atoms-coincident': {
    severity: 'error',
    title: 'Atoms at one point',
    meaning: 'Two atoms are less than 0.1 Å apart.',
    remedy: 'Remove or move one of them.',
  },
  clash: {
    severity: 'error',
    title: 'Clash',
    meaning:
      'Two fragments come closer than real ones do (r below 0.55 of the sum of the van der Waals radii; with metals, between opposite ions and for H beside N, O, F, S, Cl, Br, I below 0.75 of the sum of the covalent radii).',
    remedy: 'Move the fragments apart; no estimate holds here.',
  },
  'too-dense': {
    severity: 'error',
    title: 'Atoms far too dense',
    meaning:
      'The atoms lie many times denser than in any material, so neighbours cannot be told apart. The frame is not analysed.',
    remedy: 'Check the unit of the coordinates (they are read as Å).',
  },
  'fragments-joined': {
    severity: 'warning',
    title: 'Declared fragments joined',
    meaning: 'Two fragments that were declared separate are a covalent distance apart.',
    remedy: 'Declare them as one fragment, or move them apart.',
  },
  'near-field': {
    severity: 'warning',
    title: 'Point dipole does not hold',
    meaning:
      'The pair interacts noticeably (more than half of kT), and the point-dipole estimate differs from the reference by more than twice what is allowed: the tolerance (20 %) of the reference, or 0.1 kT where that is more. What a reference of estimated charges may itself be off by (±) counts with it.',
    remedy: 'Do not trust the point-dipole number; compute this pair.',
  },
  'dipole-unit': {
    severity: 'warning',
    title: 'Dipole in another unit',
    meaning:
      'The annotated dipole points along the dipole of the atomic charges (without charges: the published or estimated one), but is larger or smaller by just the factor between two units.',
    remedy: 'Convert the value or correct dipole_unit.',
  },
  'dipole-reversed': {
    severity: 'warning',
    title: 'Dipole reversed',
    meaning:
      'The annotated dipole points against the dipole of the atomic charges (without charges: the published or estimated one). Here dipoles point from negative to positive charge; the arrow drawn by chemists is the reverse.',
    remedy: 'Change the sign of all three components, or turn the axis round.',
  },
  'dipole-rotated': {
    severity: 'warning',
    title: 'Dipole in another orientation',
    meaning:
      'The annotated dipole has the size of the dipole of the atomic charges (without charges: the published or estimated one) but another direction: it probably belongs to another orientation of the molecule.',
    remedy: 'Derive the vector again, or give size and axis, which follow the atoms.',
  },
  'dipole-mismatch': {
    severity: 'warning',
    title: 'Dipole against charges',
    meaning:
      'The annotated dipole differs in size by more than 40 % from the dipole of the atomic charges (without charges: by more than 60 % from the published one, or by far more than the error of an estimate).',
    remedy: 'Check both; one of them does not belong to this molecule.',
  },
  'electron-parity': {
    severity: 'warning',
    title: 'Charge and multiplicity do not fit',
    meaning: 'An even number of electrons needs an odd multiplicity, an odd number an even one.',
    remedy: 'Correct the charge, the multiplicity or the atoms.',
  },
  'charge-sum': {
    severity: 'warning',
    title: 'Charges do not add up',
    meaning: 'The charges of the fragments differ from the total charge by more than 0.05 e.',
    remedy: 'Correct fragment_charges, the charge column or total_charge.',
  },
  'unit-bohr': {
    severity: 'warning',
    title: 'Coordinates look like bohr',
    meaning: 'No atoms are bonded as read, and most are after multiplying by 0.529.',
    remedy: 'Convert the coordinates to Å.',
  },
  'unit-nanometre': {
    severity: 'warning',
    title: 'Coordinates look like nanometres',
    meaning: 'Neighbouring atoms are typically less than 0.5 Å apart, and bonded after multiplying by 10.',
    remedy: 'Convert the coordinates to Å.',
  },
  'atoms-missing': {
    severity: 'warning',
    title: 'Atoms missing from a residue',
    meaning: 'A standard amino-acid residue lacks heavy atoms that it always has.',
    remedy: 'Complete the residue before trusting its charge and dipole.',
  },
  'hydrogens-missing': {
    severity: 'warning',
    title: 'Hydrogens missing',
    meaning: 'Residues or waters have no hydrogen atoms, so directions and contacts are incomplete.',
    remedy: 'Add hydrogens before judging contacts.',
  },
  'dipole-deviation': {
    severity: 'information',
    title: 'Dipole differs from the charges',
    meaning:
      'The annotated dipole differs in size by 20–40 % from the dipole of the atomic charges (without charges: from the published one). Force-field charges are commonly over-polarized (common practice, no source).',
    remedy: 'The annotated value is used; nothing to do if the difference is intended.',
  },
  'dipole-sum': {
    severity: 'information',
    title: 'Dipole of the frame',
    meaning:
      'The dipole of the whole frame differs from the sum over its fragments; mutual polarization is a real reason.',
    remedy: 'Nothing to do if the fragments polarize each other; else check the fragment dipoles.',
  },
  'key-misspelt': {
    severity: 'information',
    title: 'Key misspelt',
    meaning: 'An unknown key, or a finding in `silence`, is one or two letters from one of ours. It is ignored.',
    remedy: 'Correct the key.',
  },
  'value-unportable': {
    severity: 'information',
    title: 'Value that other readers reject',
    meaning:
      'A value of ours is written in a way that the extended XYZ convention does not allow. It is read here all the same.',
    remedy: 'Write lists flat and in double quotes.',
  },
  'edge-field': {
    severity: 'information',
    title: 'Point dipole at its edge',
    meaning:
      'The point-dipole estimate differs from the reference by more than what is allowed (the tolerance of the reference, or 0.1 kT where that is more), but by less than twice of it. What a reference of estimated charges may itself be off by (±) counts with it.',
    remedy: 'Use the number with care.',
  },
  'dipole-missing': {
    severity: 'information',
    title: 'No dipole',
    meaning: 'Nothing says what the dipole of this kind of fragment is, so its pairs have no estimate.',
    remedy: 'Give its dipole as a vector, or as a size with an axis, or give atomic charges.',
  },
  'dipole-direction': {
    severity: 'information',
    title: 'Dipole without a direction',
    meaning:
      'The size of a dipole is given, and neither an axis, whose atoms are all there, nor charges tell its direction. Only the thermal average can be given.',
    remedy: 'Give an axis that names atoms of the fragment.',
  },
  'dipole-origin': {
    severity: 'information',
    title: 'Dipole of an ion',
    meaning: 'The dipole of a charged fragment depends on the point it is taken about; the centre in use is named.',
    remedy: 'Compare it only with values about the same centre.',
  },
  'ion-charge-missing': {
    severity: 'information',
    title: 'Lone atom without a charge',
    meaning:
      'A lone atom of group 1, 2 or 17 is usually an ion, and no charge is given for it; it is taken as neutral.',
    remedy: 'Give its charge in fragment_charges or in the charge column.',
  },
  'alternate-locations': {
    severity: 'information',
    title: 'Alternate locations left out',
    meaning: 'Some residues are given in several conformations; the one with the highest occupancy is used.',
    remedy: 'Remove the conformation that is not wanted to choose another.',
  },
  'cell-small': {
    severity: 'information',
    title: 'Cell small beside the cutoff',
    meaning: 'The cell is narrower than twice the cutoff, so only the nearest image of each partner is seen.',
    remedy: 'Lower the cutoff or take a larger cell if the farther images matter.',
  },
  'fragment-endless': {
    severity: 'information',
    title: 'Fragment without an end',
    meaning: 'A fragment is bonded to its own periodic image, so it has no finite dipole or extent. It forms no pairs.',
    remedy: 'Declare finite fragments, or switch the periodic direction off.',
  },
  'extra-columns': {
    severity: 'hint',
    title: 'Further columns',
    meaning: 'A plain XYZ file has columns after z. They are kept and not interpreted.',
    remedy: 'Add Properties= to the comment line to say what they are.',
  },
  'atoms-ungrouped': {
    severity: 'hint',
    title: 'Atoms in no declared fragment',
    meaning: 'fragment_atoms leaves atoms out; they form fragments by their bonds.',
    remedy: 'List them in fragment_atoms if they belong to a fragment.',
  },
} as const satisfies Record<string, CatalogueEntry>;

export type FindingCode = keyof typeof CATALOGUE;

export const FINDING_CODES = Object.keys(CATALOGUE) as FindingCode[];

export function isFindingCode(text: string): text is FindingCode {
  return Object.hasOwn(CATALOGUE, text);
}

export function severityOf(code: FindingCode): Severity {
  return CATALOGUE[code].severity;
}
