import type { Snapshot } from '../text/snapshot';
import { parsePdb } from './pdb/parse';
import type { CoordinateTree, Language } from './tree';
import { parseXyz } from './xyz/parse';

/** Reads a text in a format. Total: any text gives a tree and problems. */
export function parse(text: Snapshot, language: Language): CoordinateTree {
  return language === 'pdb' ? parsePdb(text) : parseXyz(text);
}

/** The language of a file by the ending of its name (a further `.gz` is passed over), or `undefined`. */
export function languageOfName(name: string): Language | undefined {
  const match = /\.(xyz|extxyz|pdb|ent)(?:\.gz)?$/i.exec(name);
  if (match === null) return undefined;
  return /^(?:pdb|ent)$/i.test(match[1]!) ? 'pdb' : 'xyz';
}
