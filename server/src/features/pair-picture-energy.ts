import { fixed, unitText } from './number-text';
import type { PairPictureInput } from './pair-picture';
import { element, FONT_PX, label, line, outline, type Palette, textWidth } from './pair-picture-parts';

const REFERENCE_Y = 124;
const BAR_Y = 140;
const POINT_Y = 157;
const BAR_HALF = 4;
const BAND_HALF = 7;
const MARK_HALF = 4;
const MARK_LENGTH = 6;
/** Room for a word on either side of the axis. */
const WORD_ROOM = 66;
const EDGE = 4;
/** Room left on the axis beyond the largest energy. */
const HEADROOM = 1.08;
/** The axis reaches at least this many kT. */
const LEAST_KT = 1.5;
const TEXT_PX = 10;

/** Energies on an axis from attractive to repulsive: the ±kT band, the reference as a bar, the point dipole as a mark. */
export function energyBar(input: PairPictureInput, palette: Palette, width: number): string {
  const { referenceKJPerMol: reference, pointKJPerMol: point, kTKJPerMol: kT } = input;
  const { ink } = palette;
  if (reference === null && point === null) return label(width / 2, BAR_Y, 'energy not known', ink, 'middle');
  const zero = width / 2;
  const reach = Math.max(Math.abs(reference ?? 0), Math.abs(point ?? 0)) * HEADROOM;
  const pxPerKJ = (zero - WORD_ROOM) / (Math.max(reach, LEAST_KT * kT) || 1);
  const at = (energy: number) => zero + energy * pxPerKJ;
  // The band's value stands opposite to the reference's.
  const bandSide = reference !== null && reference > 0 ? -1 : 1;
  const band =
    input.unit === 'kT' ? '±kT' : `±kT = ${shownEnergy(kT * input.unitsPerKJPerMol)} ${unitText(input.unit)}`;
  return (
    words(reference ?? point ?? 0, palette, width, input) +
    thermalBand(kT * pxPerKJ, zero, ink) +
    line(WORD_ROOM, BAR_Y, width - WORD_ROOM, BAR_Y, ink) +
    (reference === null ? '' : referenceMark(reference, zero, at(reference), palette, input)) +
    line(zero, BAR_Y - BAND_HALF - 2, zero, BAR_Y + BAND_HALF + 2, ink) +
    (point === null ? '' : pointMark(point, zero, at(point), palette, input)) +
    small(zero + bandSide * 2 * EDGE, REFERENCE_Y, band, ink, bandSide === 1 ? 'start' : 'end')
  );
}

/** Two decimals, none where the number is large. */
export function shownEnergy(value: number): string {
  const size = Math.abs(value);
  if (size >= 1e6) return value.toExponential(2).replace('e+', 'e').replace('-', '−');
  return fixed(value, size >= 1000 ? 0 : 2);
}

/** The sign of an energy as shown: 0 where its digits are all zero. */
export function shownSign(energyKJPerMol: number, unitsPerKJPerMol: number): number {
  return /[1-9]/.test(shownEnergy(energyKJPerMol * unitsPerKJPerMol)) ? Math.sign(energyKJPerMol) : 0;
}

function small(x: number, y: number, text: string, ink: string, anchor: 'start' | 'middle' | 'end'): string {
  return label(x, y, text, ink, anchor, { 'font-size': TEXT_PX });
}

/** Both words, the one that holds in bold with a mark. */
function words(energy: number, { ink }: Palette, width: number, { unitsPerKJPerMol }: PairPictureInput): string {
  const sign = shownSign(energy, unitsPerKJPerMol);
  const word = (x: number, text: string, anchor: 'start' | 'end', holds: boolean) =>
    label(x, BAR_Y, text, ink, anchor, holds ? { 'font-weight': 'bold' } : {});
  return (
    word(WORD_ROOM - EDGE, 'attractive', 'end', sign < 0) +
    word(width - WORD_ROOM + EDGE, 'repulsive', 'start', sign > 0)
  );
}

function thermalBand(half: number, zero: number, ink: string): string {
  const [left, right, top, bottom] = [zero - half, zero + half, BAR_Y - BAND_HALF, BAR_Y + BAND_HALF];
  const edge = { 'stroke-dasharray': '2 1.5' };
  return (
    element('rect', { x: left, y: top, width: 2 * half, height: bottom - top, fill: ink, 'fill-opacity': 0.22 }) +
    line(left, top, left, bottom, ink, edge) +
    line(right, top, right, bottom, ink, edge)
  );
}

/** A filled bar from zero and a filled mark above its end. */
function referenceMark(energy: number, zero: number, x: number, palette: Palette, input: PairPictureInput): string {
  const top = BAR_Y - BAR_HALF;
  const bar = { x: Math.min(zero, x), y: top, width: Math.abs(x - zero), height: 2 * BAR_HALF, fill: palette.accent };
  return (
    element('rect', bar) +
    mark(x, top, -1, { fill: palette.ink }) +
    valueLabel('reference', energy, zero, x, REFERENCE_Y, palette, input)
  );
}

/** A hollow mark below. */
function pointMark(energy: number, zero: number, x: number, palette: Palette, input: PairPictureInput): string {
  return (
    mark(x, BAR_Y + BAR_HALF, 1, { fill: 'none', stroke: palette.ink, 'stroke-width': 1.3 }) +
    valueLabel('point dipole', energy, zero, x, POINT_Y, palette, input)
  );
}

function mark(x: number, y: number, side: 1 | -1, look: Readonly<Record<string, string | number>>): string {
  const base = y + side * MARK_LENGTH;
  const left = [x - MARK_HALF, base] as const;
  const right = [x + MARK_HALF, base] as const;
  return outline([[x, y], right, left], look);
}

/** At its mark, but within the half of the axis where the energy lies. */
function valueLabel(
  name: string,
  energy: number,
  zero: number,
  x: number,
  y: number,
  { ink }: Palette,
  input: PairPictureInput,
): string {
  const text = `${name} ${shownEnergy(energy * input.unitsPerKJPerMol)} ${unitText(input.unit)}`;
  const half = (textWidth(text) * TEXT_PX) / FONT_PX / 2;
  const [from, to] = energy > 0 ? [zero + EDGE, 2 * zero - EDGE] : [EDGE, zero - EDGE];
  return small(Math.min(Math.max(x, from + half), to - half), y, text, ink, 'middle');
}
