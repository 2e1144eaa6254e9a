import { fixed, unitText } from '../../server/src/features/number-text';
import type { PairPlace } from '../../server/src/features/pair-place';
import type { ChosenPair, PlaceData } from '../../server/src/features/panel-place';
import type { FragmentRecord } from '../../server/src/features/records';
import { curveCsv, curveLegend, drawCurve } from './curve';
import { button, html } from './dom';
import type { Host } from './host';
import { pairsCsv } from './pair-csv';
import { PairTable } from './pair-table';
import { standaloneSvg } from './save-svg';
import {
  ADVICE_WORDS,
  adviceMark,
  CONTACT_WORDS,
  type Energies,
  energyNumber,
  energyOf,
  energyText,
  multipleOfKT,
  REGIME_WORDS,
  signWord,
  tableWords,
} from './words';

/** What the cursor is on: the pair in front, then the partners. */
export class HereView {
  readonly element = html('div', { class: 'here' });
  readonly #host: Host;
  readonly #pair = html('section', { 'aria-label': 'Chosen pair' });
  readonly #partnersSection = html('section', { 'aria-label': 'Partners' });
  readonly #partnersTitle = html('h2', {});
  readonly #partnersUnit = html('p', { class: 'quiet' });
  readonly #partners: PairTable;
  #place: PlaceData | null = null;
  #isUnfolded = false;

  constructor(host: Host) {
    this.#host = host;
    this.#partners = new PairTable({
      label: 'Partners in order of what they matter',
      choose: ({ first, second }) => {
        if (this.#place !== null) host.tell({ kind: 'choose', pair: { frame: this.#place.frame, first, second } });
      },
    });
    const copy = button('Copy partners as CSV', () =>
      host.tell({ kind: 'copy', text: pairsCsv(this.#place?.partners ?? []), what: 'the partners' }),
    );
    const actions = html('div', { class: 'actions' }, copy);
    this.#partnersSection.append(this.#partnersTitle, this.#partnersUnit, this.#partners.element, actions);
    this.element.append(this.#pair, this.#partnersSection);
  }

  show(place: PlaceData, energies: Energies): void {
    this.#place = place;
    const { chosen, here, partners, partnerCount } = place;
    const focused = this.#pair.contains(document.activeElement) ? document.activeElement?.textContent : null;
    this.#pair.replaceChildren(...(chosen === null ? this.#nothing(place) : this.#chosen(place, chosen, energies)));
    // The keyboard stays on the button that it was on.
    if (focused !== null) {
      [...this.#pair.querySelectorAll<HTMLElement>('button, summary')]
        .find((other) => other.textContent === focused)
        ?.focus();
    }
    const some = partners.length < partnerCount ? `the first ${partners.length} of ${partnerCount}` : `${partnerCount}`;
    this.#partnersTitle.textContent =
      here === null ? `Strongest pairs of this frame: ${some}` : `Partners of ${here.title}: ${some}`;
    this.#partnersUnit.textContent = tableWords(energies);
    this.#partnersSection.hidden = partners.length === 0;
    const source = {
      count: partners.length,
      rows: (from: number, count: number) => partners.slice(from, from + count),
    };
    this.#partners.show(source, energies, here?.fragment.fragment ?? null, null);
    if (chosen !== null) this.#partners.mark(chosen.pair.first, chosen.pair.second);
  }

  #nothing({ here, reason }: PlaceData): HTMLElement[] {
    return [
      html('h2', {}, here === null ? 'No pair' : here.title),
      ...(here === null ? [] : [html('p', {}, fragmentWords(here.fragment))]),
      html('p', { class: 'quiet' }, reason),
    ];
  }

  #chosen(
    { frame, centre, isAsked, relativePermittivity }: PlaceData,
    chosen: ChosenPair,
    energies: Energies,
  ): HTMLElement[] {
    const { titles, pair, picture, first, second } = chosen;
    const numbers: PairPlace = { frame, first: pair.first, second: pair.second };
    const image = html('img', {
      src: `data:image/svg+xml;utf8,${encodeURIComponent(picture.svg)}`,
      alt: picture.text,
      class: 'pair-picture',
    });
    const actions = html('div', { class: 'actions' });
    actions.append(
      button('Write this pair as a file…', () => this.#host.tell({ kind: 'write', pair: numbers })),
      button('Select its atoms', () => this.#host.tell({ kind: 'choose', pair: numbers })),
    );
    if (isAsked)
      actions.append(button('Follow the cursor again', () => this.#host.tell({ kind: 'choose', pair: null })));
    return [
      html('h2', {}, `${titles[0]} – ${titles[1]}`),
      ...verdict(chosen, relativePermittivity, energies),
      actions,
      image,
      ...this.#curve(chosen, energies),
      this.#details(
        html('summary', {}, 'Terms, angles and where the dipoles come from'),
        termTable(chosen, energies),
        html('p', {}, `${titles[0]}: ${fragmentWords(first)}`),
        html('p', {}, `${titles[1]}: ${fragmentWords(second)}`),
        html('p', { class: 'quiet' }, `Dipoles point from negative to positive charge, about the centre of ${centre}.`),
      ),
      html('p', { class: 'quiet' }, 'Estimate for triage, not a substitute for a quantum calculation.'),
    ];
  }

  /** What is unfolded stays so while the cursor moves on. */
  #details(...content: HTMLElement[]): HTMLDetailsElement {
    const details = html('details', { open: this.#isUnfolded }, ...content);
    details.addEventListener('toggle', () => {
      this.#isUnfolded = details.open;
    });
    return details;
  }

  #curve(chosen: ChosenPair, energies: Energies): HTMLElement[] {
    const { curve, pair } = chosen;
    if (curve === null) {
      return [
        html('p', { class: 'quiet' }, 'No curve: the energy of this pair is not known, or one lies within the other.'),
      ];
    }
    const picture = drawCurve(chosen, energies);
    const name = `curve-${pair.first}-${pair.second}`;
    const drawing = {
      kind: 'save',
      text: `${chosen.picture.svg}\n`,
      name: `pair-${pair.first}-${pair.second}`,
    } as const;
    const figure = html('figure', {}, picture, html('figcaption', {}, curveLegend()));
    const actions = html('div', { class: 'actions' });
    actions.append(
      button('Save drawing as SVG…', () => this.#host.tell(drawing)),
      button('Save curve as SVG…', () => this.#host.tell({ kind: 'save', text: standaloneSvg(picture), name })),
      button('Copy curve as CSV', () => this.#host.tell({ kind: 'copy', text: curveCsv(curve), what: 'the curve' })),
    );
    figure.append(actions);
    return [figure];
  }
}

/** What to know at a glance: the advice, how strong, and whether to trust it. */
function verdict(
  { pair, strengthKJPerMol }: ChosenPair,
  relativePermittivity: number,
  energies: Energies,
): HTMLElement[] {
  const { advice, regime, contact, distanceA, closest } = pair;
  const energy = energyOf(pair);
  const head = html('p', { class: `verdict ${advice ?? 'none'}` });
  head.append(
    html('strong', {}, `${adviceMark(advice)} ${advice ?? 'one molecule'}`),
    ` – ${advice === null ? 'the two are parts of one molecule' : ADVICE_WORDS[advice]}`,
  );
  const strength = { strengthKJPerMol, relativePermittivity };
  const error = plusMinus(pair.dipoleUncertaintyKJPerMol, pair.doubtKJPerMol);
  const size = energy === null ? 'The energy is not known.' : sizeWords(pair, energy, error, strength, energies);
  const trust = regime === null ? 'Nothing to judge the point dipole by' : `${regime}: ${REGIME_WORDS[regime]}`;
  const near = closest.distanceA === null ? '' : `, closest atoms ${fixed(closest.distanceA, 2)} Å`;
  const rotation = rotationWords(pair, energies);
  return [
    head,
    html('p', {}, size),
    html('p', {}, `${trust}; R ${fixed(distanceA, 2)} Å, ${CONTACT_WORDS[contact]}${near}.`),
    ...(rotation === '' ? [] : [html('p', {}, rotation)]),
  ];
}

/** The energy beside kT; where the point estimate is the larger one, it is what counts. */
function sizeWords(
  pair: ChosenPair['pair'],
  energy: number,
  error: number | null,
  { strengthKJPerMol, relativePermittivity }: { strengthKJPerMol: number; relativePermittivity: number },
  energies: Energies,
): string {
  const sign = signWord(energy);
  const size = `${sign[0]!.toUpperCase()}${sign.slice(1)}, ${energyNumber(energies, energy)}${
    error === null ? '' : ` ± ${energyNumber(energies, error)}`
  } ${unitText(energies.unit)}`;
  const { pointDipole } = pair.energyKJPerMol;
  const isUnscreened = pair.contact === 'touching' && relativePermittivity > 1;
  const whole = strengthKJPerMol / (isUnscreened ? relativePermittivity : 1);
  const strongest =
    pair.referenceKJPerMol === null
      ? `${size} by the point estimate`
      : pointDipole !== null && whole > 1.02 * Math.abs(energy)
        ? `${size}; the point dipole says ${energyText(energies, pointDipole)}, and the stronger of both counts`
        : size;
  const screening = isUnscreened ? ' without the screening of the medium, since the two touch' : '';
  return `${strongest}: ${timesKT(energies, strengthKJPerMol)}${screening}.`;
}

function timesKT(energies: Energies, energyKJPerMol: number): string {
  return multipleOfKT(energies, energyKJPerMol).replace(' kT', ' times kT');
}

function plusMinus(dipoles: number | null, doubt: number | null): number | null {
  const both = Math.hypot(dipoles ?? 0, doubt ?? 0);
  return both > 0 ? both : null;
}

function rotationWords({ thermal }: ChosenPair['pair'], energies: Energies): string {
  const { averageKJPerMol, motion } = thermal;
  if (averageKJPerMol === null || motion === null) return '';
  const words = {
    free: 'thermal rotation would average it away',
    hindered: 'rotation would be hindered',
    locked: 'the orientation would be locked',
  };
  return `If both could turn freely: ${energyText(energies, averageKJPerMol)} on average; ${words[motion]}.`;
}

function fragmentWords({
  chargeE,
  chargeSource,
  dipoleNormD,
  dipoleErrorD,
  dipoleSource,
  dipoleNote,
}: FragmentRecord): string {
  const error = dipoleErrorD === null ? '' : ` ± ${fixed(dipoleErrorD, 2)}`;
  const dipole =
    dipoleNormD === null ? 'dipole unknown' : `dipole ${fixed(dipoleNormD, 2)}${error} D (${dipoleSource})`;
  return `charge ${fixed(chargeE, 2)} e (${chargeSource}), ${dipole}${dipoleNote === null ? '' : `; ${dipoleNote}`}`;
}

const TERMS = [
  ['chargeCharge', 'charge – charge'],
  ['chargeDipole', 'charge – dipole'],
  ['dipoleDipole', 'dipole – dipole'],
  ['pointDipole', 'point dipole, sum of these'],
  ['induction', 'induction (in neither)'],
  ['dispersion', 'dispersion (in neither)'],
] as const;

/** What the numbers are made of. */
function termTable({ pair }: ChosenPair, energies: Energies): HTMLTableElement {
  const row = (name: string, value: string) =>
    html('tr', {}, html('th', { scope: 'row' }, name), html('td', {}, value));
  const angle = (value: number | null) => (value === null ? '–' : `${fixed(value, 0)}°`);
  const rows = [
    row('θ₁, θ₂, φ', [pair.theta1Deg, pair.theta2Deg, pair.phiDeg].map(angle).join(', ')),
    row('arrangement', pair.arrangement ?? '–'),
    ...TERMS.map(([term, name]) => row(name, energyText(energies, pair.energyKJPerMol[term]))),
    row(`reference (${pair.basis})`, energyText(energies, pair.referenceKJPerMol)),
    row('error of the point dipole', energyText(energies, pair.errorKJPerMol)),
    row('point dipole holds from', pair.validBeyondA === null ? '–' : `${fixed(pair.validBeyondA, 2)} Å`),
  ];
  return html('table', { class: 'terms' }, html('tbody', {}, ...rows));
}
