import type { TextEdit } from '../../base/finding';
import { type Entry, scanEntries } from '../../formats/annotation/entries';
import { portable } from '../../formats/annotation/entry-fixes';
import { FRAME_KEYS } from '../../formats/annotation/keys';
import type { CoordinateTree, FrameTree } from '../../formats/tree';
import { skipBlanks, trimEnd } from '../../text/numbers';
import { type Snapshot, snapshotOf } from '../../text/snapshot';

/** Names of a key with one meaning. */
const SAME_AS: Readonly<Record<string, readonly string[]>> = {
  total_charge: ['total_charge', 'charge'],
  multiplicity: ['multiplicity', 'mult'],
};

/**
 * Changes of the keys in the comment line of an XYZ frame. What stands there stays as it is; keys that are not there come behind it, in
 * the order that annotations are written in.
 */
export class CommentLine {
  readonly #file: CoordinateTree;
  readonly #frame: FrameTree;
  readonly #edits: TextEdit[] = [];
  readonly #added: { key: string; value: string }[] = [];

  constructor(file: CoordinateTree, frame: FrameTree) {
    this.#file = file;
    this.#frame = frame;
  }

  /** The entry of a key, by whichever of its names. */
  entry(key: string): Entry | undefined {
    const names = SAME_AS[key] ?? [key];
    return this.#frame.entries.find((entry) => names.includes(entry.key));
  }

  /** Gives a key a value, in place of the one it has. */
  set(key: string, value: string): void {
    const entry = this.entry(key);
    if (entry === undefined) this.#added.push({ key, value });
    else this.#edits.push({ ...entry.value, text: quoted(key, value) });
  }

  /** Puts items at the end of the list of a key. */
  append(key: string, items: readonly string[]): void {
    const entry = this.entry(key);
    if (items.length === 0) return;
    if (entry === undefined) {
      const waiting = this.#added.find((added) => added.key === key);
      if (waiting === undefined) this.#added.push({ key, value: items.join(' ') });
      else waiting.value += ` ${items.join(' ')}`;
      return;
    }
    const { text } = this.#file;
    if (entry.form === 'quoted') {
      const end = trimEnd(text.bytes, entry.inner.start, entry.inner.end);
      this.#edits.push({ start: end, end, text: `${end > entry.inner.start ? ' ' : ''}${items.join(' ')}` });
      return;
    }
    const flat = portable(text, entry).fix?.edits[0]?.text;
    const old = flat === undefined ? text.slice(entry.inner.start, entry.inner.end) : flat.slice(1, -1);
    this.#edits.push({ ...entry.value, text: `"${[old, ...items].filter((word) => word !== '').join(' ')}"` });
  }

  /** Writes something else in place of a piece of a value. */
  replace(edit: TextEdit): void {
    this.#edits.push(edit);
  }

  /** The edits, or the sentence that says why the line cannot be changed so. */
  edits(): readonly TextEdit[] | string {
    const { text, lines } = this.#file;
    const { headLine, firstLine, entries } = this.#frame;
    if (headLine === firstLine) return 'The frame has no comment line.';
    if (entries.some(({ closed }) => !closed)) return 'A quote or bracket of the comment line is not closed.';
    const edits = [...this.#edits];
    if (this.#added.length > 0) {
      const line = { start: lines.starts[headLine]!, end: lines.end(headLine) };
      const end = trimEnd(text.bytes, line.start, line.end);
      const pairs = [...this.#added]
        .sort((a, b) => orderOf(a.key) - orderOf(b.key))
        .map(({ key, value }) => `${key}=${quoted(key, value)}`);
      const isEmpty = skipBlanks(text.bytes, line.start, line.end) === line.end;
      edits.push({ start: end, end, text: `${isEmpty ? '' : ' '}${pairs.join(' ')}` });
    }
    edits.sort((a, b) => a.start - b.start);
    return this.#readsAsMeant(edits) ? edits : 'The comment line cannot be added to without changing what it says.';
  }

  /** Whether the changed line reads as the same keys with the new ones behind: a stray quote or `=` could swallow them. */
  #readsAsMeant(edits: readonly TextEdit[]): boolean {
    const { text, lines } = this.#file;
    const { headLine, entries } = this.#frame;
    const from = lines.starts[headLine]!;
    let line = text.slice(from, lines.end(headLine));
    for (const { start, end, text: piece } of [...edits].reverse()) {
      line = line.slice(0, start - from) + piece + line.slice(end - from);
    }
    const now = snapshotOf(line);
    const keys = scanEntries(now, 0, now.length);
    const isSame = (entry: Entry, index: number) => {
      const again = keys[index];
      const isEdited = edits.some(({ start, end }) => start <= entry.value.end && end >= entry.value.start);
      return again?.key === entry.key && (isEdited || writtenValue(now, again) === writtenValue(text, entry));
    };
    return keys.length === entries.length + this.#added.length && entries.every(isSame);
  }
}

function writtenValue(text: Snapshot, { value }: Entry): string {
  return text.slice(value.start, value.end);
}

function orderOf(key: string): number {
  const index = (FRAME_KEYS as readonly string[]).indexOf(key);
  return index < 0 ? FRAME_KEYS.length : index;
}

/** Keys whose values are lists or sentences, which stand in quotes however long they are. */
const QUOTED = /^(?:fragment_|kind_|dipole_sources$|silence$)/;

function quoted(key: string, value: string): string {
  return QUOTED.test(key) || !/^[^\s"'=,[\]{}\\]+$/.test(value) ? `"${value}"` : value;
}
