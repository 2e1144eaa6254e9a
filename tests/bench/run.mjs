// `npm run bench [-- --rounds=9] [-- --only=xyz] [-- --small]`: bundles the bench and runs it in a folder of its own.
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { build } from 'esbuild';

const here = (name) => fileURLToPath(new URL(name, import.meta.url));
const folder = await mkdtemp(join(tmpdir(), 'polewise-bench-'));
try {
  const outfile = join(folder, 'bench.mjs');
  await build({
    entryPoints: [here('main.ts')],
    outfile,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    logLevel: 'warning',
    banner: { js: "import { createRequire } from 'node:module'; const require = createRequire(import.meta.url);" },
    define: { POLEWISE_VERSION: JSON.stringify('bench') },
  });
  const { runBench } = await import(pathToFileURL(outfile).href);
  process.exitCode = (await runBench(folder, here('reference.c'), process.argv.slice(2))) ? 0 : 1;
} finally {
  await rm(folder, { recursive: true, force: true });
}
