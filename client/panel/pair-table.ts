import { fixed } from '../../server/src/features/number-text';
import type { PairRow, RowKey } from '../../server/src/features/pair-list';
import { html } from './dom';
import { adviceMark, type Energies, energyNumber, multipleOfKT } from './words';

interface Column {
  readonly key: RowKey;
  readonly title: string;
  /** In full, where the title is short. */
  readonly meaning: string;
  readonly isNumber: boolean;
  text(row: PairRow, energies: Energies): string;
}

const pairColumn: Column = {
  key: 'pair',
  title: 'pair',
  meaning: 'the two fragments',
  isNumber: false,
  text: ({ names }) => names.join(' – '),
};

/** The same pair as seen from one of its fragments. */
const partnerColumn = (from: number): Column => ({
  ...pairColumn,
  title: 'partner',
  meaning: 'the other fragment',
  text: ({ first, names }) => (first === from ? names[1] : names[0]),
});

const OTHER_COLUMNS: readonly Column[] = [
  {
    key: 'advice',
    title: 'advice',
    meaning: 'what to do about the pair',
    isNumber: false,
    text: ({ advice }) => `${adviceMark(advice)} ${advice ?? 'one molecule'}`,
  },
  {
    key: 'distance',
    title: 'R/Å',
    meaning: 'separation of the centres in ångström',
    isNumber: true,
    text: ({ distanceA }) => fixed(distanceA, 2),
  },
  {
    key: 'energy',
    title: 'E',
    meaning: 'reference energy, or the point estimate (marked ~) where there is no reference',
    isNumber: true,
    text: ({ energyKJPerMol, energyFrom }, energies) =>
      `${energyFrom === 'point' ? '~' : ''}${energyNumber(energies, energyKJPerMol)}`,
  },
  {
    key: 'strength',
    title: '×kT',
    meaning: 'what the pair matters beside kT',
    isNumber: true,
    text: ({ strengthKJPerMol }, energies) => multipleOfKT(energies, strengthKJPerMol).replace(' kT', ''),
  },
  {
    key: 'point',
    title: 'point',
    meaning: 'point-dipole estimate',
    isNumber: true,
    text: ({ pointKJPerMol }, energies) => energyNumber(energies, pointKJPerMol),
  },
  {
    key: 'regime',
    title: 'regime',
    meaning: 'how well the point dipole does',
    isNumber: false,
    text: (row) => row.regime ?? '–',
  },
  {
    key: 'contact',
    title: 'contact',
    meaning: 'how close the atoms come',
    isNumber: false,
    text: (row) => row.contact,
  },
];

/** Where the rows of a table come from; a source that has to ask gives a promise. */
export interface RowSource {
  readonly count: number;
  rows(from: number, count: number): readonly PairRow[] | Promise<readonly PairRow[]>;
}

export interface TableOptions {
  readonly label: string;
  /** Called with the pair of the row that was chosen. */
  choose(row: PairRow): void;
  /** Called where the header of a column is pressed; without it the order is fixed. */
  sort?(key: RowKey): void;
}

const ROW_PX = 24;
/** Rows made beyond what is seen, on either side. */
const MARGIN = 8;
const PAGE = 100;

let tables = 0;

/**
 * A table of pairs of any length: only the rows that are seen are made. One row is the current one; arrows move it, Enter chooses it, as in
 * the grid pattern of the ARIA practices.
 */
export class PairTable {
  readonly element: HTMLElement;
  readonly #options: TableOptions;
  readonly #id = `pairs-${++tables}`;
  readonly #head = html('div', { role: 'row', class: 'head', 'aria-rowindex': 1 });
  readonly #body = html('div', { role: 'rowgroup', class: 'rows' });
  readonly #known = new Map<number, PairRow>();
  readonly #asked = new Set<number>();
  #columns: readonly Column[] = [];
  #energies: Energies | null = null;
  #source: RowSource = { count: 0, rows: () => [] };
  #generation = 0;
  #current = 0;
  #chosen = '';

  constructor(options: TableOptions) {
    this.#options = options;
    const headGroup = html('div', { role: 'rowgroup', class: 'head-group' }, this.#head);
    this.element = html(
      'div',
      { role: 'grid', class: 'pair-table', tabindex: 0, 'aria-label': options.label, 'aria-readonly': 'true' },
      headGroup,
      this.#body,
    );
    this.element.addEventListener('scroll', () => this.#draw());
    this.element.addEventListener('keydown', (event) => this.#key(event));
    this.#body.addEventListener('click', (event) => {
      const row = (event.target as Element).closest<HTMLElement>('[role=row]');
      if (row !== null) this.#choose(Number(row.dataset.at));
    });
    new ResizeObserver(() => this.#draw()).observe(this.element);
  }

  /** Shows other rows. `from` is the fragment (from 1) whose partners these are. */
  show(
    source: RowSource,
    energies: Energies,
    from: number | null,
    order: { key: RowKey; descending: boolean } | null,
  ): void {
    this.#generation++;
    this.#source = source;
    this.#energies = energies;
    this.#known.clear();
    this.#asked.clear();
    this.#columns = [from === null ? pairColumn : partnerColumn(from), ...OTHER_COLUMNS];
    this.#current = Math.min(this.#current, Math.max(0, source.count - 1));
    this.element.setAttribute('aria-rowcount', String(source.count + 1));
    this.element.setAttribute('aria-colcount', String(this.#columns.length));
    this.#body.style.height = `${source.count * ROW_PX}px`;
    this.#head.replaceChildren(...this.#columns.map((column) => this.#headCell(column, order)));
    this.#draw();
  }

  /** Marks the row of a pair as the one that is shown elsewhere. */
  mark(first: number, second: number): void {
    this.#chosen = `${Math.min(first, second)} ${Math.max(first, second)}`;
    this.#draw();
  }

  toTop(): void {
    this.#current = 0;
    this.element.scrollTop = 0;
  }

  #headCell(
    { key, title, meaning, isNumber }: Column,
    order: { key: RowKey; descending: boolean } | null,
  ): HTMLElement {
    const isKey = order?.key === key;
    const cell = html('div', {
      role: 'columnheader',
      class: isNumber ? 'number' : null,
      title: meaning,
      'aria-sort': isKey ? (order.descending ? 'descending' : 'ascending') : null,
    });
    const { sort } = this.#options;
    const arrow = isKey ? (order.descending ? ' ▾' : ' ▴') : '';
    if (sort === undefined) cell.append(title);
    else {
      const press = html('button', { type: 'button', 'aria-label': `${meaning}: order by it` }, `${title}${arrow}`);
      press.addEventListener('click', () => sort(key));
      cell.append(press);
    }
    return cell;
  }

  #draw(): void {
    if (this.#energies === null) return;
    const { count } = this.#source;
    const top = Math.max(0, this.element.scrollTop - this.#head.offsetHeight);
    const first = Math.max(0, Math.floor(top / ROW_PX) - MARGIN);
    const end = Math.min(count, Math.ceil((top + this.element.clientHeight) / ROW_PX) + MARGIN);
    this.#fetch(first, end);
    const rows: HTMLElement[] = [];
    for (let at = first; at < end; at++) rows.push(this.#row(at));
    this.#body.replaceChildren(...rows);
    const isSeen = this.#current >= first && this.#current < end;
    if (isSeen && count > 0) this.element.setAttribute('aria-activedescendant', this.#rowId(this.#current));
    else this.element.removeAttribute('aria-activedescendant');
  }

  #rowId(at: number): string {
    return `${this.#id}-${at}`;
  }

  #row(at: number): HTMLElement {
    const row = this.#known.get(at);
    const isChosen = row !== undefined && `${row.first} ${row.second}` === this.#chosen;
    const element = html('div', {
      role: 'row',
      id: this.#rowId(at),
      'aria-rowindex': at + 2,
      'aria-selected': isChosen ? 'true' : 'false',
      'data-at': at,
      class: at === this.#current ? 'current' : null,
    });
    element.style.top = `${at * ROW_PX}px`;
    for (const { text, isNumber, meaning } of this.#columns) {
      const words = row === undefined ? '…' : text(row, this.#energies!);
      element.append(
        html('div', { role: 'gridcell', class: isNumber ? 'number' : null, title: `${meaning}: ${words}` }, words),
      );
    }
    return element;
  }

  /** Sees to it that the rows from `first` to before `end` are known, page by page. */
  #fetch(first: number, end: number): void {
    for (let page = Math.floor(first / PAGE); page * PAGE < end; page++) {
      if (this.#asked.has(page)) continue;
      this.#asked.add(page);
      const rows = this.#source.rows(page * PAGE, PAGE);
      if (!(rows instanceof Promise)) {
        for (const [k, row] of rows.entries()) this.#known.set(page * PAGE + k, row);
        continue;
      }
      const generation = this.#generation;
      void rows.then((answer) => {
        if (generation !== this.#generation) return;
        for (const [k, row] of answer.entries()) this.#known.set(page * PAGE + k, row);
        this.#draw();
      });
    }
  }

  #choose(at: number): void {
    const row = this.#known.get(at);
    if (row === undefined) return;
    this.#current = at;
    this.mark(row.first, row.second);
    this.#options.choose(row);
  }

  #key(event: KeyboardEvent): void {
    if (event.target !== this.element) return;
    const page = Math.max(1, Math.floor(this.element.clientHeight / ROW_PX) - 2);
    const moves: Readonly<Record<string, number>> = {
      ArrowDown: this.#current + 1,
      ArrowUp: this.#current - 1,
      PageDown: this.#current + page,
      PageUp: this.#current - page,
      Home: 0,
      End: this.#source.count - 1,
    };
    const to = moves[event.key];
    if (to !== undefined) this.#moveTo(to);
    else if (event.key === 'Enter' || event.key === ' ') this.#choose(this.#current);
    else return;
    event.preventDefault();
  }

  #moveTo(at: number): void {
    this.#current = Math.max(0, Math.min(this.#source.count - 1, at));
    const head = this.#head.offsetHeight;
    const top = this.#current * ROW_PX;
    const view = this.element.clientHeight - head;
    const { scrollTop } = this.element;
    if (top < scrollTop) this.element.scrollTop = top;
    else if (top + ROW_PX > scrollTop + view) this.element.scrollTop = top + ROW_PX - view;
    this.#draw();
  }
}
