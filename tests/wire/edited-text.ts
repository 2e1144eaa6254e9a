import type { TextDocumentContentChangeEvent } from 'vscode-languageserver-protocol';

/** A coordinate text as an editor holds it, and random edits: one decimal of one atom's position becomes another digit. */
export class EditedText {
  readonly #lines: string[];
  readonly #random: () => number;

  constructor(text: string, random: () => number) {
    this.#lines = text.split('\n');
    this.#random = random;
  }

  get text(): string {
    return this.#lines.join('\n');
  }

  /** Makes one edit; returns it as the protocol has it. */
  edit(): TextDocumentContentChangeEvent {
    for (;;) {
      const line = this.#draw(this.#lines.length);
      const old = this.#lines[line]!;
      const numbers = [...old.matchAll(/\.(\d+)/g)];
      // What has fewer is no atom; what a PDB record has beyond is not the position.
      if (numbers.length < 3) continue;
      const { index, 1: decimals } = numbers[this.#draw(3)]!;
      const character = index + 1 + this.#draw(decimals!.length);
      const text = String((Number(old[character]) + 1 + this.#draw(9)) % 10);
      this.#lines[line] = old.slice(0, character) + text + old.slice(character + 1);
      return { range: { start: { line, character }, end: { line, character: character + 1 } }, text };
    }
  }

  #draw(below: number): number {
    return Math.floor(this.#random() * below);
  }
}
