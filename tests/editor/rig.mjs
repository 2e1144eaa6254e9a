// The rig: VS Code's own server and a headless Chromium, in a folder outside the repository, made once and used again.
// `node tests/editor/rig.mjs` makes it and says where it is.
import { execFile, spawn } from 'node:child_process';
import {
  accessSync,
  constants,
  cpSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  rmSync,
  symlinkSync,
} from 'node:fs';
import { chmod, mkdtemp, rename, rm, writeFile } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { createServer } from 'node:net';
import { homedir, tmpdir } from 'node:os';
import { delimiter, dirname, join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';

const run = promisify(execFile);

/** The repository. */
export const ROOT = fileURLToPath(new URL('../..', import.meta.url));

const CODE_SERVER = 'code-server@4.100.3';
const PLAYWRIGHT = 'playwright-core@1.65.1';
/** Changes whenever a rig made before is of no use any more. */
const RECIPE = `1 ${CODE_SERVER} ${PLAYWRIGHT}`;
const BROWSERS = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable'];
const MINUTE = 60_000;
const READY_WITHIN = MINUTE;

/** Status with which the scripts here end where no rig can be had; the reason is the last line that they print. */
export const NO_RIG = 77;

/** No rig can be had on this machine; the message is one line that says why. */
export class RigUnavailable extends Error {}

/** The line in which a program that failed says why. */
function reasonOf(error) {
  const lines = String(error.stderr || error.message || error)
    .trim()
    .split('\n');
  return (
    lines.find((line) => /error|^E:/i.test(line) && !/error (code|errno|syscall)|complete log/.test(line)) ??
    lines.at(-1)
  );
}

async function attempt(what, file, args, options = {}) {
  try {
    await run(file, args, { maxBuffer: 1 << 26, timeout: 5 * MINUTE, ...options });
  } catch (error) {
    throw new RigUnavailable(`${what} failed: ${reasonOf(error)}`);
  }
}

function onPath(names) {
  for (const name of names) {
    for (const folder of (process.env.PATH ?? '').split(delimiter)) {
      const file = join(folder, name);
      try {
        accessSync(file, constants.X_OK);
        return file;
      } catch {}
    }
  }
  return undefined;
}

/** Chromium and ripgrep: found, or installed where this is root on a system with apt-get. */
async function systemPrograms() {
  const find = () => ({ chromium: onPath(BROWSERS), ripgrep: onPath(['rg']) });
  const found = find();
  const missing = Object.keys(found).filter((name) => found[name] === undefined);
  if (missing.length === 0) return found;
  const aptGet = onPath(['apt-get']);
  if (aptGet === undefined || process.getuid?.() !== 0) {
    throw new RigUnavailable(`${missing.join(' and ')} missing, and only root with apt-get can install it`);
  }
  const options = { env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' } };
  const wait = ['-o', 'DPkg::Lock::Timeout=300'];
  await attempt('apt-get update', aptGet, [...wait, 'update', '-qq'], options);
  const install = [...wait, 'install', '-y', '-qq', '--no-install-recommends', ...missing];
  await attempt(`apt-get install ${missing.join(' ')}`, aptGet, install, options);
  const now = find();
  const still = missing.filter((name) => now[name] === undefined);
  if (still.length > 0) throw new RigUnavailable(`${still.join(' and ')} not found after installing`);
  return now;
}

async function npmInstall(folder, args) {
  const always = ['--ignore-scripts', '--no-audit', '--no-fund', '--loglevel=error'];
  await attempt('npm install for the editor', 'npm', ['install', ...always, ...args], { cwd: folder });
}

async function fillRig(folder, ripgrep) {
  rmSync(folder, { recursive: true, force: true });
  mkdirSync(folder, { recursive: true });
  await writeFile(join(folder, 'package.json'), '{ "private": true }\n');
  await npmInstall(folder, [CODE_SERVER, PLAYWRIGHT]);
  const vscode = join(folder, 'node_modules/code-server/lib/vscode');
  await npmInstall(vscode, ['--omit=dev', '--no-package-lock']);
  const bin = join(vscode, 'node_modules/@vscode/ripgrep/bin');
  mkdirSync(bin, { recursive: true });
  rmSync(join(bin, 'rg'), { force: true });
  symlinkSync(ripgrep, join(bin, 'rg'));
  if (!existsSync(join(vscode, 'node_modules.asar'))) symlinkSync('node_modules', join(vscode, 'node_modules.asar'));
  await writeFile(join(folder, 'recipe.txt'), RECIPE);
}

/** The rig, made where it is missing. Throws `RigUnavailable` where it cannot be had. */
export async function ensureRig() {
  if (process.platform !== 'linux')
    throw new RigUnavailable(`the editor rig runs on Linux, and this is ${process.platform}`);
  const { chromium, ripgrep } = await systemPrograms();
  const folder = process.env.POLEWISE_RIG || join(homedir(), '.cache', 'polewise-rig');
  const isUsable = () =>
    existsSync(join(folder, 'recipe.txt')) && readFileSync(join(folder, 'recipe.txt'), 'utf8') === RECIPE;
  if (!isUsable()) {
    // Made beside its place and moved there when whole, so that a rig broken off half-way is never used.
    const making = `${folder}.${process.pid}`;
    try {
      await fillRig(making, ripgrep);
      if (!isUsable()) {
        await rm(folder, { recursive: true, force: true });
        await rename(making, folder);
      }
    } finally {
      await rm(making, { recursive: true, force: true });
    }
  }
  const serverMain = join(folder, 'node_modules/code-server/lib/vscode/out/server-main.js');
  return { folder, chromium, serverMain };
}

/** Settings under which nothing moves, asks or phones by itself. */
export function calmSettings(more = {}) {
  return {
    'security.workspace.trust.enabled': false,
    'workbench.startupEditor': 'none',
    'workbench.tips.enabled': false,
    'workbench.reduceMotion': 'on',
    'workbench.secondarySideBar.defaultVisibility': 'hidden',
    'telemetry.telemetryLevel': 'off',
    'extensions.autoUpdate': false,
    'extensions.autoCheckUpdates': false,
    'extensions.ignoreRecommendations': true,
    'update.mode': 'none',
    'git.enabled': false,
    'chat.commandCenter.enabled': false,
    'editor.accessibilitySupport': 'off',
    'editor.minimap.enabled': false,
    'editor.inlayHints.enabled': 'on',
    'files.hotExit': 'off',
    'files.autoSave': 'off',
    ...more,
  };
}

/** Fresh folders for one run: the editor's own, and a copy of the samples to work on. `remove` deletes them. */
export async function freshPlace(settings = calmSettings()) {
  const folder = await mkdtemp(join(tmpdir(), 'polewise-editor-'));
  const place = {
    folder,
    samples: join(folder, 'samples'),
    user: join(folder, 'user'),
    extensions: join(folder, 'extensions'),
    vsix: join(folder, 'polewise.vsix'),
    setSettings: (changed) => writeFile(join(folder, 'user/User/settings.json'), JSON.stringify(changed, null, 2)),
    /** The samples as they are in the repository, and nothing beside them. */
    restoreSamples: async () => {
      for (const name of readdirSync(place.samples)) await rm(join(place.samples, name), { recursive: true });
      cpSync(join(ROOT, 'samples'), place.samples, { recursive: true });
    },
    remove: () => rm(folder, { recursive: true, force: true, maxRetries: 5, retryDelay: 200 }),
  };
  mkdirSync(join(place.user, 'User'), { recursive: true });
  mkdirSync(place.extensions);
  mkdirSync(place.samples);
  await place.restoreSamples();
  await place.setSettings(settings);
  return place;
}

/** Packs what was built into a .vsix, as `npm run package` does after building. */
export async function packExtension(file) {
  for (const built of ['client/dist/extension.cjs', 'server/dist/server.cjs', 'server/dist/cli.cjs']) {
    if (!existsSync(join(ROOT, built))) throw new Error(`${built} is missing: run \`npm run build\` first`);
  }
  const { createVSIX } = createRequire(join(ROOT, 'package.json'))('@vscode/vsce');
  const options = { dependencies: false, allowMissingRepository: true, rewriteRelativeLinks: false };
  const { log, warn } = console;
  try {
    Object.assign(console, { log: () => {}, warn: () => {} });
    await createVSIX({ cwd: ROOT, packagePath: file, ...options });
  } finally {
    Object.assign(console, { log, warn });
  }
}

function serverArguments(rig, { user, extensions }) {
  return [
    rig.serverMain,
    '--accept-server-license-terms',
    ...['--server-data-dir', join(user, 'server'), '--user-data-dir', user, '--extensions-dir', extensions],
  ];
}

const serverEnvironment = () => ({
  ...process.env,
  EXTENSIONS_GALLERY: '{"serviceUrl":"","itemUrl":"","resourceUrlTemplate":""}',
});

/** Installs a .vsix as `code --install-extension` does. */
export async function installExtension(rig, folders, vsix) {
  const args = [...serverArguments(rig, folders), '--install-extension', vsix];
  await run(process.execPath, args, { env: serverEnvironment(), timeout: MINUTE });
}

function freePort() {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address();
      probe.close(() => resolve(port));
    });
  });
}

/** Starts the editor's server; `stop` ends it with everything that it started. */
export async function startServer(rig, folders) {
  const port = await freePort();
  const args = [
    ...serverArguments(rig, folders),
    ...['--host', '127.0.0.1', '--port', String(port), '--without-connection-token', '--telemetry-level', 'off'],
    // A window that is closed does not come back: its extension host is to end.
    ...['--reconnection-grace-time', '1'],
  ];
  // Its own process group: the extension host and the language server under it end with it.
  const server = spawn(process.execPath, args, {
    env: serverEnvironment(),
    detached: true,
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let output = '';
  for (const stream of [server.stdout, server.stderr]) {
    stream.on('data', (chunk) => {
      output = (output + chunk).slice(-4000);
    });
  }
  const ended = new Promise((resolve) => server.once('exit', resolve));
  const signal = (name) => {
    try {
      process.kill(-server.pid, name);
    } catch {}
  };
  const atExit = () => signal('SIGKILL');
  process.once('exit', atExit);
  const stop = async () => {
    signal('SIGTERM');
    await Promise.race([ended, sleep(2000)]);
    signal('SIGKILL');
    process.removeListener('exit', atExit);
  };
  const deadline = Date.now() + READY_WITHIN;
  for (;;) {
    if (server.exitCode !== null) throw new Error(`the editor's server ended at once: ${output}`);
    const answer = await fetch(`http://127.0.0.1:${port}/version`).catch(() => undefined);
    if (answer?.ok) return { port, url: `http://127.0.0.1:${port}/`, stop };
    if (Date.now() > deadline) {
      await stop();
      throw new Error(`the editor's server was not ready in time: ${output}`);
    }
    await sleep(100);
  }
}

/** Writes a script that stands in for a desktop build of VS Code: it runs `stand-in.mjs` with the same arguments. */
export async function writeStandIn(place) {
  const file = join(place.folder, 'editor');
  const standIn = fileURLToPath(new URL('stand-in.mjs', import.meta.url));
  await writeFile(file, `#!/bin/sh\nexec '${process.execPath}' '${standIn}' "$@"\n`);
  await chmod(file, 0o755);
  return file;
}

/** Chromium without a window. */
export async function launchBrowser(rig) {
  const { chromium } = createRequire(join(rig.folder, 'package.json'))('playwright-core');
  return chromium.launch({
    executablePath: rig.chromium,
    headless: true,
    args: [
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

/** Runs a script of this folder: cleans up on signals too, prints the reason where no rig can be had, and exits. */
export async function main(script) {
  const cleanUps = [];
  let cleaning;
  const cleanUp = () => {
    cleaning ??= (async () => {
      for (const step of cleanUps.reverse()) await Promise.resolve(step()).catch(() => {});
    })();
    return cleaning;
  };
  const breakOff = () => void cleanUp().then(() => process.exit(130));
  for (const signal of ['SIGTERM', 'SIGINT', 'SIGHUP']) process.once(signal, breakOff);
  // Whoever started this may be killed without a word to us: then its end is ours too.
  const parent = process.ppid;
  const watch = setInterval(() => {
    if (process.ppid === parent) return;
    clearInterval(watch);
    breakOff();
  }, 1000);
  watch.unref();
  let status = 1;
  try {
    status = (await script((step) => cleanUps.push(step))) ?? 0;
  } catch (error) {
    if (error instanceof RigUnavailable) status = NO_RIG;
    console.log(error instanceof RigUnavailable ? error.message : error);
  }
  await cleanUp();
  process.exit(status);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  await main(async () => console.log(dirname((await ensureRig()).serverMain)));
}
