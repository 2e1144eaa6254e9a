import type { AtomTable } from './tree';

/** Which optional columns an {@link AtomBuilder} keeps. */
export interface AtomColumns {
  readonly charge?: boolean;
  readonly dipole?: boolean;
  readonly group?: boolean;
  readonly formal?: boolean;
  readonly residue?: boolean;
}

/** Collects atoms into columns that grow by doubling; nothing is allocated for an atom. */
export class AtomBuilder {
  count = 0;
  element: Uint8Array;
  flags: Uint8Array;
  positionA: Float64Array;
  line: Uint32Array;
  chargeE: Float64Array | null;
  dipoleEA: Float64Array | null;
  group: Int32Array | null;
  formalE: Float64Array | null;
  residue: Int32Array | null;

  constructor(capacity: number, columns: AtomColumns) {
    const room = Math.max(1, capacity);
    this.element = new Uint8Array(room);
    this.flags = new Uint8Array(room);
    this.positionA = new Float64Array(3 * room);
    this.line = new Uint32Array(room);
    this.chargeE = columns.charge ? new Float64Array(room) : null;
    this.dipoleEA = columns.dipole ? new Float64Array(3 * room) : null;
    this.group = columns.group ? new Int32Array(room) : null;
    this.formalE = columns.formal ? new Float64Array(room) : null;
    this.residue = columns.residue ? new Int32Array(room) : null;
  }

  /** Index of a new atom, all of whose columns are zero. */
  next(line: number): number {
    this.reserve();
    this.line[this.count] = line;
    return this.count++;
  }

  /** Makes room for one more atom, without taking it. */
  reserve(): void {
    if (this.count === this.element.length) this.#grow();
  }

  #grow(): void {
    const room = this.element.length * 2;
    const longer = <T extends Uint8Array | Uint32Array | Int32Array | Float64Array>(array: T, size: number): T => {
      const copy = new (array.constructor as new (length: number) => T)(size);
      copy.set(array);
      return copy;
    };
    this.element = longer(this.element, room);
    this.flags = longer(this.flags, room);
    this.positionA = longer(this.positionA, 3 * room);
    this.line = longer(this.line, room);
    this.chargeE = this.chargeE && longer(this.chargeE, room);
    this.dipoleEA = this.dipoleEA && longer(this.dipoleEA, 3 * room);
    this.group = this.group && longer(this.group, room);
    this.formalE = this.formalE && longer(this.formalE, room);
    this.residue = this.residue && longer(this.residue, room);
  }

  /** The finished table; trimmed to size where much room is left. */
  build(): AtomTable {
    const n = this.count;
    const trimmed = <T extends Uint8Array | Uint32Array | Int32Array | Float64Array>(array: T, size: number): T =>
      (array.length > size * 1.25 + 16 ? array.slice(0, size) : array.subarray(0, size)) as T;
    return {
      count: n,
      element: trimmed(this.element, n),
      flags: trimmed(this.flags, n),
      positionA: trimmed(this.positionA, 3 * n),
      line: trimmed(this.line, n),
      chargeE: this.chargeE && trimmed(this.chargeE, n),
      dipoleEA: this.dipoleEA && trimmed(this.dipoleEA, 3 * n),
      group: this.group && trimmed(this.group, n),
      formalE: this.formalE && trimmed(this.formalE, n),
      residue: this.residue && trimmed(this.residue, n),
    };
  }
}
