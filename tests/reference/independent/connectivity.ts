import { element, GHOST } from './elements.js';
import { add, coefficients, length, scale, subtract } from './linear.js';
import type { ParsedFrame, Vec } from './types.js';

/** Covalent bonds by distance (Cordero 2008 radii), fragments, and fragments made whole; brute force over images. */

export interface Bond {
  i: number;
  j: number;
  /** From atom i to the bonded image of atom j. */
  vector: Vec;
}

/** Lattice translations near the one that brings `v` closest to the origin, `spread` cells to each side. */
export function nearbyShifts(v: Vec, frame: ParsedFrame, spread: number): { image: Vec; shift: Vec }[] {
  const { cell, periodic } = frame;
  if (cell === null) return [{ image: [0, 0, 0], shift: [0, 0, 0] }];
  const start = coefficients(v, cell).map((s, k) => (periodic[k] ? -Math.round(s) : 0));
  const steps = [0, 1, 2].map((k) => {
    const range: number[] = [];
    for (let n = -spread; n <= spread; n++) if (n === 0 || periodic[k]) range.push(start[k] + n);
    return range;
  });
  const shifts: { image: Vec; shift: Vec }[] = [];
  for (const a of steps[0]) {
    for (const b of steps[1]) {
      for (const c of steps[2]) {
        shifts.push({ image: [a, b, c], shift: add(add(scale(cell[0], a), scale(cell[1], b)), scale(cell[2], c)) });
      }
    }
  }
  return shifts;
}

export function nearestImage(v: Vec, frame: ParsedFrame, spread: number): Vec {
  const images = nearbyShifts(v, frame, spread).map(({ shift }) => add(v, shift));
  return images.reduce((best, image) => (length(image) < length(best) ? image : best));
}

/** Longest distance at which two elements count as bonded; negative where distance never decides. */
export function bondReach(a: string, b: string): number {
  if (a === GHOST || b === GHOST) return -1;
  const [first, second] = [element(a), element(b)];
  const kinds = [first.kind, second.kind];
  if (kinds.includes('group 1 or 2')) return -1;
  const metals = kinds.filter((kind) => kind === 'other metal').length;
  if (metals === 2) return -1;
  return first.covalent + second.covalent + (metals === 1 ? 0.3 : 0.4);
}

export function covalentBonds(frame: ParsedFrame): Bond[] {
  const { atoms } = frame;
  const candidates: Bond[] = [];
  for (let i = 0; i < atoms.length; i++) {
    for (let j = i + 1; j < atoms.length; j++) {
      const reach = bondReach(atoms[i].symbol, atoms[j].symbol);
      if (reach < 0) continue;
      const v = subtract(atoms[j].position, atoms[i].position);
      for (const { shift } of nearbyShifts(v, frame, 2)) {
        const vector = add(v, shift);
        if (length(vector) <= reach) candidates.push({ i, j, vector });
      }
    }
  }
  const kept = atoms.map((_, i) => neighboursKept(i, candidates, frame));
  return candidates.filter((bond) => kept[bond.i].includes(bond) && kept[bond.j].includes(bond));
}

/** A hydrogen keeps its nearest neighbour alone, or two of N, O, F within 10 % of each other (a shared proton). */
function neighboursKept(atom: number, candidates: Bond[], frame: ParsedFrame): Bond[] {
  const mine = candidates.filter((bond) => bond.i === atom || bond.j === atom);
  if (frame.atoms[atom].symbol !== 'H' || mine.length < 2) return mine;
  const sorted = mine.sort((a, b) => length(a.vector) - length(b.vector));
  const partner = (bond: Bond) => frame.atoms[bond.i === atom ? bond.j : bond.i].symbol;
  const nearest = sorted[0];
  if (!isProtonHolder(partner(nearest))) return [nearest];
  const second = sorted.slice(1).find((bond) => isProtonHolder(partner(bond)));
  if (second === undefined || length(second.vector) > 1.1 * length(nearest.vector)) return [nearest];
  return [nearest, second];
}

export const isProtonHolder = (symbol: string): boolean => ['N', 'O', 'F'].includes(symbol);

/** Declared fragments, then what remains by connectivity; numbered by their first atom. */
export function findFragments(frame: ParsedFrame, bonds: Bond[]): number[][] {
  const declared = new Set(frame.groups.flat());
  const label = frame.atoms.map((_, i) => i);
  for (let changed = true; changed; ) {
    changed = false;
    for (const { i, j } of bonds) {
      if (declared.has(i) || declared.has(j) || label[i] === label[j]) continue;
      label[i] = label[j] = Math.min(label[i], label[j]);
      changed = true;
    }
  }
  const fragments = [...frame.groups];
  for (let first = 0; first < label.length; first++) {
    if (declared.has(first) || label[first] !== first) continue;
    fragments.push(label.flatMap((l, i) => (l === first && !declared.has(i) ? [i] : [])));
  }
  return fragments.sort((a, b) => a[0] - b[0]);
}

/** Positions of a fragment cut by the boundary, made whole along its bonds, starting from its first atom as written. */
export function makeWhole(atoms: number[], frame: ParsedFrame, bonds: Bond[]): Vec[] {
  if (frame.cell === null) return atoms.map((i) => frame.atoms[i].position);
  const placed = new Map<number, Vec>([[atoms[0], frame.atoms[atoms[0]].position]]);
  while (placed.size < atoms.length) {
    let grew = false;
    for (const { i, j, vector } of bonds) {
      if (!atoms.includes(i) || !atoms.includes(j) || placed.has(i) === placed.has(j)) continue;
      if (placed.has(i)) placed.set(j, add(placed.get(i)!, vector));
      else placed.set(i, subtract(placed.get(j)!, vector));
      grew = true;
    }
    if (grew) continue;
    // No bond leads on: the next atom goes to its image nearest to the first.
    const next = atoms.find((i) => !placed.has(i))!;
    const origin = frame.atoms[atoms[0]].position;
    placed.set(next, add(origin, nearestImage(subtract(frame.atoms[next].position, origin), frame, 3)));
  }
  return atoms.map((i) => placed.get(i)!);
}
