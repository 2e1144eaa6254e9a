// Bundles every entry point. `node esbuild.mjs` writes what the package and the command line run.
import { readFile } from 'node:fs/promises';
import { build } from 'esbuild';

const { version } = JSON.parse(await readFile(new URL('package.json', import.meta.url), 'utf8'));

const shared = {
  bundle: true,
  platform: 'node',
  target: 'node20',
  format: 'cjs',
  sourcemap: false,
  legalComments: 'none',
  logLevel: 'warning',
  define: { POLEWISE_VERSION: JSON.stringify(version) },
};

/** What goes into the .vsix is made small; names are kept so that a stack trace stays readable. */
const packaged = { ...shared, minify: true, keepNames: true };

await Promise.all([
  build({
    ...shared,
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
  }),
  build({
    ...packaged,
    entryPoints: ['server/src/entry/server.ts'],
    outfile: 'server/dist/server.cjs',
  }),
]);
