import { spawn, spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';

const CLI = resolve('server/dist/cli.cjs');
const CLUSTER = resolve('samples/water-cluster.xyz');
const SITE = resolve('samples/binding-site.pdb');
const MISTAKES = resolve('samples/typical-mistakes.xyz');

function polewise(args: readonly string[], options: { input?: string | Buffer; cwd?: string } = {}) {
  const result = spawnSync('node', [CLI, ...args], { encoding: 'utf8', maxBuffer: 1 << 28, ...options });
  return { status: result.status, stdout: result.stdout, stderr: result.stderr };
}

const folder = () => mkdtempSync(join(tmpdir(), 'polewise-'));

describe('exit status', () => {
  it.each([
    ['findings of a sound file: 0', ['findings', CLUSTER], 0],
    ['findings with an error: 1', ['findings', MISTAKES], 1],
    ['warnings count from --fail-on warning on', ['findings', '--fail-on', 'warning', CLUSTER], 1],
    ['information counts from --fail-on information on', ['findings', '--fail-on', 'information', CLUSTER], 1],
    ['pairs: 0, whatever was found', ['pairs', MISTAKES], 0],
    ['a file that is not there: 2', ['pairs', 'nowhere.xyz'], 2],
    ['a folder: 2', ['findings', 'samples'], 2],
    ['an ending that tells no format: 2', ['findings', 'package.json'], 2],
    ['an unknown flag: 2', ['pairs', '--colour', CLUSTER], 2],
    ['an unknown command: 2', ['frobnicate'], 2],
    ['no command: 2', [], 2],
    ['no file: 2', ['pairs'], 2],
    ['a cutoff of zero: 2', ['pairs', '--cutoff', '0', CLUSTER], 2],
    ['a permittivity below one: 2', ['pairs', '--permittivity', '0.5', CLUSTER], 2],
    ['a medium nobody knows: 2', ['pairs', '--permittivity', 'treacle', CLUSTER], 2],
    ['a temperature of zero: 2', ['pairs', '--temperature', '0', CLUSTER], 2],
    ['an unknown unit: 2', ['pairs', '--unit', 'furlong', CLUSTER], 2],
    ['a frame the file does not have: 2', ['pairs', '--frame', '2', CLUSTER], 2],
    ['a focus that names nothing: 2', ['pairs', '--focus', 'nobody', CLUSTER], 2],
    ['dimers without a folder: 2', ['dimers', CLUSTER], 2],
    ['help: 0', ['--help'], 0],
    ['version: 0', ['--version'], 0],
  ] as const)('%s', (_, args, status) => {
    expect(polewise(args).status).toBe(status);
  });

  it('is 2 for a file without a frame, and the other files are still done', () => {
    const empty = join(folder(), 'empty.xyz');
    writeFileSync(empty, '');
    const { status, stdout, stderr } = polewise(['findings', empty, CLUSTER]);
    expect(status).toBe(2);
    expect(stderr).toContain('holds no frame');
    expect(stdout).toContain('error no-frame');
    expect(stdout).toContain('near-field');
  });

  it('is 130 on an interrupt', async () => {
    const big = join(folder(), 'big.xyz');
    const atoms = Array.from(
      { length: 30000 },
      (_, i) => `Ar ${(i % 31) * 3.8} ${(Math.floor(i / 31) % 31) * 3.8} ${Math.floor(i / 961) * 3.8}`,
    );
    writeFileSync(big, `${atoms.length}\n\n${atoms.join('\n')}\n`);
    const child = spawn('node', [CLI, 'pairs', '--format', 'jsonl', '--cutoff', '40', big]);
    child.stdout.once('data', () => child.kill('SIGINT'));
    child.stdout.resume();
    const status = await new Promise((done) => child.on('exit', done));
    expect(status).toBe(130);
  });

  it('is 0 and quiet when the reader goes away', async () => {
    const child = spawn('node', [CLI, 'pairs', '--format', 'jsonl', resolve('samples/periodic-box.xyz')]);
    let stderr = '';
    child.stderr.on('data', (piece) => {
      stderr += piece;
    });
    child.stdout.destroy();
    const status = await new Promise((done) => child.on('exit', done));
    expect([status, stderr]).toEqual([0, '']);
  });
});

describe('input', () => {
  it('reads standard input as -', () => {
    const { status, stdout } = polewise(['findings', '-', '--language', 'xyz'], { input: readFileSync(CLUSTER) });
    expect(status).toBe(0);
    expect(stdout).toMatch(/^-:3:1: warning near-field: /);
  });

  it('asks for the language of standard input', () => {
    const { status, stderr } = polewise(['findings', '-'], { input: '' });
    expect([status, stderr]).toEqual([2, 'polewise: standard input: say --language xyz or --language pdb\n']);
  });

  it('reads a gzip file like the file itself', () => {
    const packed = join(folder(), 'cluster.xyz.gz');
    writeFileSync(packed, gzipSync(readFileSync(CLUSTER)));
    const plain = polewise(['pairs', '--format', 'csv', CLUSTER]).stdout.replaceAll(CLUSTER, 'FILE');
    expect(polewise(['pairs', '--format', 'csv', packed]).stdout.replaceAll(packed, 'FILE')).toBe(plain);
  });

  it('says of damaged gzip data that they are damaged', () => {
    const packed = join(folder(), 'cluster.xyz.gz');
    writeFileSync(packed, gzipSync(readFileSync(CLUSTER)).subarray(0, 100));
    const { status, stderr } = polewise(['pairs', packed]);
    expect(status).toBe(2);
    expect(stderr).toContain('the gzip data are damaged');
  });
});

describe('formats', () => {
  const first = (args: readonly string[]) => polewise(args).stdout;

  it('pairs as JSON is one object for a file and an array for several', () => {
    const one = JSON.parse(first(['pairs', '--format', 'json', CLUSTER]));
    expect([one.schema, one.file, one.language, one.frames.length]).toEqual(['polewise/pairs/1', CLUSTER, 'xyz', 1]);
    const two = JSON.parse(first(['pairs', '--format', 'json', CLUSTER, SITE]));
    expect(two.map((entry: { language: string }) => entry.language)).toEqual(['xyz', 'pdb']);
    expect(two[0]).toEqual(one);
  });

  it('jsonl holds the pairs of json with file and frame', () => {
    const lines = first(['pairs', '--format', 'jsonl', CLUSTER])
      .trim()
      .split('\n')
      .map((line) => JSON.parse(line));
    const { frames } = JSON.parse(first(['pairs', '--format', 'json', CLUSTER]));
    expect(lines).toEqual(frames[0].pairs.map((pair: object) => ({ file: CLUSTER, frame: 1, ...pair })));
  });

  it('csv has the names of json, nested ones joined by a dot', () => {
    const [titles, row] = first(['pairs', '--format', 'csv', CLUSTER]).split('\n');
    expect(titles).toContain('energyKJPerMol.pointDipole');
    expect(titles).toContain('thermal.averageKJPerMol');
    expect(titles!.split(',').length).toBe(row!.split(',').length);
  });

  it('findings as JSON counts by severity', () => {
    const report = JSON.parse(first(['findings', '--format', 'json', MISTAKES]));
    expect(report.schema).toBe('polewise/findings/1');
    expect(report.counts.error).toBe(
      report.findings.filter((entry: { severity: string }) => entry.severity === 'error').length,
    );
    expect(Object.keys(report.counts)).toEqual(['error', 'warning', 'information', 'hint']);
  });

  it('findings as JSON is an array for several files', () => {
    const reports = JSON.parse(first(['findings', '--format', 'json', CLUSTER, MISTAKES]));
    expect(reports.map((report: { file: string }) => report.file)).toEqual([CLUSTER, MISTAKES]);
  });

  it('the text table shows the first frame and says how many follow', () => {
    expect(first(['pairs', 'samples/polar-dimer-scan.xyz'])).toMatch(
      /^samples\/polar-dimer-scan\.xyz: frame 1 of 12, 11 more follow/,
    );
    expect(first(['pairs', '--frame', '3', 'samples/polar-dimer-scan.xyz'])).toMatch(/: frame 3 of 12\n/);
  });

  it('the text table shows energies in the unit asked for', () => {
    const energy = (unit: string) => {
      const table = first(['pairs', '--unit', unit, CLUSTER]);
      return Number(/1–2 H2O·H2O .*skewed +(−[\d.]+)/.exec(table)![1]!.replace('−', '-'));
    };
    expect(energy('kcal/mol') * 4.184).toBeCloseTo(energy('kJ/mol'), 1);
  });
});

describe('flags', () => {
  const pairsOf = (...args: string[]) => JSON.parse(polewise(['pairs', '--format', 'json', ...args]).stdout).frames[0];

  it('beat the keys of the file', () => {
    const { settings } = pairsOf('--temperature', '25 degC', '--permittivity', 'toluene', 'samples/ion-pair.xyz');
    expect([settings.temperatureK, settings.relativePermittivity]).toEqual([298.15, 2.379]);
  });

  it('leave the keys of the file where they are not given', () => {
    const { settings } = pairsOf('samples/ion-pair.xyz');
    expect([settings.temperatureK, settings.relativePermittivity]).toEqual([310, 8]);
  });

  it('focus by number, name and selector', () => {
    const count = (focus: string, file: string) => pairsOf('--focus', focus, file).pairs.length;
    expect(count('2', 'samples/ion-pair.xyz')).toBe(3);
    expect(count('formate', 'samples/ion-pair.xyz')).toBe(3);
    expect(count('A:LIG:401', 'samples/binding-site.pdb')).toBe(12);
    const waters = pairsOf('--focus', '*:HOH:*', 'samples/binding-site.pdb').pairs;
    expect(waters.length).toBeGreaterThan(20);
    expect(waters.every(({ first, second }: { first: number; second: number }) => first > 10 || second > 10)).toBe(
      true,
    );
  });

  it('--with adds the fragments of another file to every frame', () => {
    const probe = join(folder(), 'probe.xyz');
    writeFileSync(probe, '1\nfragment_charges="1"\nNa 30 0 0\n');
    const frame = pairsOf('--cutoff', '60', '--with', probe, CLUSTER);
    expect(frame.fragments.at(-1)).toMatchObject({
      fragment: 8,
      name: 'Na',
      atoms: [25],
      chargeE: 1,
      dipoleSource: 'atom',
    });
    expect(frame.pairs.filter((pair: { second: number }) => pair.second === 8)).toHaveLength(7);
  });

  it('findings --with sees a clash with the other file', () => {
    const receptor = join(folder(), 'receptor.xyz');
    writeFileSync(receptor, '1\n\nAr -1.1687 -0.0376 1.3\n');
    const { status, stdout } = polewise(['findings', '--with', receptor, CLUSTER]);
    expect(status).toBe(1);
    expect(stdout).toMatch(/error clash: .*fragment 8 \(of the other file\)/);
  });

  it('--tolerance takes a share or per cent, not more than all', () => {
    expect(pairsOf('--tolerance', '20%', CLUSTER).settings.tolerance).toBe(0.2);
    expect(polewise(['pairs', '--tolerance', '20', CLUSTER]).status).toBe(2);
  });

  it('--periodic uses the cell of a PDB file', () => {
    const pdb = join(folder(), 'cell.pdb');
    const atom = (serial: number, z: string) =>
      `HETATM${String(serial).padStart(5)} NA    NA A${String(serial).padStart(4)}       0.000   0.000${z.padStart(8)}  1.00  0.00          NA1+`;
    writeFileSync(
      pdb,
      `CRYST1   30.000   30.000   30.000  90.00  90.00  90.00 P 1\n${atom(1, '1.000')}\n${atom(2, '29.000')}\n`,
    );
    expect(pairsOf(pdb).pairs[0].distanceA).toBeCloseTo(28, 9);
    expect(pairsOf('--periodic', pdb).pairs[0]).toMatchObject({ distanceA: expect.closeTo(2, 9), image: [0, 0, -1] });
  });
});

describe('dimers', () => {
  it('writes each pair worth computing as its own file', () => {
    const out = join(folder(), 'new', 'deep');
    expect(polewise(['dimers', CLUSTER, '--out', out]).status).toBe(0);
    const advised = JSON.parse(polewise(['pairs', '--format', 'json', CLUSTER]).stdout).frames[0].pairs.filter(
      (pair: { advice: string }) => pair.advice === 'compute',
    );
    const names = advised.map(
      (pair: { first: number; second: number }) => `water-cluster-1-${pair.first}-${pair.second}.xyz`,
    );
    expect(readdirSync(out).sort()).toEqual(names.sort());
  });

  it('writes files that give the same pair again', () => {
    const out = folder();
    polewise(['dimers', resolve('samples/periodic-box.xyz'), '--out', out, '--focus', '1']);
    const source = JSON.parse(
      polewise(['pairs', '--format', 'json', '--focus', '1', 'samples/periodic-box.xyz']).stdout,
    ).frames[0];
    for (const name of readdirSync(out)) {
      const [, first, second] = /-(\d+)-(\d+)\.xyz$/.exec(name)!;
      const wanted = source.pairs.find(
        (pair: { first: number; second: number }) => `${pair.first}-${pair.second}` === `${first}-${second}`,
      );
      const [pair] = JSON.parse(polewise(['pairs', '--format', 'json', join(out, name)]).stdout).frames[0].pairs;
      expect(pair.distanceA).toBeCloseTo(wanted.distanceA, 9);
      expect(pair.energyKJPerMol.coulomb).toBeCloseTo(wanted.energyKJPerMol.coulomb, 7);
      expect(pair.advice).toBe(wanted.advice);
    }
    expect(readdirSync(out).length).toBeGreaterThan(2);
  });

  it('overwrites nothing without --force, and then writes nothing at all', () => {
    const out = folder();
    writeFileSync(join(out, 'water-cluster-1-4-5.xyz'), 'mine');
    const { status, stderr } = polewise(['dimers', CLUSTER, '--out', out]);
    expect(status).toBe(2);
    expect(stderr).toContain('nothing was written');
    expect(readdirSync(out)).toEqual(['water-cluster-1-4-5.xyz']);
    expect(readFileSync(join(out, 'water-cluster-1-4-5.xyz'), 'utf8')).toBe('mine');
    expect(polewise(['dimers', CLUSTER, '--out', out, '--force']).status).toBe(0);
    expect(readFileSync(join(out, 'water-cluster-1-4-5.xyz'), 'utf8')).toMatch(/^6\n/);
  });

  it('refuses a fragment cut from a chain, with the reason', () => {
    const out = folder();
    const { status, stderr } = polewise(['dimers', SITE, '--out', out, '--advice', 'compute,review']);
    expect(status).toBe(0);
    expect(stderr).toMatch(/pair 1-7-10 is not written: A:ASN:120 is a piece cut from a chain, with open bonds/);
    expect(existsSync(join(out, 'binding-site-1-7-10.xyz'))).toBe(false);
  });

  it('leaves out pairs below --min-energy', () => {
    const out = folder();
    polewise(['dimers', CLUSTER, '--out', out, '--min-energy', '15 kJ/mol']);
    const strong = JSON.parse(polewise(['pairs', '--format', 'json', CLUSTER]).stdout).frames[0].pairs.filter(
      (pair: { referenceKJPerMol: number }) => Math.abs(pair.referenceKJPerMol) >= 15,
    );
    expect(readdirSync(out)).toHaveLength(strong.length);
  });

  it('says that a folder cannot be made', () => {
    const file = join(folder(), 'file');
    writeFileSync(file, '');
    expect(polewise(['dimers', CLUSTER, '--out', join(file, 'inside')]).status).toBe(2);
  });

  it('writes charge, multiplicity and dipoles', () => {
    const out = folder();
    mkdirSync(out, { recursive: true });
    polewise(['dimers', resolve('samples/ion-pair.xyz'), '--out', out]);
    const comment = readFileSync(join(out, 'ion-pair-1-1-3.xyz'), 'utf8').split('\n')[1];
    for (const piece of [
      'fragment_names="ammonium water1"',
      'fragment_charges="1 0"',
      'total_charge=1',
      'multiplicity=1',
      'temperature=310',
      'relative_permittivity=8',
    ]) {
      expect(comment).toContain(piece);
    }
  });
});
