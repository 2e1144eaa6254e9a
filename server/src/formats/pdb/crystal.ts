import type { FindingCollector } from '../../base/finding';
import type { FrameTree } from '../tree';
import type { FixedColumns } from './fields';

const LENGTHS = [
  [6, 15],
  [15, 24],
  [24, 33],
] as const;
const ANGLES = [
  [33, 40],
  [40, 47],
  [47, 54],
] as const;

/**
 * Reads CRYST1 into cell vectors: a along x, b in the xy plane (the standard orthogonal frame of the format). A 1×1×1 cell is the
 * format's placeholder for none. Source: wwPDB format 3.30, CRYST1 and SCALE records.
 */
export function readCrystalCell(columns: FixedColumns, line: number, problems: FindingCollector): FrameTree['cell'] {
  const [a, b, c] = LENGTHS.map((range) => columns.number(line, range)) as [number, number, number];
  const [alpha, beta, gamma] = ANGLES.map((range) => (columns.number(line, range) * Math.PI) / 180) as [
    number,
    number,
    number,
  ];
  const span = columns.span(line, [6, 54]);
  if (![a, b, c, alpha, beta, gamma].every(Number.isFinite)) {
    problems.add(
      'number-unreadable',
      span,
      () => 'CRYST1 does not hold three lengths and three angles in its columns.',
    );
    return null;
  }
  if (a === 1 && b === 1 && c === 1) return null;
  const cosA = cosine(alpha);
  const cosB = cosine(beta);
  const cosG = cosine(gamma);
  const sinG = Math.sqrt(1 - cosG * cosG);
  const cy = (cosA - cosB * cosG) / sinG;
  const cz2 = 1 - cosB * cosB - cy * cy;
  const vectorsA = Float64Array.of(a, 0, 0, b * cosG, b * sinG, 0, c * cosB, c * cy, c * Math.sqrt(Math.max(0, cz2)));
  return { vectorsA, periodic: [true, true, true], span };
}

/** Cosine that is exactly 0 at a right angle, so that orthogonal cells stay orthogonal. */
function cosine(angleRad: number): number {
  const value = Math.cos(angleRad);
  return Math.abs(value) < 1e-15 ? 0 : value;
}
