import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { mulberry, waterBox } from '../bench/water';
import { WireClient } from './client';
import { EditedText } from './edited-text';

const MB = 2 ** 20;

let client: WireClient;

beforeEach(async () => {
  client = await WireClient.start({ preload: 'tests/wire/heap.cjs' });
});

afterEach(async () => {
  expect(await client.stop()).toBe(0);
});

/** What the server holds once it has answered everything sent; messages to what is preloaded would overtake it. */
async function heldBytes(): Promise<number> {
  await client.hover('file:///none.xyz', 0, 0);
  return (await client.askPreloaded('held')) as number;
}

// Checked by leaking on purpose in lsp/workspace.ts, each noticed: the list of changes of every edit kept (200 bytes each), the
// `isWanted` of every outdated run kept, `close` not deleting its entry, and one closed document of five kept.
describe('memory that the server holds', () => {
  it('does not grow with thousands of edits', async () => {
    const uri = 'file:///edited.xyz';
    const text = new EditedText(waterBox(300).xyz, mulberry(1));
    let version = 1;
    client.open(uri, text.text);
    // Most edits overtake the analysis of the one before, as while typing.
    const edit = async (count: number) => {
      for (let n = 1; n <= count; n++) {
        client.change(uri, ++version, [text.edit()]);
        if (n % 40 === 0) await client.diagnostics(uri);
      }
    };
    await edit(2000);
    const before = await heldBytes();
    await edit(8000);
    expect((await heldBytes()) - before).toBeLessThan(MB);
  });

  it('is given back when large documents are closed', async () => {
    const { xyz } = waterBox(20_000);
    const visit = async (uris: string[]) => {
      for (const uri of uris) {
        client.open(uri, xyz);
        await client.diagnostics(uri);
        expect(await client.hover(uri, 2, 0)).not.toBeNull();
      }
      for (const uri of uris) client.close(uri);
    };
    await visit(['file:///first.xyz']);
    const base = await heldBytes();
    await visit([1, 2, 3, 4, 5].map((n) => `file:///${n}.xyz`));
    expect((await heldBytes()) - base).toBeLessThan(3 * MB);
  });
});
