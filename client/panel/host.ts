import type { FromHost, KeptState, PanelMethod, ToHost } from './messages';

/** What the editor gives a panel. */
interface EditorApi {
  postMessage(message: ToHost): void;
  getState(): unknown;
  setState(state: KeptState): void;
}

declare function acquireVsCodeApi(): EditorApi;

/** The panel's way to its host: messages, questions with answers, and what is kept over a reload. */
export class Host {
  readonly #api = acquireVsCodeApi();
  readonly #waiting = new Map<number, (result: unknown) => void>();
  #asked = 0;

  constructor(listener: (message: Exclude<FromHost, { kind: 'answer' }>) => void) {
    window.addEventListener('message', ({ data }: MessageEvent<FromHost>) => {
      if (data.kind !== 'answer') return listener(data);
      this.#waiting.get(data.id)?.(data.result);
      this.#waiting.delete(data.id);
    });
  }

  tell(message: ToHost): void {
    this.#api.postMessage(message);
  }

  /** Asks the server; null where the text has changed meanwhile or is closed. */
  ask<T>(method: PanelMethod, params: object): Promise<T | null> {
    const id = ++this.#asked;
    return new Promise((resolve) => {
      this.#waiting.set(id, (result) => resolve(result as T | null));
      this.tell({ kind: 'ask', id, method, params });
    });
  }

  get kept(): Partial<KeptState> {
    return (this.#api.getState() as Partial<KeptState> | undefined) ?? {};
  }

  keep(state: KeptState): void {
    this.#api.setState(state);
  }
}
