// Uses the editor as a person would, in a light and in a dark theme: `node tests/editor/person.mjs`.
// Screenshots go to $POLEWISE_SHOTS, or to /tmp/polewise-shots.
import { ok, strictEqual } from 'node:assert/strict';
import { mkdirSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
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

const SHOTS = process.env.POLEWISE_SHOTS || join(tmpdir(), 'polewise-shots');
const WAIT = 30_000;
const THEMES = { light: 'Default Light Modern', dark: 'Default Dark Modern' };

/** Text as it reads on the screen, without the spaces that must not break. */
const words = (text) => text.replaceAll('\u00a0', ' ').replaceAll('−', '-').replace(/\s+/g, ' ').trim();

class Person {
  constructor(page, theme) {
    this.page = page;
    this.theme = theme;
    this.shots = 0;
  }

  async shot(name) {
    // Hovers fade in.
    await this.page.waitForTimeout(400);
    await this.page.screenshot({
      path: join(SHOTS, `${this.theme}-${String(++this.shots).padStart(2, '0')}-${name}.png`),
    });
  }

  async see(selector, text) {
    const all = this.page.locator(selector, text === undefined ? {} : { hasText: text });
    await all.first().waitFor({ timeout: WAIT });
    return all.first();
  }

  async openFile(name) {
    const row = await this.see('.explorer-folders-view .monaco-list-row', name);
    await row.dblclick();
    await this.see('.tab.active', name);
    await this.see('.monaco-editor .view-line');
  }

  async goTo(line, column) {
    await this.page.keyboard.press('Control+g');
    const input = await this.see('.quick-input-widget input.input');
    await input.fill(`:${line}:${column}`);
    await this.page.keyboard.press('Enter');
    await this.page.locator('.quick-input-widget').waitFor({ state: 'hidden', timeout: WAIT });
  }

  /** Goes to a place and asks what it is; gives the words of the hover. */
  async hoverAt(line, column, expected) {
    await this.page.keyboard.press('Escape');
    await this.goTo(line, column);
    await this.page.keyboard.press('Control+k');
    await this.page.keyboard.press('Control+i');
    const row = await this.see('.monaco-hover:not(.hidden) .hover-row', expected);
    return words(await row.textContent());
  }

  /** Scrolls the hover down to its picture, which has to be drawn and to say in words what it shows. */
  async picture() {
    const image = await this.see('.monaco-hover:not(.hidden) .hover-row img');
    ok(await image.evaluate((img) => img.complete && img.naturalWidth > 0), 'the picture is drawn');
    ok(((await image.getAttribute('alt')) ?? '') !== '', 'the picture has a text');
    await image.hover();
    // One turn of the wheel moves the hover by one notch, whatever its size.
    for (let turn = 0; turn < 12; turn++) await this.page.mouse.wheel(0, 200);
  }

  /** The rows of the problems panel. */
  async problems(expected) {
    await this.page.keyboard.press('Control+Shift+m');
    await this.see('.markers-panel .monaco-list-row', expected);
    return (await this.page.locator('.markers-panel .monaco-list-row').allTextContents()).map(words);
  }
}

async function session(person) {
  const { page } = person;

  await person.openFile('water-cluster.xyz');
  await person.see('.squiggly-warning');
  const status = await person.see('#status\\.languageStatus');
  ok(/Polewise|Editor Language Status/i.test((await status.getAttribute('aria-label')) ?? ''));
  await person.shot('water-squiggles');

  // Line 4 has no finding, so that our words stand alone; on line 3 the finding stands above them.
  const atom = await person.hoverAt(4, 12, 'charge');
  ok(atom.includes('H2O') && atom.includes('compute'), atom);
  await person.shot('water-atom-hover');
  await person.picture();
  await person.shot('water-atom-picture');
  await person.hoverAt(3, 1, 'near-field');
  await person.shot('water-flagged-atom-hover');

  const frame = await person.hoverAt(1, 1, '7 fragments');
  ok(frame.includes('24 atoms'), frame);
  await person.shot('water-frame-hover');

  const key = await person.hoverAt(2, 40, 'kind_dipole_sizes');
  ok(key.includes('composition'), key);
  await person.shot('water-key-hover');
  await page.keyboard.press('Escape');

  const problems = await person.problems('near-field');
  ok(
    problems.some((row) => row.includes('H2O') && row.includes('polewise')),
    problems.join('\n'),
  );
  await person.shot('water-problems');

  // The hover of the language status item says what was read of this file.
  await status.hover();
  await person.see('.hover-language-status', '1 frame, 7 fragments');
  await person.shot('water-status');
  await page.mouse.move(700, 300);
  await page.keyboard.press('Escape');

  // A letter typed into a number is an error at once; taking it back clears it.
  await page.locator('.monaco-editor .view-line').first().click();
  await person.goTo(4, 10);
  await page.keyboard.type('x');
  await person.see('.squiggly-error');
  await person.see('.markers-panel .monaco-list-row', 'number-unreadable');
  await person.shot('water-typed');
  await page.keyboard.press('Control+z');
  await page.locator('.squiggly-error').first().waitFor({ state: 'detached', timeout: WAIT });
  await page.keyboard.press('Control+j');

  await person.openFile('binding-site.pdb');
  await person.see('.view-overlays .cdr[class*=squiggly]');
  await person.shot('pdb-squiggles');
  const model = await person.hoverAt(12, 2, 'Frame 1 of 2');
  ok(model.includes('13 fragments'), model);
  await person.shot('pdb-model-hover');
  const ligand = await person.hoverAt(136, 35, 'charge');
  ok(/aminobenzonitrile|LIG:401/.test(ligand), ligand);
  await person.shot('pdb-ligand-hover');
  await person.picture();
  await person.shot('pdb-ligand-picture');

  await person.openFile('typical-mistakes.xyz');
  await person.see('.squiggly-error');
  const mistake = await person.hoverAt(6, 21, 'number-unreadable');
  ok(mistake.includes('1.2.3'), mistake);
  await person.shot('mistake-hover');
}

await main(async (atEnd) => {
  const rig = await ensureRig();
  mkdirSync(SHOTS, { recursive: true });
  for (const name of readdirSync(SHOTS)) if (/^(light|dark)-.*\.png$/.test(name)) rmSync(join(SHOTS, name));
  const place = await freshPlace();
  atEnd(() => place.remove());
  await packExtension(place.vsix);
  await installExtension(rig, place, place.vsix);
  const server = await startServer(rig, place);
  atEnd(() => server.stop());
  const browser = await launchBrowser(rig);
  atEnd(() => browser.close());

  for (const [theme, colorTheme] of Object.entries(THEMES)) {
    const started = Date.now();
    await place.setSettings(calmSettings({ 'workbench.colorTheme': colorTheme }));
    const context = await browser.newContext({ locale: 'en-US', viewport: { width: 1280, height: 800 } });
    const page = await context.newPage();
    const errors = [];
    page.on('pageerror', (error) => errors.push(String(error)));
    const person = new Person(page, theme);
    try {
      await page.goto(`${server.url}?${new URLSearchParams({ folder: place.samples })}`);
      await session(person);
    } catch (error) {
      await person.shot('failed');
      throw error;
    }
    strictEqual(errors.length, 0, errors.join('\n'));
    await context.close();
    console.log(`passed ${theme} (${Date.now() - started} ms)`);
  }
});
