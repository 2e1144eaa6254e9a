import { fixed } from '../../server/src/features/number-text';
import { svg } from './dom';

/** A linear scale from numbers to px. */
export interface Scale {
  (value: number): number;
  readonly least: number;
  readonly most: number;
}

/** Takes values from `least` to `most` to a stretch of the drawing, evenly. */
export function scale(least: number, most: number, fromPx: number, toPx: number): Scale {
  const at = (value: number) => fromPx + ((value - least) / (most - least)) * (toPx - fromPx);
  return Object.assign(at, { least, most });
}

/** Round numbers over a range, about `wanted` of them. */
export function ticks(least: number, most: number, wanted: number): number[] {
  const rough = (most - least) / Math.max(1, wanted);
  if (!(rough > 0) || !Number.isFinite(rough)) return [];
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = power * ([1, 2, 5, 10].find((factor) => factor * power >= rough * 0.999) ?? 10);
  const found: number[] = [];
  for (let k = Math.ceil(least / step - 1e-9); k * step <= most * (1 + 1e-12) + 1e-9 * step; k++) found.push(k * step);
  return found;
}

function tickDigits(values: readonly number[]): number {
  const step = values.length > 1 ? values[1]! - values[0]! : 1;
  return Math.max(0, Math.min(6, -Math.floor(Math.log10(step) + 1e-9)));
}

export interface Frame {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** Both axes with their ticks and names. */
export function axes(frame: Frame, x: Scale, y: Scale, xName: string, yName: string, wholeX = false): SVGGElement {
  const { left, right, top, bottom } = frame;
  const group = svg('g', { class: 'axes' });
  const xTicks = ticks(x.least, x.most, (right - left) / 70).filter((value) => !wholeX || Number.isInteger(value));
  const yTicks = ticks(y.least, y.most, (bottom - top) / 36);
  for (const value of xTicks) {
    const at = x(value);
    group.append(
      svg('line', { x1: at, x2: at, y1: bottom, y2: bottom + 4 }),
      svg('text', { x: at, y: bottom + 16, 'text-anchor': 'middle' }, fixed(value, tickDigits(xTicks))),
    );
  }
  for (const value of yTicks) {
    const at = y(value);
    group.append(
      svg('line', { x1: left - 4, x2: left, y1: at, y2: at }),
      svg('text', { x: left - 7, y: at + 4, 'text-anchor': 'end' }, fixed(value, tickDigits(yTicks))),
    );
  }
  group.append(
    svg('path', { d: `M${left} ${top}V${bottom}H${right}`, fill: 'none' }),
    svg('text', { x: right, y: bottom + 30, 'text-anchor': 'end' }, xName),
    svg('text', { x: 2, y: 12, 'text-anchor': 'start' }, yName),
  );
  return group;
}

/** A path through points; a null breaks it. */
export function pathThrough(points: readonly (readonly [number, number] | null)[]): string {
  let path = '';
  let pen = 'M';
  for (const point of points) {
    if (point === null) pen = 'M';
    else {
      path += `${pen}${point[0].toFixed(1)} ${point[1].toFixed(1)}`;
      pen = 'L';
    }
  }
  return path;
}
