// Acting: the walkthrough from a bare cluster to dimer files, and the questions before files are written.
import { ok, strictEqual } from 'node:assert/strict';
import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
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

/** Whether a picture of a page is drawn; walkthrough pages live in frames of their own. */
async function pictureInFrames(page, name) {
  for (let attempt = 0; attempt < 100; attempt++) {
    for (const frame of page.frames()) {
      const image = frame.locator(`img[src*="${name}"]`);
      if ((await image.count().catch(() => 0)) === 0) continue;
      if (await image.first().evaluate((img) => img.complete && img.naturalWidth > 0)) return true;
    }
    await page.waitForTimeout(100);
  }
  return false;
}

async function walkthrough(person) {
  const { page, place } = person;
  await person.command('Welcome: Open Walkthrough...');
  await page.keyboard.type('From a cluster');
  await choose(person, 'From a cluster to dimer files');
  const step = async (title, button, picture) => {
    const heading = await person.see('.getting-started-step .step-title', title);
    const expanded = page.locator('.getting-started-step.expanded', { hasText: title });
    if ((await expanded.count()) === 0) await heading.click();
    ok(await pictureInFrames(page, picture), `${picture} is drawn`);
    await person.shot(picture.replace('.svg', ''));
    await (await person.see('.getting-started-step.expanded .monaco-button', button)).click();
  };

  await step('Open a cluster', 'Open the Sample Cluster', 'open.svg');
  await person.see('.tab', 'sample-cluster.xyz');
  await person.see('.monaco-editor .view-line', 'acetone');
  await person.shot('opened');
  await step('Read what is known', 'Show the Hover of This Line', 'read.svg');
  await person.see('.monaco-hover:not(.hidden) .hover-row', 'C3H6O');
  await person.shot('explained');
  await page.keyboard.press('Escape');
  await step('Write the dipoles down', 'Add Missing Dipoles', 'dipoles.svg');
  await person.see('.monaco-editor .view-line', 'fragment_dipoles');
  await person.shot('dipoles-written');
  await step('See the pairs', 'Open the Panel', 'panel.svg');
  await person.panel.locator('h2', { hasText: 'C3H6O (1)' }).first().waitFor();
  await person.shot('panel-opened');
  await step('Write the pairs worth computing', 'Write Dimer Files', 'dimers.svg');
  await choose(person, /Pairs to compute \(/);
  await choose(person, 'In samples');
  await person.see('.notification-toast', /dimer files? written/);
  await person.shot('written');
  const written = dimersIn(place.samples);
  ok(written.length > 0, 'dimer files are there');
  for (const name of written) {
    ok(name.startsWith('sample-cluster-1-'), name);
    const text = readFileSync(join(place.samples, name), 'utf8');
    ok(text.includes('fragment_dipoles=') && text.includes('multiplicity='), text);
  }
  ok(!existsSync(join(place.samples, 'sample-cluster.xyz')), 'the sample itself was not saved');
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

async function fileSettings(person) {
  const { page } = person;
  await person.openFile('bare-cluster.xyz');
  await person.command('Polewise: Choose Temperature of This File');
  const input = await person.see('.quick-input-widget input.input');
  await input.fill('-5');
  await person.see('.quick-input-message', 'above 0 K');
  await person.shot('temperature-refused');
  await input.fill('310');
  // What is wrong with a value is asked for as it is typed.
  await page.locator('.quick-input-message', { hasText: 'above 0 K' }).waitFor({ state: 'hidden' });
  await page.keyboard.press('Enter');
  await person.see('.monaco-editor .view-line', 'temperature=310');
  await person.command('Polewise: Choose Medium of This File');
  await person.see('.quick-input-widget .monaco-list-row', 'vacuum');
  await page.keyboard.type('toluene');
  await choose(person, 'toluene');
  await person.see('.monaco-editor .view-line', 'relative_permittivity=toluene');
  await person.shot('written');
}

export const ACTING = [
  { name: 'file-settings', run: fileSettings, theme: 'hc' },
  { name: 'walkthrough', run: walkthrough, theme: 'light' },
  { name: 'writing', run: writing, theme: 'hc' },
];
