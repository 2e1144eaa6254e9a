import { execFileSync } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';

/**
 * What the command line prints for every sample, kept as files. After a change that is meant, look at the difference and write them
 * anew with `GOLDEN=write npx vitest run tests/golden`.
 */
const EXPECTED = 'tests/golden/expected';
const SAMPLES = readdirSync('samples').map((name) => `samples/${name}`);

/** The box has two thousand pairs; those of one molecule show what there is to see. */
const few = (file: string) => (file.includes('periodic-box') ? ['--focus', '1'] : []);

const COMMANDS: readonly (readonly [suffix: string, args: (file: string) => string[]])[] = [
  ['findings.txt', (file) => ['findings', file]],
  ['pairs.txt', (file) => ['pairs', ...few(file), file]],
  ['pairs.json', (file) => ['pairs', '--format', 'json', '--frame', '1', '--cutoff', '4', ...few(file), file]],
];

function run(args: readonly string[]): string {
  try {
    return execFileSync('node', ['server/dist/cli.cjs', ...args], {
      encoding: 'utf8',
      stdio: ['ignore', 'pipe', 'pipe'],
    });
  } catch (error) {
    // Status 1 is what findings are for.
    const { status, stdout } = error as { status: number; stdout: string };
    if (status !== 1) throw error;
    return stdout;
  }
}

describe.each(SAMPLES)('%s', (sample) => {
  it.each(COMMANDS)('%s', (suffix, args) => {
    const path = join(EXPECTED, `${sample.replace('samples/', '')}.${suffix}`);
    const actual = run(args(sample));
    if (process.env.GOLDEN === 'write') writeFileSync(path, actual);
    expect(existsSync(path)).toBe(true);
    expect(actual).toBe(readFileSync(path, 'utf8'));
  });
});
