import { type EnergyUnit, energyUnitsPerKJPerMol } from '../physics/units';
import type { PairPictureInput } from './pair-picture';
import type { PictureTheme } from './pair-picture-parts';
import type { FragmentRecord, PairRecord } from './records';

/** How energies and colours of a picture are chosen. */
export interface PictureLook {
  readonly unit: EnergyUnit;
  readonly kTKJPerMol: number;
  readonly theme: PictureTheme | null;
}

/** What the picture of a pair shows, `first` on the left; the pair's angles must be those seen from there. */
export function pictureInputOf(
  first: FragmentRecord,
  second: FragmentRecord,
  pair: PairRecord,
  { unit, kTKJPerMol, theme }: PictureLook,
): PairPictureInput {
  return {
    name1: `${first.name} #${first.fragment}`,
    name2: `${second.name} #${second.fragment}`,
    distanceA: pair.distanceA,
    extent1A: first.extentA,
    extent2A: second.extentA,
    charge1E: first.chargeE,
    charge2E: second.chargeE,
    dipole1D: first.dipoleD === null ? null : first.dipoleNormD,
    dipole2D: second.dipoleD === null ? null : second.dipoleNormD,
    theta1Deg: pair.theta1Deg,
    theta2Deg: pair.theta2Deg,
    phiDeg: pair.phiDeg,
    pointKJPerMol: pair.energyKJPerMol.pointDipole,
    referenceKJPerMol: pair.referenceKJPerMol,
    kTKJPerMol,
    unit,
    unitsPerKJPerMol: energyUnitsPerKJPerMol(unit, kTKJPerMol),
    theme,
  };
}
