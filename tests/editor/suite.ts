// Runs inside the extension host, with the packaged extension installed and a copy of the samples as the open folder.
import { ok, strictEqual } from 'node:assert/strict';
import { appendFileSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';
import { ACTING } from './suite-acting';
import { closeAll, folder, open, type Suite, sample, until } from './suite-kit';
import { NAVIGATION } from './suite-navigation';
import { PROVIDERS } from './suite-providers';
import { READING } from './suite-reading';
import { ROUGH } from './suite-rough';

const FIRST: Suite = {
  'the installed package is the one under test, and sleeps until one of our files opens': async () => {
    const extension = vscode.extensions.getExtension('polewise.polewise');
    ok(extension, 'polewise is installed');
    ok(extension.extensionPath.includes('extensions'), extension.extensionPath);
    strictEqual(extension.isActive, false);
    await open(sample('water-cluster.xyz'));
    await until('polewise active', () => extension.isActive || undefined);
  },
};

const SUITES: readonly Suite[] = [READING, PROVIDERS, NAVIGATION, ACTING, ROUGH];

const LAST: Suite = {
  'nothing was written to the samples': async () => {
    for (const [name] of await vscode.workspace.fs.readDirectory(folder())) {
      if (!/\.(xyz|pdb)$/.test(name)) continue;
      const original = join(process.env.POLEWISE_CLI!, '../../../samples', name);
      strictEqual(readFileSync(sample(name).fsPath, 'utf8'), readFileSync(original, 'utf8'), name);
    }
  },
};

/** Called by the extension host. */
export async function run(): Promise<void> {
  const report = (line: string) => appendFileSync(process.env.POLEWISE_REPORT!, `${line}\n`);
  // Set to a part of a name to run a few alone.
  const only = process.env.POLEWISE_ONLY ?? '';
  const tests = [FIRST, ...SUITES, LAST]
    .flatMap((suite) => Object.entries(suite))
    .filter(([name]) => name.includes(only));
  let failed = 0;
  for (const [name, test] of tests) {
    const started = Date.now();
    let outcome = 'passed';
    try {
      await test();
    } catch (error) {
      failed++;
      outcome = 'FAILED';
      const { stack, cause } = error as Error;
      report(String(stack));
      if (cause !== undefined) report(String((cause as Error).stack));
    }
    await closeAll();
    report(`${outcome} ${name} (${Date.now() - started} ms)`);
  }
  if (failed > 0) throw new Error(`${failed} of ${tests.length} failed`);
}
