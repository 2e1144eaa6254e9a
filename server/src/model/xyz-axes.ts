import type { Span } from '../base/span';
import { meantAxis } from '../formats/annotation/meant';
import type { FrameTree } from '../formats/tree';
import { atomicNumberOf } from '../physics/elements';
import { type Axis, MOST_AXIS_NAMES, type ValueReader } from './annotation';
import { atomsInRanges, rangesOf } from './fragment-list';
import type { FragmentSet } from './fragment-set';

/** Reads the axes that the comment line of an XYZ frame gives: from the atoms before `>` to those after. */
export class XyzAxes {
  readonly #reader: ValueReader;
  readonly #frame: FrameTree;
  readonly #set: FragmentSet;

  constructor(reader: ValueReader, frame: FrameTree, set: FragmentSet) {
    this.#reader = reader;
    this.#frame = frame;
    this.#set = set;
  }

  /** An axis by atom numbers (`1>2,3`). */
  byNumbers(group: Span): Axis | null {
    const { text } = this.#reader;
    const words = text.slice(group.start, group.end);
    if (words.toLowerCase() === 'nan') return null;
    const mark = words.indexOf('>');
    const count = this.#frame.atoms.count;
    const read = (start: number, end: number) => {
      const ranges = rangesOf(text, { start, end });
      if (ranges.some(({ from, to }) => !(from >= 1 && to >= from && to <= count))) return [];
      return atomsInRanges(ranges);
    };
    const before = mark < 0 ? [] : read(group.start, group.start + mark);
    const after = mark < 0 ? [] : read(group.start + mark + 1, group.end);
    if (before.length > 0 && after.length > 0) return { before, after, span: group };
    const reason = /^[\d,-]+>[\d,-]+$/.test(words)
      ? `The axis "${this.#reader.shown(group)}" names atoms outside 1 to ${count}.`
      : `"${this.#reader.shown(group)}" is no axis; write atom numbers as in 1>2,3.`;
    return this.#reader.invalid(group, reason, meantAxis(this.#reader.shown(group)));
  }

  /** Reads an axis by symbols (`O>H`), for all fragments that it is given to. */
  byNames(value: Span): (f: number) => Axis | null {
    const words = this.#reader.text.slice(value.start, value.end);
    const sides = words.split('>').map((side) => [...new Set(side.split(','))].map((name) => name.trim()));
    const isAxis = sides.length === 2 && sides.every((side) => side.length <= MOST_AXIS_NAMES);
    const elements = sides.map((side) => side.map((name) => [name, atomicNumberOf(name)] as const));
    return (f) => {
      const [before, after] = isAxis ? elements.map((side) => this.#atomsNamed(f, side)) : [];
      if (before?.length && after?.length) return { before, after, span: value };
      return this.#reader.invalid(
        value,
        `"${this.#reader.shown(value)}" names no atoms on both sides of ">"; write symbols as in O>H.`,
        meantAxis(this.#reader.shown(value)),
      );
    };
  }

  /** Atoms of a fragment by element, or by the label that stands in the file. */
  #atomsNamed(f: number, names: readonly (readonly [name: string, element: number])[]): number[] {
    const { starts, members } = this.#set;
    const { element } = this.#frame.atoms;
    const named: number[] = [];
    for (const [name, z] of names) {
      for (let k = starts[f]!; k < starts[f + 1]!; k++) {
        const atom = members[k]!;
        if (z > 0 ? element[atom] === z : this.#labelOf(atom) === name) named.push(atom);
      }
    }
    return named;
  }

  #labelOf(atom: number): string {
    const { start, end } = this.#frame.fieldSpan(atom, 'element');
    return this.#reader.text.slice(start, end);
  }
}
