// Uses the editor as a person would, in every theme: `node tests/editor/person.mjs [--theme=hc] [--flow=pdb]`.
// Screenshots go to $POLEWISE_SHOTS, or to polewise-shots in the system's folder for temporary files.
import { strictEqual } from 'node:assert/strict';
import { mkdirSync, readdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ACTING } from './flows/acting.mjs';
import { PANEL } from './flows/panel.mjs';
import { READING } from './flows/reading.mjs';
import { Person, SHOTS } from './hands.mjs';
import {
  calmSettings,
  ensureRig,
  freshPlace,
  installExtension,
  launchBrowser,
  main,
  packExtension,
  startServer,
} from './rig.mjs';

const THEMES = { light: 'Default Light Modern', dark: 'Default Dark Modern', hc: 'Default High Contrast' };

/** Each begins with nothing open but the folder of samples, as they are in the repository; it may leave behind what it likes. */
const FLOWS = [...READING, ...PANEL, ...ACTING];

const option = (name) =>
  process.argv.find((argument) => argument.startsWith(`--${name}=`))?.slice(name.length + 3) ?? '';

/** Runs flows one after another in one window: a new one for each would take longer than the flow. */
async function runFlows(page, place, theme, flows) {
  for (const flow of flows) {
    const started = Date.now();
    const person = new Person(page, place, { theme, flow: flow.name });
    try {
      await person.tidyUp();
      await flow.run(person);
    } catch (error) {
      await person.shot('failed').catch(() => {});
      throw error;
    }
    console.log(`passed ${theme} ${flow.name} (${Date.now() - started} ms)`);
  }
}

await main(async (atEnd) => {
  const rig = await ensureRig();
  mkdirSync(SHOTS, { recursive: true });
  for (const name of readdirSync(SHOTS)) {
    if (/^(light|dark|hc)-.*\.png$/.test(name)) rmSync(join(SHOTS, name));
  }
  const place = await freshPlace();
  atEnd(() => place.remove());
  await packExtension(place.vsix);
  await installExtension(rig, place, place.vsix);
  const server = await startServer(rig, place);
  atEnd(() => server.stop());
  const browser = await launchBrowser(rig);
  atEnd(() => browser.close());

  const flows = FLOWS.filter(({ name }) => name.includes(option('flow')));
  for (const [theme, colorTheme] of Object.entries(THEMES)) {
    if (!theme.includes(option('theme'))) continue;
    await place.setSettings(calmSettings({ 'workbench.colorTheme': colorTheme }));
    const context = await browser.newContext({ locale: 'en-US', viewport: { width: 1280, height: 800 } });
    const page = await context.newPage();
    const errors = [];
    page.on('pageerror', (error) => errors.push(String(error)));
    await page.goto(`${server.url}?${new URLSearchParams({ folder: place.samples })}`);
    // What does not depend on colours is done in one theme.
    const wanted = flows.filter(({ only = theme }) => only === theme);
    await runFlows(page, place, theme, wanted);
    strictEqual(errors.length, 0, errors.join('\n'));
    await context.close();
  }
});
