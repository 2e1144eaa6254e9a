// What happens to a file that is open: renamed in the explorer, split over two editors.
import { ok, strictEqual } from 'node:assert/strict';

async function renamed(person) {
  const { page } = person;
  await person.openFile('ion-pair.xyz');
  const hint = await person.see('.view-line', 'Å to ');
  ok(await hint.isVisible());
  const row = await person.see('.explorer-folders-view .monaco-list-row', 'ion-pair.xyz');
  await row.click();
  await page.keyboard.press('F2');
  const input = await person.see('.explorer-folders-view .monaco-inputbox input');
  await input.fill('renamed.xyz');
  await page.keyboard.press('Enter');
  await person.see('.tab.active', 'renamed.xyz');
  await person.see('.view-line', 'Å to ');
  const status = await person.see('#status\\.languageStatus');
  await status.hover();
  await person.see('.hover-language-status', '1 frame');
  await person.shot('status');
  await page.mouse.move(640, 400);
  await page.keyboard.press('Escape');
}

async function twoEditors(person) {
  const { page } = person;
  await person.openFile('typical-mistakes.xyz');
  await person.see('.squiggly-error');
  await person.command('View: Split Editor Right');
  const editors = page.locator('.editor-instance');
  await editors.nth(1).locator('.squiggly-error').first().waitFor();
  strictEqual(await editors.count(), 2);
  // Line 6 has 1.2.3: without its second point, both editors lose the mark on it.
  const marked = async () => Promise.all([0, 1].map((index) => editors.nth(index).locator('.squiggly-error').count()));
  const before = await marked();
  await person.goTo(6, 23);
  await page.keyboard.press('Delete');
  await person.shot('both');
  for (let look = 0; look < 100; look++) {
    const now = await marked();
    if (now.every((count, index) => count === before[index] - 1)) return;
    await page.waitForTimeout(100);
  }
  throw new Error(`marks before ${before}, afterwards ${await marked()}`);
}

export const FILES = [
  { name: 'renamed', run: renamed, theme: 'dark' },
  { name: 'two-editors', run: twoEditors, theme: 'light' },
];
