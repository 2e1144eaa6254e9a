// What has to work where there is no server's process: findings, hints, hovers with pictures, status, quick fixes, units.
import { ok } from 'node:assert/strict';
import { WAIT } from '../hands.mjs';

async function browser(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.see('.squiggly-warning');
  await person.see('.view-line', 'H2O (1)');
  await person.shot('squiggles-and-hints');

  const atom = await person.hoverAt(4, 12, 'charge');
  ok(atom.includes('H2O') && atom.includes('compute'), atom);
  await person.shot('hover');
  await person.picture();
  await page.keyboard.press('Escape');

  const status = await person.see('#status\\.languageStatus');
  await status.hover();
  await person.see('.hover-language-status', '1 frame, 7 fragments');
  await person.shot('status');
  await page.mouse.move(700, 300);
  await page.keyboard.press('Escape');

  // The remedy is an edit that the server in the worker writes.
  await person.openFile('typical-mistakes.xyz');
  await person.problems('unit-unknown');
  await person.focusEditor();
  await person.goTo(41, 130);
  await person.quickFix('nan');
  await person.gone('.markers-panel .monaco-list-row', 'array-length');
  await person.see('.markers-panel .monaco-list-row', 'unit-unknown');
  await person.shot('fixed');

  // The panel and the commands, which are bundles of their own elsewhere, work here too.
  await person.openFile('bare-cluster.xyz');
  await person.see('.codelens-decoration', 'to compute');
  await person.goTo(4, 3);
  await person.command('Polewise: Open the Panel of Pairs');
  await person.panel.locator('h2', { hasText: 'C3H6O (1)' }).first().waitFor({ timeout: WAIT });
  await person.shot('panel');
  await person.focusEditor();
  await person.command('Polewise: Add Missing Dipoles');
  await person.see('.monaco-editor .view-line', 'fragment_dipoles');
}

export const BROWSER = [{ name: 'browser', run: browser }];
