import type { AtomTable } from '../formats/tree';
import { ClosePairList, type ClosePairSearch, type ClosePairs, markBonds } from './close-pairs';

/** Close pairs after some atoms have moved. */
export interface UpdatedPairs {
  readonly pairs: ClosePairs;
  /** Atoms that have gained or lost a bond, each once. */
  readonly rebonded: readonly number[];
}

/** Looks for the partners of moved atoms alone; all other pairs are taken over, and bonds decided anew. */
export function updateClosePairs(
  atoms: AtomTable,
  old: ClosePairs,
  moved: readonly number[],
  search: ClosePairSearch,
): UpdatedPairs {
  const isMoved = new Uint8Array(atoms.count);
  for (const atom of moved) isMoved[atom] = 1;
  const found = partnersOf(moved, isMoved, search);
  let kept = 0;
  for (let k = 0; k < old.count; k++) if (!isMoved[old.first[k]!] && !isMoved[old.second[k]!]) kept++;
  const count = kept + found.length;
  const pairs: ClosePairs = {
    count,
    first: new Int32Array(count),
    second: new Int32Array(count),
    distanceA: new Float64Array(count),
    bonded: new Uint8Array(count),
    tooDense: false,
  };
  let next = 0;
  let at = 0;
  const put = (first: number, second: number, distanceA: number) => {
    pairs.first[at] = first;
    pairs.second[at] = second;
    pairs.distanceA[at++] = distanceA;
  };
  const putFound = ({ first, second, distanceA }: Found) => put(first, second, distanceA);
  for (let k = 0; k < old.count; k++) {
    const first = old.first[k]!;
    const second = old.second[k]!;
    if (isMoved[first] || isMoved[second]) continue;
    while (next < found.length && isBefore(found[next]!, first, second)) putFound(found[next++]!);
    put(first, second, old.distanceA[k]!);
  }
  while (next < found.length) putFound(found[next++]!);
  markBonds(atoms, pairs);
  return { pairs, rebonded: [...rebondedAtoms(old, pairs)] };
}

interface Found {
  readonly first: number;
  readonly second: number;
  readonly distanceA: number;
}

function partnersOf(moved: readonly number[], isMoved: Uint8Array, search: ClosePairSearch): Found[] {
  const list = new ClosePairList(16);
  for (const atom of moved) search.addPartners(atom, false, list);
  const found: Found[] = [];
  for (let k = 0; k < list.count; k++) {
    const [atom, other] = [list.first[k]!, list.second[k]!];
    // A pair of two moved atoms is found from both.
    if (isMoved[other] && other < atom) continue;
    found.push({
      first: Math.min(atom, other),
      second: Math.max(atom, other),
      distanceA: list.distanceA[k]!,
    });
  }
  return found.sort((a, b) => a.first - b.first || a.second - b.second);
}

function isBefore(found: Found, first: number, second: number): boolean {
  return found.first < first || (found.first === first && found.second < second);
}

/** Atoms with a bond that is in one of two ordered lists alone. */
function rebondedAtoms(old: ClosePairs, now: ClosePairs): Set<number> {
  const rebonded = new Set<number>();
  const add = ({ first, second }: ClosePairs, k: number) => rebonded.add(first[k]!).add(second[k]!);
  let [i, j] = [0, 0];
  const skip = ({ bonded, count }: ClosePairs, from: number) => {
    let k = from;
    while (k < count && !bonded[k]) k++;
    return k;
  };
  for (;;) {
    i = skip(old, i);
    j = skip(now, j);
    if (i === old.count && j === now.count) return rebonded;
    const order =
      i === old.count ? 1 : j === now.count ? -1 : old.first[i]! - now.first[j]! || old.second[i]! - now.second[j]!;
    if (order < 0) add(old, i++);
    else if (order > 0) add(now, j++);
    else {
      i++;
      j++;
    }
  }
}
