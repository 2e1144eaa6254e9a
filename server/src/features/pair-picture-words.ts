import { unitText } from './number-text';
import type { PairPictureInput } from './pair-picture';
import { shownEnergy, shownSign } from './pair-picture-energy';
import { fittedCount, printable, signed } from './pair-picture-parts';
import { isEnclosed, isIon, isZeroDipole } from './pair-picture-scene';

/** A name longer than this is cut, characters. */
const LONGEST_NAME = 40;

/** What the picture shows, in a sentence or two. */
export function pairInWords(input: PairPictureInput): string {
  const { distanceA, phiDeg } = input;
  const first = fragment(input.name1, input.charge1E, input.dipole1D, input.theta1Deg);
  const second = fragment(input.name2, input.charge2E, input.dipole2D, input.theta2Deg);
  const apart = distanceA === null ? '' : `, ${distanceA.toFixed(2)} Å apart`;
  const turn = phiDeg === null ? '' : `, φ ${degrees(phiDeg)}`;
  const enclosed = isEnclosed(input) ? '; one encloses the centre of the other' : '';
  return `1: ${first}; 2: ${second}${apart}${turn}${enclosed}. ${energies(input)}`;
}

function fragment(name: string, chargeE: number | null, dipoleD: number | null, thetaDeg: number | null): string {
  const charge = isIon(chargeE) ? `, charge ${signed(chargeE)}` : '';
  return `${fittedCount(printable(name), LONGEST_NAME)}${charge}, ${dipole(dipoleD, thetaDeg)}`;
}

function dipole(dipoleD: number | null, thetaDeg: number | null): string {
  if (dipoleD === null) return 'dipole not known';
  const size = `dipole ${dipoleD.toFixed(2)} D`;
  if (thetaDeg !== null && dipoleD !== 0) return `${size} at ${degrees(thetaDeg)} to the line of centres`;
  return isZeroDipole(dipoleD) ? size : `${size} of unknown direction`;
}

function degrees(value: number): string {
  return `${value.toFixed(0).replace(/^-0$/, '0').replace('-', '−')}°`;
}

function energies(input: PairPictureInput): string {
  const { referenceKJPerMol: reference, pointKJPerMol: point, kTKJPerMol: kT, unitsPerKJPerMol } = input;
  const leading = reference ?? point;
  if (leading === null) return 'No energy is known.';
  const sign = shownSign(leading, unitsPerKJPerMol);
  const word = sign < 0 ? 'Attractive' : sign > 0 ? 'Repulsive' : 'Neither attractive nor repulsive';
  const value = (energy: number) => `${shownEnergy(energy * unitsPerKJPerMol)} ${unitText(input.unit)}`;
  const parts = [
    ...(reference === null ? [] : [`reference ${value(reference)}`]),
    ...(point === null ? [] : [`point dipole ${value(point)}`]),
    ...(input.unit === 'kT' ? [] : [`kT ${value(kT)}`]),
  ];
  return `${word}: ${parts.join(', ')}.`;
}
