import { svg } from './dom';

/** Bounds of the classes by which energies are coloured, as multiples of kT. */
const BOUNDS = [0.1, 0.5, 1, 5] as const;
const WORDS = ['below 0.1 kT', '0.1 to 0.5 kT', '0.5 to 1 kT', '1 to 5 kT', 'above 5 kT'] as const;

/** How much an energy is beside kT: 0 for next to nothing, up to 4. */
export function classOf(energyKJPerMol: number, kTKJPerMol: number): number {
  const multiple = Math.abs(energyKJPerMol) / kTKJPerMol;
  return BOUNDS.filter((bound) => multiple >= bound).length;
}

export const CLASSES = WORDS.length;

/** A cell as a piece of a path: attractive ones are squares, repulsive ones diamonds, so that the sign needs no colour. */
export function cellPath(isAttractive: boolean, x: number, y: number, size: number): string {
  const gap = size > 6 ? 0.5 : 0;
  if (isAttractive) return `M${x + gap} ${y + gap}h${size - 2 * gap}v${size - 2 * gap}h${-(size - 2 * gap)}z`;
  const half = size / 2;
  return `M${x + half} ${y}l${half} ${half}l${-half} ${half}l${-half} ${-half}z`;
}

/** What shape and shade mean. */
export function ktLegend(y: number): SVGGElement {
  const group = svg('g', { class: 'kt-legend' });
  const side = 12;
  for (const [row, name] of (['attractive', 'repulsive'] as const).entries()) {
    const top = y + row * 20;
    group.append(svg('text', { x: 0, y: top + 10 }, name));
    for (let k = 1; k < CLASSES; k++) {
      const x = 70 + (k - 1) * 100;
      group.append(
        svg('path', { class: `${name} class-${k}`, d: cellPath(row === 0, x, top, side) }),
        svg('text', { x: x + side + 5, y: top + 10 }, WORDS[k]!),
      );
    }
  }
  return group;
}
