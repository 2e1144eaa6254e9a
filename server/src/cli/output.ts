/** Text on its way to standard output, in large pieces and no faster than it is taken. */
export class Output {
  #pieces: string[] = [];
  #size = 0;

  /** Adds text; wait for the result now and then, so that what is not taken does not pile up. */
  write(text: string): void {
    this.#pieces.push(text);
    this.#size += text.length;
  }

  get isFull(): boolean {
    return this.#size >= 1 << 16;
  }

  async flush(): Promise<void> {
    if (this.#size === 0) return;
    const text = this.#pieces.join('');
    this.#pieces = [];
    this.#size = 0;
    await new Promise<void>((resolve, reject) => {
      process.stdout.write(text, (error) => (error ? reject(error) : resolve()));
    });
  }
}

const TURN_MS = 50;
const PROGRESS_MS = 500;
const CALLS_PER_LOOK = 64;

/** Lets the event loop turn during long work, so that an interrupt is heard, and shows progress on a terminal. */
export class Pacer {
  #lastTurn = Date.now();
  #lastProgress = Date.now();
  #shown = false;
  #calls = 0;

  /** Call often; returns a promise only where a pause is due. */
  pause(progress: () => string): Promise<void> | undefined {
    // The clock is not asked at every one of millions of calls.
    if (++this.#calls % CALLS_PER_LOOK !== 0) return undefined;
    const now = Date.now();
    if (now - this.#lastTurn < TURN_MS) return undefined;
    this.#lastTurn = now;
    if (process.stderr.isTTY && now - this.#lastProgress >= PROGRESS_MS) {
      this.#lastProgress = now;
      this.#shown = true;
      process.stderr.write(`\r\u001b[K${progress()}`);
    }
    return new Promise((resolve) => setImmediate(resolve));
  }

  /** Takes the progress line away. */
  done(): void {
    if (this.#shown) process.stderr.write('\r\u001b[K');
    this.#shown = false;
  }
}
