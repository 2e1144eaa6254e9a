// Editing: remedies, changes that are looked at before they are made, completion, and ways between annotation and atoms.
import { ok, strictEqual } from 'node:assert/strict';
import { words } from '../hands.mjs';

/** The text of the lines that are seen, without what is only shown behind them. */
const lines = async (person) => (await person.page.locator('.monaco-editor .view-line').allTextContents()).map(words);

async function remedies(person) {
  await person.openFile('typical-mistakes.xyz');
  await person.problems('clash');
  await person.focusEditor();
  // A clash: the fragment is moved out.
  await person.goTo(132, 1);
  await person.quickFix('Move');
  await person.gone('.markers-panel .monaco-list-row', 'clash');
  await person.shot('moved-out');
  // Lengths in bohr become ångström.
  await person.goTo(105, 1);
  await person.quickFix('bohr');
  await person.gone('.markers-panel .monaco-list-row', 'unit-bohr');
  await person.shot('converted');
  // A key that is misspelt.
  await person.goTo(31, 72);
  await person.quickFix('fragment_dipoles');
  await person.gone('.markers-panel .monaco-list-row', 'key-misspelt');
}

/** What changes the arrangement is shown first. */
async function turning(person) {
  const { page } = person;
  await person.openFile('bare-cluster.xyz');
  await person.see('.codelens-decoration', 'to compute');
  await person.goTo(4, 3);
  const row = await person.offered('Control+Shift+r', /Turn/);
  ok(/kJ\/mol/.test(words(await row.textContent())), 'the energy before and after is said');
  await person.shot('offered');
  const before = await lines(person);
  await person.take(row);
  await person.see('.bulk-edit-panel', 'Apply');
  const ticks = page.locator('.bulk-edit-panel .monaco-list-row input[type=checkbox]');
  strictEqual(await ticks.count(), 2, 'the file and one change: all or nothing');
  await person.shot('preview');
  strictEqual((await lines(person)).slice(0, 6).join('\n'), before.slice(0, 6).join('\n'), 'nothing is changed yet');
  await ticks.first().check();
  await (await person.see('.bulk-edit-panel .monaco-button', 'Apply')).click();
  await person.gone('.bulk-edit-panel .monaco-button');
  await person.see('.tab.active.dirty, .tab.dirty', 'bare-cluster.xyz');
  await person.shot('turned');
}

/** From annotation to atoms and back; completion; what stands above a frame. */
async function moving(person) {
  const { page } = person;
  await person.openFile('ion-pair.xyz');
  const lens = await person.see('.codelens-decoration', /pairs? to compute|no pair to compute/);
  await person.shot('lens');
  const offset = (await page.locator('.view-line').nth(1).textContent()).length;
  ok(offset > 0);
  // A fragment is found from any of its atoms.
  await person.goTo(4, 3);
  await page.keyboard.press('Shift+F12');
  await person.see('.reference-zone-widget');
  await person.shot('references');
  await page.keyboard.press('Escape');
  await page.keyboard.press('Escape');
  await person.goTo(4, 3);
  await page.keyboard.press('F2');
  const box = await person.see('.rename-box input');
  await box.fill('cation');
  await person.shot('rename');
  await page.keyboard.press('Enter');
  await person.see('.view-line', 'cation');
  // The lens leads to the panel.
  await lens.locator('a', { hasText: 'panel' }).click();
  await person.panel.locator('h2').first().waitFor();
  await person.shot('lens-to-panel');
}

async function completing(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.goTo(2, 1);
  await page.keyboard.press('End');
  await page.keyboard.type(' frag');
  await page.keyboard.press('Control+Space');
  await person.see('.suggest-widget .monaco-list-row', 'fragment_charges');
  await page.keyboard.press('Control+Space');
  await page.waitForTimeout(500);
  await person.shot('keys');
  await page.keyboard.press('Escape');
  await person.goTo(4, 1);
  await page.keyboard.press('Home');
  await page.keyboard.press('Shift+ArrowRight');
  await page.keyboard.press('Delete');
  await page.keyboard.press('Control+Space');
  await person.see('.suggest-widget .monaco-list-row', /^H/);
  await person.shot('elements');
}

export const EDITING = [
  { name: 'remedies', run: remedies, theme: 'dark' },
  { name: 'turning', run: turning, theme: 'light' },
  { name: 'moving', run: moving, theme: 'hc' },
  { name: 'completing', run: completing, theme: 'light' },
];
