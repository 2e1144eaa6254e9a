// Bundles every entry point. `node esbuild.mjs` writes what the package and the command line run.
import { build } from 'esbuild';

const shared = {
  bundle: true,
  platform: 'node',
  target: 'node20',
  format: 'cjs',
  sourcemap: false,
  legalComments: 'none',
  logLevel: 'warning',
};

await Promise.all([
  build({
    ...shared,
    entryPoints: { cli: 'server/src/entry/cli.ts', docs: 'server/src/entry/docs.ts' },
    outdir: 'server/dist',
    outExtension: { '.js': '.cjs' },
    minifySyntax: true,
  }),
]);
