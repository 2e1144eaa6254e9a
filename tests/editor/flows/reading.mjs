// Reading: squiggles, hovers, problems, status, and what typing does to them.
import { ok } from 'node:assert/strict';

async function cluster(person) {
  const { page } = person;
  await person.openFile('water-cluster.xyz');
  await person.see('.squiggly-warning');
  const status = await person.see('#status\\.languageStatus');
  ok(/Polewise|Editor Language Status/i.test((await status.getAttribute('aria-label')) ?? ''));
  await person.shot('squiggles');

  // Line 4 has no finding, so that our words stand alone; on line 3 the finding stands above them.
  const atom = await person.hoverAt(4, 12, 'charge');
  ok(atom.includes('H2O') && atom.includes('compute'), atom);
  await person.shot('atom-hover');
  await person.picture();
  await person.shot('atom-hover-end');
  await person.hoverAt(3, 1, 'near-field');
  await person.shot('flagged-atom-hover');

  const frame = await person.hoverAt(1, 1, '7 fragments');
  ok(frame.includes('24 atoms'), frame);
  await person.shot('frame-hover');

  const key = await person.hoverAt(2, 40, 'kind_dipole_sizes');
  ok(key.includes('composition'), key);
  await person.shot('key-hover');
  await page.keyboard.press('Escape');

  const problems = await person.problems('near-field');
  ok(
    problems.some((row) => row.includes('H2O') && row.includes('polewise')),
    problems.join('\n'),
  );
  await person.shot('problems');

  // The hover of the language status item says what was read of this file.
  await status.hover();
  await person.see('.hover-language-status', '1 frame, 7 fragments');
  await person.shot('status');
  await page.mouse.move(700, 300);
  await page.keyboard.press('Escape');

  // A letter typed into a number is an error at once; taking it back clears it.
  await page.locator('.monaco-editor .view-line').first().click();
  await person.goTo(4, 10);
  await page.keyboard.type('x');
  await person.see('.squiggly-error');
  await person.see('.markers-panel .monaco-list-row', 'number-unreadable');
  await person.shot('typed');
  await page.keyboard.press('Control+z');
  await person.gone('.squiggly-error');
}

async function pdb(person) {
  await person.openFile('binding-site.pdb');
  await person.see('.view-overlays .cdr[class*=squiggly]');
  await person.shot('squiggles');
  const model = await person.hoverAt(12, 2, 'Frame 1 of 2');
  ok(model.includes('13 fragments'), model);
  await person.shot('model-hover');
  const ligand = await person.hoverAt(136, 35, 'charge');
  ok(/aminobenzonitrile|LIG:401/.test(ligand), ligand);
  await person.shot('ligand-hover');
  await person.picture();
  await person.shot('ligand-hover-end');
}

async function mistakes(person) {
  await person.openFile('typical-mistakes.xyz');
  await person.see('.squiggly-error');
  const mistake = await person.hoverAt(6, 21, 'number-unreadable');
  ok(mistake.includes('1.2.3'), mistake);
  await person.shot('hover');
}

export const READING = [
  { name: 'cluster', run: cluster },
  { name: 'pdb', run: pdb, theme: 'dark' },
  { name: 'mistakes', run: mistakes, theme: 'hc' },
];
