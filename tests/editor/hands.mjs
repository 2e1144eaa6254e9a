// What a person does and sees in the editor; the flows are written in these.
import { ok, strictEqual } from 'node:assert/strict';
import { mkdirSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** Where the screenshots go. */
export const SHOTS = process.env.POLEWISE_SHOTS || join(tmpdir(), 'polewise-shots');
export const WAIT = 30_000;
/** A whole editor on a busy machine may be slow to draw; a flow that fails as often as this is broken. */
const ATTEMPTS = 3;

/** Text as it reads on the screen, without the spaces that must not break. */
export const words = (text) => text.replaceAll('\u00a0', ' ').replaceAll('−', '-').replace(/\s+/g, ' ').trim();

/** The hands and eyes of someone at the editor. Screenshots are named by theme, flow and order. */
export class Person {
  #shots = 0;

  /**
   * @param page the workbench
   * @param place the folders of the run: `place.samples` is the one that is open
   * @param names theme and flow
   */
  constructor(page, place, { theme, flow }) {
    this.page = page;
    this.place = place;
    this.theme = theme;
    this.flow = flow;
  }

  async shot(name) {
    // Hovers fade in.
    await this.page.waitForTimeout(400);
    const file = `${this.theme}-${this.flow}-${String(++this.#shots).padStart(2, '0')}-${name}.png`;
    await this.page.screenshot({ path: join(SHOTS, file) });
  }

  /** As at the start: no editor, no panel, the samples as they were. */
  async tidyUp() {
    await this.see('.explorer-folders-view .monaco-list-row');
    for (const _ of [1, 2]) await this.page.keyboard.press('Escape');
    if ((await this.page.locator('.tab').count()) > 0) {
      await this.command('View: Close All Editors');
      const keepNothing = this.page.locator('.monaco-dialog-box .monaco-button', { hasText: "Don't Save" });
      const closed = this.page.locator('.tab').first().waitFor({ state: 'detached', timeout: WAIT });
      await Promise.race([keepNothing.waitFor({ timeout: WAIT }).catch(() => {}), closed]);
      if (await keepNothing.isVisible()) await keepNothing.click();
      await closed;
    }
    if (await this.page.locator('.part.panel').isVisible()) await this.command('View: Hide Panel');
    await this.page.mouse.move(640, 790);
    await this.place.restoreSamples();
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

  /** Opens a file that the explorer has not noticed yet. */
  async openByName(name) {
    await this.page.keyboard.press('Control+p');
    await (await this.see('.quick-input-widget input.input')).fill(name);
    await this.see('.quick-input-widget .monaco-list-row', name);
    await this.page.keyboard.press('Enter');
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

  /** The hover's picture, which has to be drawn and to say in words what it shows; then scrolls down to the hover's end. */
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

  /** Waits until nothing is found there any more. */
  async gone(selector, text) {
    const all = this.page.locator(selector, text === undefined ? {} : { hasText: text });
    await all.first().waitFor({ state: 'hidden', timeout: WAIT });
  }

  /** Back to the text from wherever the keyboard is. */
  async focusEditor() {
    await this.page.keyboard.press('Control+1');
    await this.see('.monaco-editor.focused');
  }

  /** Takes the remedy whose title has some words, at the place of the cursor. */
  async quickFix(title) {
    const row = await this.offered('Control+.', title);
    await this.shot('quick-fix');
    await this.take(row);
  }

  /** Asks what is offered at the place of the cursor, until something with some words is: the text may be looked at still. */
  async offered(keys, title) {
    for (let attempt = 0; ; attempt++) {
      await this.page.keyboard.press(keys);
      const row = this.page.locator('.action-widget .monaco-list-row', { hasText: title }).first();
      const isThere = await row.waitFor({ timeout: 5_000 }).then(
        () => true,
        () => false,
      );
      if (isThere) return row;
      if (attempt === 5) throw new Error(`not offered: ${title}`);
      await this.page.keyboard.press('Escape');
      await this.page.waitForTimeout(500);
    }
  }

  /** Takes what is offered. */
  async take(row) {
    // The list has the keyboard, and something to catch the mouse lies over it.
    const isChosen = async () => /\bfocused\b/.test((await row.getAttribute('class')) ?? '');
    for (let step = 0; step < 50 && !(await isChosen()); step++) await this.page.keyboard.press('ArrowDown');
    await this.page.keyboard.press('Enter');
    await this.gone('.action-widget');
  }

  /** The page inside our panel; other extensions and walkthroughs have pages of their own. */
  get panel() {
    return this.page
      .frameLocator('iframe.webview.ready[src*="extensionId=polewise"]')
      .frameLocator('iframe#active-frame');
  }

  /** Runs a command by its title. */
  async command(title) {
    await this.page.keyboard.press('F1');
    const input = await this.see('.quick-input-widget input.input');
    await input.fill(`>${title}`);
    await this.see('.quick-input-widget .monaco-list-row', title);
    // The list is filtered once more after it is shown.
    await this.page.waitForTimeout(300);
    await this.page.keyboard.press('Enter');
  }
}

/** A window that has never been used. */
export async function newWindow(browser) {
  const context = await browser.newContext({ locale: 'en-US', viewport: { width: 1280, height: 800 } });
  const page = await context.newPage();
  const errors = [];
  page.on('pageerror', (error) => errors.push(String(error)));
  return {
    context,
    page,
    open: (server, place) => page.goto(`${server.url}?${new URLSearchParams({ folder: place.samples })}`),
    checkErrors: () => strictEqual(errors.length, 0, errors.join('\n')),
  };
}

/** Makes room for the screenshots of some themes; those of an earlier run go. */
export function makeShots(...themes) {
  mkdirSync(SHOTS, { recursive: true });
  for (const name of readdirSync(SHOTS)) {
    if (name.endsWith('.png') && themes.includes(name.split('-')[0])) rmSync(join(SHOTS, name));
  }
}

/** Runs flows one after another in one window: a new one for each would take longer than the flow. */
export async function runFlows(page, place, theme, flows) {
  for (const flow of flows) {
    for (let attempt = 1; ; attempt++) {
      const started = Date.now();
      const person = new Person(page, place, { theme, flow: flow.name });
      try {
        await person.tidyUp();
        await flow.run(person);
        // What is left unsaved would come back in the next window.
        if (flow === flows.at(-1)) await person.tidyUp();
        console.log(`passed ${theme} ${flow.name} (${Date.now() - started} ms)`);
        break;
      } catch (error) {
        await person.shot(`failed-${attempt}`).catch(() => {});
        if (attempt === ATTEMPTS) throw error;
        console.log(`again ${theme} ${flow.name}: ${String(error.message).split('\n')[0]}`);
      }
    }
  }
}
