import { type Bond, bondReach, isProtonHolder } from './connectivity.js';
import type { Decisions } from './doubts.js';
import { element, GHOST } from './elements.js';
import { add, distance } from './linear.js';
import type { ClosestResult, Fragment, Vec } from './types.js';

/** Closest contact, its kind, and protons shared between two fragments. */

const HYDROGEN_PARTNERS = ['N', 'O', 'F', 'S', 'Cl', 'Br', 'I'];

interface AtomPair {
  a: string;
  b: string;
  i: number;
  j: number;
  r: number;
  /** Distance over the sum of the van der Waals radii. */
  ratio: number;
}

export interface Contact {
  kind: string;
  closest: ClosestResult;
}

export function findContact(
  first: Fragment,
  second: Fragment,
  shift: Vec,
  bonds: [number, number][],
  crossBonds: [number, number][],
  decide: Decisions,
): Contact {
  const bonded = crossBonds.some(
    ([i, j]) =>
      (first.atoms.includes(i) && second.atoms.includes(j)) || (first.atoms.includes(j) && second.atoms.includes(i)),
  );
  const pairs = atomPairs(first, second, shift).filter(({ i, j }) => !bonded || bondsApart(i, j, bonds) > 3);
  pairs.sort((p, q) => p.ratio - q.ratio || p.i - q.i || p.j - q.j);
  const best = pairs[0];
  if (best !== undefined && pairs[1] !== undefined) decide.below(best.ratio, pairs[1].ratio, 'closest');
  const closest: ClosestResult =
    best === undefined
      ? { atoms: null, distanceA: null, contactRatio: null }
      : { atoms: [best.i + 1, best.j + 1], distanceA: best.r, contactRatio: best.ratio };
  if (bonded) return { kind: 'bonded', closest };
  const opposite = first.charge * second.charge < 0 && isIon(first, decide) && isIon(second, decide);
  if (pairs.some((pair) => clashes(pair, opposite, decide))) return { kind: 'clash', closest };
  const touching = best !== undefined && decide.below(best.ratio, 1, 'contact', 'advice');
  return { kind: touching ? 'touching' : 'apart', closest };
}

/** An ion carries more than 0.1 e. */
export function isIon(fragment: Fragment, decide: Decisions): boolean {
  return !decide.atMost(Math.abs(fragment.charge), 0.1, 'numbers');
}

function atomPairs(first: Fragment, second: Fragment, shift: Vec): AtomPair[] {
  const pairs: AtomPair[] = [];
  for (let k = 0; k < first.atoms.length; k++) {
    for (let l = 0; l < second.atoms.length; l++) {
      const [a, b] = [first.symbols[k], second.symbols[l]];
      if (a === GHOST || b === GHOST) continue;
      const r = distance(first.positions[k], add(second.positions[l], shift));
      pairs.push({ a, b, i: first.atoms[k], j: second.atoms[l], r, ratio: r / (element(a).vdw + element(b).vdw) });
    }
  }
  return pairs;
}

function clashes(pair: AtomPair, oppositelyCharged: boolean, decide: Decisions): boolean {
  if (!decide.below(pair.ratio, 0.55, 'contact', 'advice')) return false;
  const metal = element(pair.a).kind !== 'nonmetal' || element(pair.b).kind !== 'nonmetal';
  const hydrogen =
    (pair.a === 'H' && HYDROGEN_PARTNERS.includes(pair.b)) || (pair.b === 'H' && HYDROGEN_PARTNERS.includes(pair.a));
  if (!metal && !hydrogen && !oppositelyCharged) return true;
  const reach = element(pair.a).covalent + element(pair.b).covalent;
  return decide.below(pair.r, 0.75 * reach, 'contact', 'advice');
}

/** Number of bonds on the shortest way from one atom to another. */
function bondsApart(from: number, to: number, bonds: [number, number][]): number {
  let reached = new Set([from]);
  for (let steps = 0; steps <= 3; steps++) {
    if (reached.has(to)) return steps;
    const next = new Set(reached);
    for (const [i, j] of bonds) {
      if (reached.has(i)) next.add(j);
      if (reached.has(j)) next.add(i);
    }
    reached = next;
  }
  return Number.POSITIVE_INFINITY;
}

/** All covalent bonds that count for distances along the chain: within fragments by distance, between them as declared. */
export function chainBonds(bonds: Bond[], fragments: Fragment[], crossBonds: [number, number][]): [number, number][] {
  const inside = bonds.filter(({ i, j }) => fragments.some(({ atoms }) => atoms.includes(i) && atoms.includes(j)));
  return [...inside.map(({ i, j }): [number, number] => [i, j]), ...crossBonds];
}

/** A hydrogen within bonding distance of N, O or F in both fragments, the two distances within 10 % of each other. */
export function sharesProton(first: Fragment, second: Fragment, shift: Vec, decide: Decisions): boolean {
  const back: Vec = [-shift[0], -shift[1], -shift[2]];
  return sharesProtonOf(first, second, shift, decide) || sharesProtonOf(second, first, back, decide);
}

function sharesProtonOf(owner: Fragment, other: Fragment, shift: Vec, decide: Decisions): boolean {
  return owner.symbols.some((symbol, h) => {
    if (symbol !== 'H') return false;
    const nearest = (fragment: Fragment, move: Vec): number => {
      const distances = fragment.symbols.map((holder, k) =>
        isProtonHolder(holder)
          ? distance(owner.positions[h], add(fragment.positions[k], move))
          : Number.POSITIVE_INFINITY,
      );
      const k = distances.indexOf(Math.min(...distances));
      return distances[k] <= bondReach('H', fragment.symbols[k]) ? distances[k] : Number.POSITIVE_INFINITY;
    };
    const near = nearest(owner, [0, 0, 0]);
    const far = nearest(other, shift);
    if (!Number.isFinite(near) || !Number.isFinite(far)) return false;
    return decide.atMost(Math.max(near, far), 1.1 * Math.min(near, far), 'advice');
  });
}
