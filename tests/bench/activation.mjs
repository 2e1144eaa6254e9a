// `node tests/bench/activation.mjs [--rounds=7]`: what it costs the editor to activate Polewise, beside an extension that does nothing. Each
// round is a fresh extension host of the rig of tests/editor; which of the two comes first changes from round to round.
import { statSync } from 'node:fs';
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { runTests } from '@vscode/test-electron';
import { ensureRig, freshPlace, installExtension, main, packExtension, ROOT, writeStandIn } from '../editor/rig.mjs';

const OURS = 'polewise.polewise';
const EMPTY = 'polewise-tests.empty';
const MANIFEST = {
  name: 'empty',
  publisher: 'polewise-tests',
  version: '0.0.0',
  engines: { vscode: '^1.91.0' },
  main: './main.cjs',
  activationEvents: [],
};
/** Read when a first document of ours opens: the client by the extension host, the server by its own process. */
const LOADED = ['client/dist/extension.cjs', 'server/dist/server.cjs'];

const median = (values) => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];
const option = process.argv.find((argument) => argument.startsWith('--rounds='))?.slice('--rounds='.length);
const rounds = Math.max(1, Number(option ?? 7));

await main(async (atEnd) => {
  const rig = await ensureRig();
  const place = await freshPlace();
  atEnd(() => place.remove());
  await packExtension(place.vsix);
  await installExtension(rig, place, place.vsix);
  const empty = join(place.folder, 'empty');
  await mkdir(empty);
  await writeFile(join(empty, 'package.json'), JSON.stringify(MANIFEST));
  await writeFile(join(empty, 'main.cjs'), 'exports.activate = () => {};\n');
  const executable = await writeStandIn(place);
  const report = join(place.folder, 'report.txt');

  const log = console.log;
  if (!process.env.POLEWISE_VERBOSE) console.log = () => {};
  try {
    for (let round = 0; round < rounds; round++) {
      const order = round % 2 === 0 ? [EMPTY, OURS] : [OURS, EMPTY];
      await runTests({
        vscodeExecutablePath: executable,
        extensionDevelopmentPath: empty,
        extensionTestsPath: fileURLToPath(new URL('activation-probe.cjs', import.meta.url)),
        launchArgs: [place.samples, `--user-data-dir=${place.user}`, `--extensions-dir=${place.extensions}`],
        extensionTestsEnv: { POLEWISE_REPORT: report, POLEWISE_ACTIVATE: order.join(' ') },
      });
    }
  } finally {
    console.log = log;
  }
  const lines = (await readFile(report, 'utf8'))
    .trim()
    .split('\n')
    .map((line) => JSON.parse(line));
  const of = (id) => lines.map((times) => times[id]);
  const shown = (values) => `${median(values).toFixed(1)} (${values.map((value) => value.toFixed(1)).join(', ')})`;
  console.log(`Activation in a fresh extension host, medians of ${rounds} rounds, ms (and every round):`);
  console.log(`  an extension that does nothing  ${shown(of(EMPTY))}`);
  console.log(`  Polewise                        ${shown(of(OURS))}`);
  const ratio = (pick) => (pick(of(OURS)) / pick(of(EMPTY))).toFixed(1);
  const least = (values) => Math.min(...values);
  console.log(`  ratio of the medians ${ratio(median)}, of the least of all rounds ${ratio(least)}`);
  for (const file of LOADED) console.log(`  ${file}: ${statSync(join(ROOT, file)).size} bytes`);
});
