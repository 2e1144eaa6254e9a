const BLANKS = 0x20202020;
const BLANK = 32;
const DELETE = 0x7f;

/**
 * Numbers for short texts, equal where the texts are: up to four ASCII characters, left-justified, are the four bytes of a number that
 * is not negative; any other text gets a negative number when first met.
 */
export class NameCodes {
  readonly #others = new Map<string, number>();

  /** The code of a text without blanks at its ends. */
  ofText(text: string): number {
    let packed = BLANKS;
    for (let i = 0; i < text.length; i++) {
      const unit = text.charCodeAt(i);
      if (i > 3 || unit < BLANK || unit > DELETE) return this.#ofOther(text);
      packed ^= (unit ^ BLANK) << (8 * i);
    }
    return packed;
  }

  #ofOther(text: string): number {
    let code = this.#others.get(text);
    if (code === undefined) {
      code = -1 - this.#others.size;
      this.#others.set(text, code);
    }
    return code;
  }
}

/** Whether four bytes are all ASCII from the blank on: neither a control character nor a mirror of something beyond ASCII. */
export function arePlain(four: number): boolean {
  return ((four | (four - BLANKS)) & 0x80808080) === 0;
}

/** The code of a text of four plain bytes, the blanks at its ends left out. */
export function codeOfPlain(four: number): number {
  if (four === BLANKS) return four;
  let packed = four;
  while ((packed & 255) === BLANK) packed = (packed >>> 8) | (BLANK << 24);
  return packed;
}

/** The code of a text of one plain character. */
export function codeOfPlainCharacter(unit: number): number {
  return BLANKS ^ BLANK ^ unit;
}
