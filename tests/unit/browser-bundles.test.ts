import { existsSync, readFileSync, statSync } from 'node:fs';
import { resolve } from 'node:path';
import { build, type Metafile } from 'esbuild';
import { describe, expect, it } from 'vitest';

/** What runs in a browser asks for nothing that only Node has. */

/** Each bundle for a browser, and the modules that the place where it runs gives. */
const BUNDLES: Readonly<Record<string, readonly string[]>> = {
  'client/dist/browser.js': ['vscode'],
  'server/dist/worker.js': [],
  'client/dist/panel.js': [],
};

/** The modules that a script asks for by name as it runs. */
function asksFor(script: string): string[] {
  return [...new Set([...script.matchAll(/\b(?:require|import)\(["'`]([^"'`]+)["'`]\)/g)].map(([, name]) => name!))];
}

describe.each(Object.keys(BUNDLES))('%s', (file) => {
  it('asks for nothing but what is given there', () => {
    expect(existsSync(file), `${file} is missing: run \`npm run build\` first`).toBe(true);
    expect(asksFor(readFileSync(file, 'utf8'))).toEqual(BUNDLES[file]);
  });

  it('is in the package', () => {
    expect(readFileSync('.vscodeignore', 'utf8').split('\n')).toContain(`!${file}`);
  });
});

it.each(['client/dist/extension.cjs', 'client/dist/browser.js'])(
  '%s, read at every start, has at most 500 kB',
  (file) => {
    expect(statSync(file).size).toBeLessThanOrEqual(500_000);
  },
);

describe('the manifest', () => {
  const manifest = JSON.parse(readFileSync('package.json', 'utf8'));

  it('names the entry for browsers', () => {
    expect(manifest.browser).toBe('./client/dist/browser.js');
  });

  it('does not make modules of plain scripts, which a browser then refuses to load', () => {
    expect(manifest.type ?? 'commonjs').toBe('commonjs');
  });
});

describe('the build', () => {
  interface Checks {
    refuseMissing(metafile: Metafile, given?: readonly string[]): void;
  }

  /** The words in which a build of a script for a browser is refused, or `null`. */
  async function refusal(contents: string, given?: readonly string[]): Promise<string | null> {
    const { refuseMissing } = (await import(resolve('server/esbuild-browser.mjs'))) as Checks;
    try {
      const stdin = { contents, resolveDir: process.cwd() };
      const options = { bundle: true, write: false, metafile: true, logLevel: 'silent' } as const;
      const { metafile } = await build({ ...options, stdin, platform: 'browser', format: 'cjs', external: ['vscode'] });
      refuseMissing(metafile, given);
      return null;
    } catch (error) {
      return (error as Error).message;
    }
  }

  it.each([
    ["import 'node:fs'", 'node:fs'],
    ["import { join } from 'path'; console.log(join)", 'path'],
    ["try { console.log(require('crypto')) } catch {}", '<stdin> wants crypto'],
    ["import random from 'seedrandom'; console.log(random)", 'seedrandom.js wants crypto'],
    ["import 'vscode'", '<stdin> wants vscode'],
  ])('refuses %s', async (script, reason) => {
    expect(await refusal(script)).toContain(reason);
  });

  it('lets pass what is given, and what the bundle leaves out', async () => {
    expect(await refusal("import 'vscode'", ['vscode'])).toBeNull();
    expect(await refusal("import { addDependencies } from 'mathjs'; console.log(1)")).toBeNull();
  });
});
