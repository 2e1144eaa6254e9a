import { FINDING_CODES, isFindingCode } from '../base/catalogue';
import type { FindingCollector } from '../base/finding';
import type { Span } from '../base/span';
import type { Entry } from '../formats/annotation/entries';
import { likelyKey } from '../formats/annotation/keys';
import { itemNumber, listItems, valueText } from '../formats/annotation/lists';
import {
  meantCharge,
  meantDipoleUnit,
  meantFlag,
  meantMultiplicity,
  meantNumber,
  meantPermittivity,
  meantQuantity,
  replacement,
} from '../formats/annotation/meant';
import { findMedium } from '../physics/media';
import { type Dimension, readQuantity } from '../physics/quantity';
import { dipoleUnitEA, standardDipoleUnit } from '../physics/units';
import type { Snapshot } from '../text/snapshot';

/** An axis names a few atoms; what names more is no axis. */
export const MOST_AXIS_NAMES = 200;

/** Direction of a dipole by atoms: from the mean position of `before` to that of `after` (atom indices of the frame). */
export interface Axis {
  readonly before: readonly number[];
  readonly after: readonly number[];
  readonly span: Span;
}

/** A dipole as it stands in the file, for findings and their fixes. */
export interface WrittenDipole {
  /** The three components or the one size, each with its place. */
  readonly items: readonly Span[];
  /** Unit of the numbers (its standard spelling). */
  readonly unit: string;
  /** The value as a whole. */
  readonly span: Span;
}

/** What the file says of one fragment; `null` where it says nothing. */
export interface FragmentNotes {
  name: string | null;
  chargeE: number | null;
  dipoleEA: readonly [number, number, number] | null;
  writtenDipole: WrittenDipole | null;
  dipoleSizeEA: number | null;
  writtenSize: WrittenDipole | null;
  axis: Axis | null;
  polarizabilityA3: number | null;
}

/** A value with its place. */
export interface Placed<T> {
  readonly value: T;
  readonly span: Span;
}

/** What the file says of a frame as a whole; `null` where it says nothing. */
export interface FrameNotes {
  temperatureK: number | null;
  relativePermittivity: number | null;
  totalChargeE: Placed<number> | null;
  multiplicity: Placed<number> | null;
  dipoleEA: Placed<readonly [number, number, number]> | null;
  periodic: boolean | null;
  /** Finding codes that are not wanted. */
  silence: ReadonlySet<string>;
}

/** What is noted of a fragment that nothing is said of. */
export function emptyNotes(): FragmentNotes {
  return {
    name: null,
    chargeE: null,
    dipoleEA: null,
    writtenDipole: null,
    dipoleSizeEA: null,
    writtenSize: null,
    axis: null,
    polarizabilityA3: null,
  };
}

/** Longer values are not mended. */
const LONGEST_MENDED = 80;

/** Reads single values of entries, reporting what cannot be read. */
export class ValueReader {
  readonly text: Snapshot;
  readonly problems: FindingCollector;

  constructor(text: Snapshot, problems: FindingCollector) {
    this.text = text;
    this.problems = problems;
  }

  /** Reports a value; `meant` is what is surely meant by it, and `at` where that goes. */
  invalid(span: Span, reason: string, meant: string | null = null, at = span): null {
    this.problems.add(
      'value-invalid',
      span,
      () => reason,
      () => replacement(at, meant),
    );
    return null;
  }

  /** The text of a value, cut for a message. */
  shown(span: Span): string {
    return this.text.slice(span.start, Math.min(span.end, span.start + 40));
  }

  quantity(span: Span, dimension: Dimension, what: string, bareUnit = 1): number | null {
    const words = this.text.slice(span.start, span.end);
    const result = readQuantity(words, dimension, bareUnit);
    if (result.ok) return result.value;
    const meant = words.length > LONGEST_MENDED ? null : meantQuantity(words, dimension);
    if (result.kind === 'unit') {
      this.problems.add(
        'unit-unknown',
        span,
        () => `The ${what} "${this.shown(span)}" cannot be read. ${result.reason}`,
        () => replacement(span, meant),
      );
      return null;
    }
    return this.invalid(span, `The ${what} "${this.shown(span)}" is no quantity. ${result.reason}`, meant);
  }

  /** A finite number; `nan` and anything else that is none gives null, the latter with a finding. */
  number(span: Span, what: string, meantBy: (text: string) => string | null = meantNumber): number | null {
    const { value, readable } = itemNumber(this.text, span);
    if (!Number.isNaN(value)) return value;
    if (!readable) {
      const isShort = span.end - span.start <= LONGEST_MENDED;
      this.problems.add(
        'number-unreadable',
        span,
        () => `The ${what} "${this.shown(span)}" is no finite number.`,
        () => replacement(span, isShort ? meantBy(this.text.slice(span.start, span.end)) : null),
      );
    }
    return null;
  }

  /** The dipole unit of an entry, or `null` with a finding where it is none. */
  dipoleUnit(entry: Entry): string | null {
    const unit = standardDipoleUnit(valueText(this.text, entry));
    if (unit !== undefined) return unit;
    this.problems.add(
      'unit-unknown',
      entry.value,
      () => `"${this.shown(entry.inner)}" is no unit of a dipole.`,
      () => replacement(entry.inner, meantDipoleUnit(this.shown(entry.inner))),
    );
    return null;
  }

  /** Three components of a vector in a dipole unit, e·Å. */
  vector(
    items: readonly Span[],
    unit: string,
    span: Span,
  ): { dipoleEA: [number, number, number]; written: WrittenDipole } | null {
    const numbers = items.map((item) => this.number(item, 'dipole component'));
    if (numbers.some((value) => value === null)) return null;
    const scale = dipoleUnitEA(unit)!;
    const dipoleEA = numbers.map((value) => value! * scale) as [number, number, number];
    return { dipoleEA, written: { items, unit, span } };
  }

  permittivity(entry: Entry): number | null {
    const words = valueText(this.text, entry).trim();
    const medium = findMedium(words);
    if (medium !== undefined) return medium.relativePermittivity;
    const result = readQuantity(words, 'number');
    if (result.ok && result.value >= 1) return result.value;
    return this.invalid(
      entry.value,
      `relative_permittivity "${this.shown(entry.inner)}" is no number from 1 up and no known medium.`,
      meantPermittivity(this.shown(entry.inner)),
      entry.inner,
    );
  }

  temperature(entry: Entry): number | null {
    const value = this.quantity(entry.inner, 'temperatureK', 'temperature');
    if (value === null || value > 0) return value;
    return this.invalid(entry.value, 'The temperature must be above 0 K.');
  }

  /** Keys that speak of the whole frame or file. */
  frameNotes(entries: readonly Entry[]): FrameNotes {
    const first = (...keys: string[]) => entries.find((entry) => keys.includes(entry.key));
    const permittivity = first('relative_permittivity');
    const temperature = first('temperature');
    const total = first('total_charge', 'charge');
    const multiplicity = first('multiplicity', 'mult');
    const dipole = first('dipole');
    const silence = first('silence');
    const periodic = first('periodic');
    return {
      relativePermittivity: permittivity ? this.permittivity(permittivity) : null,
      temperatureK: temperature ? this.temperature(temperature) : null,
      totalChargeE: total ? this.#placed(total, 'total charge', meantCharge, Number.isFinite) : null,
      multiplicity: multiplicity
        ? this.#placed(
            multiplicity,
            'multiplicity',
            meantMultiplicity,
            (value) => Number.isInteger(value) && value >= 1,
          )
        : null,
      dipoleEA: dipole ? this.#frameDipole(dipole) : null,
      periodic: periodic ? this.#flag(periodic) : null,
      silence: silence ? this.#silence(silence) : new Set(),
    };
  }

  #silence(entry: Entry): Set<string> {
    const codes = new Set<string>();
    for (const item of listItems(this.text, entry)) {
      const code = this.text.slice(item.start, item.end);
      if (isFindingCode(code)) {
        codes.add(code);
        continue;
      }
      const meant = likelyKey(code, FINDING_CODES);
      this.problems.add(
        'key-misspelt',
        item,
        () =>
          `"${this.shown(item)}" in silence is no finding${meant === undefined ? '' : `; did you mean "${meant}"?`}.`,
        () => replacement(item, meant),
      );
    }
    return codes;
  }

  #placed(
    entry: Entry,
    what: string,
    meantBy: (text: string) => string | null,
    allowed: (value: number) => boolean,
  ): Placed<number> | null {
    const value = this.number(entry.inner, what, meantBy);
    if (value === null) return null;
    if (allowed(value)) return { value, span: entry.value };
    return this.invalid(entry.value, `The ${what} ${value} is not allowed.`);
  }

  #frameDipole(entry: Entry): FrameNotes['dipoleEA'] {
    const items = listItems(this.text, entry);
    if (items.length !== 3) {
      this.problems.add('array-length', entry.value, () => `dipole has ${items.length} numbers; a vector has three.`);
      return null;
    }
    const vector = this.vector(items, 'e*angstrom', entry.value);
    return vector === null ? null : { value: vector.dipoleEA, span: entry.value };
  }

  #flag(entry: Entry): boolean | null {
    const word = valueText(this.text, entry).trim().toLowerCase();
    if (word === 'true' || word === 't' || word === '1' || word === 'yes') return true;
    if (word === 'false' || word === 'f' || word === '0' || word === 'no') return false;
    const meant = meantFlag(this.shown(entry.inner));
    return this.invalid(entry.value, `"${this.shown(entry.inner)}" is neither true nor false.`, meant, entry.inner);
  }
}
