import type { EnergyUnit } from '../physics/units';
import { energyBar } from './pair-picture-energy';
import { element, FONT_PX, type PictureTheme, paletteOf } from './pair-picture-parts';
import { scene } from './pair-picture-scene';
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
/** Nothing physical here is larger; what is, counts as unknown. What is smaller counts as zero. */
const LARGEST = 1e9;
const SMALLEST = 1e-9;
/** A small picture of a pair, at a glance, and the same in words. */
export function pairPicture(input: PairPictureInput): PairPicture {
  const known = withoutNonsense(input);
  const palette = paletteOf(known.theme);
  const text = pairInWords(known);
  const background =
    palette.background === null ? '' : element('rect', { width: WIDTH, height: HEIGHT, fill: palette.background });
  const content = background + scene(known, palette, WIDTH) + energyBar(known, palette, WIDTH);
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
  if (value === null || !(value >= least && value <= LARGEST)) return null;
  return Math.abs(value) < SMALLEST ? 0 : value;
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
