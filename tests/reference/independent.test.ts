import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { differences, type ProgramOutput } from './independent/compare.js';
import { inventedFiles } from './independent/invented-files.js';
import { independentFrames, type Options } from './independent.js';

/** What `polewise pairs` prints against the second calculation: the samples, and invented molecules. */

const ROOT = fileURLToPath(new URL('../..', import.meta.url));
const CLI = join(ROOT, 'server/dist/cli.cjs');

const SAMPLES = [
  'water-cluster.xyz',
  'polar-dimer-scan.xyz',
  'ion-pair.xyz',
  'periodic-box.xyz',
  'nonpolar-pair.xyz',
  'binding-site.pdb',
  'media-and-units.xyz',
];

const OPTION_SETS: [string, Options][] = [
  ['as the file says', {}],
  ['at 77 K', { temperatureK: 77 }],
  ['in a medium of 4', { relativePermittivity: 4 }],
  ['about the geometric centre', { centre: 'geometry' }],
  ['about the centre of nuclear charge', { centre: 'nuclear-charge' }],
  ['with a tolerance of 5 %', { tolerance: 0.05 }],
  ['within 6 Å', { cutoffA: 6 }],
];

/** Differences beyond this many are counted only: a wrong convention differs everywhere. */
const SHOWN = 30;

/** The second calculation knows what a file says and nothing else. */
const ALONE = ['--no-library', '--no-estimates'];

function flags(options: Options): string[] {
  const given: [string, string | number | undefined][] = [
    ['--temperature', options.temperatureK],
    ['--permittivity', options.relativePermittivity],
    ['--centre', options.centre],
    ['--tolerance', options.tolerance],
    ['--cutoff', options.cutoffA],
  ];
  const valued = given.flatMap(([flag, value]) => (value === undefined ? [] : [flag, String(value)]));
  return options.periodic ? [...valued, '--periodic'] : valued;
}

function programPrints(files: string[], options: Options): ProgramOutput[] {
  const printed = execFileSync(
    process.execPath,
    [CLI, 'pairs', ...files, '--format', 'json', ...ALONE, ...flags(options)],
    {
      encoding: 'utf8',
      maxBuffer: 2 ** 29,
      stdio: ['ignore', 'pipe', 'pipe'],
    },
  );
  const output: ProgramOutput | ProgramOutput[] = JSON.parse(printed);
  return Array.isArray(output) ? output : [output];
}

function programDiffers(output: ProgramOutput | undefined, file: string, options: Options): string[] {
  const expected = independentFrames(readFileSync(file, 'utf8'), file.endsWith('.pdb') ? 'pdb' : 'xyz', options);
  const found = differences(output?.frames ?? [], expected);
  return found.length > SHOWN ? [...found.slice(0, SHOWN), `and ${found.length - SHOWN} more`] : found;
}

describe.each(OPTION_SETS)('samples %s', (_, options) => {
  test.each(SAMPLES)('%s', (sample) => {
    const file = join(ROOT, 'samples', sample);
    expect(programDiffers(programPrints([file], options)[0], file, options)).toEqual([]);
  });
});

describe('invented molecules', () => {
  const invented = inventedFiles();
  let folder = '';
  const pathOf = ({ name, language }: { name: string; language: string }) => join(folder, `${name}.${language}`);
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'polewise-independent-'));
    for (const file of invented) writeFileSync(pathOf(file), file.text);
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  describe.each(OPTION_SETS)('%s', (_, options) => {
    const together = invented.filter((file) => file.options === undefined);
    let outputs: ProgramOutput[] = [];
    beforeAll(() => {
      outputs = programPrints(together.map(pathOf), options);
    });
    test.each(together.map((file, i) => ({ ...file, i })))('$name', ({ i }) => {
      expect(programDiffers(outputs[i], pathOf(together[i]), options)).toEqual([]);
    });

    const alone = invented.filter((file) => file.options !== undefined);
    test.each(alone)('$name', (file) => {
      const both = { ...options, ...file.options };
      expect(programDiffers(programPrints([pathOf(file)], both)[0], pathOf(file), both)).toEqual([]);
    });
  });
});
