// The panel: what it leads with, how it follows, what is chosen in it, and that everyone can use it.
import { deepStrictEqual, match, ok, strictEqual } from 'node:assert/strict';
import { readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { WAIT, words } from '../hands.mjs';

const OPEN = 'Polewise: Open the Panel of Pairs';
const AXE = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

/** The words of the first such part of the panel, once it holds some text. */
async function read(person, selector, text) {
  const found = person.panel.locator(selector, text === undefined ? {} : { hasText: text });
  await found.first().waitFor({ timeout: WAIT });
  return words(await found.first().textContent());
}

async function view(person, name) {
  await person.panel.getByRole('tab', { name }).click();
}

/** Back to the text on the left. */
async function toText(person, name) {
  await person.page.keyboard.press('Control+1');
  await person.see('.editor-group-container.active .tab.active', name);
}

/** Looks for what keeps people with a screen reader, a keyboard or weak eyes out. */
async function isAccessible(person) {
  const frame = person.page.frames().find((other) => other.name() === 'active-frame' || /fake\.html/.test(other.url()));
  ok(frame, 'the panel has a frame');
  await frame.evaluate(AXE);
  const { violations, passes } = await frame.evaluate(() =>
    globalThis.axe.run(globalThis.document, { runOnly: ['wcag2a', 'wcag2aa', 'wcag21aa', 'best-practice'] }),
  );
  const found = violations.flatMap(({ id, nodes }) => nodes.map(({ html }) => `${id}: ${html}`));
  deepStrictEqual(found, []);
  ok(passes.length > 10, 'the check looked at something');
}

async function cluster(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.goTo(4, 3);
  await person.command(OPEN);
  const title = await read(person, 'h2', 'H2O (1)');
  match(title, /^H2O \(1\) – /);
  match(await read(person, '.verdict'), /compute/);
  await person.shot('here');
  await isAccessible(person);
  const picture = person.panel.locator('img.pair-picture');
  ok(await picture.evaluate((img) => img.complete && img.naturalWidth > 0), 'the drawing is there');

  // It follows the cursor.
  await toText(person, 'water-cluster.xyz');
  await person.goTo(9, 3);
  await read(person, 'h2', 'Partners of H2O (3)');

  // Choosing a partner selects the atoms of both in the text, and shows that pair.
  await person.panel.locator('.here .rows [role=row]').nth(1).click();
  await read(person, 'h2', 'H2O (3) – H2O (5)');
  await person.see('.monaco-editor .selected-text');
  strictEqual(await page.locator('.monaco-editor .cursors-layer .cursor').count(), 2, 'two fragments, two cursors');
  await person.shot('chosen');

  await view(person, 'All pairs');
  await read(person, '.all-pairs .rows [role=row]', 'H2O');
  await person.shot('pairs');
  await isAccessible(person);
  await person.panel.getByRole('button', { name: /separation of the centres/ }).click();
  const nearest = await read(person, '.all-pairs .rows [role=row]', '2.69');
  match(nearest, /H2O \(4\) – H2O \(5\)/);
  await person.panel.getByLabel('Advice').selectOption('review');
  await read(person, '.all-pairs [role=status]', /^\d of 21 pairs/);
  await person.shot('pairs-filtered');

  await view(person, 'Fragment by fragment');
  await person.panel.locator('.matrix svg').waitFor({ timeout: WAIT });
  await person.shot('matrix');
  await isAccessible(person);

  // A table is not left as it was before an edit.
  await view(person, 'All pairs');
  await read(person, '.all-pairs [role=status]', /of 21 pairs/);
  await toText(person, 'water-cluster.xyz');
  await person.goTo(21, 1);
  await page.keyboard.press('Control+Shift+k');
  await read(person, '.all-pairs [role=status]', /of (?!21 )\d+ pairs/);
}

/** Everything by keyboard alone. */
async function keyboard(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.goTo(4, 3);
  await person.command(OPEN);
  await read(person, 'h2', 'Partners of H2O (1)');
  // Into the panel, to its tabs, and on to the second.
  await page.keyboard.press('Control+2');
  const focused = () => person.panel.locator(':focus').first();
  for (let press = 0; press < 4; press++) {
    await page.keyboard.press('Tab');
    if ((await person.panel.locator('[role=tab]:focus').count()) > 0) break;
  }
  await page.keyboard.press('ArrowRight');
  strictEqual(words(await focused().textContent()), 'All pairs');
  await read(person, '.all-pairs .rows [role=row]', 'H2O');
  for (let press = 0; press < 16; press++) {
    await page.keyboard.press('Tab');
    if ((await person.panel.locator('[role=grid]:focus').count()) > 0) break;
  }
  await page.keyboard.press('ArrowDown');
  await page.keyboard.press('ArrowDown');
  const current = words(await person.panel.locator('.all-pairs .rows .current [role=gridcell]').first().textContent());
  await person.shot('grid');
  await page.keyboard.press('Enter');
  await person.see('.monaco-editor .selected-text');
  await page.keyboard.press('Shift+Tab');
  await view(person, 'At the cursor');
  // A button keeps the keyboard though what it does draws everything anew.
  await person.panel.getByRole('button', { name: 'Select its atoms' }).focus();
  await page.keyboard.press('Enter');
  await page.waitForTimeout(700);
  strictEqual(words(await person.panel.locator(':focus').first().textContent()), 'Select its atoms');
  const [first, second] = current.split(' – ');
  const shown = await read(person, 'h2', first);
  ok(shown.includes(second), `${shown} is ${current}`);
}

async function frames(person) {
  await person.openFile('polar-dimer-scan.xyz');
  await person.goTo(4, 3);
  await person.command(OPEN);
  await read(person, 'h1', 'frame 1 of 12');
  await person.shot('here');
  await view(person, 'Over frames');
  await person.panel.locator('.over-frames svg').waitFor({ timeout: WAIT });
  await person.shot('frames');
  await isAccessible(person);
  // What happens leads to the frame where it does.
  await person.panel.getByRole('button', { name: /^Frames 5/ }).click();
  await read(person, 'h1', 'frame 6 of 12');
}

async function ligand(person) {
  await person.openFile('binding-site.pdb');
  await person.goTo(136, 35);
  await person.command(OPEN);
  await read(person, 'h2', 'A:LIG:401 –');
  await person.shot('here');
  await view(person, 'Fragment by fragment');
  await person.panel.locator('.matrix svg').waitFor({ timeout: WAIT });
  await person.shot('matrix');
}

/** A hundred thousand pairs: only what is seen is there, and the last row is as near as the first. */
async function large(person) {
  const { page, place } = person;
  const waters = Array.from({ length: 1000 }, (_, k) => {
    const [x, y, z] = [3.1 * (k % 10), 3.1 * (Math.floor(k / 10) % 10), 3.1 * Math.floor(k / 100)];
    const atom = (symbol, dx, dy) => `${symbol} ${(x + dx).toFixed(4)} ${(y + dy).toFixed(4)} ${z.toFixed(4)}\n`;
    return atom('O', 0, 0) + atom('H', 0.9572, 0) + atom('H', -0.24, 0.9266);
  });
  writeFileSync(join(place.samples, 'crowd.xyz'), `3000\n\n${waters.join('')}`);
  await person.openByName('crowd.xyz');
  await person.goTo(1500, 2);
  await person.command(OPEN);
  await read(person, 'h2', 'Partners of H2O (500)');
  await view(person, 'All pairs');
  const note = await read(person, '.all-pairs [role=status]', /\d{5,} pairs/);
  const count = Number(/(\d+) pairs/.exec(note)[1]);
  ok(count > 100_000, note);
  const grid = person.panel.locator('.all-pairs [role=grid]');
  strictEqual(await grid.getAttribute('aria-rowcount'), String(count + 1));
  await grid.focus();
  await page.keyboard.press('End');
  await read(person, `.all-pairs [role=row][aria-rowindex="${count + 1}"]`, /H2O \(\d+\) – H2O \(\d+\)/);
  const made = await person.panel.locator('.all-pairs .rows [role=row]').count();
  ok(made < 100, `${made} rows are made`);
  await person.shot('last-row');
  await view(person, 'Fragment by fragment');
  await read(person, '.matrix .reading', 'shown for up to 300');
}

/** It rests while hidden, comes back after a reload, and shows nothing of a file that is gone. */
async function lasting(person) {
  const { page, place } = person;
  await person.openFile('water-cluster.xyz');
  await person.goTo(4, 3);
  await person.command(OPEN);
  await read(person, 'h2', 'Partners of H2O (1)');
  await view(person, 'All pairs');
  await read(person, '.all-pairs .rows [role=row]', 'H2O');

  // Reloaded by the editor itself, which keeps what was open.
  await person.command('Developer: Reload Window');
  await page.waitForEvent('load', { timeout: WAIT });
  await person.see('.tab', 'Pairs of water-cluster.xyz');
  await page.reload();
  await person.see('.tab', 'Pairs of water-cluster.xyz');
  await read(person, '.all-pairs .rows [role=row]', 'H2O');
  await person.shot('reloaded');
  await view(person, 'At the cursor');
  await toText(person, 'water-cluster.xyz');
  await person.goTo(9, 3);
  await read(person, 'h2', 'Partners of H2O (3)');

  // Another editor over it: what happens meanwhile is shown when it is seen again.
  await page.keyboard.press('Control+p');
  await (await person.see('.quick-input-widget input.input')).fill('ion-pair.xyz');
  await person.see('.quick-input-widget .monaco-list-row', 'ion-pair.xyz');
  await page.keyboard.press('Control+Enter');
  await person.see('.editor-group-container.active .tab.active', 'ion-pair.xyz');
  await toText(person, 'water-cluster.xyz');
  await person.goTo(12, 3);
  await page.locator('.tab', { hasText: 'Pairs of water-cluster.xyz' }).click();
  await read(person, 'h2', 'Partners of H2O (4)');

  rmSync(join(place.samples, 'water-cluster.xyz'));
  await page
    .locator('.tab', { hasText: /^water-cluster.xyz/ })
    .locator('.codicon-close')
    .click();
  await read(person, '.state', 'water-cluster.xyz is not open');
  strictEqual(await person.panel.locator('.tabs').isVisible(), false, 'nothing stale is left');
  await person.shot('deleted');
}

export const PANEL = [
  { name: 'panel-cluster', run: cluster },
  { name: 'panel-keyboard', run: keyboard, theme: 'dark' },
  { name: 'panel-frames', run: frames, theme: 'hc' },
  { name: 'panel-ligand', run: ligand, theme: 'light' },
  { name: 'panel-large', run: large, theme: 'dark' },
  { name: 'panel-lasting', run: lasting, theme: 'light' },
];
