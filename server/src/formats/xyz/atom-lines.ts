import type { FindingCollector } from '../../base/finding';
import type { Span } from '../../base/span';
import { MAX_ATOMIC_NUMBER } from '../../physics/elements';
import type { LineIndex } from '../../text/lines';
import { isBlank, scanCount, scanNumberInto, skipBlanks, skipField, trimEnd } from '../../text/numbers';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from '../annotation/entries';
import { meantNumber, replacement } from '../annotation/meant';
import { AtomBuilder } from '../atom-builder';
import { likelySymbol, readSpecies } from '../species';
import { type AtomField, AtomFlag } from '../tree';
import { ColumnOp, type ColumnPlan } from './columns';
import { PlainLineReader } from './plain-lines';

const COORDINATE_NAMES = ['x', 'y', 'z'];

/** Reads atom lines by a column plan into columns. */
export class AtomLineReader {
  readonly atoms: AtomBuilder;
  readonly #text: Snapshot;
  readonly #lines: LineIndex;
  readonly #problems: FindingCollector;
  readonly #plan: ColumnPlan;
  readonly #plain: PlainLineReader;
  readonly #groups = new Map<string, number>();
  #groupsAreWords = false;
  #linesWithMore = 0;
  #firstMore: Span | null = null;

  constructor(text: Snapshot, lines: LineIndex, problems: FindingCollector, plan: ColumnPlan, capacity: number) {
    this.#text = text;
    this.#lines = lines;
    this.#problems = problems;
    this.#plan = plan;
    this.atoms = new AtomBuilder(capacity, { charge: plan.hasCharge, dipole: plan.hasDipole, group: plan.hasGroup });
    this.#plain = new PlainLineReader(text, lines, plan, this.atoms);
  }

  /** Distinct values of the fragment column. */
  groups(): { names: string[]; areWords: boolean } | null {
    return this.#plan.hasGroup ? { names: [...this.#groups.keys()], areWords: this.#groupsAreWords } : null;
  }

  /** Reads plain lines from `line` to before `to`, and returns the first that it leaves to {@link read}. */
  readPlainLines(line: number, to: number): number {
    return this.#plain.read(line, to);
  }

  /** Reads one line that is not blank as the next atom; what cannot be read is reported and marked in its flags. */
  read(line: number): void {
    const text = this.#text;
    const { bytes } = text;
    const end = this.#lines.end(line);
    const { ops } = this.#plan;
    const { atoms } = this;
    const atom = atoms.next(line);
    let at = skipBlanks(bytes, this.#lines.starts[line]!, end);
    for (let column = 0; column < ops.length; column++) {
      if (at === end) {
        this.#reportMissing(line, column, atom);
        return;
      }
      const op = ops[column]!;
      const start = at;
      if (op >= ColumnOp.x && op <= ColumnOp.z) {
        const index = 3 * atom + op - ColumnOp.x;
        at = scanNumberInto(text, start, end, atoms.positionA, index);
        if (at < 0 || (at < end && !isBlank(bytes[at]!)) || !Number.isFinite(atoms.positionA[index]!)) {
          at = skipField(bytes, start, end);
          atoms.flags[atom]! |= AtomFlag.noPosition;
          // A line whose first word is no element either is one cause, reported once.
          if ((atoms.flags[atom]! & AtomFlag.unknownElement) === 0)
            this.#reportNumber(start, at, COORDINATE_NAMES[op - ColumnOp.x]!);
        }
      } else {
        at = skipField(bytes, start, end);
        this.#readOther(op, atom, start, at);
      }
      if (at < end) at = skipBlanks(bytes, at, end);
    }
    if (atoms.flags[atom]! & AtomFlag.noPosition) atoms.positionA.fill(Number.NaN, 3 * atom, 3 * atom + 3);
    else if (at < end) this.#countMore(at, end);
  }

  #readOther(op: number, atom: number, start: number, end: number): void {
    const { atoms } = this;
    switch (op) {
      case ColumnOp.species: {
        const species = readSpecies(this.#text, start, end);
        atoms.element[atom] = species & 255;
        atoms.flags[atom]! |= species >> 8;
        if ((species >> 8) & AtomFlag.unknownElement) this.#reportElement(start, end);
        break;
      }
      case ColumnOp.atomicNumber: {
        const z = scanCount(this.#text.bytes, start, end);
        if (z === 0) atoms.flags[atom]! |= AtomFlag.ghost;
        else if (z > 0 && z <= MAX_ATOMIC_NUMBER) atoms.element[atom] = z;
        else {
          atoms.flags[atom]! |= AtomFlag.unknownElement;
          this.#reportElement(start, end);
        }
        break;
      }
      case ColumnOp.charge:
        this.#readInto(atoms.chargeE!, atom, atom, start, end, 'charge');
        break;
      case ColumnOp.group: {
        const name = this.#text.slice(start, end);
        let group = this.#groups.get(name);
        if (group === undefined) {
          group = this.#groups.size;
          this.#groups.set(name, group);
          if (!/^(?:[+-]?\d+)?$/.test(name)) this.#groupsAreWords = true;
        }
        atoms.group![atom] = group;
        break;
      }
      case ColumnOp.dipoleX:
      case ColumnOp.dipoleY:
      case ColumnOp.dipoleZ:
        this.#readInto(atoms.dipoleEA!, 3 * atom + op - ColumnOp.dipoleX, atom, start, end, 'atomic dipole');
        break;
    }
  }

  #readInto(out: Float64Array, index: number, atom: number, start: number, end: number, what: string): void {
    if (scanNumberInto(this.#text, start, end, out, index) === end && Number.isFinite(out[index]!)) return;
    out[index] = Number.NaN;
    // Of a line that is no atom at all enough has been said.
    const garbage = AtomFlag.unknownElement | AtomFlag.noPosition;
    if ((this.atoms.flags[atom]! & garbage) !== garbage) this.#reportNumber(start, end, what);
  }

  #reportNumber(start: number, end: number, what: string): void {
    this.#problems.add(
      'number-unreadable',
      { start, end },
      () => `The ${what} "${shown(this.#text, start, end)}" is no finite number.`,
      () =>
        replacement({ start, end }, end - start > 40 ? null : meantNumber(this.#text.slice(start, end), ['Å', 'A'])),
    );
  }

  #reportElement(start: number, end: number): void {
    this.#problems.add(
      'element-unknown',
      { start, end },
      () => `"${shown(this.#text, start, end)}" is no element.`,
      () => {
        const symbol = likelySymbol(this.#text.slice(start, Math.min(end, start + 8)));
        return symbol === '' ? {} : { fix: { title: `Replace by ${symbol}`, edits: [{ start, end, text: symbol }] } };
      },
    );
  }

  #reportMissing(line: number, column: number, atom: number): void {
    const lineStart = this.#lines.starts[line]!;
    const end = trimEnd(this.#text.bytes, lineStart, this.#lines.end(line));
    const start = skipBlanks(this.#text.bytes, lineStart, end);
    this.#problems.add('field-missing', { start, end }, () => {
      const needed = this.#plan.ops.length;
      return `The line has ${column} field${column === 1 ? '' : 's'} of the ${needed} that ${this.#plan.declared ? 'Properties declares' : 'an atom needs (symbol, x, y, z)'}.`;
    });
    const { ops } = this.#plan;
    for (let missing = column; missing < ops.length; missing++) {
      const op = ops[missing]!;
      if (op >= ColumnOp.x && op <= ColumnOp.z) this.atoms.flags[atom]! |= AtomFlag.noPosition;
      if (op === ColumnOp.species || op === ColumnOp.atomicNumber) this.atoms.flags[atom]! |= AtomFlag.unknownElement;
      if (op === ColumnOp.charge) this.atoms.chargeE![atom] = Number.NaN;
      if (op >= ColumnOp.dipoleX) this.atoms.dipoleEA!.fill(Number.NaN, 3 * atom, 3 * atom + 3);
      if (op === ColumnOp.group) this.#readOther(op, atom, end, end);
    }
    if (this.atoms.flags[atom]! & AtomFlag.noPosition) this.atoms.positionA.fill(Number.NaN, 3 * atom, 3 * atom + 3);
  }

  #countMore(start: number, end: number): void {
    this.#linesWithMore++;
    this.#firstMore ??= { start, end: trimEnd(this.#text.bytes, start, end) };
  }

  /** Reports fields beyond the plan, once a frame: an error where `Properties` says how many there are, else a hint. */
  finish(properties: Entry | undefined): void {
    const span = this.#firstMore;
    if (span === null) return;
    const many = this.#linesWithMore;
    const lines = `${many} atom line${many === 1 ? ' has' : 's have'}`;
    if (properties !== undefined && this.#plan.declared) {
      this.#problems.add(
        'columns-off',
        span,
        () => `${lines} more fields than Properties declares, the first one here.`,
      );
    } else if (properties === undefined) {
      this.#problems.add(
        'extra-columns',
        span,
        () => `${lines} columns after z, the first ones "${shown(this.#text, span.start, span.end)}".`,
      );
    }
  }
}

/** A piece of the file for a message, cut where it is long. */
function shown(text: Snapshot, start: number, end: number): string {
  return end - start <= 40 ? text.slice(start, end) : `${text.slice(start, start + 37)}…`;
}

/** Where a field of an atom stands in its line; the whole line's content where the field is missing. */
export function fieldOfAtom(text: Snapshot, lines: LineIndex, line: number, plan: ColumnPlan, field: AtomField): Span {
  const { bytes } = text;
  const lineEnd = lines.end(line);
  const first = skipBlanks(bytes, lines.starts[line]!, lineEnd);
  const whole = { start: first, end: trimEnd(bytes, first, lineEnd) };
  if (field === 'line') return whole;
  const wanted = {
    name: ColumnOp.species,
    element: ColumnOp.species,
    x: ColumnOp.x,
    y: ColumnOp.y,
    z: ColumnOp.z,
    charge: ColumnOp.charge,
    group: ColumnOp.group,
  }[field];
  let at = first;
  for (const op of plan.ops) {
    const end = skipField(bytes, at, lineEnd);
    if (end === at) return whole;
    if (op === wanted || (op === ColumnOp.atomicNumber && (field === 'element' || field === 'name')))
      return { start: at, end };
    at = skipBlanks(bytes, end, lineEnd);
  }
  return whole;
}
