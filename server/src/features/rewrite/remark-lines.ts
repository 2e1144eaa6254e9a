import type { TextEdit } from '../../base/finding';
import type { CoordinateTree } from '../../formats/tree';
import { lineEndOf } from '../../text/line-end';

/**
 * Records that stand before the coordinates and before the remarks of higher numbers.
 * Source: wwPDB, Protein Data Bank Contents Guide, format version 3.30 (2012), order of records.
 */
const TITLE_RECORDS = new Set(
  'HEADER OBSLTE TITLE SPLIT CAVEAT COMPND SOURCE KEYWDS EXPDTA NUMMDL MDLTYP AUTHOR REVDAT SPRSDE JRNL REMARK'.split(
    ' ',
  ),
);
const NUMBER = 99;
const WIDTH = 80;
const HEAD = `REMARK ${String(NUMBER).padStart(3)} `;

/** Puts remarks of the free-text range where such records belong: behind the title section, before the first coordinates. */
export function remarkInsertion(file: CoordinateTree, remarks: readonly string[]): TextEdit {
  const { text, lines } = file;
  let at = 0;
  for (; at < lines.count; at++) {
    const start = lines.starts[at]!;
    const record = text.slice(start, Math.min(start + 6, lines.end(at))).trim();
    if (!TITLE_RECORDS.has(record)) break;
    if (record === 'REMARK' && Number(text.slice(start + 6, Math.min(start + 10, lines.end(at)))) > NUMBER) break;
  }
  const lineEnd = lineEndOf(text, lines);
  const start = lines.starts[Math.min(at, lines.count)]!;
  return { start, end: start, text: remarks.map((remark) => `${HEAD}${remark}${lineEnd}`).join('') };
}

/** A sentence as the texts of remarks that fit the width of a record; nothing in it can be taken for a key. */
export function remarkSentence(sentence: string): string[] {
  const remarks: string[] = [];
  let line = '';
  for (const word of sentence.replace(/=/g, ':').split(/\s+/)) {
    if (line !== '' && HEAD.length + line.length + 1 + word.length > WIDTH) {
      remarks.push(line);
      line = '';
    }
    line += line === '' ? word : ` ${word}`;
  }
  return [...remarks, line];
}
