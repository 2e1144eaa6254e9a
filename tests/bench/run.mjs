// `npm run bench [-- --rounds=9] [-- --only=xyz] [-- --small]`: bundles the bench and runs it in a folder of its own.
// `--only` takes a part of a kernel's name, or scaling, start, edit or wait; `--small` leaves out the million atoms.
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { build } from 'esbuild';
// Builds the server as it is packaged: what is measured is the source as it stands.
import '../../esbuild.mjs';

const here = (name) => fileURLToPath(new URL(name, import.meta.url));
const folder = await mkdtemp(join(tmpdir(), 'polewise-bench-'));
const shared = { bundle: true, platform: 'node', target: 'node20', logLevel: 'warning' };
try {
  const outfile = join(folder, 'bench.mjs');
  await build({
    ...shared,
    entryPoints: [here('main.ts')],
    outfile,
    format: 'esm',
    banner: { js: "import { createRequire } from 'node:module'; const require = createRequire(import.meta.url);" },
    define: { POLEWISE_VERSION: JSON.stringify('bench') },
  });
  // Made as small as the server that it stands beside.
  const emptyServer = join(folder, 'empty-server.cjs');
  const entryPoints = [here('empty-server.ts')];
  await build({ ...shared, entryPoints, outfile: emptyServer, format: 'cjs', minify: true, keepNames: true });
  const { runBench } = await import(pathToFileURL(outfile).href);
  const agrees = await runBench({ folder, reference: here('reference.c'), emptyServer }, process.argv.slice(2));
  process.exitCode = agrees ? 0 : 1;
} finally {
  await rm(folder, { recursive: true, force: true });
}
