/** What each annotation key means, in a sentence; for hovers and completion. */
export const KEY_DOCS: Readonly<Record<string, string>> = {
  Properties: 'Columns of the atom lines as name:type:count. Read are species or Z, pos, charge, fragment and dipoles.',
  Lattice: 'The three cell vectors, nine numbers in Å, row by row.',
  pbc: 'Which cell directions are periodic; all of them where only Lattice is given.',
  fragment_atoms: 'Fragments by atom numbers from 1: a blank between fragments, commas and ranges within one.',
  fragment_names: 'Names of the fragments, in the order of their first atoms.',
  fragment_charges: 'Net charge of each fragment, e; nan for not given.',
  fragment_dipoles:
    'Cartesian dipole of each fragment, from negative to positive charge; of an ion about the centre in use.',
  fragment_dipole_sizes:
    'Size of the dipole of each fragment; the direction comes from its axis, else from its charges.',
  fragment_axes:
    'Direction of each dipole by atoms: from the mean position of those before > to that of those after it.',
  kind_dipole_sizes: 'Size of the dipole of every fragment of a composition.',
  kind_axes: 'Direction of the dipole of every fragment of a composition, by element symbols or labels.',
  fragment_polarizabilities: 'Polarizability volume of each fragment, Å³.',
  dipole_unit: 'Unit of the fragment dipoles and sizes: D, e*angstrom, a.u. or C*m.',
  dipole: 'XYZ: dipole of the whole frame, e·Å. PDB: Cartesian dipole of the fragments selected.',
  total_charge: 'Net charge of the frame, e.',
  charge: 'Net charge: of the frame in XYZ, of the fragments selected in a REMARK; e.',
  multiplicity: 'Spin multiplicity of the frame; checked against the number of electrons.',
  mult: 'Spin multiplicity of the frame; checked against the number of electrons.',
  relative_permittivity:
    'Relative permittivity for this frame or file, a number from 1 up or a medium such as toluene.',
  temperature: 'Temperature for this frame or file, K or with a unit.',
  silence: 'Findings that are not wanted in this file, by their codes.',
  fragment: 'The fragments this line speaks of, as chain:residue:number; * for any, _ for a blank chain.',
  name: 'Name of the fragments selected.',
  dipole_size: 'Size of the dipole of the fragments selected.',
  axis: 'Direction of the dipole by atom names, as in O>H1,H2.',
  polarizability: 'Polarizability volume of the fragments selected, Å³.',
  charge_column: 'Where the file keeps partial charges: occupancy, bfactor, or columns such as 71-76.',
  periodic: 'Whether the cell of CRYST1 is to be used.',
};

/** What may stand behind a key, and how that looks in each format that has it. */
export interface KeyFacts {
  /** Values, their range and unit. */
  readonly values: string;
  readonly xyz?: string;
  readonly pdb?: string;
}

const PER_FRAGMENT = 'one for each fragment, `nan` for not given';
const DIPOLE_SIZE = 'from 0 up, in `dipole_unit` (D)';

/** Values and an example for every key; for completion. */
export const KEY_FACTS: Readonly<Record<string, KeyFacts>> = {
  Properties: {
    values: '`name:type:count` triplets; the types are S, R, I and L',
    xyz: 'Properties=species:S:1:pos:R:3',
  },
  Lattice: { values: 'nine numbers, Å', xyz: 'Lattice="20 0 0 0 20 0 0 0 20"' },
  pbc: { values: 'T or F, three times', xyz: 'pbc="T T T"' },
  fragment_atoms: {
    values: 'atom numbers and ranges from 1 to the number of atoms',
    xyz: 'fragment_atoms="1-3 4,5-6"',
  },
  fragment_names: { values: `words without blanks, ${PER_FRAGMENT}`, xyz: 'fragment_names="donor acceptor"' },
  fragment_charges: { values: `numbers, e, ${PER_FRAGMENT}`, xyz: 'fragment_charges="0 nan"' },
  fragment_dipoles: {
    values: 'three numbers for each fragment in `dipole_unit` (D), `nan nan nan` for not given',
    xyz: 'fragment_dipoles="0 0 1.855 0 0 -1.855"',
  },
  fragment_dipole_sizes: {
    values: `numbers ${DIPOLE_SIZE}, ${PER_FRAGMENT}`,
    xyz: 'fragment_dipole_sizes="1.855 nan"',
  },
  fragment_axes: { values: `atom numbers before and after \`>\`, ${PER_FRAGMENT}`, xyz: 'fragment_axes="1>2,3 4>5,6"' },
  kind_dipole_sizes: { values: `composition, colon, number ${DIPOLE_SIZE}`, xyz: 'kind_dipole_sizes="H2O:1.855"' },
  kind_axes: { values: 'composition, colon, symbols or labels before and after `>`', xyz: 'kind_axes="H2O:O>H"' },
  fragment_polarizabilities: {
    values: `numbers from 0 up, Å³, ${PER_FRAGMENT}`,
    xyz: 'fragment_polarizabilities="1.45 nan"',
  },
  dipole_unit: { values: 'D, e*angstrom, a.u. or C*m', xyz: 'dipole_unit=D', pdb: 'dipole_unit=D' },
  dipole: {
    values: 'three numbers: of an XYZ frame in e·Å, of a fragment in `dipole_unit` (D)',
    xyz: 'dipole="0 0 0.39"',
    pdb: 'dipole="1.2 -0.4 3.1"',
  },
  total_charge: { values: 'a number, e', xyz: 'total_charge=0', pdb: 'total_charge=0' },
  charge: { values: 'a number, e', xyz: 'charge=0', pdb: 'charge=0' },
  multiplicity: { values: 'a whole number from 1 up', xyz: 'multiplicity=1', pdb: 'multiplicity=1' },
  mult: { values: 'a whole number from 1 up', xyz: 'mult=1' },
  relative_permittivity: {
    values: 'a number from 1 up, or the name of a medium',
    xyz: 'relative_permittivity=toluene',
    pdb: 'relative_permittivity=4',
  },
  temperature: {
    values: 'above 0 K; in K, or with a unit in quotes',
    xyz: 'temperature="25 degC"',
    pdb: 'temperature=310',
  },
  silence: { values: 'codes of findings', xyz: 'silence="near-field edge-field"', pdb: 'silence=near-field' },
  fragment: { values: '`chain:residue:number` with an optional insertion code', pdb: 'fragment=*:HOH:*' },
  name: { values: 'a word', pdb: 'name=donor' },
  dipole_size: { values: `a number ${DIPOLE_SIZE}, or with a unit in quotes`, pdb: 'dipole_size="1.855 D"' },
  axis: { values: 'atom names before and after `>`', pdb: 'axis=O>H1,H2' },
  polarizability: { values: 'a number from 0 up, Å³, or with a unit in quotes', pdb: 'polarizability=1.45' },
  charge_column: { values: 'occupancy, bfactor, or a range of columns', pdb: 'charge_column=occupancy' },
  periodic: { values: 'true or false', pdb: 'periodic=true' },
};
