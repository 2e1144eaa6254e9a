import { fixed, unitText } from '../../server/src/features/number-text';
import type { PairPlace } from '../../server/src/features/pair-place';
import type { SeriesFrame } from '../../server/src/features/series';
import { PANEL_SERIES_REQUEST, type PanelSeries } from '../../server/src/lsp/protocol';
import { axes, type Frame, pathThrough, type Scale, scale } from './axes';
import { button, html, svg } from './dom';
import type { Host } from './host';
import { standaloneSvg } from './save-svg';
import { csv, type Energies, energyText, multipleOfKT } from './words';

const WIDTH = 470;
const HEIGHT = 260;
const FRAME: Frame = { left: 46, right: 460, top: 40, bottom: 220 };
/** Marks are drawn one by one up to so many frames. */
const MOST_MARKS = 120;
const MOST_EVENTS = 50;
const MARK_OF = { far: '○', edge: '◐', near: '●' } as const;

/** The chosen pair over the frames of its file. */
export class OverFramesView {
  readonly element = html('div', { class: 'over-frames' });
  readonly #host: Host;
  #round = 0;

  constructor(host: Host) {
    this.#host = host;
  }

  show(pair: PairPlace | null): void {
    const round = ++this.#round;
    if (pair === null) {
      this.element.replaceChildren(html('p', { class: 'quiet' }, 'No pair is chosen.'));
      return;
    }
    void this.#host.ask<PanelSeries>(PANEL_SERIES_REQUEST, pair).then((answer) => {
      if (answer === null || round !== this.#round) return;
      this.element.replaceChildren(...(answer.reason === null ? this.#series(answer, pair) : this.#none(answer)));
    });
  }

  #none({ titles, reason }: PanelSeries): HTMLElement[] {
    return [html('h2', {}, titles.join(' – ')), html('p', { class: 'quiet' }, reason)];
  }

  #series(series: PanelSeries, pair: PairPlace): HTMLElement[] {
    const picture = drawSeries(series);
    const name = `series-${pair.first}-${pair.second}`;
    const actions = html('div', { class: 'actions' });
    actions.append(
      button('Save as SVG…', () => this.#host.tell({ kind: 'save', text: standaloneSvg(picture), name })),
      button('Copy as CSV', () =>
        this.#host.tell({ kind: 'copy', text: seriesCsv(series.frames), what: 'the series' }),
      ),
    );
    const more = series.events.length - MOST_EVENTS;
    const events = html('ul', { class: 'events' });
    for (const event of series.events.slice(0, MOST_EVENTS)) events.append(this.#event(event, series));
    return [
      html('h2', {}, `${series.titles.join(' – ')} over ${series.frames.length} frames`),
      html(
        'figure',
        {},
        picture,
        html('figcaption', {}, 'Point dipole: ○ far (holds), ◐ edge, ● near (does not hold). The band is within ±kT.'),
      ),
      actions,
      html('h2', {}, series.events.length === 0 ? 'Nothing happens' : 'What happens'),
      events,
      ...(more > 0 ? [html('p', { class: 'quiet' }, `${more} more events are in the CSV of polewise series.`)] : []),
    ];
  }

  #event({ fromFrame, toFrame, what }: PanelSeries['events'][number], { frames }: PanelSeries): HTMLElement {
    const { first, second } = frames[toFrame - 1] ?? {};
    const name = fromFrame === toFrame ? `Frame ${toFrame}` : `Frames ${fromFrame}–${toFrame}`;
    if (first == null || second == null) return html('li', {}, `${name}: ${what}`);
    const go = button(name, () => this.#host.tell({ kind: 'choose', pair: { frame: toFrame, first, second } }));
    return html('li', {}, go, ` ${what}`);
  }
}

function drawSeries(series: PanelSeries): SVGSVGElement {
  const { frames, frame: present, kTKJPerMol } = series;
  const { left, right, top, bottom } = FRAME;
  const energies = frames.map(({ energyKJPerMol }) => energyKJPerMol);
  const known = energies.filter((energy) => energy !== null);
  const x = scale(1, Math.max(2, frames.length), left + 8, right - 8);
  const most = Math.max(1.6 * kTKJPerMol, ...known.map((energy) => 1.1 * energy));
  const least = Math.min(-1.6 * kTKJPerMol, ...known.map((energy) => 1.1 * energy));
  const y = scale(least, most, bottom, top);
  const picture = svg('svg', {
    viewBox: `0 0 ${WIDTH} ${HEIGHT}`,
    role: 'img',
    class: 'plot',
    'aria-label': seriesInWords(series),
  });
  picture.append(
    svg('rect', {
      class: 'thermal-band',
      x: left,
      width: right - left,
      y: y(kTKJPerMol),
      height: y(-kTKJPerMol) - y(kTKJPerMol),
    }),
    svg('path', { class: 'zero', d: `M${left} ${y(0).toFixed(1)}H${right}` }),
    svg('path', {
      class: 'curve reference',
      d: pathThrough(energies.map((energy, k) => (energy === null ? null : [x(k + 1), y(energy)]))),
    }),
    ...(frames.length <= MOST_MARKS ? marks(frames, x, y) : []),
    axes(FRAME, x, yInUnits(y, series), 'frame', `energy / ${unitText(series.unit)}`, true),
    svg(
      'g',
      { class: 'present' },
      svg('line', { x1: x(present), x2: x(present), y1: top, y2: bottom }),
      svg(
        'text',
        {
          x: x(present) + (present > frames.length * 0.7 ? -5 : 5),
          y: top - 6,
          'text-anchor': present > frames.length * 0.7 ? 'end' : 'start',
        },
        `frame ${present}`,
      ),
    ),
  );
  return picture;
}

function marks(frames: readonly SeriesFrame[], x: Scale, y: Scale): SVGTextElement[] {
  return frames.flatMap(({ energyKJPerMol, regime }, k) =>
    energyKJPerMol === null || regime === null
      ? []
      : [
          svg(
            'text',
            { class: 'mark', x: x(k + 1), y: y(energyKJPerMol) + 4, 'text-anchor': 'middle' },
            MARK_OF[regime],
          ),
        ],
  );
}

function yInUnits(y: Scale, { unitsPerKJPerMol }: Energies): Scale {
  const at = (value: number) => y(value / unitsPerKJPerMol);
  return Object.assign(at, { least: y.least * unitsPerKJPerMol, most: y.most * unitsPerKJPerMol });
}

function seriesInWords(series: PanelSeries): string {
  const { frames, titles } = series;
  const known = frames.filter(({ energyKJPerMol }) => energyKJPerMol !== null);
  const [first] = known;
  const last = known[known.length - 1];
  const say = (frame: SeriesFrame | undefined) =>
    frame === undefined
      ? ''
      : `frame ${frame.frame}: ${energyText(series, frame.energyKJPerMol)} = ${multipleOfKT(series, frame.energyKJPerMol!)} at ${fixed(frame.distanceA, 2)} Å`;
  return `Energy of ${titles.join(' and ')} over ${frames.length} frames. ${say(first)}; ${say(last)}.`;
}

function seriesCsv(frames: readonly SeriesFrame[]): string {
  const names = [
    'frame',
    'first',
    'second',
    'distanceA',
    'energyKJPerMol',
    'energyFrom',
    'pointDipoleKJPerMol',
    'regime',
    'contact',
    'advice',
    'missing',
  ] as const;
  return csv([names, ...frames.map((frame) => names.map((name) => frame[name]))]);
}
