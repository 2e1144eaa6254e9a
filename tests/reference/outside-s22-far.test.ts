import { describe, expect, it } from 'vitest';
import { additivePolarizability } from '../../server/src/physics/additive-polarizability';
import { COULOMB_KJ_A_PER_MOL } from '../../server/src/physics/constants';
import { estimateDipole } from '../../server/src/physics/dipole-estimate';
import { dispersionElectrons, dispersionEnergy, slaterKirkwoodC6 } from '../../server/src/physics/dispersion';
import { fitCharges } from '../../server/src/physics/fitted-charges';
import { fragmentGraph } from '../../server/src/physics/fragment-graph';
import { debyeEnergy } from '../../server/src/physics/induction-pair';
import { dipoleDipole } from '../../server/src/physics/multipole-energies';
import { type Geometry, geometryOf, massCentre, part } from './data/geometry';
import { S22_FAR } from './data/s22-far';
import { markdownTable, printIfAsked } from './markdown';

const EV_KJ_PER_MOL = 96.48533212331;

/** What the program makes of one molecule from its geometry alone. */
function molecule(geometry: Geometry) {
  const centreA = massCentre(geometry);
  const { count, elements, positionsA } = geometry;
  const estimate = estimateDipole(count, elements, positionsA, 0, centreA);
  if (!estimate.ok) throw new Error(estimate.reason);
  const alpha = additivePolarizability(fragmentGraph(count, elements, positionsA), elements, 0);
  if (!alpha.ok) throw new Error(alpha.reason);
  const chargesE = estimate.chargesE.slice();
  fitCharges(count, positionsA, chargesE, 0, estimate.dipoleEA, centreA);
  let electrons = 0;
  for (const z of elements) electrons += dispersionElectrons(z);
  return { ...geometry, centreA, dipoleEA: estimate.dipoleEA, chargesE, alphaA3: alpha.polarizabilityA3, electrons };
}

type Molecule = ReturnType<typeof molecule>;

const dot = (u: readonly number[], v: readonly number[]) => u[0]! * v[0]! + u[1]! * v[1]! + u[2]! * v[2]!;

function pointDipoles(one: Molecule, two: Molecule, offset: readonly number[], distanceA: number): number {
  const unit = offset.map((v) => v / distanceA);
  const energy = dipoleDipole(
    dot(one.dipoleEA, two.dipoleEA),
    dot(one.dipoleEA, unit),
    dot(two.dipoleEA, unit),
    distanceA,
  );
  return COULOMB_KJ_A_PER_MOL * energy;
}

function coulombSum(one: Molecule, two: Molecule): number {
  let sum = 0;
  for (let i = 0; i < one.count; i++) {
    for (let j = 0; j < two.count; j++) {
      const apart = [0, 1, 2].map((a) => one.positionsA[3 * i + a]! - two.positionsA[3 * j + a]!);
      sum += (one.chargesE[i]! * two.chargesE[j]!) / Math.hypot(apart[0]!, apart[1]!, apart[2]!);
    }
  }
  return COULOMB_KJ_A_PER_MOL * sum;
}

function terms(dimer: (typeof S22_FAR)[number]) {
  const whole = geometryOf(dimer.atoms);
  const one = molecule(part(whole, 0, dimer.split));
  const two = molecule(part(whole, dimer.split, whole.count));
  const offset = [0, 1, 2].map((a) => two.centreA[a]! - one.centreA[a]!);
  const distanceA = Math.hypot(offset[0]!, offset[1]!, offset[2]!);
  const site = (m: Molecule) => ({ chargeE: 0, dipoleEA: m.dipoleEA, polarizabilityA3: m.alphaA3 });
  const induction = COULOMB_KJ_A_PER_MOL * debyeEnergy(site(one), site(two), offset);
  const dispersion = dispersionEnergy(
    slaterKirkwoodC6(one.electrons, one.alphaA3, two.electrons, two.alphaA3),
    distanceA,
  );
  const [point, charges] = [pointDipoles(one, two, offset, distanceA), coulombSum(one, two)];
  return {
    name: dimer.name,
    distanceA,
    benchmark: dimer.energyEV * EV_KJ_PER_MOL,
    point,
    charges,
    induction,
    dispersion,
    withPoint: point + induction + dispersion,
    withCharges: charges + induction + dispersion,
  };
}

describe('S22 at twice the distance, from geometry alone, against CCSD(T) energies', () => {
  const rows = S22_FAR.map(terms);
  const deviations = rows.map((row) => row.withCharges - row.benchmark);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + Math.abs(value), 0) / values.length;
  const n = (value: number) => value.toFixed(2).replace('-', '−');

  printIfAsked('S22 at 2.0 R, kJ/mol', () =>
    markdownTable(
      ['dimer', 'R, Å', 'CCSD(T)', 'dipole–dipole', 'charges', 'induction', 'dispersion', 'sum (charges)', 'deviation'],
      [
        ...rows.map((row) => [
          row.name,
          row.distanceA.toFixed(2),
          n(row.benchmark),
          n(row.point),
          n(row.charges),
          n(row.induction),
          n(row.dispersion),
          n(row.withCharges),
          n(row.withCharges - row.benchmark),
        ]),
        ['mean, absolute', '', n(mean(rows.map((row) => row.benchmark))), '', '', '', '', '', n(mean(deviations))],
      ],
    ),
  );

  it('has all 22', () => {
    expect(rows).toHaveLength(22);
  });

  it('is right in sign where the benchmark is beyond 0.5 kJ/mol', () => {
    for (const row of rows) if (Math.abs(row.benchmark) > 0.5) expect(row.withCharges, row.name).toBeLessThan(0);
  });

  it('is near the benchmark without hydrogen bonds, and far short of it with them, as measured', () => {
    // The first seven are the set's hydrogen-bonded ones: from geometry alone their hydrogens come out too little polar.
    expect(mean(deviations.slice(7))).toBeLessThan(0.7);
    expect(Math.max(...deviations.slice(7).map(Math.abs))).toBeLessThan(2.5);
    expect(mean(deviations.slice(0, 7))).toBeLessThan(7);
    for (const value of deviations.slice(0, 7)) expect(value).toBeGreaterThan(0);
    expect(Math.max(...deviations)).toBeLessThan(16);
  });

  it('induction and dispersion bind, and dispersion falls off as R^-6', () => {
    for (const row of rows) {
      expect(row.induction).toBeLessThanOrEqual(0);
      expect(row.dispersion).toBeLessThan(0);
    }
  });
});
