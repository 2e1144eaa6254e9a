import { COULOMB_KJ_A_PER_MOL, ELECTRONVOLT_KJ_PER_MOL } from '../physics/constants';
import { dispersionEnergy, londonC6, slaterKirkwoodC6 } from '../physics/dispersion';
import { isNobleGas } from '../physics/elements';
import { debyeEnergy, type PolarizableSite } from '../physics/induction-pair';
import { ZERO_DIPOLE_EA } from './settings';
import type { System } from './system';

/** Debye induction of two fragments with the vector between their centres, kJ/mol; NaN where a moment or polarizability is unknown. */
export function inductionOf(system: System, f: number, g: number, x: number, y: number, z: number): number {
  const { relativePermittivity } = system.settings;
  const energy = debyeEnergy(siteOf(system, f), siteOf(system, g), [x, y, z]);
  return (energy * COULOMB_KJ_A_PER_MOL) / (relativePermittivity * relativePermittivity);
}

function siteOf({ moments }: System, f: number): PolarizableSite {
  const isZero = moments.dipoleNormEA[f]! < ZERO_DIPOLE_EA;
  return {
    chargeE: moments.chargeE[f]!,
    dipoleEA: isZero ? [0, 0, 0] : moments.dipoleEA.subarray(3 * f, 3 * f + 3),
    polarizabilityA3: moments.polarizabilityA3[f]!,
  };
}

/**
 * Dispersion of two fragments, kJ/mol; NaN where a polarizability is unknown. By Slater and Kirkwood, which comes closer to published C₆
 * of molecules than London's formula (tests/reference/outside-dispersion.test.ts); by London for two noble gas atoms, for which it does.
 */
export function dispersionOf(system: System, f: number, g: number, distanceA: number): number {
  const { polarizabilityA3, ionizationEnergyEV, dispersionElectrons } = system.moments;
  const [alpha1, alpha2] = [polarizabilityA3[f]!, polarizabilityA3[g]!];
  const london =
    isNobleAtom(system, f) && isNobleAtom(system, g)
      ? londonC6(
          ionizationEnergyEV[f]! * ELECTRONVOLT_KJ_PER_MOL,
          alpha1,
          ionizationEnergyEV[g]! * ELECTRONVOLT_KJ_PER_MOL,
          alpha2,
        )
      : Number.NaN;
  const c6 = Number.isNaN(london)
    ? slaterKirkwoodC6(dispersionElectrons[f]!, alpha1, dispersionElectrons[g]!, alpha2)
    : london;
  return dispersionEnergy(c6, distanceA);
}

function isNobleAtom({ moments, element, starts }: System, f: number): boolean {
  return moments.isAtom[f] === 1 && isNobleGas(element[starts[f]!]!);
}
