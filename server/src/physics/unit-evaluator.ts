import {
  addDependencies,
  create,
  createUnitDependencies,
  divideDependencies,
  type MathJsInstance,
  multiplyDependencies,
  powDependencies,
  subtractDependencies,
  type Unit,
  unitDependencies,
} from 'mathjs';
import {
  AVOGADRO_PER_MOL,
  BOHR_A,
  BOHR_RADIUS_M,
  DEBYE_E_A,
  ELEMENTARY_CHARGE_C,
  HARTREE_KJ_PER_MOL,
  KILOCALORIE_KJ,
} from './constants';

/** A number, or one with a unit. */
export type EvaluatedValue = number | Unit;

/** The arithmetic of quantities. */
export interface UnitEvaluator {
  unit(value: number, unit: string): Unit;
  add(a: EvaluatedValue, b: EvaluatedValue): EvaluatedValue;
  subtract(a: EvaluatedValue, b: EvaluatedValue): EvaluatedValue;
  multiply(a: EvaluatedValue, b: EvaluatedValue): EvaluatedValue;
  divide(a: EvaluatedValue, b: EvaluatedValue): EvaluatedValue;
  pow(a: EvaluatedValue, b: number): EvaluatedValue;
}

/**
 * Makes an evaluator of the mathjs functions used and nothing else of it. Bundles load this module at the first call: it is larger than
 * all the rest, and seldom needed.
 */
export function createUnitEvaluator(): UnitEvaluator {
  const math = create({
    unitDependencies,
    createUnitDependencies,
    addDependencies,
    subtractDependencies,
    multiplyDependencies,
    divideDependencies,
    powDependencies,
  }) as MathJsInstance;
  const define = (name: string, definition: string) => math.createUnit(name, definition);
  define('pwCharge', `${ELEMENTARY_CHARGE_C} C`);
  define('pwBohr', `${BOHR_RADIUS_M} m`);
  define('pwChargeAngstrom', '1 pwCharge angstrom');
  define('pwDebye', `${DEBYE_E_A} pwChargeAngstrom`);
  define('pwAtomicDipole', `${BOHR_A} pwChargeAngstrom`);
  define('pwAtomicVolume', `${BOHR_A ** 3} angstrom^3`);
  define('pwCalorie', `${KILOCALORIE_KJ} J`);
  define('pwKilocalorie', `${KILOCALORIE_KJ} kJ`);
  define('pwElectronvoltPerMol', `${ELEMENTARY_CHARGE_C * AVOGADRO_PER_MOL} J/mol`);
  define('pwMillielectronvoltPerMol', `${(ELEMENTARY_CHARGE_C * AVOGADRO_PER_MOL) / 1000} J/mol`);
  define('pwHartreePerMol', `${HARTREE_KJ_PER_MOL} kJ/mol`);
  define('pwMillihartreePerMol', `${HARTREE_KJ_PER_MOL / 1000} kJ/mol`);
  return math as unknown as UnitEvaluator;
}
