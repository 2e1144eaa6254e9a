import { chargeCharge, chargeDipole } from './multipole-energies';

/** One side of a pair for the extended-dipole model. */
export interface ExtendedDipole {
  /** Net charge at the centre, e. */
  readonly chargeE: number;
  /** Dipole, e·Å. */
  readonly dipoleEA: readonly [number, number, number];
  /** Extent: the distance of the two charges that stand for the dipole, Å; 0 keeps it a point. */
  readonly extentA: number;
}

/** Shifts of the midpoint along the dipole, as shares of the extent. */
const SHIFTS = [0, 0.25, -0.25];

interface Site {
  readonly chargeE: number;
  readonly at: readonly [number, number, number];
}

function sitesOf(side: ExtendedDipole, shift: number): Site[] {
  const sites: Site[] = [{ chargeE: side.chargeE, at: [0, 0, 0] }];
  const size = Math.hypot(...side.dipoleEA);
  if (size === 0 || side.extentA === 0) return sites;
  const u = side.dipoleEA.map((m) => m / size);
  for (const end of [0.5, -0.5]) {
    const along = (shift + end) * side.extentA;
    sites.push({ chargeE: (Math.sign(end) * size) / side.extentA, at: [u[0]! * along, u[1]! * along, u[2]! * along] });
  }
  return sites;
}

/**
 * Energy of two dipoles of finite length, e²/Å: each dipole as two opposite charges of the same moment, an extent apart, its midpoint
 * moved along it by 0 or a quarter of the extent either way. Of the nine combinations, the energy farthest from `pointEnergy` is
 * returned: a cautious reference where nothing is known of how the charge is spread. A side without extent stays a point charge with
 * a point dipole.
 *
 * @param separation vector from centre 1 to centre 2, Å
 */
export function extendedDipoleEnergy(
  first: ExtendedDipole,
  second: ExtendedDipole,
  separation: readonly [number, number, number],
  pointEnergy: number,
): number {
  let farthest = pointEnergy;
  const shifts1 = first.extentA === 0 ? [0] : SHIFTS;
  const shifts2 = second.extentA === 0 ? [0] : SHIFTS;
  for (const shift1 of shifts1) {
    const sites1 = sitesOf(first, shift1);
    for (const shift2 of shifts2) {
      const energy = siteEnergy(first, sites1, second, sitesOf(second, shift2), separation);
      if (Math.abs(energy - pointEnergy) > Math.abs(farthest - pointEnergy)) farthest = energy;
    }
  }
  return farthest;
}

function siteEnergy(
  first: ExtendedDipole,
  sites1: readonly Site[],
  second: ExtendedDipole,
  sites2: readonly Site[],
  separation: readonly [number, number, number],
): number {
  let energy = 0;
  const point1 = first.extentA === 0 ? first.dipoleEA : null;
  const point2 = second.extentA === 0 ? second.dipoleEA : null;
  for (const a of sites1) {
    for (const b of sites2) {
      const r = separation.map((s, k) => s + b.at[k]! - a.at[k]!) as [number, number, number];
      const distance = Math.hypot(...r);
      const along = (m: readonly [number, number, number] | null) =>
        m === null ? 0 : (m[0] * r[0] + m[1] * r[1] + m[2] * r[2]) / distance;
      energy += chargeCharge(a.chargeE, b.chargeE, distance);
      energy += chargeDipole(a.chargeE, along(point1), b.chargeE, along(point2), distance);
      if (point1 !== null && point2 !== null) {
        const product = point1[0] * point2[0] + point1[1] * point2[1] + point1[2] * point2[2];
        energy += (product - 3 * along(point1) * along(point2)) / distance ** 3;
      }
    }
  }
  return energy;
}
