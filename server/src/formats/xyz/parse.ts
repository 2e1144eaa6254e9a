import { FindingCollector } from '../../base/finding';
import type { Span } from '../../base/span';
import { lineEndOf } from '../../text/line-end';
import { indexLines, type LineIndex } from '../../text/lines';
import { scanCount, scanNumber, skipBlanks, skipField, trimEnd } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import { type Entry, scanEntries } from '../annotation/entries';
import { FRAME_KEYS } from '../annotation/keys';
import { reportKeys } from '../annotation/report-keys';
import type { CoordinateTree, FrameTree } from '../tree';
import { finishTree } from '../unreadable';
import { AtomLineReader } from './atom-lines';
import { readCell } from './cell';
import { type ColumnPlan, PLAIN_COLUMNS, readProperties } from './columns';
import { xyzFrame } from './frame';

const NO_BONDS = new Int32Array(0);
/** Room for atoms at first in later frames; a count may promise more than a frame holds. */
const FIRST_CAPACITY = 1 << 15;

/**
 * Reads XYZ and extended XYZ: any number of frames, each a count line, a comment line and atom lines. Any text gives a tree; every
 * problem is in its list, and reading goes on at the next line that makes sense. Linear in the text.
 */
export function parseXyz(text: Snapshot): CoordinateTree {
  const lines = indexLines(text);
  const problems = new FindingCollector();
  const frames: FrameTree[] = [];
  const reader = new XyzReader(text, lines, problems);
  let line = 0;
  let lost = false;
  while (line < lines.count) {
    if (reader.isBlankLine(line)) {
      line++;
      continue;
    }
    const frame = reader.frameAt(line, frames.length);
    if (frame === null) {
      if (!lost && frames.length > 0) {
        const span = reader.contentSpan(line);
        problems.add(
          'count-wrong',
          span,
          () => 'A frame must begin with its atom count; this line is no whole number.',
        );
      }
      lost = true;
      line++;
      continue;
    }
    lost = false;
    frames.push(frame);
    line = Math.max(frame.endLine, line + 1);
  }
  return finishTree({ language: 'xyz', text, lines, frames, remarks: [] }, problems);
}

class XyzReader {
  readonly #text: Snapshot;
  readonly #lines: LineIndex;
  readonly #problems: FindingCollector;
  #blankFrom = 0;
  #blankTo = 0;

  constructor(text: Snapshot, lines: LineIndex, problems: FindingCollector) {
    this.#text = text;
    this.#lines = lines;
    this.#problems = problems;
  }

  isBlankLine(line: number): boolean {
    const end = this.#lines.end(line);
    return skipBlanks(this.#text.bytes, this.#lines.starts[line]!, end) === end;
  }

  /** The line without blanks at both ends. */
  contentSpan(line: number): Span {
    const lineEnd = this.#lines.end(line);
    const start = skipBlanks(this.#text.bytes, this.#lines.starts[line]!, lineEnd);
    return { start, end: trimEnd(this.#text.bytes, start, lineEnd) };
  }

  /** The whole number that is the only field of a line, or −1. */
  #countAt(line: number): number {
    if (line >= this.#lines.count) return -1;
    const { start, end } = this.contentSpan(line);
    return scanCount(this.#text.bytes, start, end);
  }

  /** Whether a line reads as an atom: a word and three numbers. */
  #looksLikeAtom(line: number): boolean {
    if (line >= this.#lines.count) return false;
    const { bytes } = this.#text;
    const end = this.#lines.end(line);
    let at = skipField(bytes, skipBlanks(bytes, this.#lines.starts[line]!, end), end);
    for (let k = 0; k < 3; k++) {
      const start = skipBlanks(bytes, at, end);
      at = skipField(bytes, start, end);
      if (at === start || Number.isNaN(scanNumber(this.#text, start, at))) return false;
    }
    return true;
  }

  /** Whether a frame seems to begin here: a lone count and, two lines on, an atom or nothing more. */
  #looksLikeHead(line: number): boolean {
    if (this.#countAt(line) < 0) return false;
    return line + 2 >= this.#lines.count || this.#looksLikeAtom(line + 2) || this.#countAt(line) === 0;
  }

  /** Reads the frame that begins at a line that is not blank, or `null` where none does. */
  frameAt(line: number, index: number): FrameTree | null {
    const declared = this.#countAt(line);
    if (declared >= 0) return this.#readFrame(index, line, declared, line + 2);
    if (this.#looksLikeAtom(line)) return this.#readFrame(index, line, -1, line);
    return this.#looksLikeAtom(line + 2) ? this.#readFrame(index, line, -1, line + 2) : null;
  }

  #readFrame(index: number, head: number, declared: number, firstAtomLine: number): FrameTree {
    const lines = this.#lines;
    const commentLine = firstAtomLine > head ? head + 1 : -1;
    const hasComment = commentLine >= 0 && commentLine < lines.count;
    const entries = hasComment ? scanEntries(this.#text, lines.starts[commentLine]!, lines.end(commentLine)) : [];
    reportKeys(this.#text, entries, FRAME_KEYS, this.#problems);
    const plan = this.#columnPlan(entries);
    const available = Math.max(0, lines.count - firstAtomLine);
    const reader = new AtomLineReader(
      this.#text,
      lines,
      this.#problems,
      plan,
      Math.min(available, Math.max(declared, 16), index === 0 ? available : FIRST_CAPACITY),
    );
    let line = firstAtomLine;
    const { bytes } = this.#text;
    for (; line < lines.count; line++) {
      line = reader.readPlainLines(line, Math.min(lines.count, line + declared - reader.atoms.count));
      if (line === lines.count) break;
      const end = lines.end(line);
      const start = skipBlanks(bytes, lines.starts[line]!, end);
      if (start === end) {
        if (this.#onlyBlankFrom(line) || this.#looksLikeHead(this.#nextFilled(line))) break;
        const span = { start: lines.starts[line]!, end };
        const whole = { start: span.start, end: lines.starts[line + 1]! };
        this.#problems.add(
          'field-missing',
          span,
          () => 'A blank line stands among the atoms.',
          () => ({ fix: { title: 'Remove the blank line', edits: [{ ...whole, text: '' }] } }),
        );
        continue;
      }
      if (isDigit(bytes[start]!) && this.#looksLikeHead(line)) break;
      // Past the count only lines that surely are atoms belong to the frame.
      if (reader.atoms.count >= declared && !this.#looksLikeAtom(line)) break;
      reader.read(line);
    }
    reader.finish(entries.find((entry) => entry.key === 'Properties'));
    const atoms = reader.atoms.build();
    if (atoms.count !== declared) this.#reportCount(head, declared, atoms.count, firstAtomLine > head);
    const cell = readCell(this.#text, entries, this.#problems);
    const content = {
      index,
      firstLine: head,
      endLine: line,
      headLine: hasComment ? commentLine : head,
      atoms,
      groups: reader.groups(),
      entries,
      cell,
      residues: null,
      bonds: NO_BONDS,
    };
    return xyzFrame(content, { snapshot: this.#text, lines }, plan);
  }

  #columnPlan(entries: readonly Entry[]): ColumnPlan {
    const entry = entries.find((candidate) => candidate.key === 'Properties');
    if (entry === undefined) return PLAIN_COLUMNS;
    const plan = readProperties(this.#text, entry);
    if (typeof plan !== 'string') return plan;
    this.#problems.add('columns-off', entry.value, () => `${plan} The lines are read as symbol, x, y, z.`);
    return PLAIN_COLUMNS;
  }

  #onlyBlankFrom(line: number): boolean {
    return this.#nextFilled(line) >= this.#lines.count;
  }

  /** The first line from `line` on that is not blank; a run of blank lines is walked once, however often it is asked about. */
  #nextFilled(line: number): number {
    if (line >= this.#blankFrom && line < this.#blankTo) return this.#blankTo;
    let next = line;
    while (next < this.#lines.count && this.isBlankLine(next)) next++;
    this.#blankFrom = line;
    this.#blankTo = next;
    return next;
  }

  #reportCount(head: number, declared: number, found: number, hasHead: boolean): void {
    const span = this.contentSpan(head);
    const atomLines = `${found} atom line${found === 1 ? '' : 's'}`;
    if (!hasHead) {
      const lineEnd = lineEndOf(this.#text, this.#lines);
      this.#problems.add(
        'count-wrong',
        span,
        () => `The count and comment lines are missing before ${atomLines}.`,
        () => ({
          fix: {
            title: `Insert the count ${found} and an empty comment line`,
            edits: [
              {
                start: this.#lines.starts[head]!,
                end: this.#lines.starts[head]!,
                text: `${found}${lineEnd}${lineEnd}`,
              },
            ],
          },
        }),
      );
      return;
    }
    const said = declared < 0 ? 'This line is no atom count' : `The count says ${declared}`;
    this.#problems.add(
      'count-wrong',
      span,
      () => `${said}, and ${atomLines} follow${found === 1 ? 's' : ''}.`,
      () => ({
        ...(found > 0
          ? { fix: { title: `Set the count to ${found}`, edits: [{ ...span, text: String(found) }] } }
          : {}),
      }),
    );
  }
}

function isDigit(unit: number): boolean {
  return unit >= 48 && unit <= 57;
}
