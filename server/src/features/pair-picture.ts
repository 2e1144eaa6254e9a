import { ION_CHARGE_E } from '../analysis/settings';
import type { EnergyUnit } from '../physics/units';
import { energyBar } from './pair-picture-energy';
import {
  type ArrowStyle,
  arrow,
  circle,
  element,
  FONT_PX,
  fitted,
  label,
  line,
  type Palette,
  type PictureTheme,
  paletteOf,
  rounded,
  signed,
  textWidth,
} from './pair-picture-parts';
import { pairInWords } from './pair-picture-words';

/** What a picture of a pair shows; `null` (or a number that is not finite) where something is not known. */
export interface PairPictureInput {
  readonly name1: string;
  readonly name2: string;
  readonly distanceA: number | null;
  readonly extent1A: number | null;
  readonly extent2A: number | null;
  readonly charge1E: number | null;
  readonly charge2E: number | null;
  /** Sizes of the dipoles, debye. */
  readonly dipole1D: number | null;
  readonly dipole2D: number | null;
  readonly theta1Deg: number | null;
  readonly theta2Deg: number | null;
  readonly phiDeg: number | null;
  readonly pointKJPerMol: number | null;
  readonly referenceKJPerMol: number | null;
  readonly kTKJPerMol: number;
  /** The unit in which energies are written, and how many of it make one kJ/mol. */
  readonly unit: EnergyUnit;
  readonly unitsPerKJPerMol: number;
  /** `null` where it is not known: mid-tones. */
  readonly theme: PictureTheme | null;
}

export interface PairPicture {
  /** A whole SVG document, without scripts, styles or references. */
  readonly svg: string;
  /** The same in words: plain text, not escaped for any markup. */
  readonly text: string;
}

const WIDTH = 360;
const HEIGHT = 164;
/** Width of the side view where the round inset stands beside it. */
const SIDE_VIEW_WIDTH = 266;
const NAME_Y = 8;
const AXIS_Y = 60;
const DISTANCE_Y = 109;
const LARGEST_RADIUS = 42;
const EDGE = 4;
/** Room beside a centre for half an arrow, its sign, and the value of its angle. */
const SIDE_ROOM = 54;
const LONGEST_ARROW = 66;
const SIGN_GAP = 7;
const ARC_RADIUS = 13;
const LABEL_OFFSET_X = 8;
const LABEL_OFFSET_Y = 18;
const BADGE_RADIUS = 10;
const INSET = { x: 316, y: 58, r: 28 } as const;
const INSET_ARC_RADIUS = 11;
/** Least turn between the two numbers around the inset. */
const INSET_LABEL_TURN_DEG = 36;
/** From here on a dipole is drawn as turned out of the plane (sine of the angle out of it). */
const OUT_OF_PLANE = Math.sin(Math.PI / 12);
/** Nothing physical here is larger; what is, counts as unknown. */
const LARGEST = 1e9;
const RADIANS = Math.PI / 180;

/** One fragment as drawn. */
interface Side {
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

/** A small picture of a pair, at a glance, and the same in words. */
export function pairPicture(input: PairPictureInput): PairPicture {
  const known = withoutNonsense(input);
  const palette = paletteOf(known.theme);
  const text = pairInWords(known);
  const background = palette.background === null ? '' : element('rect', { width: WIDTH, height: HEIGHT, fill: palette.background });
  const content = background + scene(known, palette) + energyBar(known, palette, WIDTH);
  const svg = element(
    'svg',
    {
      xmlns: 'http://www.w3.org/2000/svg',
      width: WIDTH,
      height: HEIGHT,
      viewBox: `0 0 ${WIDTH} ${HEIGHT}`,
      'font-family': 'sans-serif',
      'font-size': FONT_PX,
      role: 'img',
      'aria-label': text,
    },
    content,
  );
  return { svg, text };
}

function knownNumber(value: number | null, least = -LARGEST): number | null {
  return value !== null && value >= least && value <= LARGEST ? value : null;
}

function withoutNonsense(input: PairPictureInput): PairPictureInput {
  return {
    ...input,
    distanceA: knownNumber(input.distanceA, 0),
    extent1A: knownNumber(input.extent1A, 0),
    extent2A: knownNumber(input.extent2A, 0),
    charge1E: knownNumber(input.charge1E),
    charge2E: knownNumber(input.charge2E),
    dipole1D: knownNumber(input.dipole1D, 0),
    dipole2D: knownNumber(input.dipole2D, 0),
    theta1Deg: knownNumber(input.theta1Deg),
    theta2Deg: knownNumber(input.theta2Deg),
    phiDeg: knownNumber(input.phiDeg),
    pointKJPerMol: knownNumber(input.pointKJPerMol),
    referenceKJPerMol: knownNumber(input.referenceKJPerMol),
    kTKJPerMol: knownNumber(input.kTKJPerMol, 0) ?? 0,
    unitsPerKJPerMol: knownNumber(input.unitsPerKJPerMol, 0) ?? 1,
  };
}

function isEnclosed({ distanceA, extent1A, extent2A }: PairPictureInput): boolean {
  return distanceA !== null && distanceA < Math.max(extent1A ?? 0, extent2A ?? 0);
}

function isIon(chargeE: number | null): chargeE is number {
  return chargeE !== null && Math.abs(chargeE) >= ION_CHARGE_E;
}

/** The side view, and beside it the inset or why there is no arrow. */
function scene(input: PairPictureInput, palette: Palette): string {
  const enclosed = isEnclosed(input);
  const hasArrow =
    !enclosed && ((input.dipole1D && input.theta1Deg !== null) || (input.dipole2D && input.theta2Deg !== null));
  const width = enclosed || hasArrow ? SIDE_VIEW_WIDTH : WIDTH;
  if (input.distanceA === null) return names(input, WIDTH / 3, (2 * WIDTH) / 3, WIDTH, palette, true);
  const [first, second] = sidesOf(input, input.distanceA, width, enclosed);
  const beside = enclosed ? whyNoArrows(palette) : hasArrow ? inset(first, second, input.phiDeg, palette) : '';
  return (
    disc(first, palette) +
    disc(second, palette) +
    lineOfCentres(first, second, palette) +
    distance(first.x, second.x, input.distanceA, palette) +
    names(input, first.x, second.x, width, palette, enclosed) +
    (enclosed ? '' : moments(first, second, palette) + moments(second, first, palette)) +
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
  const longest = Math.min(LONGEST_ARROW, Math.max(0, apart - 2 * SIGN_GAP - EDGE));
  const pxPerD = longest / Math.max(input.dipole1D ?? 0, input.dipole2D ?? 0);
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

function disc({ x, radius }: Side, { ink }: Palette): string {
  const look = { fill: ink, 'fill-opacity': 0.12, stroke: ink, 'stroke-opacity': 0.55 };
  return radius < 0.01 ? '' : circle(x, AXIS_Y, radius, look);
}
