import { ION_CHARGE_E } from '../analysis/settings';
import type { PairPictureInput } from './pair-picture';
import { CAPTION_Y, HEADING_Y, inset, whyNoArrows } from './pair-picture-inset';
import {
  type ArrowStyle,
  arrow,
  circle,
  element,
  fitted,
  label,
  line,
  type Palette,
  rounded,
  signed,
  textWidth,
} from './pair-picture-parts';

/** Width of the side view where the round inset stands beside it. */
const SIDE_VIEW_WIDTH = 266;
const AXIS_Y = 60;
const LARGEST_RADIUS = 42;
const EDGE = 4;
/** Room beside a centre for half an arrow, its sign, and the value of its angle. */
const SIDE_ROOM = 54;
const LONGEST_ARROW = 62;
const SIGN_GAP = 7;
/** Between the arrows of both fragments along the line: two signs. */
const ARROW_GAP = 26;
const ARC_RADIUS = 13;
/** Half the height of the value of an angle, and what keeps it off its arc. */
const LABEL_HALF_Y = 6;
const LABEL_GAP = 3;
const LABEL_OFFSET_Y = 18;
/** From here on an angle counts as wide: its value stands beside its arc. */
const ACUTE_DEG = 80;
/** The line of centres goes on this far beyond the second centre. */
const BEYOND = 30;
const MARK_GAP = 13;
const BADGE_RADIUS = 10;
const BADGE_PX = 10.5;
const BADGE_SMALL_PX = 8;
/** From here on a dipole is drawn as turned out of the plane (sine of the angle out of it). */
const OUT_OF_PLANE = Math.sin(Math.PI / 12);
const RADIANS = Math.PI / 180;

/** One fragment as drawn. */
export interface Side {
  readonly number: '₁' | '₂';
  readonly name: string;
  readonly x: number;
  readonly radius: number;
  readonly chargeE: number | null;
  readonly dipoleD: number | null;
  /** `null` where no arrow is drawn. */
  readonly thetaDeg: number | null;
  readonly arrowLength: number;
  /** 1 where the part across the line points up, −1 where down. */
  readonly up: 1 | -1;
  readonly style: ArrowStyle;
}

export function isEnclosed({ distanceA, extent1A, extent2A }: PairPictureInput): boolean {
  return distanceA !== null && distanceA < Math.max(extent1A ?? 0, extent2A ?? 0);
}

export function isIon(chargeE: number | null): chargeE is number {
  return chargeE !== null && Math.abs(chargeE) >= ION_CHARGE_E;
}

/** Whether a dipole is zero as written, with two decimals. */
export function isZeroDipole(dipoleD: number | null): boolean {
  return dipoleD !== null && dipoleD < 0.005;
}

/** The side view, and beside it the inset or why there is no arrow. */
export function scene(input: PairPictureInput, palette: Palette, fullWidth: number): string {
  const enclosed = isEnclosed(input);
  const hasArrow =
    !enclosed && ((input.dipole1D && input.theta1Deg !== null) || (input.dipole2D && input.theta2Deg !== null));
  const width = enclosed || hasArrow ? SIDE_VIEW_WIDTH : fullWidth;
  if (input.distanceA === null)
    return names(input, fullWidth / 3, (2 * fullWidth) / 3, fullWidth, palette, [true, true]);
  const [first, second] = sidesOf(input, input.distanceA, width, enclosed);
  const beside = enclosed ? whyNoArrows(palette) : hasArrow ? inset(first, second, input.phiDeg, palette) : '';
  return (
    disc(first, palette) +
    disc(second, palette) +
    lineOfCentres(first, second, palette) +
    distance(first.x, second.x, input.distanceA, palette) +
    names(input, first.x, second.x, width, palette, [
      enclosed || first.thetaDeg !== null,
      enclosed || second.thetaDeg !== null,
    ]) +
    (enclosed
      ? centreMark(first, palette) + centreMark(second, palette)
      : moments(first, second, palette) + moments(second, first, palette)) +
    beside
  );
}

function sidesOf(input: PairPictureInput, r: number, width: number, enclosed: boolean): [Side, Side] {
  const [a1, a2] = [input.extent1A ?? 0, input.extent2A ?? 0];
  // Division by zero gives Infinity, which min leaves out; a pair without any size is drawn one px to the ångström.
  const pxPerA = Math.min(
    LARGEST_RADIUS / Math.max(a1, a2),
    (width - 2 * SIDE_ROOM) / r,
    (width - SIDE_ROOM - EDGE) / (r + Math.max(a1, a2)),
    (width - 2 * EDGE) / (r + a1 + a2),
  );
  const scale = Number.isFinite(pxPerA) ? pxPerA : 1;
  const apart = r * scale;
  const [left, right] = [Math.max(SIDE_ROOM, a1 * scale + EDGE), Math.max(SIDE_ROOM, a2 * scale + EDGE)];
  const x1 = (width - left - apart - right) / 2 + left;
  const pxPerD = enclosed ? 0 : pxPerDebye(input, apart);
  const arrowOf = (dipoleD: number | null, thetaDeg: number | null) =>
    enclosed || dipoleD === null || dipoleD === 0
      ? { dipoleD, thetaDeg: null, arrowLength: 0 }
      : { dipoleD, thetaDeg, arrowLength: dipoleD * pxPerD };
  const phi = input.phiDeg;
  const outward = phi === null ? 0 : Math.sin(phi * RADIANS) * Math.sin((input.theta2Deg ?? 0) * RADIANS);
  return [
    {
      number: '₁',
      name: input.name1,
      x: x1,
      radius: a1 * scale,
      chargeE: input.charge1E,
      up: 1,
      style: 'plain',
      ...arrowOf(input.dipole1D, input.theta1Deg),
    },
    {
      number: '₂',
      name: input.name2,
      x: x1 + apart,
      radius: a2 * scale,
      chargeE: input.charge2E,
      up: phi !== null && Math.abs(phi) > 90 ? -1 : 1,
      style: Math.abs(outward) < OUT_OF_PLANE ? 'plain' : outward > 0 ? 'toward' : 'away',
      ...arrowOf(input.dipole2D, input.theta2Deg),
    },
  ];
}

/** The larger dipole as long as fits: no longer than the limit, and clear of the other along the line. */
function pxPerDebye({ dipole1D, dipole2D, theta1Deg, theta2Deg }: PairPictureInput, apart: number): number {
  const along = (dipoleD: number | null, thetaDeg: number | null) =>
    thetaDeg === null ? 0 : ((dipoleD ?? 0) * Math.abs(Math.cos(thetaDeg * RADIANS))) / 2;
  const both = along(dipole1D, theta1Deg) + along(dipole2D, theta2Deg);
  return Math.min(LONGEST_ARROW / Math.max(dipole1D ?? 0, dipole2D ?? 0), Math.max(0, apart - ARROW_GAP) / both);
}

function disc({ x, radius }: Side, { ink }: Palette): string {
  const look = { fill: ink, 'fill-opacity': 0.12, stroke: ink, 'stroke-opacity': 0.55 };
  return radius < 0.01 ? '' : circle(x, AXIS_Y, radius, look);
}

/** Room a fragment without an arrow takes on the line for its charge or question mark. */
function gapOf(side: Side): number {
  return side.thetaDeg !== null ? 0 : isIon(side.chargeE) ? BADGE_RADIUS : MARK_GAP;
}

/** Dashed between the centres, and beyond the second where its angle starts. */
function lineOfCentres(first: Side, second: Side, { ink }: Palette): string {
  const dashed = { 'stroke-dasharray': '3 2.5' };
  const [from, to] = [first.x + gapOf(first), second.x - gapOf(second)];
  const between = to > from ? line(from, AXIS_Y, to, AXIS_Y, ink, dashed) : '';
  if (second.thetaDeg === null) return between;
  return between + line(second.x, AXIS_Y, second.x + BEYOND, AXIS_Y, ink, dashed);
}

/** R on a line of its own below, from centre to centre. */
function distance(x1: number, x2: number, distanceA: number, { ink }: Palette): string {
  const text = `R ${distanceA.toFixed(2)} Å`;
  const half = textWidth(text) / 2;
  const middle = (x1 + x2) / 2;
  const ticks = [x1, x2].map((x) => line(x, CAPTION_Y - 4, x, CAPTION_Y + 4, ink)).join('');
  if (x2 - x1 < 2 * half + 12) {
    return ticks + line(x1, CAPTION_Y, x2, CAPTION_Y, ink) + label(x2 + 6, CAPTION_Y, text, ink);
  }
  return (
    ticks +
    line(x1, CAPTION_Y, middle - half, CAPTION_Y, ink) +
    label(middle, CAPTION_Y, text, ink, 'middle') +
    line(middle + half, CAPTION_Y, x2, CAPTION_Y, ink)
  );
}

/** Both names above their fragments, each in its own half; with the charges where no badge shows them. */
function names(
  input: PairPictureInput,
  x1: number,
  x2: number,
  width: number,
  { ink }: Palette,
  withCharge: readonly [boolean, boolean],
): string {
  const middle = (x1 + x2) / 2;
  const [charge1, charge2] = [input.charge1E, input.charge2E].map((chargeE, i) =>
    withCharge[i] && isIon(chargeE) ? ` (${signed(chargeE)})` : '',
  );
  const one = (number: string, name: string, tail: string, x: number, from: number, to: number) => {
    const text = `${number} ${fitted(name, to - from - textWidth(`${number} ${tail}`))}${tail}`;
    const half = textWidth(text) / 2;
    return label(Math.min(Math.max(x, from + half), to - half), HEADING_Y, text, ink, 'middle', {
      'font-weight': 'bold',
    });
  };
  return (
    one('1', input.name1, charge1!, x1, EDGE, middle - EDGE) +
    one('2', input.name2, charge2!, x2, middle + EDGE, width - EDGE)
  );
}

function centreMark({ x }: Side, { ink }: Palette): string {
  return circle(x, AXIS_Y, 1.6, { fill: ink });
}

/** What stands in a fragment: its dipole with its angle, its charge, or that its dipole is not known or zero. */
function moments(side: Side, other: Side, palette: Palette): string {
  const { x, thetaDeg, chargeE, dipoleD } = side;
  if (thetaDeg !== null) return dipole(side, thetaDeg, other, palette) + centreMark(side, palette);
  if (isIon(chargeE)) return badge(x, chargeE, palette);
  return label(x, AXIS_Y, isZeroDipole(dipoleD) ? 'μ 0' : 'μ ?', palette.ink, 'middle', { 'font-weight': 'bold' });
}

function dipole(side: Side, thetaDeg: number, other: Side, palette: Palette): string {
  const { x, up, arrowLength, style } = side;
  const [ux, uy] = [Math.cos(thetaDeg * RADIANS), -up * Math.sin(thetaDeg * RADIANS)];
  const half = arrowLength / 2;
  const shaft = { tailX: x - half * ux, tailY: AXIS_Y - half * uy, tipX: x + half * ux, tipY: AXIS_Y + half * uy };
  const sign = (text: string, along: number) =>
    label(x + along * ux, AXIS_Y + along * uy, text, palette.ink, 'middle', { 'font-weight': 'bold', 'font-size': 14 });
  const text = `θ${side.number} ${rounded(Math.round(thetaDeg))}°`;
  // An arc that the signs of a short arrow do not touch.
  const arcRadius = half > ARC_RADIUS ? ARC_RADIUS : half + 2 * SIGN_GAP;
  const offset = Math.sqrt(arcRadius ** 2 - (LABEL_OFFSET_Y - LABEL_HALF_Y) ** 2) + LABEL_GAP;
  const right = fitsBetween(side, other, offset + textWidth(text));
  // Opposite to both halves of the arrow: the two free quarters around the centre.
  const rightY = AXIS_Y + (thetaDeg < ACUTE_DEG ? up : -up) * LABEL_OFFSET_Y;
  const leftY = AXIS_Y + (thetaDeg < ACUTE_DEG ? -up : up) * LABEL_OFFSET_Y;
  const value = right
    ? label(x + offset, rightY, text, palette.ink)
    : label(x - offset, leftY, text, palette.ink, 'end');
  const signs = sign('+', half + SIGN_GAP) + sign('−', -half - SIGN_GAP);
  return arc(x, AXIS_Y, arcRadius, thetaDeg, up, palette) + arrow(shaft, palette.accent, style) + signs + value;
}

/** Whether a text to the right of a centre keeps clear of the other fragment's arrow. */
function fitsBetween(side: Side, other: Side, width: number): boolean {
  if (other.x < side.x) return true;
  const reach =
    other.thetaDeg === null
      ? gapOf(other)
      : (other.arrowLength / 2 + 2 * SIGN_GAP) * Math.abs(Math.cos(other.thetaDeg * RADIANS)) + SIGN_GAP;
  return side.x + width + EDGE <= other.x - reach;
}

/** From the direction of the line of centres, counter-clockwise where `up` is 1. */
function arc(x: number, y: number, r: number, degrees: number, up: 1 | -1, { ink }: Palette): string {
  if (Math.round(degrees) === 0) return '';
  const [endX, endY] = [x + r * Math.cos(degrees * RADIANS), y - up * r * Math.sin(degrees * RADIANS)];
  const d = `M${rounded(x + r)} ${rounded(y)}A${r} ${r} 0 0 ${up === 1 ? 0 : 1} ${rounded(endX)} ${rounded(endY)}`;
  return element('path', { d, fill: 'none', stroke: ink });
}

/** The charge of an ion without an arrow, in a circle at its centre. */
function badge(x: number, chargeE: number, { ink }: Palette): string {
  const size = Math.abs(chargeE);
  const text = signed(size < 9.95 ? Number(chargeE.toFixed(1)) : Math.round(chargeE)).slice(
    0,
    size < 99.5 ? undefined : 1,
  );
  const fontPx = text.length > 2 ? BADGE_SMALL_PX : BADGE_PX;
  return (
    circle(x, AXIS_Y, BADGE_RADIUS, { fill: 'none', stroke: ink, 'stroke-width': 1.4 }) +
    label(x, AXIS_Y, text, ink, 'middle', { 'font-weight': 'bold', 'font-size': fontPx })
  );
}
