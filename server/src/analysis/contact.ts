import { bondLimitA, CLASH_COVALENT, CLASH_RATIO, SHARED_PROTON_RATIO, sharesProton } from '../model/close-pairs';
import { ELEMENT_STRIDE, elementPairTable } from '../physics/element-pair-table';
import { COVALENT_RADIUS_A, isMetal, VDW_RADIUS_A } from '../physics/elements';
import type { System } from './system';

/** How two fragments touch. */
export type Contact = 'apart' | 'touching' | 'clash' | 'bonded';

/** What one pass over the atom pairs of two fragments finds. */
export interface AtomScan {
  /** Indices into the system's atoms of the pair with the smallest contact ratio; −1 where there is none. */
  closest1: number;
  closest2: number;
  closestA: number;
  /** Distance over the sum of van der Waals radii; infinite where there is no pair. */
  contactRatio: number;
  clash: boolean;
  /** A hydrogen stands between two N, O or F atoms of the two fragments, within 10 % of equal distance. */
  sharedProton: boolean;
  /** Σ q_i q_j/r_ij over the charge columns, e²/Å; NaN without them. */
  columnSum: number;
  /** The same over the fitted charges; NaN where they are not wanted. */
  fittedSum: number;
}

/** Squares of the sums of van der Waals radii, Å². */
export const vdwSums2A2 = elementPairTable((z1, z2) => (VDW_RADIUS_A[z1]! + VDW_RADIUS_A[z2]!) ** 2);
const covalentClashes2 = elementPairTable((z1, z2) => {
  const sum = COVALENT_RADIUS_A[z1]! + COVALENT_RADIUS_A[z2]!;
  return Number.isNaN(sum) ? 0 : (CLASH_COVALENT * sum) ** 2;
});

/** N, O, F, S, Cl, Br, I: hydrogen comes close to these in ordinary hydrogen bonds. */
const HYDROGEN_PARTNERS = new Set([7, 8, 9, 16, 17, 35, 53]);

/** 1 where a pair of elements may come closer than the van der Waals rule allows. */
const leniences = elementPairTable((z1, z2) => {
  const hydrogen = (z1 === 1 && HYDROGEN_PARTNERS.has(z2)) || (z2 === 1 && HYDROGEN_PARTNERS.has(z1));
  return hydrogen || isMetal(z1) || isMetal(z2) ? 1 : 0;
});

/** Contacts this near to each other are equal but for rounding, and the first by atom number stands. */
const TIE = 1 - 1e-12;

/** No hydrogen is shared over a longer distance, Å². */
const SHARED_REACH2 = 1.5 * 1.5;

/**
 * Looks at every atom pair of fragments `f` and `g`, whose centres lie `dx, dy, dz` apart (Å, from f to g): closest contact by
 * ratio to the van der Waals radii (ghosts left out, ties by atom number), clash, Coulomb sums. Cost: n₁·n₂.
 */
export function scanAtoms(
  system: System,
  f: number,
  g: number,
  dx: number,
  dy: number,
  dz: number,
  wantFitted: boolean,
): AtomScan {
  const { starts, localA, element, ghost, columnE, fittedE } = system;
  const vdwSum2 = vdwSums2A2();
  const covalentClash2 = covalentClashes2();
  const lenient = leniences();
  const bonded = system.chains.areBonded(f, g);
  const opposite =
    system.isIon[f] === 1 && system.isIon[g] === 1 && system.moments.chargeE[f]! * system.moments.chargeE[g]! < 0;
  let best2 = Number.POSITIVE_INFINITY;
  let closest1 = -1;
  let closest2 = -1;
  let clash = false;
  let sharedProton = false;
  let columnSum = 0;
  let fittedSum = 0;
  for (let i = starts[f]!; i < starts[f + 1]!; i++) {
    const x = localA[3 * i]! - dx;
    const y = localA[3 * i + 1]! - dy;
    const z = localA[3 * i + 2]! - dz;
    const qi = columnE[i]!;
    const ti = fittedE[i]!;
    const zi = element[i]!;
    const near = bonded ? system.chains.near(system.atomNumbers[i]!) : null;
    for (let j = starts[g]!; j < starts[g + 1]!; j++) {
      const rx = localA[3 * j]! - x;
      const ry = localA[3 * j + 1]! - y;
      const rz = localA[3 * j + 2]! - z;
      const r2 = rx * rx + ry * ry + rz * rz;
      const inverse = 1 / Math.sqrt(r2);
      columnSum += qi * columnE[j]! * inverse;
      if (wantFitted) fittedSum += ti * fittedE[j]! * inverse;
      const pair = ELEMENT_STRIDE * zi + element[j]!;
      const ratio2 = r2 / vdwSum2[pair]!;
      // Nothing below concerns atoms that are farther than the closest and than any clash.
      const close = ratio2 < CLASH_RATIO * CLASH_RATIO;
      if (ratio2 >= best2 && !close) continue;
      if (ghost[i] || ghost[j] || near?.has(system.atomNumbers[j]!)) continue;
      if (ratio2 < best2 * TIE) {
        best2 = ratio2;
        closest1 = i;
        closest2 = j;
      }
      clash ||= close && (!(opposite || lenient[pair] === 1) || r2 < covalentClash2[pair]!);
      if (r2 < SHARED_REACH2 && !sharedProton) {
        sharedProton = isShared(system, i, f, j, r2) || isShared(system, j, g, i, r2);
      }
    }
  }
  const hasPair = closest1 >= 0;
  return {
    closest1,
    closest2,
    closestA: hasPair
      ? Math.sqrt(best2 * vdwSum2[ELEMENT_STRIDE * element[closest1]! + element[closest2]!]!)
      : Number.NaN,
    contactRatio: Math.sqrt(best2),
    clash,
    sharedProton,
    columnSum: finiteOrNaN(columnSum),
    fittedSum: wantFitted ? finiteOrNaN(fittedSum) : Number.NaN,
  };
}

function finiteOrNaN(value: number): number {
  return Number.isFinite(value) ? value : Number.NaN;
}

/** Whether a hydrogen of a fragment is shared between its nearest N, O or F there and such an atom of the other fragment. */
function isShared(system: System, hydrogen: number, fragment: number, partner: number, r2: number): boolean {
  const { element, starts, localA } = system;
  if (element[hydrogen] !== 1 || !sharesProton(element[partner]!)) return false;
  const distance = Math.sqrt(r2);
  if (distance > bondLimitA(1, element[partner]!)) return false;
  let own = Number.POSITIVE_INFINITY;
  for (let k = starts[fragment]!; k < starts[fragment + 1]!; k++) {
    if (!sharesProton(element[k]!)) continue;
    const d = Math.hypot(
      localA[3 * k]! - localA[3 * hydrogen]!,
      localA[3 * k + 1]! - localA[3 * hydrogen + 1]!,
      localA[3 * k + 2]! - localA[3 * hydrogen + 2]!,
    );
    if (d <= bondLimitA(1, element[k]!)) own = Math.min(own, d);
  }
  return Math.max(own, distance) <= SHARED_PROTON_RATIO * Math.min(own, distance);
}
