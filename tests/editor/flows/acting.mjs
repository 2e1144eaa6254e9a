// Acting: the questions before dimer files are written.
import { ok, strictEqual } from 'node:assert/strict';
import { readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const dimersIn = (folder) =>
  readdirSync(folder)
    .filter((name) => /-\d+-\d+-\d+\.xyz$/.test(name))
    .sort();

async function choose(person, label) {
  const row = await person.see('.quick-input-widget .monaco-list-row', label);
  // The list is drawn before it can be used.
  await person.page.waitForTimeout(300);
  await row.click();
}

async function writing(person) {
  const { page, place } = person;
  const { samples } = place;
  await person.openFile('water-cluster.xyz');
  const write = async () => {
    await person.command('Polewise: Write Dimer Files');
    await choose(person, 'Choose pairs');
    await person.see('.quick-input-widget .monaco-list-row', '1–2');
    await person.shot('choices');
    // Those to compute are ticked: all, then none, then two.
    const all = await person.see('.quick-input-header :is(input[type=checkbox], .monaco-custom-toggle)');
    await all.click();
    await person.see('.quick-input-count', '21 Selected');
    await all.click();
    await person.see('.quick-input-count', '0 Selected');
    for (const pair of ['1–2', '1–3']) await choose(person, pair);
    await page.locator('.quick-input-widget .quick-input-action .monaco-button', { hasText: 'OK' }).click();
    await choose(person, 'Beside the file');
  };
  await write();
  await person.see('.notification-toast', '2 dimer files written.');
  await person.shot('written');
  const [first, second] = dimersIn(samples);
  strictEqual(dimersIn(samples).length, 2);
  writeFileSync(join(samples, first), 'mine');
  rmSync(join(samples, second));
  await write();
  const dialog = await person.see('.monaco-dialog-box', '1 of the files exists already.');
  await person.shot('question');
  ok((await dialog.textContent()).includes(first));
  await (await person.see('.monaco-dialog-box .monaco-button', 'Keep Existing One')).click();
  await person.see('.notification-toast', '1 dimer file written, 1 existing one kept.');
  strictEqual(readFileSync(join(samples, first), 'utf8'), 'mine');
  ok(readFileSync(join(samples, second), 'utf8').startsWith('6\n'));
}

export const ACTING = [{ name: 'writing', run: writing }];
