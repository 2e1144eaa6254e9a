// The panel: what it leads with, how it follows, and that its parts answer.
import { ok, strictEqual } from 'node:assert/strict';
import { WAIT, words } from '../hands.mjs';

/** The page inside the panel. */
export function inPanel(person) {
  return person.page.frameLocator('iframe.webview.ready').frameLocator('iframe#active-frame');
}

async function readPanel(person, selector, text) {
  const found = inPanel(person).locator(selector, text === undefined ? {} : { hasText: text });
  await found.first().waitFor({ timeout: WAIT });
  return words(await found.first().textContent());
}

async function cluster(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.goTo(4, 3);
  await person.command('Polewise: Open the Panel of Pairs');
  const title = await readPanel(person, 'h2', 'H2O');
  ok(title.includes('H2O (1)'), title);
  await readPanel(person, '.curve.reference').catch(() => {});
  await person.shot('here');

  // It follows the cursor.
  await page.locator('.monaco-editor .view-line').nth(9).click();
  await person.goTo(9, 3);
  await readPanel(person, 'h2', 'Partners of H2O (3)');
  await person.shot('followed');

  // Choosing a partner selects the atoms of both in the text.
  const panel = inPanel(person);
  await panel.locator('.here .rows [role=row]').nth(1).click();
  await page.locator('.monaco-editor .selected-text').first().waitFor({ timeout: WAIT });
  await person.shot('chosen');

  await panel.getByRole('tab', { name: 'All pairs' }).click();
  await readPanel(person, '.all-pairs .rows [role=row]', 'H2O');
  await person.shot('pairs');
  await panel.getByRole('tab', { name: 'Fragment by fragment' }).click();
  await panel.locator('.matrix svg').waitFor({ timeout: WAIT });
  await person.shot('matrix');
}

async function frames(person) {
  await person.openFile('polar-dimer-scan.xyz');
  await person.goTo(4, 3);
  await person.command('Polewise: Open the Panel of Pairs');
  await readPanel(person, 'h1', 'frame 1 of');
  const panel = inPanel(person);
  await person.shot('here');
  await panel.getByRole('tab', { name: 'Over frames' }).click();
  await panel.locator('.over-frames svg').waitFor({ timeout: WAIT });
  await person.shot('frames');
  strictEqual(await panel.locator('.over-frames h2').count(), 2);
}

async function ligand(person) {
  await person.openFile('binding-site.pdb');
  await person.goTo(136, 35);
  await person.command('Polewise: Open the Panel of Pairs');
  await readPanel(person, 'h2', 'LIG:401');
  await person.shot('here');
}

export const PANEL = [
  { name: 'panel-cluster', run: cluster },
  { name: 'panel-frames', run: frames },
  { name: 'panel-ligand', run: ligand },
];
