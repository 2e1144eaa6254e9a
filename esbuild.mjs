// Bundles every entry point. `node esbuild.mjs` writes what the package and the command line run.
import { readdirSync } from 'node:fs';
import { readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { build } from 'esbuild';
import { refuseMissing, sleepingUnits } from './server/esbuild-browser.mjs';

const { version } = JSON.parse(await readFile(new URL('package.json', import.meta.url), 'utf8'));

const shared = {
  bundle: true,
  platform: 'node',
  target: 'node20',
  format: 'cjs',
  sourcemap: false,
  legalComments: 'none',
  logLevel: 'warning',
  metafile: true,
  loader: { '.xyz': 'text' },
  define: { POLEWISE_VERSION: JSON.stringify(version) },
};

/**
 * Keeps the evaluator of units in a bundle of its own, loaded at its first call: it is larger than all the rest, few files need it, and a
 * start need not wait for it.
 */
const lazyUnits = {
  name: 'lazy-units',
  setup({ onLoad }) {
    onLoad({ filter: /[\\/]unit-evaluator\.ts$/ }, () => ({
      contents: `export const createUnitEvaluator = () => require('./units.cjs').createUnitEvaluator();`,
      loader: 'js',
    }));
  },
};
const withLazyUnits = { plugins: [lazyUnits], external: ['./units.cjs'] };

/** Keeps what the commands run in a bundle of its own on the desktop, loaded at the first command. */
const lazyCommands = {
  name: 'lazy-commands',
  setup({ onResolve }) {
    onResolve({ filter: /^\.\/acting$/ }, () => ({ path: './commands.cjs', external: true }));
  },
};

/** What goes into the .vsix is made small; names are kept so that a stack trace stays readable. */
const packaged = { ...shared, minify: true, keepNames: true };

const forBrowser = { ...packaged, platform: 'browser', target: 'es2022' };

const browserUnits = await build({
  ...forBrowser,
  entryPoints: ['server/src/physics/unit-evaluator.ts'],
  write: false,
});

const results = await Promise.all([
  build({
    ...packaged,
    entryPoints: { units: 'server/src/physics/unit-evaluator.ts' },
    outdir: 'server/dist',
    outExtension: { '.js': '.cjs' },
  }),
  build({
    ...shared,
    ...withLazyUnits,
    entryPoints: { cli: 'server/src/entry/cli.ts', docs: 'server/src/entry/docs.ts' },
    outdir: 'server/dist',
    outExtension: { '.js': '.cjs' },
    minifySyntax: true,
  }),
  build({
    ...packaged,
    entryPoints: ['client/src/extension.ts'],
    outfile: 'client/dist/extension.cjs',
    external: ['vscode'],
    plugins: [lazyCommands],
    // A module of the extension must be required: only then does it find the editor's own.
    supported: { 'dynamic-import': false },
  }),
  build({
    ...packaged,
    entryPoints: ['client/src/acting/index.ts'],
    outfile: 'client/dist/commands.cjs',
    external: ['vscode'],
  }),
  build({
    ...packaged,
    ...withLazyUnits,
    entryPoints: ['server/src/entry/server.ts'],
    outfile: 'server/dist/server.cjs',
  }),
  build({
    ...forBrowser,
    entryPoints: ['client/src/browser.ts'],
    outfile: 'client/dist/browser.js',
    external: ['vscode'],
  }),
  build({
    ...forBrowser,
    format: 'iife',
    entryPoints: ['server/src/entry/worker.ts'],
    outfile: 'server/dist/worker.js',
    plugins: [sleepingUnits(browserUnits.outputFiles[0].text)],
  }),
  build({
    ...forBrowser,
    format: 'iife',
    entryPoints: { panel: 'client/panel/main.ts' },
    outdir: 'client/dist',
  }),
]);

const [browserClient, worker, panel] = results.slice(-3);
refuseMissing(browserClient.metafile, ['vscode']);
refuseMissing(worker.metafile);
refuseMissing(panel.metafile);

/** The licences of the packages that a bundle took in; they ask to be passed on with it. */
async function noticesOf(metafiles) {
  const folders = new Set();
  for (const path of metafiles.flatMap((metafile) => Object.keys(metafile.inputs))) {
    const folder = /^(?:.*\/)?node_modules\/(?:@[^/]+\/)?[^/]+/.exec(path)?.[0];
    if (folder !== undefined) folders.add(folder);
  }
  const notices = [];
  for (const folder of [...folders].sort()) {
    const manifest = JSON.parse(await readFile(join(folder, 'package.json'), 'utf8'));
    const file = readdirSync(folder).find((name) => /^licen[cs]e/i.test(name));
    const text = file === undefined ? `Licence: ${manifest.license}` : await readFile(join(folder, file), 'utf8');
    notices.push(`${manifest.name} ${manifest.version}\n\n${text.trim()}\n`);
  }
  return notices.join(`\n${'-'.repeat(78)}\n\n`);
}

await writeFile(
  'server/dist/NOTICES.txt',
  await noticesOf([...results, browserUnits].map((result) => result.metafile)),
);
