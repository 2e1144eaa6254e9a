import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { parsePdb } from '../../server/src/formats/pdb/parse';
import type { CoordinateTree } from '../../server/src/formats/tree';
import { parseXyz } from '../../server/src/formats/xyz/parse';
import { findClosePairs } from '../../server/src/model/close-pairs';
import { UnionFind } from '../../server/src/model/fragment-set';
import { snapshotOf, snapshotOfBytes } from '../../server/src/text/snapshot';
import { type Case, compare, type Row, showTable } from './compare';
import { fragmentsNaively, parsePdbNaively, parseXyzNaively } from './naive';
import { buildModel, pairCases } from './pairs';
import { compileReference, Reference } from './reference';
import { type WaterBox, waterBox } from './water';

/** Runs all cases and prints their table; false where versions disagree. */
export async function runBench(folder: string, source: string, args: readonly string[]): Promise<boolean> {
  const option = (name: string) => args.find((arg) => arg.startsWith(`--${name}=`))?.slice(name.length + 3);
  const rounds = Math.max(1, Number(option('rounds') ?? 9));
  const only = option('only') ?? '';
  const sizes = args.includes('--small') ? [100_000] : [100_000, 1_000_000];
  const compiled = compileReference(source, folder);
  if ('reason' in compiled) console.log(`Left out: the C reference and every ratio to it (${compiled.reason}).`);
  const rows: Row[] = [];
  for (const size of sizes) {
    const box = waterBox(size);
    const data = join(folder, String(size));
    mkdirSync(data);
    writeFileSync(join(data, 'water.xyz'), box.xyz);
    writeFileSync(join(data, 'water.pdb'), box.pdb);
    const withPairs = size === sizes[0];
    const cases = [...textCases(box), ...(withPairs ? pairCases(box, data) : [])];
    const reference = 'program' in compiled ? new Reference(compiled.program, data, withPairs) : null;
    for (const entry of cases) {
      if (!entry.name.toLowerCase().includes(only.toLowerCase())) continue;
      // The C fragments work on the coordinates that C has parsed.
      if (entry.c === 'fragments') await reference?.run('xyz');
      rows.push(await compare(entry, box.atoms, rounds, reference));
    }
    reference?.close();
  }
  showTable(rows, rounds);
  return rows.every((row) => row.agrees);
}

function textCases({ xyz, pdb }: WaterBox): Case[] {
  const bytes = new TextEncoder().encode(xyz);
  const pdbBytes = new TextEncoder().encode(pdb);
  const parsed = parseXyz(snapshotOfBytes(bytes));
  const objects = parseXyzNaively(xyz);
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
      naive: () => fragmentsNaively(objects),
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
