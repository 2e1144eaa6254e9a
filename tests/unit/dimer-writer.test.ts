import { describe, expect, it } from 'vitest';
import {
  type ExistingFiles,
  existingInWords,
  outcomeInWords,
  refusedInWords,
  type TargetFolder,
  writeFiles,
} from '../../client/src/acting/dimer-writer';

/** A folder in memory; `broken` names fail when they are written, half of their text written. */
class FakeFolder implements TargetFolder {
  readonly files: Map<string, string>;
  readonly broken = new Set<string>();
  lookFails = false;

  constructor(files: Readonly<Record<string, string>> = {}) {
    this.files = new Map(Object.entries(files));
  }

  async exists(name: string): Promise<boolean> {
    if (this.lookFails) throw new Error('the folder is not there');
    return this.files.has(name);
  }

  async write(name: string, text: string): Promise<void> {
    const isBroken = this.broken.has(name);
    this.files.set(name, isBroken ? text.slice(0, 1) : text);
    if (isBroken) throw new Error('the disk is full');
  }

  async remove(name: string): Promise<void> {
    this.files.delete(name);
  }
}

const FILES = ['a', 'b', 'c'].map((name) => ({ name: `${name}.xyz`, text: `text of ${name}` }));
const ALL = { 'a.xyz': 'text of a', 'b.xyz': 'text of b', 'c.xyz': 'text of c' };

function answering(answer: ExistingFiles) {
  const asked: (readonly string[])[] = [];
  return {
    asked,
    decide: async (existing: readonly string[]) => {
      asked.push(existing);
      return answer;
    },
  };
}

describe('writing files', () => {
  it('asks nothing where none exists, and writes all', async () => {
    const folder = new FakeFolder();
    const { asked, decide } = answering('cancel');
    const outcome = await writeFiles(FILES, folder, decide);
    expect(outcome).toEqual({ written: Object.keys(ALL), kept: [], isCancelled: false, failed: null });
    expect(Object.fromEntries(folder.files)).toEqual(ALL);
    expect(asked).toEqual([]);
  });

  it.each([
    ['overwrite', ALL, ['a.xyz', 'b.xyz', 'c.xyz'], []],
    ['keep', { ...ALL, 'a.xyz': 'mine', 'c.xyz': 'mine too' }, ['b.xyz'], ['a.xyz', 'c.xyz']],
    ['cancel', { 'a.xyz': 'mine', 'c.xyz': 'mine too' }, [], []],
  ] as const)('asks once, before anything is written, where some exist: %s', async (answer, after, written, kept) => {
    const folder = new FakeFolder({ 'a.xyz': 'mine', 'c.xyz': 'mine too' });
    const { asked, decide } = answering(answer);
    const outcome = await writeFiles(FILES, folder, async (existing) => {
      expect(folder.files.size).toBe(2);
      return decide(existing);
    });
    expect(outcome).toEqual({ written, kept, isCancelled: answer === 'cancel', failed: null });
    expect(Object.fromEntries(folder.files)).toEqual(after);
    expect(asked).toEqual([['a.xyz', 'c.xyz']]);
  });

  it('ends at the file that fails, and leaves no part of it', async () => {
    const folder = new FakeFolder();
    folder.broken.add('b.xyz');
    const outcome = await writeFiles(FILES, folder, answering('cancel').decide);
    const failed = { name: 'b.xyz', reason: 'the disk is full' };
    expect(outcome).toEqual({ written: ['a.xyz'], kept: [], isCancelled: false, failed });
    expect([...folder.files.keys()]).toEqual(['a.xyz']);
  });

  it('does not take away a file that existed before', async () => {
    const folder = new FakeFolder({ 'b.xyz': 'mine' });
    folder.broken.add('b.xyz');
    await writeFiles(FILES, folder, answering('overwrite').decide);
    expect(folder.files.has('b.xyz')).toBe(true);
  });

  it('writes nothing where the folder cannot be looked at', async () => {
    const folder = new FakeFolder();
    folder.lookFails = true;
    const { failed } = await writeFiles(FILES, folder, answering('overwrite').decide);
    expect(failed).toEqual({ name: 'a.xyz', reason: 'the folder is not there' });
    expect(folder.files.size).toBe(0);
  });
});

describe('words', () => {
  const nothing = { written: [], kept: [], isCancelled: false, failed: null };

  it.each([
    [{ written: ['a'] }, '1 dimer file written.'],
    [{ written: ['a', 'b', 'c'] }, '3 dimer files written.'],
    [{ written: ['a', 'b'], kept: ['c'] }, '2 dimer files written, 1 existing one kept.'],
    [{ written: ['a'], kept: ['b', 'c'] }, '1 dimer file written, 2 existing ones kept.'],
    [{ kept: ['a', 'b', 'c'] }, 'No file written: all 3 exist already.'],
    [{ kept: ['a'] }, 'No file written: it exists already.'],
    [{ failed: { name: 'a', reason: 'it is full' } }, 'a could not be written: it is full. No file was written.'],
    [
      { written: ['a'], failed: { name: 'b', reason: 'It is full.' } },
      'b could not be written: It is full. 1 of 3 files was written.',
    ],
  ])('of the outcome %j', (outcome, words) => {
    expect(outcomeInWords({ ...nothing, ...outcome }, 3)).toBe(words);
  });

  it('of the question say how many exist, and name up to five', () => {
    expect(existingInWords(['a'])).toEqual({ message: '1 of the files exists already.', detail: 'a' });
    expect(existingInWords(['a', 'b', 'c', 'd', 'e', 'f', 'g'])).toEqual({
      message: '7 of the files exist already.',
      detail: 'a\nb\nc\nd\ne\nand 2 more',
    });
  });

  it('of refused pairs give the reasons', () => {
    const refused = [1, 2, 3, 4, 5].map((first) => ({ frame: 1, first, second: 9, reason: `reason ${first}` }));
    expect(refusedInWords(refused.slice(0, 1))).toBe('1 pair is not written: 1–9, since reason 1.');
    expect(refusedInWords(refused)).toBe(
      '5 pairs are not written: 1–9, since reason 1; 2–9, since reason 2; 3–9, since reason 3; and 2 more.',
    );
  });
});
