import type { Language } from '../../server/src/formats/tree';
import type { TextChange } from '../../server/src/lsp/text-store';

export type Random = () => number;

/** Numbers from 0 up to 1 that are the same for the same seed. */
export function randomFrom(seed: number): Random {
  let state = seed | 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

interface Place {
  readonly line: number;
  readonly character: number;
}

/**
 * A change as an editor may send it: mostly a digit of a coordinate, now and then anything else. `history` holds texts that were in
 * order; calm edits touch nothing but numbers.
 */
export function randomEdit(
  random: Random,
  text: string,
  language: Language,
  history: readonly string[],
  { isDamaged, isCalm }: { readonly isDamaged: boolean; readonly isCalm: boolean },
): TextChange[] {
  const pick = <T>(list: readonly T[]): T => list[Math.floor(random() * list.length)]!;
  // What was spoilt is undone soon, as people do.
  const kind = isCalm ? 0.3 + 0.42 * random() : isDamaged && random() < 0.4 ? 0.89 + 0.11 * random() : random();
  const lines = text.split(/\r\n|\r|\n/);
  const atomLines = lines.flatMap((line, n) => (isAtomLine(line, language) ? [n] : []));
  const some = atomLines.length > 0 ? atomLines : [0];
  const at = (line: number, from: number, to: number, by: string): TextChange => ({
    range: { start: { line, character: from }, end: { line, character: to } },
    text: by,
  });
  const digit = (line: number): TextChange => {
    const places = [...lines[line]!.matchAll(/\d/g)]
      .map(({ index }) => index)
      .filter((n) => isNumberPlace(n, language));
    if (places.length === 0) return at(line, 0, 0, '');
    const n = pick(places);
    return at(line, n, n + 1, String(Math.floor(random() * 10)));
  };
  if (kind < 0.5) return [digit(pick(some))];
  if (kind < 0.62) return [shiftedNumber(random, pick, lines, pick(some), language)];
  // Many cursors, sent from the end of the text to its beginning.
  if (kind < 0.72) {
    const chosen = [...new Set([pick(some), pick(some), pick(some)])].sort((a, b) => b - a);
    return chosen.map(digit);
  }
  const line = Math.floor(random() * lines.length);
  if (kind < 0.76)
    return [{ range: { start: { line, character: 0 }, end: { line: line + 1, character: 0 } }, text: '' }];
  if (kind < 0.8) return [at(line, 0, 0, `${lines[pick(some)]}\n`)];
  if (kind < 0.83) return [at(0, 0, lines[0]!.length, String(atomLines.length))];
  if (kind < 0.85) {
    const atom = pick(some);
    const { index, 0: symbol } = /[A-Z][a-z]?(?=\s*$)|[A-Z][a-z]?/.exec(lines[atom]!) ?? { index: 0, 0: '' };
    return [at(atom, index, index + symbol.length, pick(['H', 'C', 'O', 'F', 'X']).padEnd(symbol.length))];
  }
  if (kind < 0.87) {
    const length = lines[line]!.length;
    const from = Math.floor(random() * (length + 1));
    return [at(line, from, Math.min(length, from + 1), pick(['', '-', 'x', ' ', '9', '.', 'H', 'C', '\n', 'é', '"']))];
  }
  if (kind < 0.89) return [annotationEdit(pick, lines, at)];
  // Undo, as one piece and as a whole text.
  const back = history[Math.max(0, history.length - 1 - Math.floor(random() * 4))]!;
  if (kind < 0.94) return [replacementOf(text, back)];
  if (kind < 0.97) return [{ text: back }];
  if (kind < 0.985) return [{ text: history[0]! }];
  return [{ text: back.includes('\r\n') ? back.replaceAll('\r\n', '\n') : back.replaceAll('\n', '\r\n') }];
}

function isAtomLine(line: string, language: Language): boolean {
  return language === 'pdb' ? /^(?:ATOM|HETATM)/.test(line) : /^\s*[A-Z][a-z]?(?:\s+-?\d*\.?\d+){3}/.test(line);
}

/** In fixed columns only those of the coordinates are numbers to type in. */
function isNumberPlace(column: number, language: Language): boolean {
  return language === 'xyz' || (column >= 30 && column < 54);
}

/** A coordinate a little off, written as the format writes it. */
function shiftedNumber(
  random: Random,
  pick: <T>(list: readonly T[]) => T,
  lines: readonly string[],
  line: number,
  language: Language,
): TextChange {
  const numbers = [...lines[line]!.matchAll(/-?\d+\.\d+/g)].filter(({ index }) => isNumberPlace(index, language));
  if (numbers.length === 0) return { range: { start: { line, character: 0 }, end: { line, character: 0 } }, text: '' };
  const { index, 0: written } = pick(numbers);
  const decimals = written.length - written.indexOf('.') - 1;
  const size = random() < 0.2 ? 6 : 0.4;
  const value = (Number(written) + (random() - 0.5) * size).toFixed(decimals);
  const end = { line, character: index + written.length };
  if (language === 'xyz') return { range: { start: { line, character: index }, end }, text: value };
  const start = { line, character: index + written.length - 8 };
  return { range: { start, end }, text: value.padStart(8) };
}

const KEYS = [
  ' temperature=310',
  ' kind_dipole_sizes="H2O:1.9"',
  ' kind_axes=H2O:O>H',
  ' fragment_names="a b c"',
  ' total_charge=1',
  ' silence=near-field',
  ' dipole_unit=au',
  ' pbc="T T F"',
  ' Lattice="11 0 0 0 11 0 0 0 11"',
];

function annotationEdit(
  pick: <T>(list: readonly T[]) => T,
  lines: readonly string[],
  at: (line: number, from: number, to: number, by: string) => TextChange,
): TextChange {
  const comment = Math.min(1, lines.length - 1);
  const key = pick(KEYS);
  const known = lines[comment]!.indexOf(key);
  return known < 0
    ? at(comment, lines[comment]!.length, lines[comment]!.length, key)
    : at(comment, known, known + key.length, '');
}

/** The one piece in which two texts differ, as a change of the first. */
function replacementOf(text: string, other: string): TextChange {
  let same = 0;
  while (same < text.length && text[same] === other[same]) same++;
  let tail = 0;
  while (tail < Math.min(text.length, other.length) - same && text.at(-1 - tail) === other.at(-1 - tail)) tail++;
  const place = (offset: number): Place => {
    const before = text.slice(0, offset).split(/\r\n|\r|\n/);
    return { line: before.length - 1, character: before[before.length - 1]!.length };
  };
  return {
    range: { start: place(same), end: place(text.length - tail) },
    text: other.slice(same, other.length - tail),
  };
}
