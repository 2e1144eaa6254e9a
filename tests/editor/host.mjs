// The suite inside the extension host, against the packaged extension: `node tests/editor/host.mjs`.
// POLEWISE_VSCODE names the executable of a desktop build of VS Code to use in place of the rig.
import { spawnSync } from 'node:child_process';
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { resolveCliArgsFromVSCodeExecutablePath, runTests } from '@vscode/test-electron';
import { build } from 'esbuild';
import { ensureRig, freshPlace, installExtension, main, packExtension, ROOT, writeStandIn } from './rig.mjs';

const here = (file) => fileURLToPath(new URL(file, import.meta.url));

/** An extension that does nothing: what is tested is the installed one. */
const EMPTY_EXTENSION = { name: 'empty', publisher: 'polewise-tests', version: '0.0.0', engines: { vscode: '*' } };

function installInDesktop(executable, { user, extensions }, vsix) {
  const [cli, ...args] = resolveCliArgsFromVSCodeExecutablePath(executable, { reuseMachineInstall: true });
  const folders = [`--user-data-dir=${user}`, `--extensions-dir=${extensions}`];
  const shell = process.platform === 'win32';
  const { status } = spawnSync(cli, [...args, ...folders, '--install-extension', vsix], { stdio: 'inherit', shell });
  if (status !== 0) throw new Error(`installing the package into ${executable} failed`);
}

await main(async (atEnd) => {
  const desktop = process.env.POLEWISE_VSCODE || undefined;
  const rig = desktop ? undefined : await ensureRig();
  const place = await freshPlace();
  atEnd(() => place.remove());

  await packExtension(place.vsix);
  if (rig === undefined) installInDesktop(desktop, place, place.vsix);
  else await installExtension(rig, place, place.vsix);

  const development = join(place.folder, 'empty');
  await mkdir(development);
  await writeFile(join(development, 'package.json'), JSON.stringify(EMPTY_EXTENSION));
  const suite = join(place.folder, 'suite.cjs');
  await build({
    entryPoints: [here('suite.ts')],
    outfile: suite,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'cjs',
    external: ['vscode'],
    logLevel: 'warning',
  });
  const executable = desktop ?? (await writeStandIn(place));

  const report = join(place.folder, 'report.txt');
  let failure;
  try {
    await runTests({
      vscodeExecutablePath: executable,
      extensionDevelopmentPath: development,
      extensionTestsPath: suite,
      launchArgs: [place.samples, `--user-data-dir=${place.user}`, `--extensions-dir=${place.extensions}`],
      extensionTestsEnv: { POLEWISE_REPORT: report, POLEWISE_CLI: join(ROOT, 'server/dist/cli.cjs') },
    });
  } catch (error) {
    failure = error;
  }
  console.log(await readFile(report, 'utf8').catch(() => 'the suite did not report'));
  if (failure !== undefined) throw failure;
});
