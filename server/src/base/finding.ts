import { CATALOGUE, type FindingCode, type Severity } from './catalogue';
import type { Span } from './span';

/** A further place that a finding speaks of. */
export interface Related extends Span {
  readonly message: string;
}

/** A replacement of one span of the text. */
export interface TextEdit extends Span {
  readonly text: string;
}

/** A remedy that can be applied: what it does, and the edits that do it. */
export interface Fix {
  readonly title: string;
  readonly edits: readonly TextEdit[];
  /** Whether it takes something out that was given. */
  readonly drops?: boolean;
}

export type FragmentPair = readonly [first: number, second: number];

/** One thing found in a file, at an exact place. */
export interface Finding extends Span {
  readonly code: FindingCode;
  readonly severity: Severity;
  /** The reason and what to do, in sentences. */
  readonly message: string;
  readonly related: readonly Related[];
  readonly fix?: Fix;
  /** Pairs of fragments that it speaks of, the worst first; fragments of the frame from 0. */
  readonly pairs?: readonly FragmentPair[];
  /** How many more of its code were met and only counted, on the last one kept. */
  readonly more?: number;
}

/** What a site adds to the catalogue's entry. */
export interface FindingDetail {
  readonly related?: readonly Related[];
  readonly fix?: Fix;
  readonly pairs?: readonly FragmentPair[];
}

/** A reason quotes pieces of the file; one that runs on is cut. */
const LONGEST_REASON = 600;

/** Makes a finding: `reason` says what was seen, the catalogue adds what to do. */
export function finding(code: FindingCode, span: Span, reason: string, detail: FindingDetail = {}): Finding {
  const entry = CATALOGUE[code];
  return {
    code,
    severity: entry.severity,
    message: `${reason.length > LONGEST_REASON ? `${reason.slice(0, LONGEST_REASON)}…` : reason} ${entry.remedy}`,
    start: span.start,
    end: span.end,
    related: detail.related ?? [],
    ...(detail.fix === undefined ? {} : { fix: detail.fix }),
    ...(detail.pairs === undefined ? {} : { pairs: detail.pairs }),
  };
}

/** How many findings of one code are kept one by one; the last then says how many more there were. */
const KEPT_PER_CODE = 100;

/**
 * Collects findings with bounded memory: past a hundred of one code they are only counted. The same code at the same place is one
 * finding, however often it is met (an annotation that holds for many fragments or models).
 */
export class FindingCollector {
  readonly #kept: Finding[] = [];
  readonly #counts = new Map<FindingCode, number>();
  readonly #last = new Map<FindingCode, number>();
  readonly #places = new Set<string>();

  /** Adds a finding; the reason is only made where the finding is kept. */
  add(code: FindingCode, span: Span, reason: () => string, detail?: () => FindingDetail): void {
    if (this.#admits(code, span)) this.#kept.push(finding(code, span, reason(), detail?.()));
  }

  /** Takes over a finding of another collector, with what that one only counted. */
  push({ more = 0, ...entry }: Finding): void {
    if (this.#admits(entry.code, entry)) this.#kept.push(entry);
    if (more > 0) this.#counts.set(entry.code, this.count(entry.code) + more);
  }

  #admits(code: FindingCode, { start, end }: Span): boolean {
    const count = this.count(code) + 1;
    const place = `${code} ${start} ${end}`;
    if (this.#places.has(place)) return false;
    this.#counts.set(code, count);
    if (count > KEPT_PER_CODE) return false;
    this.#places.add(place);
    this.#last.set(code, this.#kept.length);
    return true;
  }

  count(code: FindingCode): number {
    return this.#counts.get(code) ?? 0;
  }

  /** All findings kept, in the order of their place in the text. */
  list(): Finding[] {
    const list = [...this.#kept];
    for (const [code, count] of this.#counts) {
      const index = this.#last.get(code);
      const kept = list.filter((entry) => entry.code === code).length;
      if (count > kept && index !== undefined) list[index] = { ...list[index]!, more: count - kept };
    }
    return sortFindings(list);
  }
}

/** Orders findings by place, then code. */
export function sortFindings(findings: Finding[]): Finding[] {
  return findings.sort(
    (a, b) => a.start - b.start || a.end - b.end || (a.code < b.code ? -1 : a.code > b.code ? 1 : 0),
  );
}
