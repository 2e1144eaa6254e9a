import type { HoverData } from '../features/hover';
import { fixed, NOTHING, plural } from '../features/number-text';
import { pairPicture } from '../features/pair-picture';
import { pictureInputOf } from '../features/pair-picture-input';
import type { PictureTheme } from '../features/pair-picture-parts';
import type { PartnerView } from '../features/partner-view';
import type { FragmentRecord, Maybe } from '../features/records';
import { BOHR_A, COULOMB_METRE_E_A, DEBYE_E_A } from '../physics/constants';
import { type EnergyUnit, energyUnitsPerKJPerMol } from '../physics/units';

const CAUTION = 'Estimate for triage, not a substitute for a quantum calculation.';
/** Text of the file, so that it stands as written and means nothing to Markdown. */
export function escapeMarkdown(text: string): string {
  return text.replace(/[\\`*_{}[\]()#!|<>~&]/g, '\\$&').replace(/\s+/g, ' ');
}

/** What a fragment is called: its place in the chain, and its name where that says more. */
function nameOf({ label, name }: FragmentRecord): string {
  if (label === null) return escapeMarkdown(name);
  return escapeMarkdown(label.split(':')[1] === name ? label : `${label} ${name}`);
}

/** How a hover is drawn. */
export interface HoverLook {
  readonly unit: EnergyUnit;
  readonly theme: PictureTheme | null;
  /** Base64 of the UTF-8 bytes of a text. */
  base64(text: string): string;
}

/** A hover as Markdown. */
export function renderHover(data: HoverData, look: HoverLook): string {
  switch (data.kind) {
    case 'key':
      return `**${escapeMarkdown(data.key)}**\n\n${escapeMarkdown(data.text)}`;
    case 'dipole':
      return renderDipole(data);
    case 'fragment':
      return renderFragment(data, look);
    case 'frame':
      return renderFrame(data, look.unit);
  }
}

function renderDipole(data: Extract<HoverData, { kind: 'dipole' }>): string {
  const { sizeEA, chargesEA, angleDeg } = data;
  const units = [
    `${fixed(sizeEA / DEBYE_E_A, 3)} D`,
    `${fixed(sizeEA, 4)} e·Å`,
    `${fixed(sizeEA / BOHR_A, 4)} a.u.`,
    `${(sizeEA / COULOMB_METRE_E_A).toExponential(3).replace('-', '−')} C·m`,
  ];
  const compared =
    chargesEA === null
      ? 'There are no charges to compare it with.'
      : `The charges give ${fixed(chargesEA / DEBYE_E_A, 3)} D${angleDeg === null ? '' : `, ${fixed(angleDeg, 0)}° from it`}.`;
  return (
    `**${escapeMarkdown(data.key)}** of ${nameOf(data.fragment)} (fragment ${data.fragment.fragment})\n\n` +
    `${units.join(' = ')}\n\n${compared} From negative to positive charge, about the centre of ${data.centre}.\n\n${escapeMarkdown(data.text)}`
  );
}

function dipoleInWords({ dipoleNormD, dipoleD, dipoleSource, dipoleErrorD }: FragmentRecord): string {
  if (dipoleNormD === null) return 'dipole unknown';
  const error = dipoleErrorD === null ? '' : ` ± ${fixed(dipoleErrorD, 2)}`;
  return `dipole ${fixed(dipoleNormD, dipoleErrorD === null ? 3 : 2)}${error} D (${dipoleSource}${dipoleD === null ? ', no direction' : ''})`;
}

/** What to know at a glance comes first and fits into what a hover shows without scrolling: fragment, verdict, picture. */
function renderFragment(data: Extract<HoverData, { kind: 'fragment' }>, look: HoverLook): string {
  const { fragment, partners, partnerCount } = data;
  const head =
    `**${nameOf(fragment)}** · fragment ${fragment.fragment}, atom ${data.atomNumber}` +
    ` · charge ${fixed(fragment.chargeE, 2)} e (${fragment.chargeSource}) · ${dipoleInWords(fragment)}`;
  const [strongest] = partners;
  if (strongest === undefined) {
    const why =
      fragment.centreA === null
        ? 'It could not be read whole (or has no end), so its pairs are not estimated.'
        : 'No partner within the cutoff.';
    return `${head}\n\n${why}`;
  }
  const more = partnerCount - partners.length;
  return [
    head,
    verdict(strongest, look.unit, data.kTKJPerMol),
    picture(data, strongest, look),
    partnerTable(partners, look.unit, data.kTKJPerMol, fragment.fragment),
    ...(more > 0 ? [`${more} weaker partner${more === 1 ? '' : 's'} not shown.`] : []),
    ...originInWords(data),
    `*${CAUTION}*`,
  ].join('\n\n');
}

function originInWords({ fragment, centre }: Extract<HoverData, { kind: 'fragment' }>): string[] {
  const { dipoleD, dipoleNote, dipoleAngleErrorDeg, dipoleNormD } = fragment;
  const sentences: string[] = [];
  if (dipoleD !== null) {
    const vector = dipoleD.map((value) => fixed(value, 2)).join(', ');
    sentences.push(`Dipole (${vector}) D, from negative to positive charge, about the centre of ${centre}.`);
  }
  if (dipoleNote !== null) {
    const angle =
      dipoleAngleErrorDeg === null ? '' : ` Its direction is off by ${fixed(dipoleAngleErrorDeg, 0)}° on average.`;
    sentences.push(
      `${dipoleNormD === null ? 'No dipole: ' : 'Dipole: '}${escapeMarkdown(dipoleNote)}${dipoleNote.endsWith('.') ? '' : '.'}${angle}`,
    );
  }
  return sentences.length === 0 ? [] : [sentences.join(' ')];
}

function verdict({ partner, pair }: PartnerView, unit: EnergyUnit, kTKJPerMol: number): string {
  const energy = pair.referenceKJPerMol ?? pair.energyKJPerMol.pointDipole;
  const who = `Strongest partner **${nameOf(partner)} (${partner.fragment})** at ${fixed(pair.distanceA, 2)} Å`;
  const advice = pair.advice === null ? 'parts of one molecule' : `**${pair.advice}**`;
  if (energy === null) return `${who}: energy not known, ${advice}`;
  const kind = energy < 0 ? 'attractive' : energy > 0 ? 'repulsive' : 'no interaction';
  const scale = energyUnitsPerKJPerMol(unit, kTKJPerMol);
  const { dipoleUncertaintyKJPerMol } = pair;
  const error = dipoleUncertaintyKJPerMol === null ? '' : ` ± ${fixed(dipoleUncertaintyKJPerMol * scale, 1)}`;
  const size = `${fixed(energy * scale, 1)}${error} ${unit}`;
  const regime = pair.regime === null ? 'no basis to judge the point dipole' : `point dipole ${pair.regime}`;
  return `${who}: ${kind}, ${size} = ${fixed(Math.abs(energy) / kTKJPerMol, 1)} kT, ${regime}, ${advice}`;
}

/** The strongest pair as a picture, and the same in words. */
function picture(
  { fragment, kTKJPerMol }: Extract<HoverData, { kind: 'fragment' }>,
  { partner, pair }: PartnerView,
  { unit, theme, base64 }: HoverLook,
): string {
  const { svg, text } = pairPicture(pictureInputOf(fragment, partner, pair, { unit, kTKJPerMol, theme }));
  const words = escapeMarkdown(text);
  return `![${words}](data:image/svg+xml;base64,${base64(svg)}|width=360,height=164)`;
}

function renderFrame(data: Extract<HoverData, { kind: 'frame' }>, unit: EnergyUnit): string {
  const { regimes } = data;
  const scale = energyUnitsPerKJPerMol(unit, data.kTKJPerMol);
  const head = `**Frame ${data.frame} of ${data.frames}** · ${plural(data.atoms, 'atom')} · ${plural(data.fragments, 'fragment')} · ${plural(data.pairCount, 'pair')}`;
  if (data.pairCount === 0) return head;
  const sum = `Sum of the energies ${fixed(data.sumKJPerMol * scale, 1)} ${unit}, over the ${data.summedPairs} pairs that have one. Point dipole: far ${regimes.far}, edge ${regimes.edge}, near ${regimes.near}, without basis ${regimes.none}.`;
  const { energyKJPerMol, nonAdditiveKJPerMol, reason } = data.induction;
  const induction =
    energyKJPerMol === null || nonAdditiveKJPerMol === null
      ? `Induction of the whole: ${escapeMarkdown(reason ?? '')}`
      : `Induction of the whole ${fixed(energyKJPerMol * scale, 1)} ${unit}, of which ${fixed(nonAdditiveKJPerMol * scale, 1)} is not in the sum of pairs.`;
  return `${head}\n\n${sum}\n\n${induction}\n\n${partnerTable(data.strongest, unit, data.kTKJPerMol, null)}\n\n*${CAUTION}*`;
}

function partnerTable(
  views: readonly PartnerView[],
  unit: EnergyUnit,
  kTKJPerMol: number,
  from: number | null,
): string {
  const scale = energyUnitsPerKJPerMol(unit, kTKJPerMol);
  const rows = views.map(({ partner, pair, strengthKJPerMol }) => {
    const { pointDipole } = pair.energyKJPerMol;
    const inUnit = (value: Maybe) => fixed(value === null ? null : value * scale, 2);
    const cells = [
      from === null ? `${pair.first}–${pair.second}` : `${nameOf(partner)} (${partner.fragment})`,
      pair.advice ?? 'same molecule',
      fixed(pair.distanceA, 2),
      [pair.theta1Deg, pair.theta2Deg, pair.phiDeg].map((angle) => fixed(angle, 0)).join(' / '),
      inUnit(pair.referenceKJPerMol),
      inUnit(pointDipole),
      inUnit(pair.energyKJPerMol.induction),
      inUnit(pair.energyKJPerMol.dispersion),
      fixed(strengthKJPerMol / kTKJPerMol, 1),
      pair.regime ?? NOTHING,
      pair.contact,
    ];
    return `| ${cells.join(' | ')} |`;
  });
  return [
    `Energies in ${unit}: reference (E), point dipole (point), induction (ind.), dispersion (disp.); strength beside kT.`,
    '',
    `| ${from === null ? 'pair' : 'partner'} | advice | R/Å | θ₁ / θ₂ / φ | E | point | ind. | disp. | /kT | regime | contact |`,
    '| --- | --- | ---: | :---: | ---: | ---: | ---: | ---: | ---: | --- | --- |',
    ...rows,
  ].join('\n');
}
