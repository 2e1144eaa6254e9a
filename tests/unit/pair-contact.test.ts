import { describe, expect, test } from 'vitest';
import { analyse, type Fragment, pairOf, type Vector } from '../property/build-frame';

/** Contacts: what clashes, what touches, what is bonded. */

const single = (symbol: string, x: number, chargeE?: number): Fragment => ({
  sites: [{ symbol, at: [x, 0, 0] }],
  ...(chargeE === undefined ? {} : { chargeE }),
});

describe('two single atoms clash', () => {
  // 0.55·(sum of van der Waals radii), the strict rule; Bondi, for the rest Mantina and Alvarez.
  test.each([
    ['C', 'C', 0.55 * 3.4],
    ['O', 'O', 0.55 * 3.04],
    ['C', 'H', 0.55 * 2.9],
    ['H', 'H', 0.55 * 2.4],
    ['Ar', 'Ar', 0.55 * 3.76],
    ['H', 'P', 0.55 * 3],
    ['F', 'F', 0.55 * 2.94],
  ])('%s–%s below %d Å, 0.55 of the radii', (a, b, limit) => {
    expect(pairOf(single(a, 0), single(b, limit - 0.005)).contact).toBe('clash');
    expect(pairOf(single(a, 0), single(b, limit + 0.005)).contact).toBe('touching');
    expect(pairOf(single(b, 0), single(a, limit - 0.005)).advice).toBe('repair');
  });

  // 0.75·(sum of covalent radii): H 0.31, O 0.66, N 0.71, F 0.57, S 1.05, Cl 1.02, Br 1.20, I 1.39, Na 1.66, Li 1.28, Zn 1.22.
  test.each([
    ['H', 'O', 0.75 * 0.97],
    ['H', 'N', 0.75 * 1.02],
    ['H', 'F', 0.75 * 0.88],
    ['H', 'S', 0.75 * 1.36],
    ['H', 'Cl', 0.75 * 1.33],
    ['H', 'Br', 0.75 * 1.51],
    ['H', 'I', 0.75 * 1.7],
    ['Na', 'O', 0.75 * 2.32],
    ['Li', 'F', 0.75 * 1.85],
    ['Zn', 'N', 0.75 * 1.93],
  ])('%s–%s below %d Å only, 0.75 of the covalent radii', (a, b, limit) => {
    expect(pairOf(single(a, 0), single(b, limit - 0.005)).contact).toBe('clash');
    expect(pairOf(single(a, 0), single(b, limit + 0.005)).contact).toBe('touching');
    expect(pairOf(single(b, 0), single(a, limit + 0.005)).contact).toBe('touching');
  });

  test('with opposite charges below 0.75 of the covalent radii only, with like or no charges by the strict rule', () => {
    const at = (x: number, q1: number, q2: number) => pairOf(single('C', 0, q1), single('C', x, q2)).contact;
    expect([at(1.5, 1, -1), at(1.145, -1, 1), at(1.135, 1, -1)]).toEqual(['touching', 'touching', 'clash']);
    expect([at(1.5, 1, 1), at(1.5, 0, 0), at(1.5, 1, 0), at(1.5, 0.1, -1)]).toEqual([
      'clash',
      'clash',
      'clash',
      'clash',
    ]);
  });

  test('in two fragments where any pair clashes, though another is the closest by ratio', () => {
    // H···O at 1.30 Å: ratio 0.478, an allowed contact; C–C at 1.85 Å: ratio 0.544, a clash.
    const first: Fragment = {
      sites: [
        { symbol: 'C', at: [0, 0, 0] },
        { symbol: 'H', at: [0, 5, 0] },
      ],
    };
    const second: Fragment = {
      sites: [
        { symbol: 'C', at: [1.85, 0, 0] },
        { symbol: 'O', at: [1.3, 5, 0] },
      ],
    };
    const pair = pairOf(first, second);
    expect(pair.closest.atoms).toEqual([2, 4]);
    expect(pair.contact).toBe('clash');
  });
});

describe('the closest contact', () => {
  test('is that of the smallest ratio to the radii, not of the smallest distance', () => {
    // H–H 2.6 Å: 1.083; I–I (1.98 each) 3.5 Å: 0.884.
    const first: Fragment = {
      sites: [
        { symbol: 'H', at: [0, 0, 0] },
        { symbol: 'I', at: [0, 6, 0] },
      ],
    };
    const second: Fragment = {
      sites: [
        { symbol: 'H', at: [2.6, 0, 0] },
        { symbol: 'I', at: [3.5, 6, 0] },
      ],
    };
    const { closest } = pairOf(first, second);
    expect(closest.atoms).toEqual([2, 4]);
    expect(closest.distanceA).toBeCloseTo(3.5, 12);
    expect(closest.contactRatio).toBeCloseTo(3.5 / 3.96, 12);
  });

  test('is that of the lowest atom numbers among equals', () => {
    const square = (x: number): Fragment => ({
      sites: [
        { symbol: 'Ar', at: [x, 0, 0] },
        { symbol: 'Ar', at: [x, 8, 0] },
      ],
    });
    expect(pairOf(square(0), square(4)).closest.atoms).toEqual([1, 3]);
  });

  test('leaves ghosts out, and is none between ghosts alone', () => {
    const withGhost: Fragment = {
      sites: [
        { symbol: 'Ar', at: [0, 0, 0] },
        { symbol: 'X', at: [2, 0, 0] },
      ],
    };
    expect(pairOf(withGhost, single('Ar', 4)).closest.atoms).toEqual([1, 3]);
    const ghosts = pairOf(single('X', 0), single('X', 1)).closest;
    expect(ghosts).toEqual({ atoms: null, distanceA: null, contactRatio: null });
  });
});

describe('a shared proton', () => {
  // HF | F with F–H 1.14 twice: within 10 % of equal distance.
  const hf: Fragment = {
    sites: [
      { symbol: 'F', at: [0, 0, 0] },
      { symbol: 'H', at: [1.14, 0, 0] },
    ],
    dipoleEA: [0.01, 0, 0],
  };
  test('between two fragments is touching and to be looked at', () => {
    expect(pairOf(hf, single('F', 2.28))).toMatchObject({ contact: 'touching', advice: 'review' });
  });
});

type PdbAtom = readonly [name: string, residue: string, number: number, at: Vector, element: string];

function pdb(atoms: readonly PdbAtom[], ...records: string[]): string {
  const lines = atoms.map(([name, residue, number, at, element], k) => {
    const label = element.length === 1 ? ` ${name.padEnd(3)}` : name.padEnd(4);
    const place = at.map((x) => x.toFixed(3).padStart(8)).join('');
    const head = `ATOM  ${String(k + 1).padStart(5)} ${label} ${residue.padStart(3)} A${String(number).padStart(4)}    `;
    return `${head}${place}  1.00  0.00          ${element.padStart(2)}`;
  });
  return [...lines, ...records, 'END', ''].join('\n');
}

/** Three glycines in a zigzag along x without hydrogens: bonds of 1.45–1.53 Å within, C–N 1.33 Å between. */
const PEPTIDE: PdbAtom[] = [0, 1, 2].flatMap((r): PdbAtom[] => {
  const x = 3.63 * r;
  const flip = r % 2 === 0 ? 1 : -1;
  return [
    ['N', 'GLY', r + 1, [x, 0, 0], 'N'],
    ['CA', 'GLY', r + 1, [x + 1.2, 0.82 * flip, 0], 'C'],
    ['C', 'GLY', r + 1, [x + 2.45, 0, 0], 'C'],
    ['O', 'GLY', r + 1, [x + 2.45, -1.23 * flip, 0], 'O'],
  ];
});

describe('bonded pairs of a PDB model', () => {
  test('polymer neighbours are bonded and have no numbers; a residue further on is none', () => {
    const { records } = analyse(pdb(PEPTIDE), {}, 'pdb');
    const contacts = Object.fromEntries(records.map((pair) => [`${pair.first}-${pair.second}`, pair.contact]));
    expect(contacts['1-2']).toBe('bonded');
    expect(contacts['2-3']).toBe('bonded');
    expect(contacts['1-3']).not.toBe('bonded');
    const bonded = records.find((pair) => pair.first === 1 && pair.second === 2)!;
    expect(new Set(Object.values(bonded.energyKJPerMol))).toEqual(new Set([null]));
    expect(bonded).toMatchObject({ regime: null, advice: null, validBeyondA: null, referenceKJPerMol: null });
    // Atoms up to three bonds apart make no contact: of the rest, none of C, CA, O with N, CA, C is left but four bonds or more.
    const [i, j] = bonded.closest.atoms!;
    const bonds = (a: number, b: number) => ({ 1: 2, 2: 1, 3: 0, 4: 1 })[a]! + 1 + { 5: 0, 6: 1, 7: 2, 8: 3 }[b]!;
    expect(bonds(i!, j!)).toBeGreaterThan(3);
  });

  test('the same residues apart by more than a bond are no neighbours', () => {
    const broken = PEPTIDE.map(([name, residue, number, [x, y, z], element]): PdbAtom => {
      return [name, residue, number, [x + (number - 1) * 2, y, z], element];
    });
    const { records } = analyse(pdb(broken), {}, 'pdb');
    expect(records.map((pair) => pair.contact)).not.toContain('bonded');
    expect(records.every((pair) => pair.advice !== null)).toBe(true);
  });

  const far: PdbAtom[] = [
    ['SG', 'CYS', 10, [0, 0, 0], 'S'],
    ['CB', 'CYS', 10, [1.8, 0, 0], 'C'],
    ['C1', 'LIG', 20, [-1.8, 0, 0], 'C'],
    ['O1', 'LIG', 20, [-2.4, 1.2, 0], 'O'],
    ['AR', 'AR', 30, [0, 8, 0], 'AR'],
  ];

  test('residues joined by CONECT outside the backbone form one fragment', () => {
    const { frame } = analyse(pdb(far, 'CONECT    1    3'), {}, 'pdb');
    expect(Array.from(frame.model.fragments.ofAtom)).toEqual([0, 0, 0, 0, 1]);
    expect(Array.from(analyse(pdb(far), {}, 'pdb').frame.model.fragments.ofAtom)).toEqual([0, 0, 1, 1, 2]);
  });

  test('residues joined by LINK outside the backbone form one fragment', () => {
    const link = 'LINK         SG  CYS A  10                 C1  LIG A  20     1555   1555  1.80';
    const { frame } = analyse(pdb(far, link), {}, 'pdb');
    expect(Array.from(frame.model.fragments.ofAtom)).toEqual([0, 0, 0, 0, 1]);
  });

  test('ends of a ring closed by a LINK of backbone atoms stay two fragments that are bonded', () => {
    const link = 'LINK         C   GLY A   3                 N   GLY A   1     1555   1555  1.33';
    const { frame, records } = analyse(pdb(PEPTIDE, link), {}, 'pdb');
    expect(frame.model.fragments.count).toBe(3);
    expect(records.find((pair) => pair.first === 1 && pair.second === 3)).toMatchObject({
      contact: 'bonded',
      advice: null,
    });
  });

  test('two residues at a covalent distance that are no polymer neighbours are not bonded', () => {
    const { records } = analyse(pdb(far), {}, 'pdb');
    const pair = records.find((record) => record.first === 1 && record.second === 2)!;
    expect(pair.contact).toBe('clash');
    expect(pair.closest.atoms).toEqual([1, 3]);
  });

  test('declared fragments of an XYZ file are never bonded, however close', () => {
    // C–C 1.5 Å: ratio 0.44
    expect(pairOf(single('C', 0), single('C', 1.5)).contact).toBe('clash');
    // C–O 1.9 Å, within c + c + 0.4 = 1.82? no: touching only
    expect(pairOf(single('C', 0), single('O', 1.9)).contact).toBe('touching');
  });
});
