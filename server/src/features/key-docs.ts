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
