/** Something in a library file that cannot be used: the JSON Pointer (RFC 6901) of its place, and why. */
export interface LibraryProblem {
  readonly path: string;
  readonly message: string;
}

/** Past this many problems the rest are left out: a file that is no library at all would fill the screen. */
const MOST_PROBLEMS = 100;
const LONGEST_TEXT = 1000;

/** Reads the plain parts of a JSON value and collects what is wrong with them. */
export class ProblemList {
  readonly list: LibraryProblem[] = [];

  add(path: string, message: string): void {
    if (this.list.length < MOST_PROBLEMS) this.list.push({ path, message });
  }

  /** An object with no other keys than `keys`, or `null`. Keys that are none are told and passed over. */
  object(
    value: unknown,
    path: string,
    keys: readonly string[],
    what: string,
  ): Readonly<Record<string, unknown>> | null {
    if (!isRecord(value)) {
      this.add(path, `${what} must be an object in braces.`);
      return null;
    }
    for (const key of Object.keys(value)) {
      if (!keys.includes(key)) this.add(pointer(path, key), `There is no such key; the keys are ${keys.join(', ')}.`);
    }
    return value;
  }

  /** A text that holds something, or `null`. */
  text(value: unknown, path: string): string | null {
    if (typeof value === 'string' && value.trim() !== '' && value.length <= LONGEST_TEXT) return value.trim();
    this.add(path, `It must be a text of up to ${LONGEST_TEXT} characters.`);
    return null;
  }

  /** A text, `null` where it is taken away, `undefined` where it cannot be used. */
  textOrNull(value: unknown, path: string): string | null | undefined {
    return value === null ? null : (this.text(value, path) ?? undefined);
  }

  /** A list of texts, of which those that are none are left out; `undefined` where it is no list. */
  textList(value: unknown, path: string): string[] | undefined {
    if (!Array.isArray(value)) {
      this.add(path, 'It must be a list of texts.');
      return undefined;
    }
    return value.map((item, index) => this.text(item, `${path}/${index}`)).filter((item) => item !== null);
  }

  /** An object whose values are all texts, as a map; empty where there is none. */
  texts(value: unknown, path: string): Map<string, string> {
    const found = new Map<string, string>();
    if (value === undefined) return found;
    if (!isRecord(value)) {
      this.add(path, 'It must be an object in braces, a text for each short name.');
      return found;
    }
    for (const [key, item] of Object.entries(value)) {
      const text = this.text(item, pointer(path, key));
      if (text !== null) found.set(key, text);
    }
    return found;
  }

  /** Atoms written from 1 to `count`, numbered from 0; `null` where it is no list of such. */
  atomList(value: unknown, path: string, count: number): number[] | null {
    const isAtom = (item: unknown) => Number.isInteger(item) && Number(item) >= 1 && Number(item) <= count;
    if (Array.isArray(value) && value.length > 0 && value.every(isAtom)) return value.map((item) => Number(item) - 1);
    this.add(path, `It must be a list of atom numbers from 1 to ${count}, the number of atoms with the hydrogens.`);
    return null;
  }
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function pointer(path: string, key: string): string {
  return `${path}/${key.replaceAll('~', '~0').replaceAll('/', '~1')}`;
}
