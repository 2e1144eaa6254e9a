import { describe, expect, test } from 'vitest';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { fragmentRecord, pairRecord } from '../../server/src/features/records';
import { analyse, applyFix } from '../support/analyse';

/** Dipoles, charges and polarizabilities that a file does not give, and what is said of dipoles that it gives. */

const KNOWING: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: true, estimates: true }),
};
const ESTIMATING: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: false, estimates: true }),
};

/** Experimental geometry of water, C2 along z, oxygen up: its dipole points down. */
const WATER = ['O 0 0 0.1173', 'H 0 0.7572 -0.4692', 'H 0 -0.7572 -0.4692'];
const FORMALDEHYDE = ['C 0 0 0', 'O 0 0 1.205', 'H 0.94 0 -0.54', 'H -0.94 0 -0.54'];

const xyz = (atoms: readonly string[], comment = '') => [atoms.length, comment, ...atoms, ''].join('\n');

function first(text: string, request: AnalysisRequest, language: 'xyz' | 'pdb' = 'xyz') {
  const { frames } = analyse(text, language, request);
  return fragmentRecord(frames[0]!, 0, () => ({ name: '', label: null }));
}

describe('a fragment of which the file says nothing', () => {
  test('without knowledge has no dipole', () => {
    expect(first(xyz(WATER), DEFAULT_REQUEST)).toMatchObject({ dipoleSource: 'none', dipoleD: null });
  });

  test('has the published dipole along the axis of its atoms, and says how sure it is', () => {
    // Water: 1.85 D, CCCBDB (NIST SRD 101, release 17b); from the oxygen to the hydrogens.
    const record = first(xyz(WATER), KNOWING);
    expect(record).toMatchObject({ dipoleSource: 'library', chargeSource: 'library', dipoleNormD: 1.85 });
    expect(record.dipoleD![2]).toBeCloseTo(-1.85, 10);
    expect(record.dipoleErrorD).toBeGreaterThan(0);
    expect(record.dipoleNote).toContain('CCCBDB');
    expect(record.polarizabilitySource).toContain('CCCBDB');
  });

  test('has the same dipole turned, when it is turned', () => {
    const turned = WATER.map((line) => line.replace(/^(\S+) (\S+) (\S+) (\S+)$/, '$1 $4 $2 $3'));
    const { dipoleD } = first(xyz(turned), KNOWING);
    expect(dipoleD![0]).toBeCloseTo(-1.85, 10);
  });

  test('without the library has a dipole from its geometry, within three mean errors of the published size', () => {
    // Formaldehyde: 2.33 D, CCCBDB.
    const record = first(xyz(FORMALDEHYDE), ESTIMATING);
    expect(record.dipoleSource).toBe('estimated');
    expect(Math.abs(record.dipoleNormD! - 2.33)).toBeLessThan(3 * record.dipoleErrorD!);
    expect(record.dipoleD![2]).toBeLessThan(0);
    expect(record.dipoleAngleErrorDeg).toBeGreaterThan(0);
  });

  test.each([
    ['methanol', ['C 0 0 0', 'O 0 0 1.42']],
    ['formaldehyde', ['C 0 0 0', 'O 0 0 1.205']],
    ['dimethyl ether', ['C 0 1.17 0.79', 'O 0 0 0', 'C 0 -1.17 0.79']],
    ['formic acid', ['O 0 1.05 0.55', 'C 0 0 0', 'O 0 -1.21 0.5']],
    ['hydrazine', ['N 0 0 0', 'N 0 0 1.45']],
  ])('the skeleton of %s without hydrogens is taken for nothing, whatever else the file holds', (_, atoms) => {
    const water = WATER.map((line) => line.replace(/^(\S+) (\S+)/, '$1 9$2').replace('90', '9.0'));
    const record = first(xyz([...atoms, ...water]), KNOWING);
    expect(record).toMatchObject({ dipoleSource: 'none', dipoleD: null, chargeSource: 'assumed' });
    expect(record.dipoleNote).toMatch(/hydrogens/i);
  });

  test.each([
    // 0.11 D, CCCBDB; the carbon is the negative end.
    ['carbon monoxide', ['C 0 0 0', 'O 0 0 1.128'], 0.11],
    ['carbon dioxide', ['C 0 0 0', 'O 0 0 1.16', 'O 0 0 -1.16'], 0],
    ['nitrogen', ['N 0 0 0', 'N 0 0 1.098'], 0],
  ])('%s, which has no hydrogens, is found in a file without any', (_, atoms, dipoleD) => {
    expect(first(xyz(atoms), KNOWING)).toMatchObject({ dipoleSource: 'library', dipoleNormD: dipoleD });
  });

  test('a lone atom in XYZ is no ion: its charge is asked for', () => {
    const text = xyz(['Na 0 0 0', 'Na 0 0 3.08']);
    expect(first(text, KNOWING)).toMatchObject({ chargeE: 0, chargeSource: 'assumed' });
    expect(analyse(text, 'xyz', KNOWING).findings.map(({ code }) => code)).toContain('ion-charge-missing');
  });

  test.each([
    ['a radical', ['O 0 0 0', 'H 0 0 0.97'], /odd number of electrons/i],
    ['a metal', ['Ti 0 0 0', 'O 0 0 1.62'], /metal|odd|parameters/i],
  ])('%s is refused with a reason', (_, atoms, reason) => {
    const record = first(xyz(atoms), ESTIMATING);
    expect(record).toMatchObject({ dipoleSource: 'none', dipoleD: null, dipoleErrorD: null });
    expect(record.dipoleNote).toMatch(reason);
  });

  test('an ion by the name of its residue carries its charge', () => {
    const line = 'HETATM    1 NA    NA A   1       0.000   0.000   0.000  1.00  0.00          NA  ';
    expect(first(`${line}\nEND\n`, KNOWING, 'pdb')).toMatchObject({ chargeE: 1, chargeSource: 'library' });
  });

  test('a water without hydrogens has the size of the dipole and no direction', () => {
    const line = 'HETATM    1  O   HOH A   1       0.000   0.000   0.000  1.00  0.00           O  ';
    expect(first(`${line}\nEND\n`, KNOWING, 'pdb')).toMatchObject({
      dipoleSource: 'library',
      dipoleNormD: 1.85,
      dipoleD: null,
    });
  });
});

describe('a pair of waters of which the file says nothing', () => {
  const shifted = WATER.map((line) => {
    const [symbol, x, y, z] = line.split(' ');
    return [symbol, x, y, (Number(z) + 5).toFixed(4)].join(' ');
  });
  const { frames, pairs } = analyse(xyz([...WATER, ...shifted]), 'xyz', KNOWING);
  const record = pairRecord(frames[0]!.system, pairs[0]![0]!);

  test('in a row: each dipole moves the energy by its own share of error, and the two are independent', () => {
    // E is proportional to each size, both off by 3 %.
    const { dipoleDipole } = record.energyKJPerMol;
    expect(record.dipoleUncertaintyKJPerMol).toBeCloseTo(Math.SQRT2 * 0.03 * Math.abs(dipoleDipole!), 10);
  });

  test('has induction and dispersion, and an averaged induction of −2 μ²α/R⁶', () => {
    expect(record.energyKJPerMol.induction).toBeLessThan(0);
    expect(record.energyKJPerMol.dispersion).toBeLessThan(0);
    // Debye's average: P. Debye, Phys. Z. 21 (1920) 178; k_e = 1389.354576 kJ·Å/(mol·e²), 1 D = 0.20819434 e·Å (CODATA 2022).
    const average = (-2 * (1.85 * 0.20819434) ** 2 * 1.501 * 1389.354576) / 5 ** 6;
    expect(record.thermal.inductionKJPerMol! / average).toBeCloseTo(1, 6);
  });

  test('given by the file has no uncertainty of that kind', () => {
    const text = xyz([...WATER, ...shifted], 'kind_dipole_sizes=H2O:1.85 kind_axes=H2O:O>H');
    const given = analyse(text, 'xyz', KNOWING);
    expect(pairRecord(given.frames[0]!.system, given.pairs[0]![0]!).dipoleUncertaintyKJPerMol).toBeNull();
  });
});

test('errors of estimated directions move an energy that sizes do not: a dipole along the line, one across it', () => {
  // Dipole 1 along z and dipole 2 along x, on the x axis: each stands at right angles to the field of the other, 2μ/R³ and μ/R³.
  const across = FORMALDEHYDE.map((line) => {
    const [symbol, x, y, z] = line.split(' ');
    return [symbol, (Number(z) + 7).toFixed(4), x, y].join(' ');
  });
  const { frames, pairs } = analyse(xyz([...FORMALDEHYDE, ...across]), 'xyz', ESTIMATING);
  const fragment = fragmentRecord(frames[0]!, 0, () => ({ name: '', label: null }));
  const pair = pairRecord(frames[0]!.system, pairs[0]![0]!);
  const dipoleEA = fragment.dipoleNormD! * 0.20819434;
  const turn = Math.sin((fragment.dipoleAngleErrorDeg! * Math.PI) / 180);
  // The centres are a little off the axis.
  const expected = (Math.sqrt(5) * 1389.354576 * dipoleEA ** 2 * turn) / pair.distanceA! ** 3;
  expect(pair.dipoleUncertaintyKJPerMol! / expected).toBeGreaterThan(0.9);
  expect(pair.dipoleUncertaintyKJPerMol! / expected).toBeLessThan(1.1);
});

test('charges that do not add up say which of them is the guess of the library', () => {
  const text = xyz(
    ['O 0 0 0', 'H 0 0 0.97', ...WATER.map((line) => line.replace(/^(\S+) 0/, '$1 5'))],
    'total_charge=0',
  );
  const found = analyse(text, 'xyz', KNOWING).findings.find(({ code }) => code === 'charge-sum');
  expect(found!.message).toContain("The charge of HO (fragment 1) is the library's.");
});

test('a fragment of twenty thousand atoms is refused at once', () => {
  const chain = Array.from({ length: 20_000 }, (_, n) => `C ${(1.3 * n).toFixed(1)} ${n % 2} 0`);
  const record = first(xyz(chain), ESTIMATING);
  expect(record).toMatchObject({ dipoleSource: 'none', polarizabilityA3: null });
  expect(record.dipoleNote).toMatch(/300 atoms/);
});

describe('a dipole of the file, without charges, beside the published one', () => {
  const codes = (text: string) => analyse(text, 'xyz', KNOWING).findings.map(({ code }) => code);

  test.each([
    ['that agrees', '0 0 -1.85', []],
    ['reversed', '0 0 1.85', ['dipole-reversed']],
    ['in atomic units', '0 0 -0.728', ['dipole-unit']],
    ['in e·Å', '0 0 -0.385', ['dipole-unit']],
    ['of another orientation', '1.85 0 0', ['dipole-rotated']],
    [
      'of a polarized water model (SPC/E, 2.35 D: H. J. C. Berendsen et al., J. Phys. Chem. 91 (1987) 6269)',
      '0 0 -2.35',
      ['dipole-deviation'],
    ],
    ['of another molecule', '0 0 -3.9', ['dipole-mismatch']],
  ])('%s', (_, dipole, expected) => {
    expect(codes(xyz(WATER, `fragment_dipoles="${dipole}"`))).toEqual(expected);
  });

  test.each([['0 0 1.85'], ['0 0 -0.728'], ['1.85 0 0']])(
    '%s D is mended by the fix, and nothing else is said',
    (dipole) => {
      const text = xyz(WATER, `fragment_dipoles="${dipole}"`);
      const [finding] = analyse(text, 'xyz', KNOWING).findings;
      expect(finding!.message).toContain('published');
      expect(codes(applyFix(text, finding!))).toEqual([]);
    },
  );

  test('is compared with an estimate where nothing is published, and by its error', () => {
    const text = (dipole: string) => xyz(FORMALDEHYDE, `fragment_dipoles="${dipole}"`);
    const said = (dipole: string) => analyse(text(dipole), 'xyz', ESTIMATING).findings;
    expect(said('0 0 2.4').map(({ code }) => code)).toEqual(['dipole-reversed']);
    expect(said('0 0 2.4')[0]!.message).toContain('estimated from its geometry');
    expect(said('0 0 -2.9')).toEqual([]);
  });

  test('an axis the wrong way round is noticed too', () => {
    expect(codes(xyz(WATER, 'kind_dipole_sizes=H2O:1.85 kind_axes=H2O:H>O'))).toEqual(['dipole-reversed']);
  });
});
