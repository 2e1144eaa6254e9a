import { dipoleUnit } from './constants.js';

/** Key=value pairs of comment lines and REMARK records: bare, "quoted", {braced}, [bracketed], nested arrays. */
export function readPairs(text: string): Map<string, string> {
  const pairs = new Map<string, string>();
  const key = /(?:^|\s)([A-Za-z_][\w-]*)\s*=\s*/g;
  for (let found = key.exec(text); found !== null; found = key.exec(text)) {
    const start = key.lastIndex;
    const end = endOfValue(text, start);
    const raw = text.slice(start, end);
    pairs.set(found[1], /^["{[]/.test(raw) ? raw.slice(1, -1) : raw);
    key.lastIndex = end;
  }
  return pairs;
}

function endOfValue(text: string, start: number): number {
  const open = text[start];
  if (open === '"') return text.indexOf('"', start + 1) + 1;
  if (open === '{') return text.indexOf('}', start + 1) + 1;
  if (open === '[') {
    let depth = 0;
    for (let i = start; i < text.length; i++) {
      if (text[i] === '[') depth++;
      if (text[i] === ']') depth--;
      if (depth === 0) return i + 1;
    }
  }
  const blank = text.slice(start).search(/\s/);
  return blank < 0 ? text.length : start + blank;
}

/** A list of numbers, flat or nested; NaN stands for "not given". */
export function readNumbers(value: string): number[] {
  return readWords(value.replace(/[,[\]{}]/g, ' ')).map(readNumber);
}

export function readNumber(word: string): number {
  const value = Number(word.replace(/[dD](?=[+-]?\d)/, 'e'));
  if (Number.isNaN(value) && word.toLowerCase() !== 'nan') throw new Error(`${word} is not a number`);
  return value;
}

export function readWords(value: string): string[] {
  return value.split(/\s+/).filter((word) => word !== '');
}

/** Atom numbers such as `1-3,9`, as 0-based indices. */
export function readRanges(value: string): number[] {
  const indices: number[] = [];
  for (const part of value.split(',')) {
    const [first, last] = part.split('-').map(Number);
    for (let i = first; i <= (last ?? first); i++) indices.push(i - 1);
  }
  return indices;
}

/** Kelvin, with an optional unit word: `298.15`, `25 degC`. */
export function readTemperature(value: string): number {
  const [number, unit] = readWords(value);
  return readNumber(number) + (unit === 'degC' ? 273.15 : 0);
}

/** A dipole size in e·Å: a bare number in the file's unit, or a number with its own unit word. */
export function readSize(value: string, fileUnit: number): number {
  const [number, ...unit] = readWords(value);
  return readNumber(number) * (unit.length > 0 ? dipoleUnit(unit.join('')) : fileUnit);
}
