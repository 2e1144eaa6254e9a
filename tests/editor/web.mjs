// The extension where everything runs in a browser, extension host and language server too: `node tests/editor/web.mjs`.
// The rig's server gives the workbench and the files to edit; it does not have the extension.
import { ok } from 'node:assert/strict';
import { readdirSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { BROWSER } from './flows/browser.mjs';
import { makeShots, newWindow, runFlows } from './hands.mjs';
import { ensureRig, freshPlace, launchBrowser, main, ROOT, startServer } from './rig.mjs';

/** No such place is ever asked: the requests are answered here, from the files that the package would hold. */
const HOME = { scheme: 'https', authority: 'polewise.test', path: '/' };

/** Answers for `HOME`; gives the list of what has been asked for. */
async function servePackage(context) {
  const { listFiles, PackageManager } = createRequire(join(ROOT, 'package.json'))('@vscode/vsce');
  const files = await listFiles({ cwd: ROOT, packageManager: PackageManager.None });
  const asked = [];
  await context.route(`${HOME.scheme}://${HOME.authority}/**`, (route) => {
    const file = new URL(route.request().url()).pathname.slice(1);
    if (!files.includes(file)) return route.fulfill({ status: 404 });
    asked.push(file);
    return route.fulfill({ path: join(ROOT, file), headers: { 'access-control-allow-origin': '*' } });
  });
  return asked;
}

/** Runs in the page before anything else: the workbench finds one more extension in its settings. */
function addExtension(home) {
  document.addEventListener('readystatechange', () => {
    const element = document.getElementById('vscode-workbench-web-configuration');
    if (document.readyState !== 'interactive' || element === null) return;
    const settings = JSON.parse(element.dataset.settings);
    element.dataset.settings = JSON.stringify({ ...settings, additionalBuiltinExtensions: [home] });
  });
}

await main(async (atEnd) => {
  const rig = await ensureRig();
  makeShots('web');
  const place = await freshPlace();
  atEnd(() => place.remove());
  const server = await startServer(rig, place);
  atEnd(() => server.stop());
  const browser = await launchBrowser(rig);
  atEnd(() => browser.close());

  const window = await newWindow(browser);
  const asked = await servePackage(window.context);
  await window.page.addInitScript(addExtension, HOME);
  await window.open(server, place);
  await runFlows(window.page, place, 'web', BROWSER);
  window.checkErrors();
  for (const file of ['client/dist/browser.js', 'server/dist/worker.js'])
    ok(asked.includes(file), `${file} was loaded`);
  ok(!asked.some((file) => file.endsWith('.cjs')), 'nothing for Node was loaded');
  ok(!readdirSync(place.extensions).some((name) => name.includes('polewise')), 'the server has no Polewise');
});
