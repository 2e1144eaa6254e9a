import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { scanAtoms } from '../../server/src/analysis/contact';
import { FileAnalysis, pairsOf } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { System } from '../../server/src/analysis/system';
import { FindingCollector } from '../../server/src/base/finding';
import type { CoordinateTree } from '../../server/src/formats/tree';
import { parseXyz } from '../../server/src/formats/xyz/parse';
import { buildFrameModel, type FrameModel } from '../../server/src/model/frame-model';
import { NeighbourBuffer } from '../../server/src/model/neighbour-buffer';
import { PointGrid } from '../../server/src/model/point-grid';
import { VDW_RADIUS_A } from '../../server/src/physics/elements';
import { dipoleDipole } from '../../server/src/physics/multipole-energies';
import { snapshotOf } from '../../server/src/text/snapshot';
import type { Case } from './compare';
import { contactsNaively, dipoleSumNaively, type Site } from './naive';
import type { WaterBox } from './water';

const CUTOFF_A = 12;

export function buildModel(tree: CoordinateTree): FrameModel {
  return buildFrameModel(tree, tree.frames[0]!, null, false, new FindingCollector());
}

/** The pair kernels on the molecules of a box with TIP3P charges; their data also go to files for C. */
export function pairCases(box: WaterBox, folder: string): Case[] {
  const text = box.xyz
    .replace('water', 'Properties=species:S:1:pos:R:3:charge:R:1')
    .replace(/^([OH]) .*$/gm, (line, symbol) => `${line} ${symbol === 'O' ? '-0.834' : '0.417'}`);
  const frame = new FileAnalysis(parseXyz(snapshotOf(text)), DEFAULT_REQUEST).frame(0);
  const { system } = frame;
  const pairs = pairsWithin(system);
  const { centreA, dipoleEA } = system.moments;
  const files = {
    pairs,
    starts: system.starts,
    local: system.localA,
    charge: system.columnE,
    kind: system.element,
    centre: centreA,
    dipole: dipoleEA,
  };
  for (const [name, data] of Object.entries(files)) writeFileSync(join(folder, `${name}.bin`), data);
  const number = (value: unknown) => value as number;
  const centres = Array.from({ length: system.count }, (_, f) => [...centreA.subarray(3 * f, 3 * f + 3)]);
  const points = centres.map(([x, y, z]) => ({ x: x!, y: y!, z: z! }));
  const dipoles = centres.map((_, f) => [...dipoleEA.subarray(3 * f, 3 * f + 3)]);
  const fragments = centres.map((_, f) => sitesOf(system, f));
  return [
    {
      name: 'pairs within 12 Å, dipole-dipole',
      c: 'dipoles',
      ours: () => dipoleSum(system),
      sum: number,
      naive: () => dipoleSumNaively(points, dipoles, CUTOFF_A),
      goal: 2.3,
    },
    {
      name: 'Coulomb and closest contact',
      c: 'contacts',
      ours: () => contacts(system, pairs),
      sum: number,
      naive: () => contactsNaively(pairs, fragments, centres),
      goal: 2,
    },
    {
      name: 'whole pair list',
      ours: () => {
        let count = 0;
        for (const pair of pairsOf(frame)) count += pair.first < pair.second ? 1 : 0;
        return count;
      },
      sum: number,
    },
  ];
}

function pairsWithin(system: System): Int32Array {
  const grid = new PointGrid(system.moments.centreA, null, CUTOFF_A, null);
  const buffer = new NeighbourBuffer();
  const pairs: number[] = [];
  for (let f = 0; f < system.count; f++) {
    grid.gather(f, CUTOFF_A, true, buffer);
    for (let k = 0; k < buffer.count; k++) pairs.push(f, buffer.index[k]!);
  }
  return Int32Array.from(pairs);
}

function dipoleSum(system: System): number {
  const { centreA, dipoleEA: m } = system.moments;
  const grid = new PointGrid(centreA, null, CUTOFF_A, null);
  const buffer = new NeighbourBuffer();
  let sum = 0;
  for (let f = 0; f < system.count; f++) {
    grid.gather(f, CUTOFF_A, true, buffer);
    const { count, index, vectorA } = buffer;
    const px = m[3 * f]!;
    const py = m[3 * f + 1]!;
    const pz = m[3 * f + 2]!;
    for (let k = 0; k < count; k++) {
      const g = 3 * index[k]!;
      const x = vectorA[3 * k]!;
      const y = vectorA[3 * k + 1]!;
      const z = vectorA[3 * k + 2]!;
      const r = Math.sqrt(x * x + y * y + z * z);
      const pu = (px * x + py * y + pz * z) / r;
      const qu = (m[g]! * x + m[g + 1]! * y + m[g + 2]! * z) / r;
      sum += dipoleDipole(px * m[g]! + py * m[g + 1]! + pz * m[g + 2]!, pu, qu, r);
    }
  }
  return sum;
}

function contacts(system: System, pairs: Int32Array): number {
  const { centreA: c } = system.moments;
  let total = 0;
  for (let k = 0; k < pairs.length; k += 2) {
    const f = pairs[k]!;
    const g = pairs[k + 1]!;
    const dx = c[3 * g]! - c[3 * f]!;
    const dy = c[3 * g + 1]! - c[3 * f + 1]!;
    const dz = c[3 * g + 2]! - c[3 * f + 2]!;
    const { columnSum, contactRatio } = scanAtoms(system, f, g, dx, dy, dz, false);
    total += columnSum + contactRatio;
  }
  return total;
}

function sitesOf(system: System, f: number): Site[] {
  const { starts, localA, columnE, element } = system;
  return Array.from({ length: starts[f + 1]! - starts[f]! }, (_, n) => {
    const i = starts[f]! + n;
    const radius = VDW_RADIUS_A[element[i]!]!;
    return { place: [...localA.subarray(3 * i, 3 * i + 3)], charge: columnE[i]!, radius };
  });
}
