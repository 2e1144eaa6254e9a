import { describe, expect, it } from 'vitest';
import type { FindingCode } from '../../server/src/base/catalogue';
import { safeEdits } from '../../server/src/features/quick-fixes';
import type { Language } from '../../server/src/formats/tree';
import { analyse, applyFix } from '../support/analyse';
import { pdbAtom } from './findings-table';

/** Remedies for what is wrongly written: the piece that is wrong, and what stands there after the remedy; `null` where there is none. */
type Row = readonly [code: FindingCode, wrong: string, mended: string | null];

const WATERS = ['O 0 0 0', 'H 0.757 0.586 0', 'H -0.757 0.586 0', 'O 0 0 8', 'H 0.757 0.586 8', 'H -0.757 0.586 8'];
const water = (number: number, z: number) => [
  pdbAtom(3 * number, 'O', 'HOH', number, [0, 0, z], 'O'),
  pdbAtom(3 * number + 1, 'H1', 'HOH', number, [0.757, 0.586, z], 'H'),
  pdbAtom(3 * number + 2, 'H2', 'HOH', number, [-0.757, 0.586, z], 'H'),
];

function mend(text: string, code: FindingCode, language: Language): string | null {
  const finding = analyse(text, language).findings.find((entry) => entry.code === code);
  expect(finding?.code).toBe(code);
  return finding!.fix === undefined ? null : applyFix(text, finding!);
}

describe.each(['\n', '\r\n'])('a comment line before %j', (lineEnd) => {
  const file = (comment: string) => ['6', `made by hand ${comment}`, ...WATERS, ''].join(lineEnd);
  const rows: readonly Row[] = [
    ['unit-unknown', 'dipole_unit=debeye', 'dipole_unit=D'],
    ['unit-unknown', 'dipole_unit="e*angstrm"', 'dipole_unit="e*angstrom"'],
    ['unit-unknown', 'dipole_unit=furlong', null],
    ['unit-unknown', 'temperature="300 Kelvin"', 'temperature="300 K"'],
    ['unit-unknown', 'temperature="25 celsius"', 'temperature="25 degC"'],
    ['unit-unknown', 'temperature="25 furlong"', null],
    ['unit-unknown', 'kind_dipole_sizes=H2O:1.855Debeye', 'kind_dipole_sizes=H2O:1.855debye'],
    ['value-invalid', 'temperature=26,85', 'temperature=26.85'],
    ['value-invalid', 'temperature=-5', null],
    ['value-invalid', 'relative_permittivity=watter', 'relative_permittivity=water'],
    ['value-invalid', 'relative_permittivity="4,5"', 'relative_permittivity="4.5"'],
    ['value-invalid', 'relative_permittivity=0.3', null],
    ['value-invalid', 'pbc=true', 'pbc="T T T"'],
    ['value-invalid', 'pbc=xy', 'pbc="T T F"'],
    ['value-invalid', 'pbc="yes yes no"', 'pbc="T T F"'],
    ['value-invalid', 'pbc="T T"', null],
    ['value-invalid', 'kind_axes="H2O:O->H"', 'kind_axes="H2O:O>H"'],
    ['value-invalid', 'kind_axes="H2O:H<O"', 'kind_axes="H2O:O>H"'],
    ['value-invalid', 'kind_axes="h2o:O>H"', 'kind_axes="H2O:O>H"'],
    ['selector-unmatched', 'kind_axes="H20:O>H"', 'kind_axes="H2O:O>H"'],
    ['value-invalid', 'fragment_axes="1>2,3 4->5,6"', 'fragment_axes="1>2,3 4>5,6"'],
    ['number-unreadable', 'total_charge=1-', 'total_charge=-1'],
    ['number-unreadable', 'total_charge=−1e', 'total_charge=-1'],
    ['number-unreadable', 'multiplicity=doublet', 'multiplicity=2'],
    ['number-unreadable', 'fragment_charges="0 1+"', 'fragment_charges="0 1"'],
    ['number-unreadable', 'fragment_charges="0 ?"', null],
    ['selector-unmatched', 'kind_axes="H3O:O>H"', 'kind_axes="H2O:O>H"'],
    ['selector-unmatched', 'kind_axes="H2O:O>H H3O:O>H"', null],
    ['selector-unmatched', 'kind_axes="C6H6:C>H"', null],
    ['key-repeated', 'temperature=300 temperature=310', 'temperature=300'],
    ['key-repeated', 'temperature=300 note=x  "temperature" = 310 y=z', 'temperature=300 note=x y=z'],
    ['fragments-overlap', 'fragment_atoms="1-3 3-6"', 'fragment_atoms="1-3 4-6"'],
    ['fragments-overlap', 'fragment_atoms="1-3 4,5,1,6"', 'fragment_atoms="1-3 4,5,6"'],
    ['fragments-overlap', 'fragment_atoms="1-3 4-6,2"', 'fragment_atoms="1-3 4-6"'],
    ['fragments-overlap', 'fragment_atoms="2 1-3 4-6"', 'fragment_atoms="2 1,3 4-6"'],
    ['fragments-overlap', 'fragment_atoms="1-3 2-3 4-6"', 'fragment_atoms="1-3 4-6"'],
    ['value-unportable', 'fragment_charges=[0,0,]', 'fragment_charges="0 0"'],
    ['value-unportable', 'fragment_atoms=[[1,2,3],[4,5,6],]', 'fragment_atoms="1,2,3 4,5,6"'],
    ['value-unportable', 'fragment_charges="0 0', 'fragment_charges="0 0"'],
    ['value-unportable', 'fragment_charges=[0, 0 temperature=300', 'fragment_charges="0 0" temperature=300'],
    ['value-unportable', 'fragment_names=["a b", c,]', null],
    ['key-misspelt', 'temprature=300', 'temperature=300'],
    ['key-misspelt', 'temprature=300 temperature=310', null],
    ['key-misspelt', 'total_chrge=0 charge=0', null],
    ['array-length', 'fragment_axes="1 > 2,3 4>5,6"', null],
    ['array-length', 'fragment_charges="0 0 0"', 'fragment_charges="0 0"'],
  ];

  it.each(rows)('%s: %s becomes %s', (code, wrong, mended) => {
    expect(mend(file(wrong), code, 'xyz')).toBe(mended === null ? null : file(mended));
  });
});

describe('remedies applied all at once', () => {
  const safely = (comment: string) => {
    const text = ['6', comment, ...WATERS, ''].join('\n');
    const edits = [...safeEdits(analyse(text, 'xyz').findings)].reverse();
    const after = edits.reduce((all, edit) => all.slice(0, edit.start) + edit.text + all.slice(edit.end), text);
    return after.split('\n')[1];
  };

  it.each([
    ['fill up a list', 'fragment_charges="0"', 'fragment_charges="0 nan"'],
    ['fill up a list of one bare word', 'fragment_charges=0', 'fragment_charges="0 nan"'],
    ['take nothing out of a list', 'fragment_charges="0 0 1"', 'fragment_charges="0 0 1"'],
    ['give no key twice', 'temprature=300 temperatur=310', 'temperature=300 temperatur=310'],
  ])('%s', (_, before, after) => {
    expect(safely(before)).toBe(after);
  });
});

describe('atom lines', () => {
  const atoms = (line: string, lineEnd = '\n') => ['6', '', ...WATERS.slice(0, 5), line, ''].join(lineEnd);

  it.each<Row>([
    ['number-unreadable', 'H\t-0,757\t0.586\t8', 'H\t-0.757\t0.586\t8'],
    ['number-unreadable', 'H −0.757 0.586 8', 'H -0.757 0.586 8'],
    ['number-unreadable', 'H -0.757Å 0.586 8', 'H -0.757 0.586 8'],
    ['number-unreadable', 'H -0.7.57 0.586 8', null],
    ['element-unknown', 'Hx -0.757 0.586 8', 'H -0.757 0.586 8'],
  ])('%s: %j becomes %j', (code, wrong, mended) => {
    expect(mend(atoms(wrong), code, 'xyz')).toBe(mended === null ? null : atoms(mended));
  });

  it('a blank line among them goes, with its line end', () => {
    const text = ['6', '', ...WATERS.slice(0, 3), '  ', ...WATERS.slice(3), ''].join('\r\n');
    expect(mend(text, 'field-missing', 'xyz')).toBe(['6', '', ...WATERS, ''].join('\r\n'));
  });

  it('a count and a comment line come with the line ends of the file', () => {
    const text = [...WATERS, ''].join('\r\n');
    expect(mend(text, 'count-wrong', 'xyz')).toBe(['6', '', ...WATERS, ''].join('\r\n'));
  });
});

describe('a PDB file', () => {
  const file = (...lines: string[]) => [...lines, ...water(1, 0), ...water(2, 8), ''].join('\r\n');
  const rows: readonly Row[] = [
    ['selector-unmatched', 'fragment=B:HOH:* charge=0', null],
    ['selector-unmatched', 'fragment=A:HHO:* charge=0', 'fragment=A:HOH:* charge=0'],
    ['selector-unmatched', 'fragment="a:HOH:2" charge=0', 'fragment="A:HOH:2" charge=0'],
    ['selector-unmatched', 'fragment=A:WAT:2 charge=0', 'fragment=A:HOH:2 charge=0'],
    ['selector-unmatched', 'fragment=A:HOH:3 charge=0', null],
    ['value-invalid', 'fragment=A.HOH.2 charge=0', 'fragment=A:HOH:2 charge=0'],
    ['value-invalid', 'fragment=HOH:2 charge=0', 'fragment=*:HOH:2 charge=0'],
    ['value-invalid', 'periodic=on', 'periodic=true'],
    ['value-invalid', 'periodic=perhaps', null],
    ['value-invalid', 'charge_column=b-factor', 'charge_column=bfactor'],
    ['value-invalid', 'charge_column=71:76', 'charge_column=71-76'],
    ['value-invalid', 'fragment=*:HOH:* axis=O→H1,H2', 'fragment=*:HOH:* axis=O>H1,H2'],
    ['key-repeated', 'temperature=300 temperature=310', 'temperature=300'],
  ];

  it.each(rows)('%s: %s becomes %s', (code, wrong, mended) => {
    expect(mend(file(`REMARK  99 ${wrong}`), code, 'pdb')).toBe(mended === null ? null : file(`REMARK  99 ${mended}`));
  });

  it('a line that gives a key once more goes whole where it says nothing else', () => {
    const first = 'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1,H2';
    const second = 'REMARK  99 fragment=*:HOH:* dipole_size=2';
    expect(mend(file(first, second), 'key-repeated', 'pdb')).toBe(file(first));
    expect(mend(file(first, `${second} charge=0`), 'key-repeated', 'pdb')).toBe(
      file(first, 'REMARK  99 fragment=*:HOH:* charge=0'),
    );
    expect(mend(file(first, `${second} as measured`), 'key-repeated', 'pdb')).toBe(
      file(first, 'REMARK  99 fragment=*:HOH:* as measured'),
    );
  });

  it('a coordinate keeps its columns', () => {
    expect(mend(file().replace('   0.757', '   0,757'), 'number-unreadable', 'pdb')).toBe(file());
  });
});
