import { parsePdb } from '../../server/src/formats/pdb/parse';
import type { CoordinateTree } from '../../server/src/formats/tree';
import { parseXyz } from '../../server/src/formats/xyz/parse';
import { findClosePairs } from '../../server/src/model/close-pairs';
import { UnionFind } from '../../server/src/model/fragment-set';
import { snapshotOf, snapshotOfBytes } from '../../server/src/text/snapshot';
import type { Case } from './compare';
import { fragmentsNaively, parsePdbNaively, parseXyzNaively } from './naive';
import { buildModel } from './pairs';
import type { WaterBox } from './water';

/** What is done with a text before pairs are looked at. */
export function textCases({ xyz, pdb }: WaterBox): Case[] {
  const bytes = new TextEncoder().encode(xyz);
  const pdbBytes = new TextEncoder().encode(pdb);
  const parsed = parseXyz(snapshotOfBytes(bytes));
  // Made at need: an object an atom would cost every other case longer garbage collections.
  let objects: ReturnType<typeof parseXyzNaively> | undefined;
  const { atoms } = parsed.frames[0]!;
  return [
    {
      name: 'XYZ from bytes',
      c: 'xyz',
      ours: () => parseXyz(snapshotOfBytes(bytes)),
      sum: (tree) => sumOfTree(tree as CoordinateTree),
      naive: () => parseXyzNaively(new TextDecoder().decode(bytes)),
      naiveSum: (list) => sumOfObjects(list as ReturnType<typeof parseXyzNaively>),
      goal: 2.5,
      naiveGoal: 8,
    },
    {
      name: 'XYZ from a string',
      c: 'xyz',
      ours: () => parseXyz(snapshotOf(xyz)),
      sum: (tree) => sumOfTree(tree as CoordinateTree),
      naive: () => parseXyzNaively(xyz),
      naiveSum: (list) => sumOfObjects(list as ReturnType<typeof parseXyzNaively>),
      goal: 3.2,
      naiveGoal: 8,
    },
    {
      name: 'PDB from bytes',
      c: 'pdb',
      ours: () => parsePdb(snapshotOfBytes(pdbBytes)),
      sum: (tree) => sumOfTree(tree as CoordinateTree),
      naive: () => parsePdbNaively(pdb),
      naiveSum: (list) => sumOfObjects(list as ReturnType<typeof parseXyzNaively>),
      goal: 2.5,
    },
    {
      name: 'covalent fragments',
      c: 'fragments',
      ours: () => {
        const pairs = findClosePairs(atoms, atoms.positionA, null);
        const sets = new UnionFind(atoms.count);
        for (let k = 0; k < pairs.count; k++) if (pairs.bonded[k]) sets.union(pairs.first[k]!, pairs.second[k]!);
        return Int32Array.from({ length: atoms.count }, (_, i) => sets.find(i));
      },
      sum: (labels) => sumOf(labels as Int32Array),
      naive: () => {
        objects ??= parseXyzNaively(xyz);
        return fragmentsNaively(objects);
      },
      naiveSum: (labels) => sumOf(labels as number[]),
      goal: 2,
    },
    {
      name: 'whole frame model',
      ours: () => buildModel(parsed),
      sum: (model) => (model as ReturnType<typeof buildModel>).fragments.count,
    },
  ];
}

function sumOf(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i]!;
  return sum;
}

function sumOfTree(tree: CoordinateTree): number {
  const { positionA, element } = tree.frames[0]!.atoms;
  return sumOf(positionA) + sumOf(element);
}

const NUMBER_OF: Record<string, number> = { H: 1, O: 8 };

function sumOfObjects(list: ReturnType<typeof parseXyzNaively>): number {
  let sum = 0;
  for (const { x, y, z } of list) sum = sum + x + y + z;
  return sum + list.reduce((total, { symbol }) => total + NUMBER_OF[symbol]!, 0);
}
