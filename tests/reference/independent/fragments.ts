import { type Bond, findFragments, makeWhole } from './connectivity.js';
import { element, GHOST } from './elements.js';
import { add, distance, dot, length, mean, scale, subtract } from './linear.js';
import type { Annotation, Centre, Fragment, Matrix, ParsedFrame, Vec } from './types.js';

/** Dipoles below this, e·Å, are zero. */
const ZERO_DIPOLE = 1e-6;

export function buildFragments(frame: ParsedFrame, bonds: Bond[], centre: Centre): Fragment[] {
  const groups = findFragments(frame, bonds);
  const annotations = frame.annotate(groups);
  return groups.map((atoms, f) =>
    buildFragment(f + 1, atoms, makeWhole(atoms, frame, bonds), annotations[f], frame, centre),
  );
}

function buildFragment(
  number: number,
  atoms: number[],
  positions: Vec[],
  annotation: Annotation,
  frame: ParsedFrame,
  centreKind: Centre,
): Fragment {
  const members = atoms.map((i) => frame.atoms[i]);
  const symbols = members.map((atom) => atom.symbol);
  const centre = centreOf(symbols, positions, centreKind);
  const column = members.some((atom) => atom.charge === null) ? null : members.map((atom) => atom.charge!);
  const matter = positions.filter((_, i) => isMatter(symbols, i));
  const single = matter.length === 1;

  const formal = members.map((atom) => atom.formal);
  let charge = 0;
  let chargeSource = 'assumed';
  if (annotation.chargeE !== undefined) [charge, chargeSource] = [annotation.chargeE, 'annotated'];
  else if (column !== null) [charge, chargeSource] = [column.reduce((sum, q) => sum + q, 0), 'charges'];
  else if (formal.some((q) => q !== null)) {
    [charge, chargeSource] = [formal.reduce<number>((sum, q) => sum + (q ?? 0), 0), 'formal'];
  }

  const arms = positions.map((position) => subtract(position, centre));
  const chargesDipole = column === null ? null : dipoleOf(column, arms);
  const axis = annotation.axis && axisOf(annotation.axis, atoms, positions);
  let dipole: Vec | null = null;
  let dipoleSize: number | null = null;
  let dipoleSource = 'none';
  if (annotation.dipole !== undefined) {
    dipole = annotation.dipole;
    dipoleSource = 'annotated';
  } else if (annotation.size !== undefined) {
    const direction = axis ?? (chargesDipole === null ? null : unit(chargesDipole));
    dipoleSource = axis ? 'axis' : 'annotated';
    dipoleSize = annotation.size;
    if (direction !== null) dipole = scale(direction, annotation.size);
    else if (annotation.size < ZERO_DIPOLE) dipole = [0, 0, 0];
  } else if (single) {
    dipole = [0, 0, 0];
    dipoleSource = 'atom';
  } else if (chargesDipole !== null) {
    dipole = chargesDipole;
    dipoleSource = 'charges';
  }
  if (dipole !== null) {
    if (length(dipole) < ZERO_DIPOLE) dipole = [0, 0, 0];
    dipoleSize = length(dipole);
  }

  return {
    number,
    name: annotation.name ?? frame.defaultName(atoms),
    atoms,
    symbols,
    positions,
    column,
    charge,
    chargeSource,
    centre,
    extent: Math.max(...matter.map((position) => distance(position, centre))),
    dipole,
    dipoleSize,
    dipoleSource,
    chargesDipole,
    quadrupole: single ? zeroMatrix() : column === null ? null : quadrupoleOf(column, arms),
    polarizability: annotation.polarizability ?? null,
  };
}

/** Ghosts are no atoms, unless a fragment is made of nothing else. */
export function isMatter(symbols: string[], i: number): boolean {
  return symbols[i] !== GHOST || symbols.every((symbol) => symbol === GHOST);
}

function centreOf(symbols: string[], positions: Vec[], kind: Centre): Vec {
  const matter = symbols.map((_, i) => i).filter((i) => isMatter(symbols, i));
  if (matter.length === 1) return positions[matter[0]];
  const weight = (i: number): number => {
    if (kind === 'geometry' || symbols[i] === GHOST) return 1;
    return kind === 'mass' ? element(symbols[i]).weight : element(symbols[i]).z;
  };
  let sum: Vec = [0, 0, 0];
  let total = 0;
  for (const i of matter) {
    sum = add(sum, scale(positions[i], weight(i)));
    total += weight(i);
  }
  return scale(sum, 1 / total);
}

export function dipoleOf(charges: number[], arms: Vec[]): Vec {
  let sum: Vec = [0, 0, 0];
  charges.forEach((q, i) => {
    sum = add(sum, scale(arms[i], q));
  });
  return sum;
}

const zeroMatrix = (): Matrix => [
  [0, 0, 0],
  [0, 0, 0],
  [0, 0, 0],
];

/** Traceless quadrupole, ½ Σ q (3 r_a r_b − r² δ_ab) (Buckingham's convention). */
export function quadrupoleOf(charges: number[], arms: Vec[]): Matrix {
  const theta = zeroMatrix();
  for (let a = 0; a < 3; a++) {
    for (let b = 0; b < 3; b++) {
      charges.forEach((q, i) => {
        const r = arms[i];
        theta[a][b] += 0.5 * q * (3 * r[a] * r[b] - (a === b ? dot(r, r) : 0));
      });
    }
  }
  return theta;
}

function unit(v: Vec): Vec | null {
  const size = length(v);
  return size < ZERO_DIPOLE ? null : scale(v, 1 / size);
}

/** From the mean position of the atoms before the `>` to that of those after it. */
function axisOf(axis: { from: number[]; to: number[] }, atoms: number[], positions: Vec[]): Vec | null {
  const place = (indices: number[]) => mean(indices.map((i) => positions[atoms.indexOf(i)]));
  if (axis.from.length === 0 || axis.to.length === 0) return null;
  return unit(subtract(place(axis.to), place(axis.from)));
}
