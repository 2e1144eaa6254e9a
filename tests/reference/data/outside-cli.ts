import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

/** Runs the built command line in the root folder of the project. */

export const ROOT = fileURLToPath(new URL('../../..', import.meta.url));

export function polewise(...argv: string[]): { status: number | null; stdout: string; stderr: string } {
  const command = ['server/dist/cli.cjs', ...argv];
  return spawnSync(process.execPath, command, { cwd: ROOT, encoding: 'utf8', maxBuffer: 2 ** 28 });
}
