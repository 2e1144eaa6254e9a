/** Per slot three key words, and one more than the residue: 0 in a free slot. */
const STRIDE = 4;
const FIRST_SLOTS = 64;

/**
 * The residue last opened under each key of ten ASCII characters, given as three words. A hash table with open addressing in one
 * array: a large file has a new key every few lines, and a string for each would cost more than all else that is read of them.
 */
export class ResidueKeys {
  #slots = new Int32Array(STRIDE * FIRST_SLOTS);
  #used = 0;

  /** The residue of a key, or −1. */
  find(key0: number, key1: number, key2: number): number {
    return this.#slots[this.#slotOf(key0, key1, key2) + 3]! - 1;
  }

  set(key0: number, key1: number, key2: number, residue: number): void {
    const slots = this.#slots;
    const slot = this.#slotOf(key0, key1, key2);
    if (slots[slot + 3] === 0) this.#used++;
    slots[slot] = key0;
    slots[slot + 1] = key1;
    slots[slot + 2] = key2;
    slots[slot + 3] = residue + 1;
    if (this.#used * 2 * STRIDE > slots.length) this.#grow();
  }

  /** Where a key stands, or else the free slot where it belongs. */
  #slotOf(key0: number, key1: number, key2: number): number {
    const slots = this.#slots;
    const mask = slots.length - 1;
    let slot = (STRIDE * mixed(key0, key1, key2)) & mask;
    while (slots[slot + 3] !== 0 && (slots[slot] !== key0 || slots[slot + 1] !== key1 || slots[slot + 2] !== key2)) {
      slot = (slot + STRIDE) & mask;
    }
    return slot;
  }

  #grow(): void {
    const old = this.#slots;
    this.#slots = new Int32Array(2 * old.length);
    this.#used = 0;
    for (let slot = 0; slot < old.length; slot += STRIDE) {
      if (old[slot + 3] !== 0) this.set(old[slot]!, old[slot + 1]!, old[slot + 2]!, old[slot + 3]! - 1);
    }
  }
}

/** A hash whose low bits depend on all bits of the key; odd multipliers with well-mixed bits (MurmurHash3, A. Appleby, 2011). */
function mixed(key0: number, key1: number, key2: number): number {
  let hash = Math.imul(key0, 0xcc9e2d51) ^ Math.imul(key1, 0x1b873593) ^ Math.imul(key2, 0x85ebca6b);
  hash = Math.imul(hash ^ (hash >>> 16), 0x85ebca6b);
  hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35);
  return hash ^ (hash >>> 16);
}
