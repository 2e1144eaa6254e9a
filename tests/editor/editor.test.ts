import { spawn } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { describe, expect, type TestContext, test } from 'vitest';

/** With which the scripts end where no rig can be had. */
const NO_RIG = 77;
/** Making the rig from nothing takes about a minute on a fast network. */
const LIMIT = 10 * 60_000;
const GRACE = 10_000;
/** Flows are tried again one by one; what fails all the same is tried once more from the start. */
const RETRIES = 1;

interface Outcome {
  readonly status: number | null;
  readonly output: string;
}

/** Runs a script in its own process group, which is ended with it whatever happens. */
function runScript(name: string, within: number): Promise<Outcome> {
  const script = fileURLToPath(new URL(name, import.meta.url));
  const child = spawn(process.execPath, [script], { detached: true, stdio: ['ignore', 'pipe', 'pipe'] });
  const end = (signal: NodeJS.Signals) => {
    try {
      process.kill(-child.pid!, signal);
    } catch {
      // It has ended.
    }
  };
  const stop = () => end('SIGTERM');
  process.once('exit', stop);
  const timers = [setTimeout(stop, within), setTimeout(() => end('SIGKILL'), within + GRACE)];
  let output = '';
  for (const stream of [child.stdout, child.stderr]) stream.on('data', (chunk) => (output += chunk));
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('close', (status) => {
      for (const timer of timers) clearTimeout(timer);
      process.removeListener('exit', stop);
      end('SIGKILL');
      resolve({ status, output });
    });
  });
}

async function passes(context: TestContext, script: string): Promise<void> {
  const { status, output } = await runScript(script, LIMIT - 2 * GRACE);
  if (status === NO_RIG) {
    const reason = output.trim().split('\n').at(-1)!;
    // CI that means to have the editor says so: a rig that cannot be had is then a failure.
    if (process.env.POLEWISE_EDITOR === 'required') throw new Error(reason);
    console.log(`${script} skipped: ${reason}`);
    context.skip(reason);
  }
  expect(status, output).toBe(0);
}

describe.sequential('the packaged extension in a real editor', () => {
  test('inside the extension host', { timeout: LIMIT, retry: RETRIES }, (context) => passes(context, 'host.mjs'));
  test('as a person uses it, in every theme', { timeout: LIMIT, retry: RETRIES }, (context) =>
    passes(context, 'person.mjs'),
  );
  test('where there is nothing but a browser', { timeout: LIMIT, retry: RETRIES }, (context) =>
    passes(context, 'web.mjs'),
  );
});
