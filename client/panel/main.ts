import './panel.css';
import { fixed, plural } from '../../server/src/features/number-text';
import type { PairPlace } from '../../server/src/features/pair-place';
import type { PanelPlace } from '../../server/src/lsp/protocol';
import { AllPairsView } from './all-pairs';
import { html } from './dom';
import { HereView } from './here';
import { Host } from './host';
import { MatrixView } from './matrix';
import type { FromHost } from './messages';
import { OverFramesView } from './over-frames';
import { Tabs } from './tabs';
import { energyText } from './words';

const VIEWS = [
  { id: 'here', title: 'At the cursor' },
  { id: 'pairs', title: 'All pairs' },
  { id: 'matrix', title: 'Fragment by fragment' },
  { id: 'frames', title: 'Over frames' },
] as const;
type ViewId = (typeof VIEWS)[number]['id'];

/** The panel: what the cursor is on comes first, the whole frame is one step away. */
class Panel {
  readonly #host = new Host((message) => this.#hear(message));
  readonly #title = html('h1', {});
  readonly #facts = html('p', { class: 'quiet' });
  readonly #state = html('p', { class: 'state', role: 'status' });
  readonly #here = new HereView(this.#host);
  readonly #pairs = new AllPairsView(this.#host);
  readonly #matrix = new MatrixView(this.#host);
  readonly #frames = new OverFramesView(this.#host);
  readonly #tabs = new Tabs<ViewId>(
    'Views',
    VIEWS.map(({ id, title }) => ({ id, title, element: this.#view(id).element })),
    (id) => {
      this.#keep();
      this.#fill(id);
    },
  );
  #uri = this.#host.kept.uri ?? '';
  #pair: PairPlace | null = this.#host.kept.pair ?? null;
  #last: PanelPlace | null = null;
  /** What each view of a whole frame was last filled with. */
  readonly #filled = new Map<ViewId, string>();

  constructor() {
    const main = html('main', {}, this.#tabs.element);
    document.body.append(html('header', {}, this.#title, this.#facts, this.#state), main);
    const kept = VIEWS.find(({ id }) => id === this.#host.kept.view);
    if (kept !== undefined) this.#tabs.select(kept.id);
    this.#tabs.element.hidden = true;
    this.#host.tell({ kind: 'ready', pair: this.#pair });
  }

  #view(id: ViewId): { readonly element: HTMLElement } {
    return { here: this.#here, pairs: this.#pairs, matrix: this.#matrix, frames: this.#frames }[id];
  }

  #keep(): void {
    this.#host.keep({ uri: this.#uri, view: this.#tabs.selected, pair: this.#pair });
  }

  #hear(message: Exclude<FromHost, { kind: 'answer' }>): void {
    if (message.kind === 'state') {
      this.#filled.clear();
      // What was computed of an earlier text is not left to be read as if it held.
      document.body.classList.toggle('busy', message.state === 'busy');
      this.#state.textContent = message.text;
      if (message.state === 'empty') this.#empty();
      return;
    }
    const { uri, file, answer } = message;
    if (uri !== this.#uri) this.#filled.clear();
    this.#uri = uri;
    this.#last = answer;
    const { place } = answer;
    document.body.classList.remove('busy');
    this.#state.textContent = place === null ? 'No coordinates could be read.' : '';
    if (place === null) {
      this.#title.textContent = file;
      this.#empty();
      return;
    }
    this.#title.textContent = place.frames > 1 ? `${file}, frame ${place.frame} of ${place.frames}` : file;
    this.#facts.textContent = [
      plural(place.atoms, 'atom'),
      plural(place.fragments, 'fragment'),
      `${fixed(place.temperatureK, 2)} K`,
      `εᵣ ${place.relativePermittivity}`,
      `kT ${energyText(answer, place.kTKJPerMol)}`,
    ].join(' · ');
    const { chosen, frame, isAsked } = place;
    this.#pair = isAsked && chosen !== null ? { frame, first: chosen.pair.first, second: chosen.pair.second } : null;
    this.#tabs.element.hidden = false;
    this.#tabs.enable('frames', place.frames > 1);
    this.#keep();
    this.#fill(this.#tabs.selected);
  }

  #empty(): void {
    this.#last = null;
    this.#tabs.element.hidden = true;
    this.#facts.textContent = '';
  }

  /**
   * Fills the view that is seen; the others are filled when they are. What stands for the whole frame is not asked for again while only the
   * cursor moves: each new analysis is told of as busy, and forgets what is filled.
   */
  #fill(id: ViewId): void {
    const place = this.#last?.place;
    if (this.#last === null || place === null || place === undefined) return;
    const { frame, chosen } = place;
    if (id === 'here') this.#here.show(place, this.#last);
    const pair = chosen === null ? null : { frame, first: chosen.pair.first, second: chosen.pair.second };
    const subject = JSON.stringify(id === 'frames' ? pair : frame);
    const isFilled = this.#filled.get(id) === subject;
    this.#filled.set(id, subject);
    if (id === 'pairs' && !isFilled) this.#pairs.show(frame);
    if (id === 'matrix' && !isFilled) this.#matrix.show(frame, pair);
    if (id === 'frames' && !isFilled) this.#frames.show(pair);
    if (id === 'pairs' && chosen !== null) this.#pairs.mark(chosen.pair.first, chosen.pair.second);
  }
}

new Panel();
