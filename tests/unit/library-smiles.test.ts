import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readSmiles } from '../../server/src/library/smiles';
import { symbolOf } from '../../server/src/physics/elements';

function formulaOf(elements: readonly number[]): string {
  const counts = new Map<string, number>();
  for (const z of elements) counts.set(symbolOf(z), (counts.get(symbolOf(z)) ?? 0) + 1);
  return [...counts]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([symbol, count]) => `${symbol}${count}`)
    .join(' ');
}

/** Formulas and charges from the meaning of each SMILES in OpenSMILES, not from the reader. */
const READABLE: [smiles: string, formula: string, bonds: number, chargeE: number][] = [
  ['O', 'H2 O1', 2, 0],
  ['[H]O[H]', 'H2 O1', 2, 0],
  ['[OH2]', 'H2 O1', 2, 0],
  ['[2H]O[2H]', 'H2 O1', 2, 0],
  ['[HH]', 'H2', 1, 0],
  ['[H][H]', 'H2', 1, 0],
  ['C', 'C1 H4', 4, 0],
  ['CC', 'C2 H6', 7, 0],
  ['C=C', 'C2 H4', 5, 0],
  ['C#C', 'C2 H2', 3, 0],
  ['C-C', 'C2 H6', 7, 0],
  ['[C-]#[O+]', 'C1 O1', 1, 0],
  ['N', 'H3 N1', 3, 0],
  ['[NH4+]', 'H4 N1', 4, 1],
  ['CN(C)C', 'C3 H9 N1', 12, 0],
  ['O=N(=O)C', 'C1 H3 N1 O2', 6, 0],
  ['P', 'H3 P1', 3, 0],
  ['FP(F)(F)(F)F', 'F5 P1', 5, 0],
  ['S', 'H2 S1', 2, 0],
  ['CS(C)=O', 'C2 H6 O1 S1', 9, 0],
  ['CS(=O)(=O)C', 'C2 H6 O2 S1', 10, 0],
  ['FS(F)(F)(F)(F)F', 'F6 S1', 6, 0],
  ['B', 'B1 H3', 3, 0],
  ['Cl', 'Cl1 H1', 1, 0],
  ['BrC(Br)Br', 'Br3 C1 H1', 4, 0],
  ['[Na+]', 'Na1', 0, 1],
  ['[Ca+2]', 'Ca1', 0, 2],
  ['[Ca++]', 'Ca1', 0, 2],
  ['[O--]', 'O1', 0, -2],
  ['[O-2]', 'O1', 0, -2],
  ['[Fe+3:7]', 'Fe1', 0, 3],
  ['[O-]S(=O)(=O)[O-]', 'O4 S1', 4, -2],
  ['CC(=O)[O-]', 'C2 H3 O2', 6, -1],
  ['C1CC1', 'C3 H6', 9, 0],
  ['C%12CC%12', 'C3 H6', 9, 0],
  ['C=1CCCCC1', 'C6 H10', 16, 0],
  ['C1CCCCC=1', 'C6 H10', 16, 0],
  ['c1ccccc1', 'C6 H6', 12, 0],
  ['C1=CC=CC=C1', 'C6 H6', 12, 0],
  ['c1ccc2ccccc2c1', 'C10 H8', 19, 0],
  ['n1ccccc1', 'C5 H5 N1', 11, 0],
  ['[nH]1cccc1', 'C4 H5 N1', 10, 0],
  ['Cn1cccc1', 'C5 H7 N1', 13, 0],
  ['o1cccc1', 'C4 H4 O1', 9, 0],
  ['s1cccc1', 'C4 H4 S1', 9, 0],
  ['c1c[nH]cn1', 'C3 H4 N2', 9, 0],
  ['O=c1cc[nH]cc1', 'C5 H5 N1 O1', 12, 0],
  ['c1ccc(cc1)-c1ccccc1', 'C12 H10', 23, 0],
  ['N[C@@H](C)C(=O)O', 'C3 H7 N1 O2', 12, 0],
  ['C(C(C(C)))C', 'C5 H12', 16, 0],
  ['C[Si](C)(C)C', 'C4 H12 Si1', 16, 0],
];

const UNREADABLE: [smiles: string, at: number, reason: RegExp][] = [
  ['', 0, /no atom/],
  ['X', 0, /"X" is not understood/],
  ['CQ', 1, /"Q"/],
  ['C(', 2, /not closed/],
  ['C)', 1, /never opened/],
  ['C()C', 2, /no atom/],
  ['(C)', 0, /out of place/],
  ['C1CC', 1, /Ring 1 is not closed/],
  ['C11', 2, /bonded to/],
  ['C1C1', 3, /bonded to/],
  ['C=1CC-1', 6, /different bonds/],
  ['1CC1', 0, /must follow an atom/],
  ['C=', 2, /leads nowhere/],
  ['C==C', 2, /out of place/],
  ['=C', 0, /out of place/],
  ['C(=)C', 3, /out of place/],
  ['[Xx]', 0, /"Xx" is no element/],
  ['[C', 0, /brackets/],
  ['[]', 0, /brackets/],
  ['[C+-]', 0, /brackets/],
  ['*', 0, /not understood/],
  ['[Na+].[Cl-]', 5, /must be bonded/],
  ['F/C=C/F', 1, /cis and trans/],
  ['F\\C=C/F', 1, /cis and trans/],
  ['C C', 1, /not understood/],
  ['C'.repeat(201), 200, /more than 200 atoms/],
  ['C'.repeat(301), 300, /longer than 300/],
];

describe('readSmiles', () => {
  it.each(READABLE)('reads %s as %s', (smiles, formula, bonds, chargeE) => {
    const result = readSmiles(smiles);
    if (!result.ok) throw new Error(result.reason);
    expect(formulaOf(result.molecule.elements)).toBe(formula);
    expect(result.molecule.bonds).toHaveLength(bonds);
    expect(result.molecule.chargeE).toBe(chargeE);
  });

  it('numbers atoms as written, then the hydrogens left out in the order of their atoms', () => {
    const result = readSmiles('CO');
    expect(result).toEqual({
      ok: true,
      molecule: {
        elements: [6, 8, 1, 1, 1, 1],
        bonds: [
          [0, 1],
          [0, 2],
          [0, 3],
          [0, 4],
          [1, 5],
        ],
        chargeE: 0,
      },
    });
  });

  it.each(UNREADABLE)('refuses %s with a place and a reason', (smiles, at, reason) => {
    const result = readSmiles(smiles);
    expect(result).toMatchObject({ ok: false, at, reason: expect.stringMatching(reason) });
  });

  it('never throws, and what it reads has bonds between atoms that it has', () => {
    const letters = fc.constantFrom(...'CNOSPFBIcnosHl123%()[]=#+-/.@: ');
    fc.assert(
      fc.property(fc.array(letters, { maxLength: 30 }), (characters) => {
        const result = readSmiles(characters.join(''));
        if (result.ok) {
          const { elements, bonds } = result.molecule;
          expect(bonds.flat().every((atom) => atom >= 0 && atom < elements.length)).toBe(true);
        } else expect(result.reason).toMatch(/\.$/);
      }),
      { numRuns: 2000 },
    );
  });
});
