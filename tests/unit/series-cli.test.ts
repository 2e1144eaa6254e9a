import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { frameText, point } from '../property/build-frame';

const CLI = resolve('server/dist/cli.cjs');
const SCAN = 'samples/polar-dimer-scan.xyz';
const CLUSTER = 'samples/water-cluster.xyz';
const IONS = 'samples/ion-pair.xyz';
const SITE = 'samples/binding-site.pdb';

function polewise(args: readonly string[], input?: string | Buffer) {
  const result = spawnSync('node', [CLI, ...args], { encoding: 'utf8', maxBuffer: 1 << 28, input });
  return { status: result.status, stdout: result.stdout, stderr: result.stderr };
}

const series = (...args: string[]) => polewise(['series', ...args]);
const jsonOf = (...args: string[]) => JSON.parse(series('--format', 'json', ...args).stdout);

function written(name: string, text: string): string {
  const path = join(mkdtempSync(join(tmpdir(), 'polewise-')), name);
  writeFileSync(path, text);
  return path;
}

/** Two dipoles 6 Å apart, the second turned by `degrees`. */
function turned(degrees: number): string {
  const angle = (degrees * Math.PI) / 180;
  const second = point([6, 0, 0], [0, 0.4 * Math.sin(angle), 0.4 * Math.cos(angle)]);
  return frameText([point([0, 0, 0], [0, 0, 0.4]), second]);
}

describe('exit status of series', () => {
  it.each([
    ['a scan: 0', [SCAN], 0, ''],
    [
      'a pair that has no energy anywhere: 0',
      ['--no-library', '--no-estimates', '--pair', '1,2', 'samples/nonpolar-pair.xyz'],
      0,
      '',
    ],
    ['no file: 2', [], 2, 'missing required argument'],
    ['a file that is not there: 2', ['nowhere.xyz'], 2, 'there is no such file'],
    ['an unknown format: 2', ['--format', 'yaml', SCAN], 2, 'Allowed choices are text, json, csv'],
    ['one fragment: 2', ['--pair', '1', SCAN], 2, '--pair takes two fragments joined by a comma, such as 1,2; not "1"'],
    ['a fragment with itself: 2', ['--pair', '1,1', SCAN], 2, 'fragment 1 makes no pair with itself'],
    ['a fragment that is not there: 2', ['--pair', '1,3', SCAN], 2, 'no fragment of the first frame is called "3"'],
    ['a name of nobody: 2', ['--pair', 'nobody,1', SCAN], 2, 'no fragment of the first frame is called "nobody"'],
    ['half a pair: 2', ['--pair', '1,', SCAN], 2, 'no fragment of the first frame is called ""'],
    ['a name of several: 2', ['--pair', 'H2O,1', CLUSTER], 2, '"H2O" is 6 fragments'],
    [
      'no pair with an energy to choose from: 2',
      ['samples/typical-mistakes.xyz'],
      2,
      'known energy; --pair A,B names one',
    ],
    ['a temperature of zero: 2', ['--temperature', '0', SCAN], 2, 'above zero'],
  ] as const)('%s', (_, args, status, message) => {
    const result = series(...args);
    expect([result.status, result.stderr.includes(message)]).toEqual([status, true]);
    if (status === 2) expect(result.stdout).toBe('');
    else expect(result.stderr).toBe('');
  });

  it('is 2 for a file without a frame', () => {
    const { status, stderr } = series(written('empty.xyz', ''));
    expect([status, stderr.includes('holds no frame')]).toEqual([2, true]);
  });
});

describe('the text of series', () => {
  it('follows the acetonitriles of the sample from touching to far below kT', () => {
    const { stdout } = series('--pair', '1,2', SCAN);
    expect(stdout).toMatch(/^samples\/polar-dimer-scan\.xyz: pair 1–2 C2H3N·C2H3N, 12 frames\n298\.15 K/);
    expect(stdout.match(/^ +\d+ +\d+\.\d\d .*$/gm)).toHaveLength(12);
    expect(stdout).toContain('\n4 events: 1 contact, 2 regime, 1 kT\n');
    expect(stdout).toContain('  between frames 1 and 2: contact touching → apart\n');
    expect(stdout).toContain('  between frames 2 and 3: regime near → edge\n');
    expect(stdout).toContain('  between frames 5 and 6: regime edge → far\n');
    expect(stdout).toMatch(/ {2}between frames 7 and 8: \|E\| falls below kT, about frame 7\.92 \(R 6\.93 Å\)\n/);
    expect(stdout).toMatch(/\nEstimates for triage, no substitute for a quantum calculation\.[\s\S]*\.\n$/);
  });

  it('ends in the caution of the pair table', () => {
    const caution = /\nEstimates for triage[\s\S]*$/;
    expect(caution.exec(series(SCAN).stdout)![0]).toBe(caution.exec(polewise(['pairs', SCAN]).stdout)![0]);
  });

  it('shows energies in the unit asked for', () => {
    const energy = (unit: string) =>
      Number(/^ +1 +3\.30 +\S+ +(−[\d.]+)/m.exec(series('--unit', unit, SCAN).stdout)![1]!.replace('−', '-'));
    expect(energy('kcal/mol') * 4.184).toBeCloseTo(energy('kJ/mol'), 1);
  });

  it('says why a frame has no pair, and where a sign changes', () => {
    const alone = frameText([point([0, 0, 0], [0, 0, 0.4])]);
    const { stdout } = series(written('turn.xyz', turned(40) + turned(80) + turned(100) + alone + alone));
    expect(stdout).toMatch(/^ +4 +–( +–)+ +missing$/m);
    expect(stdout).toContain('between frames 2 and 3: the energy changes sign, + → −, about frame 2.50 (R 6.00 Å)\n');
    expect(stdout).toContain('frames 4 to 5: missing: there is no fragment 2\n');
  });

  it('thins out more than forty frames, and leaves the first, the last and those with events', () => {
    const angles = Array.from({ length: 100 }, (_, k) => 40 + 0.93 * k);
    const { stdout } = series(written('long.xyz', angles.map(turned).join('')));
    const shown = [...stdout.matchAll(/^ +(\d+) +6\.00 /gm)].map(([, frame]) => Number(frame));
    const before = angles.filter((angle) => angle < 90).length;
    expect(stdout).toContain(`between frames ${before} and ${before + 1}: the energy changes sign`);
    expect(shown).toEqual([...shown].sort((a, b) => a - b));
    for (const frame of [1, 4, 7, before, before + 1, 97, 100]) expect(shown).toContain(frame);
    expect(shown.length).toBeLessThan(42);
    expect(stdout).toContain(`; ${shown.length} of 100 frames`);
  });
});

describe('a series of very many events', () => {
  it('counts them by kind and tells the first two hundred', () => {
    const angles = Array.from({ length: 300 }, (_, k) => (k % 2 === 0 ? 60 : 120));
    const { stdout } = series(written('noise.xyz', angles.map(turned).join('')));
    expect(stdout).toContain('\n299 events: 299 sign\n');
    expect(stdout.match(/^ {2}between frames/gm)).toHaveLength(200);
    expect(stdout).toContain('  … and 99 more (--format json)\n');
  });
});

describe('the pair of series', () => {
  const chosen = (...args: string[]) => {
    const { first, second } = jsonOf(...args);
    return [first, second].map(({ fragment }) => fragment);
  };

  it('is the strongest of the first frame, or two numbers, names or selectors', () => {
    expect(chosen(IONS)).toEqual(chosen('--pair', 'formate,ammonium', IONS));
    expect(chosen('--pair', '3, 1', IONS)).toEqual([1, 3]);
    const { first, second } = jsonOf('--pair', 'A:LIG:401,A:NA:301', SITE);
    expect([first, second].map(({ label }) => label).sort()).toEqual(['A:LIG:401', 'A:NA:301']);
  });

  it('may have a comma in a name', () => {
    const text = '2\nProperties=species:S:1:pos:R:3:fragment:S:1\nNa 0 0 0 N,N-first\nCl 0 0 5 second\n';
    expect(chosen('--pair', 'N,N-first,second', written('comma.xyz', text))).toEqual([1, 2]);
  });

  it('may be with a fragment of another file', () => {
    const probe = written('probe.xyz', '1\nfragment_charges="1"\nNa 0 0 9\n');
    const { second, frames } = jsonOf('--with', probe, '--pair', '1,3', SCAN);
    expect(second).toMatchObject({ fragment: 3, name: 'Na' });
    expect(frames.every(({ missing }: { missing: string | null }) => missing === null)).toBe(true);
  });
});

describe('the data of series', () => {
  it('as JSON hold what pairs says of each frame', () => {
    const report = jsonOf('--pair', '1,2', SCAN);
    expect(Object.keys(report)).toEqual([
      'schema',
      'file',
      'language',
      'settings',
      'first',
      'second',
      'frames',
      'events',
    ]);
    expect([report.schema, report.file, report.language]).toEqual(['polewise/series/1', SCAN, 'xyz']);
    const pairs = JSON.parse(polewise(['pairs', '--format', 'json', SCAN]).stdout).frames;
    expect(report.settings).toEqual(pairs[0].settings);
    for (const [k, frame] of report.frames.entries()) {
      const [pair] = pairs[k].pairs;
      expect(frame).toMatchObject({
        frame: k + 1,
        first: pair.first,
        second: pair.second,
        distanceA: pair.distanceA,
        energyKJPerMol: pair.referenceKJPerMol,
        referenceKJPerMol: pair.referenceKJPerMol,
        pointDipoleKJPerMol: pair.energyKJPerMol.pointDipole,
        inductionKJPerMol: pair.energyKJPerMol.induction,
        dispersionKJPerMol: pair.energyKJPerMol.dispersion,
        regime: pair.regime,
        contact: pair.contact,
        advice: pair.advice,
      });
    }
    expect(report.events.map(({ kind }: { kind: string }) => kind)).toEqual(['contact', 'regime', 'regime', 'kT']);
  });

  it('as CSV are one row a frame with the names of JSON', () => {
    const rows = series('--format', 'csv', SCAN)
      .stdout.trimEnd()
      .split('\n')
      .map((line) => line.split(','));
    expect(rows).toHaveLength(13);
    expect(rows.every((row) => row.length === rows[0]!.length)).toBe(true);
    const { frames } = jsonOf(SCAN);
    expect(rows[0]).toEqual(['file', ...Object.keys(frames[0]), 'events']);
    const column = rows[0]!.indexOf('energyKJPerMol');
    expect(rows.slice(1).map((row) => Number(row[column]))).toEqual(
      frames.map(({ energyKJPerMol }: { energyKJPerMol: number }) => energyKJPerMol),
    );
    expect(rows.map((row) => row.at(-1)).slice(1, 4)).toEqual(['', 'contact', 'regime']);
  });

  it('are the same from standard input', () => {
    const { status, stdout } = polewise(['series', '-', '--language', 'xyz', '--format', 'json'], readFileSync(SCAN));
    expect(status).toBe(0);
    expect({ ...JSON.parse(stdout), file: SCAN }).toEqual(jsonOf(SCAN));
  });
});
