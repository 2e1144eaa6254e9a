import { PANEL_MATRIX_REQUEST, type PanelMatrix } from '../../server/src/lsp/protocol';
import { button, html, svg } from './dom';
import type { Host } from './host';
import { CLASSES, cellPath, classOf, ktLegend } from './kt-scale';
import { standaloneSvg } from './save-svg';
import { adviceMark, csv, energyText, multipleOfKT, signWord } from './words';

const WIDTH = 470;
const LEGEND_PX = 62;
const NAMES_PX = 96;
/** Names are written where rows are at least this high. */
const READABLE_PX = 11;
const LONGEST_NAME = 15;
/** A cell this large holds the mark of the advice. */
const MARK_PX = 12;

/** Energies fragment by fragment: shades beside kT above the diagonal, the advice below it. */
export class MatrixView {
  readonly element = html('div', { class: 'matrix' });
  readonly #host: Host;
  readonly #picture = html('div', {
    class: 'matrix-picture',
    tabindex: 0,
    role: 'application',
    'aria-label': 'Energies fragment by fragment: arrows move from cell to cell, Enter chooses the pair',
  });
  readonly #reading = html('p', { class: 'reading', 'aria-live': 'polite' });
  readonly #actions = html('div', { class: 'actions' });
  #data: PanelMatrix | null = null;
  #places = new Map<string, number>();
  #cell: readonly [number, number] = [0, 1];
  #round = 0;

  constructor(host: Host) {
    this.#host = host;
    this.#actions.append(
      button('Save as SVG…', () => this.#save()),
      button('Copy as CSV', () => this.#copy()),
    );
    this.element.append(this.#reading, this.#picture, this.#actions);
    this.#picture.addEventListener('keydown', (event) => this.#key(event));
    this.#picture.addEventListener('focus', () => this.#point());
    this.#picture.addEventListener('mousemove', (event) => {
      const at = this.#cellAt(event);
      if (at !== null) this.#point(at);
    });
    this.#picture.addEventListener('click', (event) => {
      const at = this.#cellAt(event);
      if (at === null) return;
      this.#point(at);
      this.#choose();
    });
  }

  /** Shows a frame, beginning with the pair (from 1) that is shown elsewhere. */
  show(frame: number, pair: { readonly first: number; readonly second: number } | null): void {
    const round = ++this.#round;
    if (pair !== null) this.#cell = [Math.min(pair.first, pair.second) - 1, Math.max(pair.first, pair.second) - 1];
    void this.#host.ask<PanelMatrix>(PANEL_MATRIX_REQUEST, { frame }).then((answer) => {
      if (answer !== null && round === this.#round) this.#show(answer);
    });
  }

  #show(data: PanelMatrix): void {
    this.#data = data;
    this.#places = new Map(data.first.map((first, k) => [`${first - 1} ${data.second[k]! - 1}`, k]));
    const isThere = data.reason === null;
    this.#picture.hidden = !isThere;
    this.#actions.hidden = !isThere;
    if (!isThere) {
      this.#reading.textContent = data.reason;
      return;
    }
    const count = data.titles.length;
    this.#cell = [Math.min(this.#cell[0], count - 2), Math.min(this.#cell[1], count - 1)];
    this.#picture.replaceChildren(this.#draw(data));
    this.#point();
  }

  #layout(count: number): { side: number; left: number; top: number } {
    const whole = (WIDTH - 2) / count;
    const withNames = (WIDTH - NAMES_PX) / count;
    const isNamed = withNames >= READABLE_PX;
    return { side: Math.min(36, isNamed ? withNames : whole), left: isNamed ? NAMES_PX : 1, top: isNamed ? 20 : 1 };
  }

  #draw({ titles, first, second, energyKJPerMol, advice, kTKJPerMol }: PanelMatrix): SVGSVGElement {
    const count = titles.length;
    const { side, left, top } = this.#layout(count);
    const paths = { attractive: new Array<string>(CLASSES).fill(''), repulsive: new Array<string>(CLASSES).fill('') };
    const marks: SVGTextElement[] = [];
    for (const [k, f] of first.entries()) {
      const [row, column] = [f - 1, second[k]! - 1];
      const energy = energyKJPerMol[k];
      if (energy !== null && energy !== undefined) {
        const name = energy < 0 ? 'attractive' : 'repulsive';
        const path = cellPath(energy < 0, round(left + column * side), round(top + row * side), round(side));
        paths[name][classOf(energy, kTKJPerMol)] += path;
      }
      if (side >= MARK_PX) {
        const [x, y] = [left + (row + 0.5) * side, top + (column + 0.5) * side + 4];
        marks.push(svg('text', { class: 'mark', x, y, 'text-anchor': 'middle' }, adviceMark(advice[k] ?? null)));
      }
    }
    const cells = (['attractive', 'repulsive'] as const).flatMap((name) =>
      paths[name].map((d, k) => svg('path', { class: `${name} class-${k}`, d })),
    );
    const size = side * count;
    const height = top + size + 14 + LEGEND_PX;
    return svg(
      'svg',
      {
        viewBox: `0 0 ${WIDTH} ${round(height)}`,
        role: 'img',
        'aria-label': 'Energies fragment by fragment',
        class: 'plot',
      },
      svg('rect', { class: 'ground', x: left, y: top, width: size, height: size }),
      svg('path', { class: 'diagonal', d: `M${left} ${top}L${left + size} ${top + size}` }),
      ...cells,
      ...marks,
      ...this.#names(titles, side, left, top),
      svg('rect', { class: 'cursor', width: side, height: side, x: -side, y: -side }),
      this.#legend(top + size + 14, side >= MARK_PX),
    );
  }

  #names(titles: readonly string[], side: number, left: number, top: number): SVGTextElement[] {
    if (left === 1) return [];
    const short = (title: string) => (title.length > LONGEST_NAME ? `${title.slice(0, LONGEST_NAME - 1)}…` : title);
    return titles.flatMap((title, f) => [
      svg('text', { x: left - 5, y: top + (f + 0.5) * side + 4, 'text-anchor': 'end' }, short(title)),
      ...(side >= 18
        ? [svg('text', { x: left + (f + 0.5) * side, y: top - 6, 'text-anchor': 'middle' }, String(f + 1))]
        : []),
    ]);
  }

  #legend(y: number, hasMarks: boolean): SVGGElement {
    const group = ktLegend(y);
    if (hasMarks) {
      const words = 'below the diagonal: ● compute  ◐ review  ○ accept  ✕ repair  – one molecule';
      group.append(svg('text', { x: 0, y: y + 55, class: 'quiet' }, words));
    }
    return group;
  }

  #cellAt({ clientX, clientY }: MouseEvent): readonly [number, number] | null {
    const picture = this.#picture.querySelector('svg');
    if (picture === null || this.#data === null) return null;
    const count = this.#data.titles.length;
    const { side, left, top } = this.#layout(count);
    const box = picture.getBoundingClientRect();
    const perPx = WIDTH / box.width;
    const column = Math.floor(((clientX - box.left) * perPx - left) / side);
    const row = Math.floor(((clientY - box.top) * perPx - top) / side);
    const isInside = row >= 0 && column >= 0 && row < count && column < count && row !== column;
    return isInside ? [row, column] : null;
  }

  /** Reads a cell out and puts the frame around it. */
  #point(cell = this.#cell): void {
    if (this.#data === null || this.#data.reason !== null) return;
    this.#cell = cell;
    const { titles } = this.#data;
    const [row, column] = cell;
    const { side, left, top } = this.#layout(titles.length);
    const cursor = this.#picture.querySelector('.cursor');
    cursor?.setAttribute('x', String(left + column * side));
    cursor?.setAttribute('y', String(top + row * side));
    const at = this.#places.get(`${Math.min(row, column)} ${Math.max(row, column)}`);
    const who = `${titles[row]} – ${titles[column]}`;
    this.#reading.textContent = `${who}: ${at === undefined ? 'beyond the cutoff' : this.#words(at)}`;
  }

  #words(at: number): string {
    const { energyKJPerMol, advice } = this.#data!;
    const energy = energyKJPerMol[at] ?? null;
    const what = advice[at] ?? 'parts of one molecule';
    if (energy === null) return `energy not known, ${what}`;
    return `${signWord(energy)}, ${energyText(this.#data!, energy)} = ${multipleOfKT(this.#data!, energy)}, ${what}`;
  }

  #key(event: KeyboardEvent): void {
    const steps: Readonly<Record<string, readonly [number, number]>> = {
      ArrowUp: [-1, 0],
      ArrowDown: [1, 0],
      ArrowLeft: [0, -1],
      ArrowRight: [0, 1],
    };
    const step = steps[event.key];
    const count = this.#data?.titles.length ?? 0;
    if (step !== undefined) {
      let [row, column] = this.#cell;
      do {
        row += step[0];
        column += step[1];
      } while (row === column);
      if (row >= 0 && column >= 0 && row < count && column < count) this.#point([row, column]);
    } else if (event.key === 'Enter' || event.key === ' ') this.#choose();
    else return;
    event.preventDefault();
  }

  #choose(): void {
    const [first, second] = [Math.min(...this.#cell) + 1, Math.max(...this.#cell) + 1];
    if (this.#data !== null) this.#host.tell({ kind: 'choose', pair: { frame: this.#data.frame, first, second } });
  }

  #save(): void {
    const picture = this.#picture.querySelector('svg');
    if (picture !== null)
      this.#host.tell({ kind: 'save', text: standaloneSvg(picture), name: `frame-${this.#data!.frame}` });
  }

  #copy(): void {
    if (this.#data === null) return;
    const { titles, first, second, energyKJPerMol, advice } = this.#data;
    const rows = first.map((f, k) => [
      f,
      second[k]!,
      titles[f - 1]!,
      titles[second[k]! - 1]!,
      energyKJPerMol[k]!,
      advice[k]!,
    ]);
    const text = csv([['first', 'second', 'firstName', 'secondName', 'energyKJPerMol', 'advice'], ...rows]);
    this.#host.tell({ kind: 'copy', text, what: 'the energies' });
  }
}

function round(value: number): number {
  return Math.round(value * 100) / 100;
}
