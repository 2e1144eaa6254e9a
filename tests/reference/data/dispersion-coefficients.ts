/**
 * Published C₆ of like pairs, hartree·bohr⁶, with the polarizability volume (Å³), ionization energy (eV) and atoms of the partner.
 *
 * C₆ of molecules: dipole oscillator strength distributions (Meath and coworkers), as in table III of J. Toulouse et al., J. Chem. Phys.
 * 138 (2013) 194106 (arXiv:1305.0107), read in a public file that quotes it; benzene of A. J. Thakkar, arXiv:2010.01162, read there.
 * C₆ of noble gases: X. Chu, A. Dalgarno, J. Chem. Phys. 121 (2004) 4083, read in the mendeleev tables; xenon of T. Gould, T. Bučko, J.
 * Chem. Theory Comput. 12 (2016) 3603, read there.
 * Polarizabilities: NIST CCCBDB or CRC Handbook, from memory where the second column of the source table is empty; noble gases P.
 * Schwerdtfeger, J. K. Nagle, Mol. Phys. 117 (2019) 1200, read. Ionization energies: NIST CCCBDB and NIST ASD, read.
 */
export interface PublishedC6 {
  readonly name: string;
  readonly c6Au: number;
  readonly polarizabilityA3: number;
  readonly ionizationEV: number;
  readonly elements: readonly string[];
}

const row = (
  name: string,
  c6Au: number,
  polarizabilityA3: number,
  ionizationEV: number,
  elements: string,
): PublishedC6 => ({ name, c6Au, polarizabilityA3, ionizationEV, elements: elements.split(' ') });

export const PUBLISHED_C6: readonly PublishedC6[] = [
  row('He', 1.42, 0.205, 24.587, 'He'),
  row('Ne', 6.2, 0.394, 21.565, 'Ne'),
  row('Ar', 64.2, 1.642, 15.76, 'Ar'),
  row('Kr', 130, 2.487, 14, 'Kr'),
  row('Xe', 302, 4.048, 12.13, 'Xe'),
  row('H2', 12.1, 0.787, 15.426, 'H H'),
  row('N2', 73.3, 1.71, 15.58, 'N N'),
  row('CO', 81.4, 1.953, 14.01, 'C O'),
  row('HF', 19, 0.8, 16.03, 'H F'),
  row('HCl', 130.4, 2.515, 12.74, 'H Cl'),
  row('H2O', 45.3, 1.501, 12.62, 'O H H'),
  row('H2S', 216.8, 3.631, 10.46, 'S H H'),
  row('NH3', 89, 2.103, 10.07, 'N H H H'),
  row('CH4', 129.7, 2.448, 12.61, 'C H H H H'),
  row('CO2', 158.7, 2.507, 13.78, 'C O O'),
  row('C2H2', 204.1, 3.487, 11.4, 'C C H H'),
  row('C2H4', 300.2, 4.188, 10.51, 'C C H H H H'),
  row('C2H6', 381.9, 4.226, 11.52, 'C C H H H H H H'),
  row('C6H6', 1765, 10, 9.24, 'C C C C C C H H H H H H'),
];
