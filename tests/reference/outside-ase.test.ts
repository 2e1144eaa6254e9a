import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it, type TestContext } from 'vitest';
import { scanEntries } from '../../server/src/formats/annotation/entries';
import { typedValue } from '../../server/src/formats/annotation/values';
import { parse } from '../../server/src/formats/parse';
import type { FrameTree } from '../../server/src/formats/tree';
import { symbolOf } from '../../server/src/physics/elements';
import { snapshotOf } from '../../server/src/text/snapshot';
import { polewise, ROOT } from './data/outside-cli';
import { read } from './data/outside-program';

/**
 * An annotated file stays a file for other programs: the samples, and the dimers that the program writes, are read by the extended
 * XYZ reader of ASE (Atomic Simulation Environment), and ASE's own files by the program. Where ASE is not installed the tests that
 * need it are skipped with the reason, and what the convention asks of a file is checked alone.
 */

const MISSING = 'ASE is not installed: apt-get install python3-ase';

function python(script: string, argv: readonly string[] = []): { ok: boolean; stdout: string } {
  for (const command of ['/usr/bin/python3', 'python3']) {
    const { status, stdout } = spawnSync(command, ['-c', script, ...argv], { encoding: 'utf8', maxBuffer: 2 ** 28 });
    if (status === 0) return { ok: true, stdout };
  }
  return { ok: false, stdout: '' };
}

const probe = python('import ase, ase.io; print(ase.__version__)');
const ase = probe.ok ? `ASE ${probe.stdout.trim()}` : `ASE [${MISSING}]`;

function needAse(context: TestContext): void {
  if (!probe.ok) context.skip(MISSING);
}

interface AseFrame {
  symbols: string[];
  positions: number[][];
  charges: number[] | null;
  fragment: (string | number)[] | null;
  cell: number[][];
  pbc: boolean[];
}

const READER = `
import json, sys
from ase.io import read
def charges(atoms):
    for name in ('initial_charges', 'charge', 'charges'):
        if name in atoms.arrays:
            return atoms.arrays[name].tolist()
    if atoms.calc is not None and atoms.calc.results.get('charges') is not None:
        return atoms.calc.results['charges'].tolist()
    return None
def record(atoms):
    return dict(symbols=atoms.get_chemical_symbols(), positions=atoms.get_positions().tolist(), charges=charges(atoms),
                fragment=atoms.arrays['fragment'].tolist() if 'fragment' in atoms.arrays else None,
                cell=atoms.cell.tolist() if atoms.cell.rank else [], pbc=atoms.pbc.tolist())
print(json.dumps([[record(a) for a in read(p, index=':', format='extxyz')] for p in sys.argv[1:]]))
`;

function aseReads(paths: readonly string[]): AseFrame[][] {
  const { ok, stdout } = python(READER, paths);
  expect(ok).toBe(true);
  return JSON.parse(stdout);
}

const programReads = (path: string) => parse(snapshotOf(readFileSync(path, 'utf8')), 'xyz');

function asAse({ atoms, groups, cell }: FrameTree): AseFrame {
  const rows = (values: ArrayLike<number>) =>
    Array.from({ length: values.length / 3 }, (_, k) => [values[3 * k]!, values[3 * k + 1]!, values[3 * k + 2]!]);
  const name = (k: number) => (groups!.areWords ? groups!.names[k]! : Number(groups!.names[k]!));
  return {
    symbols: Array.from(atoms.element, symbolOf),
    positions: rows(atoms.positionA),
    charges: atoms.chargeE === null ? null : Array.from(atoms.chargeE),
    fragment: atoms.group === null ? null : Array.from(atoms.group, name),
    cell: cell === null ? [] : rows(cell.vectorsA),
    pbc: cell === null ? [false, false, false] : [...cell.periodic],
  };
}

const SAMPLES = readdirSync(join(ROOT, 'samples'))
  .filter((name) => name.endsWith('.xyz') && !name.startsWith('typical-mistakes'))
  .map((name) => join('samples', name));

describe(`samples and ${ase}`, () => {
  it('there are at least six samples', () => {
    expect(SAMPLES.length).toBeGreaterThanOrEqual(6);
  });

  for (const sample of SAMPLES) {
    it(`${sample} is read by ASE as by the program`, (context) => {
      needAse(context);
      const [frames] = aseReads([join(ROOT, sample)]);
      expect(frames).toEqual(programReads(join(ROOT, sample)).frames.map(asAse));
    });
  }

  it.each(SAMPLES)('%s keeps to the convention', (sample) => {
    expectConvention(readFileSync(join(ROOT, sample), 'utf8'));
  });
});

/** What the convention asks: count, columns as declared, lists flat and quoted, and values that every reader takes. */
function expectConvention(text: string): void {
  const lines = text.split('\n');
  for (let at = 0; at < lines.length && lines[at]!.trim() !== ''; ) {
    const count = Number(lines[at]);
    expect(Number.isInteger(count) && count > 0).toBe(true);
    const comment = snapshotOf(lines[at + 1]!);
    const entries = scanEntries(comment, 0, comment.length);
    for (const entry of entries) {
      expect(entry.key).toMatch(/^[A-Za-z][A-Za-z0-9_]*$/);
      expect(entry.form).toMatch(/^(?:bare|quoted)$/);
      if (entry.key !== 'kind_axes') expect([entry.key, typedValue(comment, entry).kind]).not.toContain('invalid');
    }
    // Without the key a line is a symbol and three coordinates.
    const properties = entries.find(({ key }) => key === 'Properties')?.inner;
    const declared = properties === undefined ? 'species:S:1:pos:R:3' : comment.slice(properties.start, properties.end);
    const widths = declared.split(':').filter((_, k) => k % 3 === 2);
    const columns = widths.reduce((sum, width) => sum + Number(width), 0);
    for (const line of lines.slice(at + 2, at + 2 + count)) expect(line.trim().split(/\s+/)).toHaveLength(columns);
    at += count + 2;
  }
}

describe(`files that dimers writes and ${ase}`, () => {
  const folder = mkdtempSync(join(tmpdir(), 'polewise-ase-'));
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  const sources: [source: string, advice: string][] = [
    ['samples/water-cluster.xyz', 'accept,review,compute'],
    ['samples/ion-pair.xyz', 'accept,review,compute'],
    ['samples/media-and-units.xyz', 'accept,review,compute'],
    ['samples/nonpolar-pair.xyz', 'accept,review,compute'],
    ['samples/polar-dimer-scan.xyz', 'accept,review,compute'],
    ['samples/periodic-box.xyz', 'compute'],
    ['samples/binding-site.pdb', 'accept,review,compute'],
  ];
  describe.each(sources)('%s (%s)', (source, advice) => {
    const out = join(folder, source.replace(/\W/g, '-'));
    let paths: string[] = [];
    beforeAll(() => {
      expect(polewise('dimers', source, '--out', out, '--advice', advice).status).toBe(0);
      paths = readdirSync(out).map((name) => join(out, name));
    });

    it('writes at least one file', () => {
      expect(paths.length).toBeGreaterThan(0);
    });

    it('each keeps to the convention', () => {
      for (const path of paths) expectConvention(readFileSync(path, 'utf8'));
    });

    it('each has two fragments and no error', () => {
      for (const path of paths) {
        const { fragments, findings } = read(readFileSync(path, 'utf8'));
        expect(fragments).toHaveLength(2);
        expect(findings.filter((finding) => finding.startsWith('error'))).toEqual([]);
      }
    });

    it('each is read by ASE as by the program', (context) => {
      needAse(context);
      expect(aseReads(paths)).toEqual(paths.map((path) => programReads(path).frames.map(asAse)));
    });
  });
});

describe(`files that ${ase} writes`, () => {
  const WRITER = `
import sys
from ase import Atoms
from ase.io import write
from ase.calculators.singlepoint import SinglePointCalculator
water = Atoms('OH2', positions=[[0, 0, 0.119], [0, 0.763, -0.477], [0, -0.763, -0.477]], cell=[[9, 0, 0], [1, 8, 0], [0, 2, 7]],
              pbc=[True, False, True])
water.set_initial_charges([-0.8, 0.4, 0.4])
water.calc = SinglePointCalculator(water, energy=-14.2, dipole=[0, 0, -0.39], forces=[[0, 0, 1], [0, 0, 0], [0, 0, -1]])
water.info['note'] = 'written by ASE'
write(sys.argv[1], [water, water], format='extxyz')
`;
  it('are read with symbols, positions, charges, cell and periodic directions, and no error or warning', (context) => {
    needAse(context);
    const folder = mkdtempSync(join(tmpdir(), 'polewise-ase-'));
    const path = join(folder, 'water.xyz');
    expect(python(WRITER, [path]).ok).toBe(true);
    const text = readFileSync(path, 'utf8');
    rmSync(folder, { recursive: true, force: true });
    const { file, findings, fragments } = read(text);
    expect(file.frames).toHaveLength(2);
    expect(asAse(file.frames[1]!)).toEqual({
      symbols: ['O', 'H', 'H'],
      positions: [
        [0, 0, 0.119],
        [0, 0.763, -0.477],
        [0, -0.763, -0.477],
      ],
      charges: [-0.8, 0.4, 0.4],
      fragment: null,
      cell: [
        [9, 0, 0],
        [1, 8, 0],
        [0, 2, 7],
      ],
      pbc: [true, false, true],
    });
    expect(fragments[0]!.dipoleSource).toBe('charges');
    expect(findings.filter((finding) => /^(?:error|warning)/.test(finding))).toEqual([]);
  });
});
