import { describe, expect, it } from 'vitest';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import type { FrameAnalysis } from '../../server/src/analysis/frame-analysis';
import { type AnalysisRequest, DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { TextEdit } from '../../server/src/base/finding';
import { addDipolesEdits } from '../../server/src/features/rewrite/add-dipoles';
import { moveApart } from '../../server/src/features/rewrite/move-fragment';
import { turnTowardStrongest } from '../../server/src/features/rewrite/turn-fragment';
import type { Language } from '../../server/src/formats/tree';
import { COULOMB_KJ_A_PER_MOL, DEBYE_E_A } from '../../server/src/physics/constants';
import { analyse } from '../support/analyse';
import { edited } from '../support/edits';
import { pdbAtom } from './findings-table';

const xyz = (comment: string, ...atoms: string[]) => `${[atoms.length, comment, ...atoms].join('\n')}\n`;
const KNOWING: AnalysisRequest = {
  ...DEFAULT_REQUEST,
  knowledge: builtInKnowledge({ library: true, estimates: true }),
};

function turned(text: string, fragment: number, language: Language = 'xyz', request = DEFAULT_REQUEST) {
  const { tree, frames } = analyse(text, language, request);
  const turn = turnTowardStrongest(tree, frames[0]!, fragment);
  return turn === null ? null : { turn, text: edited(text, turn.edits()) };
}

function moved(text: string, language: Language = 'xyz', request = DEFAULT_REQUEST) {
  const { tree, frames } = analyse(text, language, request);
  const move = moveApart(tree, frames[0]!, 0, 1);
  return move === null ? null : { move, text: edited(text, move.edits()) };
}

const dipoleOf = ({ moments }: FrameAnalysis, f: number) => Array.from(moments.dipoleEA.subarray(3 * f, 3 * f + 3));

describe('two point dipoles', () => {
  // Lone atoms that are given dipoles of 1 D: nothing but point dipoles, 5 Å apart.
  const pair = (first: string, second: string, at = '0 0 5') =>
    xyz(`fragment_atoms="1 2" fragment_dipoles="${first} ${second}"`, 'Ar 0 0 0', `Ar ${at}`);
  const unit = (COULOMB_KJ_A_PER_MOL * DEBYE_E_A ** 2) / 125;
  const energyOf = (text: string) => analyse(text).pairs[0]![0]!.energies.pointDipole;

  it('head to head: the second is turned head to tail, from +2μ²/R³ to −2μ²/R³', () => {
    const before = pair('0 0 1', '0 0 -1');
    expect(energyOf(before)).toBeCloseTo(2 * unit, 10);
    const after = turned(before, 1)!;
    expect(after.text).toBe(pair('0 0 1', '0 0 1'));
    expect(energyOf(after.text)).toBeCloseTo(-2 * unit, 10);
    expect(after.turn.beforeKJPerMol).toBeCloseTo(2 * unit, 10);
    expect(after.turn.afterKJPerMol).toBeCloseTo(-2 * unit, 10);
    expect(after.turn.angleDeg).toBeCloseTo(180, 6);
  });

  it('side by side: the second is turned antiparallel, from +μ²/R³ to −μ²/R³', () => {
    const after = turned(pair('1 0 0', '1 0 0'), 1)!;
    expect(after.text).toBe(pair('1 0 0', '-1 0 0'));
    expect(energyOf(after.text)).toBeCloseTo(-unit, 10);
  });

  it('crossed: a dipole on the line of one across is turned through a right angle', () => {
    const after = turned(pair('1.000 0 0', '0 0 1.000'), 1)!;
    expect(energyOf(after.text)).toBeCloseTo(-unit, 10);
    expect(after.turn.angleDeg).toBeCloseTo(90, 6);
  });

  it('at 45 degrees: the field of the first has the size √(1 + 3 cos²θ) μ/R³', () => {
    const diagonal = '0 3.5355339059 3.5355339059';
    const after = turned(pair('0 0 1', '1.000000 0 0', diagonal), 1)!;
    expect(energyOf(after.text)).toBeCloseTo(-Math.sqrt(2.5) * unit, 4);
  });

  it('aligned already: nothing is offered', () => {
    expect(turned(pair('0 0 1', '0 0 1'), 1)).toBeNull();
  });

  it('a dipole beside a cation turns away from it, to −Qμ/R²', () => {
    const text = xyz(
      'fragment_atoms="1 2" fragment_charges="1 0" fragment_dipoles="nan nan nan 1 0 0"',
      'Na 0 0 0',
      'Ar 0 0 5',
    );
    const after = turned(text, 1)!;
    expect(after.text).toBe(text.replace('nan 1 0 0', 'nan 0 0 1'));
    expect(energyOf(after.text)).toBeCloseTo((-COULOMB_KJ_A_PER_MOL * DEBYE_E_A) / 25, 10);
  });

  it('nothing has a field where the partner has neither charge nor dipole', () => {
    expect(turned(pair('0 0 0', '0 0 1'), 1)).toBeNull();
  });
});

describe('a molecule', () => {
  const WATERS = [
    'O   0.0000   0.0000   0.0000',
    'H   0.7572   0.0000   0.5865',
    'H  -0.7572   0.0000   0.5865',
    'O   0.0000   0.0000   5.0000',
    'H   0.7572   0.0000   4.4135',
    'H  -0.7572   0.0000   4.4135',
  ];

  it('turns as a whole, with its columns, and leaves all other lines alone', () => {
    const text = xyz('two waters', ...WATERS);
    const after = turned(text, 1, 'xyz', KNOWING)!;
    const [old, lines] = [text.split('\n'), after.text.split('\n')];
    expect(lines.slice(0, 5)).toEqual(old.slice(0, 5));
    expect(lines.slice(5).map((line) => line.replace(/-?\d+\.\d{4}/g, (n) => '#'.repeat(n.length)).length)).toEqual(
      old.slice(5).map((line) => line.length),
    );
    const frame = analyse(after.text, 'xyz', KNOWING).frames[0]!;
    const [, y, z] = dipoleOf(frame, 1);
    expect(z).toBeGreaterThan(0.3);
    expect(Math.abs(y!)).toBeLessThan(0.01);
  });

  it('takes the vector with it that the file gives', () => {
    const text = xyz('fragment_dipoles="0 0 1.85 0 0 -1.850"', ...WATERS);
    const after = turned(text, 1)!;
    expect(after.text).toContain('fragment_dipoles="0 0 1.85 0 0 1.85"');
    expect(after.text).not.toContain('4.4135');
  });

  it('is not turned where its vector holds for others as well', () => {
    const water = (n: number, z: number, h: number) => [
      pdbAtom(3 * n, 'O', 'HOH', n, [0, 0, z], 'O'),
      pdbAtom(3 * n + 1, 'H1', 'HOH', n, [0.757, 0, z + h], 'H'),
      pdbAtom(3 * n + 2, 'H2', 'HOH', n, [-0.757, 0, z + h], 'H'),
    ];
    const file = (remark: string) =>
      `${[`REMARK  99 ${remark}`, ...water(1, 0, 0.586), ...water(2, 5, -0.586)].join('\n')}\n`;
    expect(turned(file('fragment=*:HOH:* dipole="0 0 1.85"'), 1, 'pdb')).toBeNull();
    const own = file('fragment=A:HOH:2 dipole="0 0 -1.85"').replace(
      '\n',
      '\nREMARK  99 fragment=A:HOH:1 dipole="0 0 1.85"\n',
    );
    const after = turned(own, 1, 'pdb')!;
    expect(after.text).toContain('fragment=A:HOH:2 dipole="0 0 1.85"');
    expect(after.text.split('\n').map((line) => line.length)).toEqual(
      own.split('\n').map((line) => line.length - (line.includes('HOH:2 dipole') ? 1 : 0)),
    );
    const withSpread = own.replace(
      /(ATOM {6}6.*\n)/,
      '$1ANISOU    6  O   HOH A   2     1000   1000   1000      0      0      0       O\n',
    );
    expect(withSpread).not.toBe(own);
    expect(turned(withSpread, 1, 'pdb')).toBeNull();
  });

  it('keeps clear of what stands behind it', () => {
    // Turned the shortest way, about y, a hydrogen would come to lie 1.4 Å from the argon beside it.
    const text = xyz('fragment_atoms="1-3 4-6 7"', ...WATERS, 'Ar 1.5 0 6.6');
    const across = (after: string) => Math.abs(Number(after.split('\n')[6]!.split(/\s+/)[2]));
    expect(across(turned(xyz('', ...WATERS), 1, 'xyz', KNOWING)!.text)).toBe(0);
    const after = turned(text, 1, 'xyz', KNOWING)!;
    expect(across(after.text)).toBeGreaterThan(0.1);
    const { findings } = analyse(after.text, 'xyz', KNOWING);
    expect(findings.filter(({ severity }) => severity === 'error')).toEqual([]);
  });
});

describe('a residue that is joined to another', () => {
  const atoms = (number: number, z: number) => [
    pdbAtom(3 * number, 'O', 'HOH', number, [0, 0, z], 'O'),
    pdbAtom(3 * number + 1, 'H1', 'HOH', number, [0.757, 0.586, z], 'H'),
    pdbAtom(3 * number + 2, 'H2', 'HOH', number, [-0.757, 0.586, z], 'H'),
  ];
  const joined = `${[...atoms(1, 0), ...atoms(2, 3), ...atoms(3, 9), 'CONECT    3    6'].join('\n')}\n`;

  it('is not given the dipole of those that are not', () => {
    const { tree, frames } = analyse(joined, 'pdb', KNOWING);
    const after = edited(joined, addDipolesEdits(tree, frames[0]!) as readonly TextEdit[]);
    expect(after).toContain('REMARK  99 fragment=A:HOH:3 dipole_size=1.85 axis=O>H1,H2');
    const [frame] = analyse(after, 'pdb', KNOWING).frames;
    expect(dipoleOf(frame!, 0)).toEqual(dipoleOf(frames[0]!, 0));
    expect(dipoleOf(frame!, 1)[1]).toBeCloseTo(1.85 * DEBYE_E_A, 6);
  });
});

describe('moving apart', () => {
  const ratioAfter = (text: string) => Math.min(...analyse(text).pairs[0]!.map(({ contactRatio }) => contactRatio));

  it('goes to the next written number beyond two van der Waals spheres, 2 × 1.88 Å for argon', () => {
    const after = moved(xyz('fragment_atoms="1 2"', 'Ar 0 0 0.000', 'Ar 0 0 1.000'))!;
    expect(after.text).toBe(xyz('fragment_atoms="1 2"', 'Ar 0 0 0.000', 'Ar 0 0 3.761'));
    expect(after.move.distanceA).toBeCloseTo(2.761, 10);
  });

  it('moves the smaller one, and the later of two alike', () => {
    const text = xyz('fragment_atoms="1 2-3"', 'Ar 0 0 0.0', 'N 0 0 1.0', 'N 0 0 2.1');
    expect(moved(text)!.move.fragment).toBe(0);
    expect(moved(xyz('fragment_atoms="1 2"', 'Ar 0 0 0', 'Ar 0 0 1'))!.move.fragment).toBe(1);
  });

  it('goes on past a third fragment in the way', () => {
    const after = moved(xyz('fragment_atoms="1 2 3"', 'Ar 0 0 0.000', 'Ar 0 0 1.000', 'Ar 0 0 5.000'))!;
    expect(after.text).toContain('Ar 0 0 8.761');
    expect(ratioAfter(after.text)).toBeGreaterThanOrEqual(1);
  });

  it('is not offered where nothing is free within 10 Å', () => {
    const row = Array.from({ length: 6 }, (_, k) => `Ar 0 0 ${(k + 1) * 3}.000`);
    const atoms = [
      'Ar 0 0 0.000',
      'Ar 0 0 0.200',
      ...row,
      ...row.map((line) => line.replace(/ (\d)/g, ' $1').replace('0 0 ', '0 0 -')),
    ];
    expect(moved(xyz('fragment_atoms="1 2 3 4 5 6 7 8 9 10 11 12 13 14"', ...atoms))).toBeNull();
  });

  it('goes along z where the centres coincide', () => {
    expect(moved(xyz('fragment_atoms="1 2"', 'Ar 1 1 1.000', 'Ar 1 1 1.000'))!.text).toContain('Ar 1 1 4.761');
  });

  it('looks at the images in a cell', () => {
    const after = moved(xyz('Lattice="30 0 0 0 30 0 0 0 7" fragment_atoms="1 2"', 'Ar 0 0 0.000', 'Ar 0 0 1.000'));
    // Between the first and its image 7 Å on there is no room for a third sphere.
    expect(after).toBeNull();
    const wider = moved(xyz('Lattice="30 0 0 0 30 0 0 0 9" fragment_atoms="1 2"', 'Ar 0 0 0.000', 'Ar 0 0 8.500'))!;
    expect(wider.text).toContain('Ar 0 0 5.239');
  });

  it('takes the decimals that the file gives, and blanks before a number for a longer one', () => {
    const after = moved(
      xyz('fragment_atoms="1 2"', 'Ar    0.00000    0.00000    9.00000', 'Ar    0.00000    0.00000    9.50000'),
    )!;
    expect(after.text).toContain('Ar    0.00000    0.00000   12.76001\n');
  });

  it('does not move a residue out of its chain', () => {
    const text = `${[
      pdbAtom(1, 'N', 'GLY', 1, [0, 0, 0], 'N'),
      pdbAtom(2, 'CA', 'GLY', 1, [1.45, 0, 0], 'C'),
      pdbAtom(3, 'C', 'GLY', 1, [2, 1.42, 0], 'C'),
      pdbAtom(4, 'N', 'GLY', 2, [3.3, 1.6, 0], 'N'),
      pdbAtom(5, 'CA', 'GLY', 2, [4, 2.9, 0], 'C'),
      pdbAtom(6, 'C', 'GLY', 2, [5.5, 2.7, 0], 'C'),
    ].join('\n')}\n`;
    expect(moved(text, 'pdb')).toBeNull();
  });

  it('does not leave an alternate location behind', () => {
    const text = `${[
      pdbAtom(1, 'AR', 'AR', 1, [0, 0, 0], 'AR'),
      pdbAtom(2, 'AR', 'AR', 2, [0, 0, 1], 'AR', { altLoc: 'A', occupancy: 0.6 }),
      pdbAtom(3, 'AR', 'AR', 2, [0, 0, 1.4], 'AR', { altLoc: 'B', occupancy: 0.4 }),
    ].join('\n')}\n`;
    expect(moved(text, 'pdb')!.move.fragment).toBe(0);
  });

  it('refuses numbers that do not fit their columns', () => {
    const text = `${[pdbAtom(1, 'AR', 'AR', 1, [0, 0, 9998], 'AR'), pdbAtom(2, 'AR', 'AR', 2, [0, 0, 9999], 'AR')].join(
      '\n',
    )}\n`;
    const after = moved(text, 'pdb')!;
    expect(after.move.fragment).toBe(0);
    expect(after.text.split('\n').map((line) => line.length)).toEqual(text.split('\n').map((line) => line.length));
  });
});
