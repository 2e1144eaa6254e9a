import { add, cross, dot, length, scale } from './linear.js';
import type { Vec } from './types.js';

/** Invented molecules in random orientations, from a seeded generator, written as annotated files. */

export interface Molecule {
  name: string;
  symbols: string[];
  positions: Vec[];
  charges: number[];
}

/** Mulberry32: a small public-domain generator, uniform in [0, 1). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

function molecule(name: string, rows: [string, number, number, number, number][]): Molecule {
  return {
    name,
    symbols: rows.map((row) => row[0]),
    positions: rows.map((row): Vec => [row[1], row[2], row[3]]),
    charges: rows.map((row) => row[4]),
  };
}

/** Rough geometries; the charges are made up and only sum to the right net charge. */
export const MOLECULES = {
  water: molecule('water', [
    ['O', 0, 0, 0.117, -0.82],
    ['H', 0, 0.757, -0.469, 0.41],
    ['H', 0, -0.757, -0.469, 0.41],
  ]),
  hydrogenFluoride: molecule('hydrogen-fluoride', [
    ['F', 0, 0, 0, -0.42],
    ['H', 0, 0, 0.917, 0.42],
  ]),
  formaldehyde: molecule('formaldehyde', [
    ['C', 0, 0, -0.53, 0.34],
    ['O', 0, 0, 0.68, -0.42],
    ['H', 0, 0.94, -1.12, 0.04],
    ['H', 0, -0.94, -1.12, 0.04],
  ]),
  ammonia: molecule('ammonia', [
    ['N', 0, 0, 0.12, -0.96],
    ['H', 0.938, 0, -0.27, 0.32],
    ['H', -0.469, 0.812, -0.27, 0.32],
    ['H', -0.469, -0.812, -0.27, 0.32],
  ]),
  fluoroChloroMethane: molecule('fluorochloromethane', [
    ['C', 0, 0, 0, 0.11],
    ['F', 1.02, 0.71, 0.58, -0.22],
    ['Cl', -1.21, 0.93, -0.84, -0.11],
    ['H', 0.53, -0.61, -0.73, 0.1],
    ['H', -0.46, -0.62, 0.77, 0.12],
  ]),
  carbonDioxide: molecule('carbon-dioxide', [
    ['C', 0, 0, 0, 0.7],
    ['O', 0, 0, 1.162, -0.35],
    ['O', 0, 0, -1.162, -0.35],
  ]),
  ammonium: molecule('ammonium', [
    ['N', 0, 0, 0, -0.4],
    ['H', 0.589, 0.589, 0.589, 0.35],
    ['H', -0.589, -0.589, 0.589, 0.35],
    ['H', -0.589, 0.589, -0.589, 0.35],
    ['H', 0.589, -0.589, -0.589, 0.35],
  ]),
  hydroxide: molecule('hydroxide', [
    ['O', 0, 0, 0, -1.2],
    ['H', 0, 0, 0.964, 0.2],
  ]),
  chain: molecule('chain', [
    ['N', -4.4, 0.3, 0.1, -0.6],
    ['C', -3.0, -0.2, 0.1, 0.2],
    ['C', -1.6, 0.4, -0.1, 0.05],
    ['C', -0.2, -0.3, 0.2, -0.05],
    ['C', 1.2, 0.4, 0, 0.1],
    ['C', 2.6, -0.3, -0.2, 0.3],
    ['O', 3.8, 0.4, 0.1, -0.5],
    ['H', -5.1, -0.4, 0.3, 0.3],
    ['H', 4.6, -0.2, -0.1, 0.2],
  ]),
  sodium: molecule('sodium', [['Na', 0, 0, 0, 1]]),
  chloride: molecule('chloride', [['Cl', 0, 0, 0, -1]]),
  argon: molecule('argon', [['Ar', 0, 0, 0, 0]]),
  magnesium: molecule('magnesium', [['Mg', 0, 0, 0, 2]]),
};

export function randomDirection(random: () => number): Vec {
  const z = 2 * random() - 1;
  const angle = 2 * Math.PI * random();
  const s = Math.sqrt(1 - z * z);
  return [s * Math.cos(angle), s * Math.sin(angle), z];
}

/** A rotation about a random axis by a random angle (Rodrigues' formula). */
export function randomRotation(random: () => number): (v: Vec) => Vec {
  const axis = randomDirection(random);
  const angle = 2 * Math.PI * random();
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  return (v) => add(add(scale(v, c), scale(cross(axis, v), s)), scale(axis, dot(axis, v) * (1 - c)));
}

export function move(it: Molecule, rotate: (v: Vec) => Vec, shift: Vec): Molecule {
  return { ...it, positions: it.positions.map((position) => add(rotate(position), shift)) };
}

/** Molecules turned at random and set `gap` to 2.5 `gap` from the one before, in random directions. */
export function scatter(molecules: Molecule[], gap: number, random: () => number): Molecule[] {
  let place: Vec = [0, 0, 0];
  return molecules.map((it, k) => {
    if (k > 0) place = add(place, scale(randomDirection(random), gap * (1 + 1.5 * random())));
    return move(it, randomRotation(random), place);
  });
}

export interface XyzStyle {
  /** Extra key=value pairs of the comment line. */
  keys?: string;
  charges?: boolean;
  /** Write the fragment column. */
  fragments?: boolean;
}

export function writeXyz(molecules: Molecule[], style: XyzStyle = {}): string {
  const properties = ['species:S:1:pos:R:3'];
  if (style.charges) properties.push('charge:R:1');
  if (style.fragments) properties.push('fragment:S:1');
  const lines: string[] = [];
  molecules.forEach((it, k) => {
    it.symbols.forEach((symbol, i) => {
      const fields = [symbol, ...it.positions[i].map((x) => x.toFixed(9))];
      if (style.charges) fields.push(it.charges[i].toFixed(6));
      if (style.fragments) fields.push(`${it.name}-${k + 1}`);
      lines.push(fields.join('  '));
    });
  });
  return `${lines.length}\nProperties=${properties.join(':')} ${style.keys ?? ''}\n${lines.join('\n')}\n`;
}

/** `count` random vectors of about `size`, flat, as a fragment list is written. */
export function randomVectors(count: number, size: number, random: () => number): string {
  const vectors = Array.from({ length: count }, () => scale(randomDirection(random), size * (0.5 + random())));
  return vectors.flatMap((v) => v.map((x) => x.toFixed(6))).join(' ');
}

/** Dipole of a molecule's own charges about any origin, in e·Å; only for neutral ones. */
export function ownDipole(it: Molecule): Vec {
  let sum: Vec = [0, 0, 0];
  it.positions.forEach((position, i) => {
    sum = add(sum, scale(position, it.charges[i]));
  });
  return sum;
}

export const unitOf = (v: Vec): Vec => scale(v, 1 / length(v));
