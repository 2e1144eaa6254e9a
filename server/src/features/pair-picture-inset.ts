import { type ArrowStyle, arrow, circle, element, label, type Palette, rounded } from './pair-picture-parts';
import type { Side } from './pair-picture-scene';

/** Heights of the first and last row of the scene: names and heading, R and φ. */
export const HEADING_Y = 8;
export const CAPTION_Y = 109;
const INSET = { x: 316, y: 58, r: 30 } as const;
/** Least turn between the two numbers around the inset. */
const INSET_LABEL_TURN_DEG = 36;
const NUMBER_GAP = 7;
const SMALL_PX = 9.5;
const RADIANS = Math.PI / 180;

/** In place of the inset. */
export function whyNoArrows({ ink }: Palette): string {
  const lines = ['one encloses', 'the centre of', 'the other'];
  return lines
    .map((text, i) => label(INSET.x, INSET.y + 13 * (i - 1), text, ink, 'middle', { 'font-size': SMALL_PX }))
    .join('');
}

/** Looking along the line of centres from the first to the second: the first one's part across it points up. */
export function inset(first: Side, second: Side, phiDeg: number | null, palette: Palette): string {
  const { x, y, r } = INSET;
  const { ink, accent } = palette;
  const longest = Math.max(first.arrowLength, second.arrowLength) || 1;
  const across = (side: Side) => (r * side.arrowLength * Math.sin((side.thetaDeg ?? 0) * RADIANS)) / longest;
  const turned = (degrees: number, radius: number) =>
    [x + radius * Math.sin(degrees * RADIANS), y - radius * Math.cos(degrees * RADIANS)] as const;
  const part = (side: Side, degrees: number, style: ArrowStyle) => {
    const [tipX, tipY] = turned(degrees, across(side));
    return side.thetaDeg === null ? '' : arrow({ tailX: x, tailY: y, tipX, tipY }, accent, style);
  };
  const number = (side: Side, text: string, degrees: number) => {
    const [tx, ty] = turned(degrees, r + NUMBER_GAP);
    return across(side) < 1 ? '' : label(tx, ty, text, ink, 'middle', { 'font-size': SMALL_PX });
  };
  const turn = phiDeg ?? 0;
  const apart = Math.max(Math.abs(turn), INSET_LABEL_TURN_DEG) * (turn < 0 ? -1 : 1);
  const caption = phiDeg === null ? 'φ –' : `φ ${signedDegrees(phiDeg)}`;
  return (
    circle(x, y, r, { fill: ink, 'fill-opacity': 0.12, stroke: ink, 'stroke-opacity': 0.55 }) +
    turnArc(turn, turned, palette) +
    part(second, turn, 'hollow') +
    part(first, 0, 'plain') +
    circle(x, y, 1.6, { fill: ink }) +
    number(first, '1', 0) +
    number(second, '2', across(first) < 1 ? turn : apart) +
    label(x, HEADING_Y, 'seen 1 → 2', ink, 'middle', { 'font-size': SMALL_PX }) +
    label(x, CAPTION_Y, caption, ink, 'middle')
  );
}

function signedDegrees(degrees: number): string {
  const whole = rounded(Math.round(degrees));
  return `${whole < 0 ? '−' : ''}${Math.abs(whole)}°`;
}

/** φ as a thick stretch of the rim, clockwise from the first one's part. */
function turnArc(
  phiDeg: number,
  turned: (degrees: number, radius: number) => readonly [number, number],
  { ink }: Palette,
): string {
  if (Math.round(phiDeg) === 0) return '';
  const [x1, y1] = turned(0, INSET.r);
  const [x2, y2] = turned(phiDeg, INSET.r);
  const radius = `${INSET.r} ${INSET.r}`;
  const d = `M${rounded(x1)} ${rounded(y1)}A${radius} 0 0 ${phiDeg > 0 ? 1 : 0} ${rounded(x2)} ${rounded(y2)}`;
  return element('path', { d, fill: 'none', stroke: ink, 'stroke-width': 2.4 });
}
