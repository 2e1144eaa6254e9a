import type { FindingCollector } from '../../base/finding';
import type { Span } from '../../base/span';
import type { CoordinateTree } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';
import type { FrameAnalysis } from '../frame-analysis';

const LONGEST_NAME = 60;

/** What a rule looks at: one frame of a file, where to put findings, and what has been said in earlier frames. */
export class RuleContext {
  readonly file: CoordinateTree;
  readonly frame: FrameAnalysis;
  readonly findings: FindingCollector;
  readonly #said: Set<string>;

  constructor(file: CoordinateTree, frame: FrameAnalysis, findings: FindingCollector, said: Set<string>) {
    this.file = file;
    this.frame = frame;
    this.findings = findings;
    this.#said = said;
  }

  /** True the first time a thing is to be said in this file. */
  isNews(topic: string): boolean {
    if (this.#said.has(topic)) return false;
    this.#said.add(topic);
    return true;
  }

  /** Number of fragments that stand in this file; further ones come from a companion file. */
  get ownFragments(): number {
    return this.frame.model.fragments.count;
  }

  /** A fragment as findings name it. */
  nameOf(fragment: number): string {
    const { names, labels } = this.frame.model;
    if (fragment >= this.ownFragments) return `fragment ${fragment + 1} (of the other file)`;
    const cut = (text: string) => (text.length > LONGEST_NAME ? `${text.slice(0, LONGEST_NAME)}…` : text);
    return labels[fragment] !== '' ? cut(labels[fragment]!) : `${cut(names[fragment]!)} (fragment ${fragment + 1})`;
  }

  /** What names a fragment on its first atom line (element or residue); `null` for one of a companion file. */
  placeOf(fragment: number): Span | null {
    if (fragment >= this.ownFragments) return null;
    return this.frame.model.tree.fieldSpan(atomsOf(this.frame.model.fragments, fragment)[0]!, 'name');
  }

  /** The line of an atom by its number in the frame; `null` for one of a companion file. */
  atomLine(atomNumber: number): Span | null {
    const { tree } = this.frame.model;
    return atomNumber <= tree.atoms.count ? tree.fieldSpan(atomNumber - 1, 'line') : null;
  }

  /** The line that stands for the frame. */
  headSpan(): Span {
    const { lines } = this.file;
    const line = this.frame.model.tree.headLine;
    const start = lines.starts[line]!;
    return { start, end: Math.min(lines.end(line), start + 200) };
  }
}

/** A number for a sentence: three or more significant digits, no exponent in the usual range. */
export function shown(value: number, digits = 3): string {
  if (value === 0) return '0';
  const size = Math.abs(value);
  const text =
    size >= 1e-3 && size < 1e5
      ? value.toFixed(Math.max(0, digits - 1 - Math.floor(Math.log10(size))))
      : value.toExponential(digits - 1);
  return text.replace('-', '−');
}
