/** Pieces of SVG text for `pair-picture.ts`: elements, labels, arrows. Coordinates in px, y downwards. */

/** Kind of theme a picture is drawn for; `null` where it is not known. */
export type PictureTheme = 'light' | 'dark' | 'high-contrast';

export interface Palette {
  /** Words and thin lines. */
  readonly ink: string;
  /** Arrows and the energy bar. */
  readonly accent: string;
  /** Own background, or `null` to stay transparent. */
  readonly background: string | null;
}

/** Mid-tones with the same contrast against white and against a dark editor (about 4 : 1). */
const MID_TONES: Palette = { ink: '#7e7e7e', accent: '#3f82c0', background: null };
const PALETTES: Readonly<Record<PictureTheme, Palette>> = {
  light: { ink: '#555555', accent: '#1f6fb5', background: null },
  dark: { ink: '#b4b4b4', accent: '#5a9fdc', background: null },
  // There are light and dark high-contrast themes: the own background stands out in both.
  'high-contrast': { ink: '#ffffff', accent: '#ffffff', background: '#000000' },
};

export function paletteOf(theme: PictureTheme | null): Palette {
  return theme === null ? MID_TONES : PALETTES[theme];
}

/** To 1/100, never −0. */
export function rounded(value: number): number {
  return Math.round(value * 100) / 100 + 0;
}

type Attributes = Readonly<Record<string, string | number>>;

export function element(name: string, attributes: Attributes, content = ''): string {
  const list = Object.entries(attributes).map(
    ([key, value]) => ` ${key}="${typeof value === 'number' ? rounded(value) : escapeXml(value)}"`,
  );
  return content === '' ? `<${name}${list.join('')}/>` : `<${name}${list.join('')}>${content}</${name}>`;
}

export function line(x1: number, y1: number, x2: number, y2: number, stroke: string, more: Attributes = {}): string {
  return element('line', { x1, y1, x2, y2, stroke, ...more });
}

export function circle(cx: number, cy: number, r: number, more: Attributes): string {
  return element('circle', { cx, cy, r, ...more });
}

/** A closed outline through points. */
export function outline(points: readonly (readonly [number, number])[], more: Attributes): string {
  const path = points.map(([x, y]) => `${rounded(x)} ${rounded(y)}`).join('L');
  return element('path', { d: `M${path}Z`, ...more });
}

export const FONT_PX = 10.5;
/** Width of a character, px, generously. */
const CHARACTER_PX = 6.2;
/** From the baseline up to the middle of a small letter or digit. */
const MIDDLE_PX = 3.7;

/** A line of text whose middle is at height `y`. */
export function label(
  x: number,
  y: number,
  text: string,
  fill: string,
  anchor: 'start' | 'middle' | 'end' = 'start',
  more: Attributes = {},
): string {
  const side: Attributes = anchor === 'start' ? {} : { 'text-anchor': anchor };
  return element('text', { x, y: y + MIDDLE_PX, fill, ...side, ...more }, escapeXml(text));
}

export function textWidth(text: string): number {
  let width = 0;
  for (const character of text) width += character.codePointAt(0)! >= 0x1100 ? 2 * CHARACTER_PX : CHARACTER_PX;
  return width;
}

/** The longest start of `text` that fits, with "…" where something is cut. */
export function fitted(text: string, widthPx: number): string {
  if (textWidth(text) <= widthPx) return text;
  let kept = '';
  for (const character of text) {
    if (textWidth(`${kept}${character}…`) > widthPx) break;
    kept += character;
  }
  return `${kept}…`;
}

/** The first `count` characters, with "…" where something is cut. */
export function fittedCount(text: string, count: number): string {
  const characters = [...text];
  return characters.length <= count ? text : `${characters.slice(0, count - 1).join('')}…`;
}

/** What XML 1.0 cannot hold, line breaks, and marks that turn the direction of the text around them. */
const UNPRINTABLE = /[\p{Cc}\p{Cs}\u2028-\u202e\u2066-\u2069\ufffe\uffff]/gu;

export function printable(text: string): string {
  return text.replace(UNPRINTABLE, '�');
}

const ENTITIES: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };

export function escapeXml(text: string): string {
  return printable(text).replace(/[&<>"]/g, (character) => ENTITIES[character]!);
}

export interface Arrow {
  readonly tailX: number;
  readonly tailY: number;
  readonly tipX: number;
  readonly tipY: number;
}

/** `toward`: a solid wedge whose tip is nearer to the reader; `away`: a hashed wedge, as chemists draw bonds. */
export type ArrowStyle = 'plain' | 'toward' | 'away' | 'hollow';

const HEAD_LENGTH = 11;
const HEAD_SHARE = 0.6;
const HEAD_HALF_WIDTH = 0.45;
const WEDGE_HALF_WIDTH = 3.5;
const SHAFT_HALF_WIDTH = 1.2;
const HOLLOW_HALF_WIDTH = 3;
const HASHES = 8;

/** An arrow as one closed outline (a hashed one also as short strokes). */
export function arrow({ tailX, tailY, tipX, tipY }: Arrow, colour: string, style: ArrowStyle): string {
  const length = Math.hypot(tipX - tailX, tipY - tailY);
  if (rounded(length) === 0) return '';
  const [ux, uy] = [(tipX - tailX) / length, (tipY - tailY) / length];
  const at = (along: number, across: number) =>
    [tailX + along * ux - across * uy, tailY + along * uy + across * ux] as const;
  const head = Math.min(HEAD_LENGTH, HEAD_SHARE * length);
  const base = length - head;
  const slim = head / HEAD_LENGTH;
  const wide =
    style === 'plain' ? SHAFT_HALF_WIDTH : (style === 'hollow' ? HOLLOW_HALF_WIDTH : WEDGE_HALF_WIDTH) * slim;
  const narrow = style === 'toward' ? 0.3 : wide;
  const barb = HEAD_HALF_WIDTH * head + (style === 'plain' ? 0 : 1.5 * slim);
  const headPoints = [at(base, barb), at(length, 0), at(base, -barb)];
  if (style === 'away') return hashes(at, base, wide, colour) + outline(headPoints, { fill: colour });
  const points = [at(0, narrow), at(base, wide), ...headPoints, at(base, -wide), at(0, -narrow)];
  return outline(points, style === 'hollow' ? { fill: 'none', stroke: colour } : { fill: colour });
}

function hashes(
  at: (along: number, across: number) => readonly [number, number],
  base: number,
  wide: number,
  stroke: string,
): string {
  let path = '';
  for (let i = 0; i < HASHES; i++) {
    const share = (i + 0.5) / HASHES;
    const half = 1 + share * wide;
    const [x1, y1] = at(share * base, half);
    const [x2, y2] = at(share * base, -half);
    path += `M${rounded(x1)} ${rounded(y1)}L${rounded(x2)} ${rounded(y2)}`;
  }
  return element('path', { d: path, stroke, 'stroke-width': 1.8 });
}

/** "+1", "−2", "+0.5". */
export function signed(value: number): string {
  const size = String(Math.abs(rounded(value)));
  return (value < 0 ? '−' : '+') + size;
}
