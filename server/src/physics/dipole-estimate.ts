import { bondTypeDipole } from './bond-type-dipole';
import { EEQ_MOST_ATOMS, eeqCharges, hasEeqParameters } from './eeq-charges';
import { isMetal, isNobleGas, symbolOf } from './elements';
import { lacksHydrogens, type MoleculeClass, moleculeClass, reasonForDoubt } from './estimate-trust';
import { fragmentGraph } from './fragment-graph';

/** Charges and dipole of a fragment from nothing but its geometry. */
export type DipoleEstimate =
  | {
      readonly ok: true;
      /** EEQ charges, e; they sum to the net charge. */
      readonly chargesE: Float64Array;
      /** Dipole about the centre asked for, e·Å. Not that of `chargesE`, whose own dipole is worse. */
      readonly dipoleEA: readonly [number, number, number];
      readonly moleculeClass: MoleculeClass;
      /** Mean error of the size in this class, D, and of the direction, degrees, as measured ({@link ESTIMATE_ERRORS}). */
      readonly sizeErrorD: number;
      readonly angleErrorDeg: number | null;
      /** Why this estimate is less sure than its class, or null. */
      readonly doubt: string | null;
    }
  | { readonly ok: false; readonly reason: string };

/**
 * Mean absolute error of the size, D, and mean error of the direction, degrees, by class of molecule; the direction over molecules above
 * 0.5 D whose symmetry leaves it free, null where there were none. Measured tenfold on molecules left out of the fit in that round, three
 * times over; tests/reference/outside-dipole-estimates.test.ts holds the parameters to these numbers.
 */
export const ESTIMATE_ERRORS: Readonly<Record<MoleculeClass, readonly [sizeD: number, angleDeg: number | null]>> = {
  ionic: [0.4, null],
  ion: [0.7, 24],
  'bromine or iodine': [0.33, 8],
  nitrile: [0.28, 5],
  carbonyl: [0.33, 7],
  'sulfur or phosphorus': [0.38, 11],
  halocarbon: [0.17, 5],
  amine: [0.34, 8],
  'water, alcohol, ether': [0.21, 4],
  hydrocarbon: [0.19, null],
  other: [0.26, 7],
};

/** Charges farther than this from a whole number do not say how many electrons there are, e. */
const WHOLE = 0.1;

/**
 * Estimates charges by EEQ and the dipole by charge carried along bonds, about `centreA`, for a fragment of `netChargeE`.
 *
 * A net charge is spread as EEQ spreads it: μ = μ(bonds) + Σ [q_i(Q) − q_i(0)](r_i − c). Domain: closed shells of the non-metals from H to I and
 * Li, Na, K with two atoms or more. Refused, with a sentence: lone atoms, too many atoms, ghosts and elements without parameters, other
 * metals and noble gases, an odd number of electrons, charges that are no whole number, atoms at one point, carbons that lack bonds.
 * Cost: 4 ms for 100 atoms, 0.2 s for 900, 1.4 s for 2,000.
 */
export function estimateDipole(
  count: number,
  elements: ArrayLike<number>,
  positionsA: Float64Array,
  netChargeE: number,
  centreA: readonly [number, number, number],
): DipoleEstimate {
  const refusal = whyNot(count, elements, positionsA, netChargeE, centreA);
  if (refusal !== null) return { ok: false, reason: refusal };
  const graph = fragmentGraph(count, elements, positionsA);
  if (lacksHydrogens(graph, elements, positionsA)) {
    return {
      ok: false,
      reason:
        'A carbon has fewer bonds than its shape asks for: hydrogens are missing, a bond is cut, or it is a carbene.',
    };
  }
  const chargesE = new Float64Array(count);
  const trouble = eeqCharges(count, elements, positionsA, netChargeE, chargesE);
  if (trouble !== null) return { ok: false, reason: trouble };
  const dipole = new Float64Array(3);
  let doubt = reasonForDoubt(graph, elements, netChargeE);
  if (bondTypeDipole(graph, elements, positionsA, dipole)) {
    if (netChargeE !== 0) {
      const neutral = new Float64Array(count);
      const again = eeqCharges(count, elements, positionsA, 0, neutral);
      if (again !== null) return { ok: false, reason: again };
      for (let i = 0; i < count; i++) addMoment(dipole, chargesE[i]! - neutral[i]!, positionsA, i, centreA);
    }
  } else {
    for (let i = 0; i < count; i++) addMoment(dipole, chargesE[i]!, positionsA, i, centreA);
    doubt ??= 'An element without bond parameters: the dipole is that of the equilibrated charges.';
  }
  const kind = moleculeClass(graph, elements, netChargeE);
  const [sizeErrorD, angleErrorDeg] = ESTIMATE_ERRORS[kind];
  const dipoleEA = [dipole[0]!, dipole[1]!, dipole[2]!] as const;
  return { ok: true, chargesE, dipoleEA, moleculeClass: kind, sizeErrorD, angleErrorDeg, doubt };
}

function addMoment(
  dipole: Float64Array,
  chargeE: number,
  positionsA: Float64Array,
  atom: number,
  centreA: readonly [number, number, number],
): void {
  dipole[0]! += chargeE * (positionsA[3 * atom]! - centreA[0]);
  dipole[1]! += chargeE * (positionsA[3 * atom + 1]! - centreA[1]);
  dipole[2]! += chargeE * (positionsA[3 * atom + 2]! - centreA[2]);
}

/** Li, Na and K have bond parameters; no other metal has. */
function isMetalWithBonds(z: number): boolean {
  return z === 3 || z === 11 || z === 19;
}

function whyNot(
  count: number,
  elements: ArrayLike<number>,
  positionsA: Float64Array,
  netChargeE: number,
  centreA: readonly [number, number, number],
): string | null {
  if (count < 2) return 'A lone atom has no dipole about itself.';
  if (count > EEQ_MOST_ATOMS) return `More than ${EEQ_MOST_ATOMS} atoms are too many to estimate a dipole.`;
  let protons = 0;
  for (let i = 0; i < count; i++) {
    const z = elements[i]!;
    if (!hasEeqParameters(z) || isNobleGas(z)) return `No parameters for ${z === 0 ? 'a ghost' : symbolOf(z)}.`;
    if (isMetal(z) && !isMetalWithBonds(z))
      return `Dipoles of molecules with metals (here ${symbolOf(z)}) cannot be estimated.`;
    protons += z;
  }
  for (let k = 0; k < 3 * count; k++) if (!Number.isFinite(positionsA[k]!)) return 'A position is not a number.';
  if (!centreA.every(Number.isFinite)) return 'The centre is not a point.';
  const whole = Math.round(netChargeE);
  if (!(Math.abs(netChargeE - whole) <= WHOLE)) return 'The net charge is not a whole number.';
  if ((protons - whole) % 2 !== 0) return 'An odd number of electrons: an ion whose charge is not given, or a radical.';
  return atomsMeet(count, positionsA) ? 'Two atoms stand at one point.' : null;
}

/** Whether two atoms are closer than any bond, 0.3 Å. */
function atomsMeet(count: number, positionsA: Float64Array): boolean {
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < i; j++) {
      const x = positionsA[3 * i]! - positionsA[3 * j]!;
      const y = positionsA[3 * i + 1]! - positionsA[3 * j + 1]!;
      const z = positionsA[3 * i + 2]! - positionsA[3 * j + 2]!;
      if (x * x + y * y + z * z < 0.09) return true;
    }
  }
  return false;
}
