// Uses the editor as a person would: `node tests/editor/person.mjs [--theme=hc] [--flow=pdb] [--every]`. Flows that read and draw most run in
// every theme, the others in one of their own; `--every` runs all of them in all.
// Screenshots go to $POLEWISE_SHOTS, or to polewise-shots in the system's folder for temporary files.
import { ACTING } from './flows/acting.mjs';
import { EDITING } from './flows/editing.mjs';
import { FILES } from './flows/files.mjs';
import { PANEL } from './flows/panel.mjs';
import { READING } from './flows/reading.mjs';
import { makeShots, newWindow, runFlows } from './hands.mjs';
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
const FLOWS = [...READING, ...EDITING, ...PANEL, ...ACTING, ...FILES];

const option = (name) =>
  process.argv.find((argument) => argument.startsWith(`--${name}=`))?.slice(name.length + 3) ?? '';

await main(async (atEnd) => {
  const rig = await ensureRig();
  makeShots(...Object.keys(THEMES));
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
    const window = await newWindow(browser);
    await window.open(server, place);
    const isEvery = process.argv.includes('--every') || option('theme') !== '';
    const wanted = flows.filter((flow) => isEvery || (flow.theme ?? theme) === theme);
    await runFlows(window.page, place, theme, wanted);
    window.checkErrors();
    await window.context.close();
  }
});
