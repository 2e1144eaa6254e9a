import type { Advice } from '../../server/src/analysis/advice';
import type { PairRow, RowKey, RowQuery } from '../../server/src/features/pair-list';
import { PANEL_ROWS_REQUEST, type PanelRows } from '../../server/src/lsp/protocol';
import { button, html } from './dom';
import type { Host } from './host';
import { pairsCsv } from './pair-csv';
import { PairTable } from './pair-table';
import { tableWords } from './words';

const ADVICE: readonly Advice[] = ['compute', 'review', 'accept', 'repair'];
/** Words and codes are read from A to Z; sizes from the largest. */
const FROM_THE_LARGEST: ReadonlySet<RowKey> = new Set(['strength', 'regime', 'contact', 'advice']);
const COPY_PAGE = 1000;
const TYPING_MS = 200;

/** All pairs of a frame. */
export class AllPairsView {
  readonly element = html('div', { class: 'all-pairs' });
  readonly #host: Host;
  readonly #table: PairTable;
  readonly #note = html('p', { class: 'quiet', role: 'status' });
  #frame = 0;
  #query: RowQuery = { key: 'strength', descending: true, advice: null, text: '' };
  #round = 0;

  constructor(host: Host) {
    this.#host = host;
    this.#table = new PairTable({
      label: 'All pairs of the frame',
      choose: ({ first, second }) => host.tell({ kind: 'choose', pair: { frame: this.#frame, first, second } }),
      sort: (key) => {
        const descending = this.#query.key === key ? !this.#query.descending : FROM_THE_LARGEST.has(key);
        this.#ask({ ...this.#query, key, descending });
      },
    });
    const advice = html('select', {}, html('option', { value: '' }, 'any'));
    advice.append(...ADVICE.map((word) => html('option', { value: word }, word)));
    advice.addEventListener('change', () =>
      this.#ask({ ...this.#query, advice: (advice.value || null) as Advice | null }),
    );
    const text = html('input', { type: 'search', placeholder: 'name or number', size: 14 });
    let typing: ReturnType<typeof setTimeout> | undefined;
    text.addEventListener('input', () => {
      clearTimeout(typing);
      typing = setTimeout(() => this.#ask({ ...this.#query, text: text.value }), TYPING_MS);
    });
    const tools = html(
      'div',
      { class: 'tools' },
      html('label', {}, 'Advice ', advice),
      html('label', {}, 'Fragment ', text),
      button('Copy as CSV', () => void this.#copy()),
    );
    this.element.append(tools, this.#note, this.#table.element);
  }

  /** Shows the pairs of a frame of the present text. */
  show(frame: number): void {
    if (frame !== this.#frame) this.#table.toTop();
    this.#frame = frame;
    this.#ask(this.#query, false);
  }

  mark(first: number, second: number): void {
    this.#table.mark(first, second);
  }

  #ask(query: RowQuery, isNew = true): void {
    this.#query = query;
    const round = ++this.#round;
    if (isNew) this.#table.toTop();
    void this.#page(0, 100).then((answer) => {
      if (answer === null || round !== this.#round) return;
      this.#show(answer, round);
    });
  }

  #page(from: number, count: number): Promise<PanelRows | null> {
    return this.#host.ask<PanelRows>(PANEL_ROWS_REQUEST, { frame: this.#frame, query: this.#query, from, count });
  }

  #show(first: PanelRows, round: number): void {
    const { matching, pairs, reason } = first;
    this.#note.textContent =
      reason ?? `${matching === pairs ? pairs : `${matching} of ${pairs}`} pairs. ${tableWords(first)}`;
    this.#table.element.hidden = reason !== null;
    const rows = (from: number, count: number): readonly PairRow[] | Promise<readonly PairRow[]> =>
      from === 0
        ? first.rows
        : this.#page(from, count).then((answer) => (answer === null || round !== this.#round ? [] : answer.rows));
    this.#table.show({ count: matching, rows }, first, null, this.#query);
  }

  async #copy(): Promise<void> {
    const all: PairRow[] = [];
    for (;;) {
      const answer = await this.#page(all.length, COPY_PAGE);
      if (answer === null || answer.reason !== null) return;
      all.push(...answer.rows);
      if (all.length >= answer.matching || answer.rows.length === 0) break;
    }
    this.#host.tell({ kind: 'copy', text: pairsCsv(all), what: `${all.length} pairs` });
  }
}
