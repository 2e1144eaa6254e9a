import { fixed, unitText } from '../../server/src/features/number-text';
import type { ChosenPair } from '../../server/src/features/panel-place';
import type { CurvePoint, SeparationCurve } from '../../server/src/features/separation-curve';
import { axes, type Frame, pathThrough, type Scale, scale } from './axes';
import { html, svg } from './dom';
import { csv, type Energies, energyText } from './words';

const WIDTH = 470;
const HEIGHT = 280;
const FRAME: Frame = { left: 46, right: 460, top: 42, bottom: 238 };
/** Room above and below what has to be seen, and of the thermal band. */
const HEADROOM = 1.15;
const LEAST_KT = 1.6;
/** Separations shorter than this share of the present one may run out of the picture. */
const LEADING_SHARE = 0.93;

/** Names of the shaded stretches, with what keeps them apart without colour: how densely they are hatched. */
const STRETCHES = ['far', 'edge', 'near', 'clash'] as const;
type Stretch = (typeof STRETCHES)[number];

/** Draws the energy of a pair against the separation of its centres, with the band within ±kT and where the point dipole holds. */
export function drawCurve({ curve, titles }: ChosenPair, energies: Energies): SVGSVGElement {
  const { points, presentA, validBeyondA } = curve!;
  const { left, right, top, bottom } = FRAME;
  const x = scale(points[0]!.distanceA, points[points.length - 1]!.distanceA, left, right);
  const y = energyScale(curve!, energies, bottom, top);
  const kT = energies.kTKJPerMol;
  const line = (value: (point: CurvePoint) => number | null, name: string) =>
    svg('path', {
      class: `curve ${name}`,
      d: pathThrough(points.map((p) => (value(p) === null ? null : [x(p.distanceA), y(value(p)!)]))),
    });
  const title = `Energy of ${titles[0]} and ${titles[1]} against the separation of their centres`;
  const clip = svg('clipPath', { id: 'curve-inside' });
  clip.append(svg('rect', { x: left, y: top, width: right - left, height: bottom - top }));
  const inside = svg(
    'g',
    { 'clip-path': 'url(#curve-inside)' },
    ...stretches(points, x),
    svg('rect', { class: 'thermal-band', x: left, width: right - left, y: y(kT), height: Math.max(0, y(-kT) - y(kT)) }),
    svg('path', { class: 'zero', d: `M${left} ${y(0).toFixed(1)}H${right}` }),
    svg('path', { class: 'doubt', d: doubtOutline(points, x, y) }),
    line((p) => p.thermalKJPerMol, 'thermal'),
    line((p) => p.pointKJPerMol, 'point'),
    line((p) => p.referenceKJPerMol, 'reference'),
  );
  const picture = svg(
    'svg',
    {
      viewBox: `0 0 ${WIDTH} ${HEIGHT}`,
      role: 'img',
      'aria-label': curveInWords(curve!, energies, title),
      class: 'plot',
    },
    clip,
    inside,
    ...stretchNames(points, x),
    axes(FRAME, x, inUnits(y, energies), 'separation of the centres / Å', `energy / ${unitText(energies.unit)}`),
    svg('text', { class: 'quiet', x: right - 4, y: y(kT) - 4, 'text-anchor': 'end' }, '±kT'),
    upright(x(presentA), 'present', `now ${fixed(presentA, 2)} Å`, x),
  );
  if (validBeyondA !== null && validBeyondA > x.least && validBeyondA < x.most) {
    picture.append(upright(x(validBeyondA), 'holds', `holds from ${fixed(validBeyondA, 1)} Å`, x));
  }
  const present = presentOf(points, presentA);
  for (const [value, name] of [
    [present.pointKJPerMol, 'point'],
    [present.referenceKJPerMol, 'reference'],
  ] as const) {
    if (value !== null) picture.append(svg('circle', { class: `spot ${name}`, cx: x(presentA), cy: y(value), r: 3.5 }));
  }
  return picture;
}

/** The lines by their look. */
export function curveLegend(): HTMLElement {
  const entry = (name: string, text: string) => {
    const sample = svg('svg', { width: 30, height: 10, 'aria-hidden': 'true' });
    sample.append(
      name === 'doubt' || name === 'thermal-band'
        ? svg('rect', { class: name, x: 0, y: 0, width: 30, height: 10 })
        : svg('path', { class: `curve ${name}`, d: 'M0 5H30' }),
    );
    return html('li', {}, sample, text);
  };
  return html(
    'ul',
    { class: 'legend' },
    entry('reference', 'reference'),
    entry('doubt', 'its ±'),
    entry('point', 'point dipole'),
    entry('thermal', 'average where both turn freely'),
    entry('thermal-band', 'within ±kT'),
  );
}

/** The curve as CSV; separations in Å, energies in kJ/mol. */
export function curveCsv({ points }: SeparationCurve): string {
  const head = [
    'distanceA',
    'referenceKJPerMol',
    'plusMinusKJPerMol',
    'pointKJPerMol',
    'thermalKJPerMol',
    'regime',
    'contact',
  ];
  const rows = points.map((p) => [
    p.distanceA,
    p.referenceKJPerMol,
    p.plusMinusKJPerMol,
    p.pointKJPerMol,
    p.thermalKJPerMol,
    p.regime,
    p.contact,
  ]);
  return csv([head, ...rows]);
}

function inUnits(y: Scale, { unitsPerKJPerMol }: Energies): Scale {
  const at = (value: number) => y(value / unitsPerKJPerMol);
  return Object.assign(at, { least: y.least * unitsPerKJPerMol, most: y.most * unitsPerKJPerMol });
}

function presentOf(points: readonly CurvePoint[], presentA: number): CurvePoint {
  return points.reduce((best, p) =>
    Math.abs(p.distanceA - presentA) < Math.abs(best.distanceA - presentA) ? p : best,
  );
}

/** What counts at the present separation and beyond has to be seen, and the band of kT. */
function energyScale(
  { points, presentA }: SeparationCurve,
  { kTKJPerMol }: Energies,
  low: number,
  high: number,
): Scale {
  let most = LEAST_KT * kTKJPerMol;
  let least = -most;
  for (const { distanceA, referenceKJPerMol, pointKJPerMol, thermalKJPerMol } of points) {
    if (distanceA < LEADING_SHARE * presentA) continue;
    for (const value of [referenceKJPerMol, pointKJPerMol, thermalKJPerMol]) {
      if (value === null) continue;
      most = Math.max(most, HEADROOM * value);
      least = Math.min(least, HEADROOM * value);
    }
  }
  return scale(least, most, low, high);
}

function stretchOf({ contact, regime }: CurvePoint): Stretch | null {
  return contact === 'clash' ? 'clash' : regime;
}

interface Run {
  readonly stretch: Stretch;
  readonly fromA: number;
  readonly toA: number;
}

/** Neighbouring points of the same regime as one stretch; the border lies half-way between two points. */
function runsOf(points: readonly CurvePoint[]): Run[] {
  const runs: Run[] = [];
  let begin = 0;
  for (let k = 1; k <= points.length; k++) {
    const stretch = stretchOf(points[begin]!);
    if (k < points.length && stretchOf(points[k]!) === stretch) continue;
    const half = (a: number, b: number) => (points[a]!.distanceA + points[b]!.distanceA) / 2;
    if (stretch !== null) {
      const fromA = begin === 0 ? points[0]!.distanceA : half(begin - 1, begin);
      runs.push({ stretch, fromA, toA: k === points.length ? points[k - 1]!.distanceA : half(k - 1, k) });
    }
    begin = k;
  }
  return runs;
}

function stretches(points: readonly CurvePoint[], x: Scale): SVGElement[] {
  const { top, bottom } = FRAME;
  return runsOf(points).map(({ stretch, fromA, toA }) =>
    svg('rect', {
      class: `stretch ${stretch}`,
      x: x(fromA),
      width: x(toA) - x(fromA),
      y: top,
      height: bottom - top,
    }),
  );
}

function stretchNames(points: readonly CurvePoint[], x: Scale): SVGElement[] {
  return runsOf(points).flatMap(({ stretch, fromA, toA }) => {
    const width = x(toA) - x(fromA);
    const border = svg('line', { class: 'border', x1: x(toA), x2: x(toA), y1: FRAME.top - 14, y2: FRAME.bottom });
    const name = svg(
      'text',
      { class: 'stretch-name', x: x(fromA) + width / 2, y: FRAME.top - 4, 'text-anchor': 'middle' },
      stretch,
    );
    const isLast = x(toA) >= FRAME.right - 0.5;
    return [...(isLast ? [] : [border]), ...(width > 8 * stretch.length ? [name] : [])];
  });
}

/** A line from top to bottom with a word beside it, on the side where there is room. */
function upright(at: number, name: string, text: string, x: Scale): SVGGElement {
  const isRight = at < x(x.least + 0.62 * (x.most - x.least));
  const y = name === 'present' ? FRAME.bottom - 8 : FRAME.bottom - 24;
  return svg(
    'g',
    { class: name },
    svg('line', { x1: at, x2: at, y1: FRAME.top, y2: FRAME.bottom }),
    svg('text', { x: at + (isRight ? 5 : -5), y, 'text-anchor': isRight ? 'start' : 'end' }, text),
  );
}

function doubtOutline(points: readonly CurvePoint[], x: Scale, y: Scale): string {
  const known = points.filter((p) => p.referenceKJPerMol !== null && p.plusMinusKJPerMol !== null);
  if (known.length < 2) return '';
  const side = (sign: number) =>
    known.map(
      (p) => `${x(p.distanceA).toFixed(1)} ${y(p.referenceKJPerMol! + sign * p.plusMinusKJPerMol!).toFixed(1)}`,
    );
  return `M${[...side(1), ...side(-1).reverse()].join('L')}Z`;
}

/** The curve for those who do not see it. */
function curveInWords({ points, presentA, validBeyondA }: SeparationCurve, energies: Energies, title: string): string {
  const say = (point: CurvePoint) =>
    `at ${fixed(point.distanceA, 1)} Å reference ${energyText(energies, point.referenceKJPerMol)}, point dipole ${energyText(energies, point.pointKJPerMol)}`;
  const marks = [
    presentOf(points, presentA),
    ...[0.25, 0.5, 1].map((s) => points[Math.round(s * (points.length - 1))]!),
  ];
  const holds = validBeyondA === null ? '' : ` The point dipole holds from ${fixed(validBeyondA, 1)} Å.`;
  return `${title}: now ${marks.map(say).join('; ')}.${holds}`;
}
