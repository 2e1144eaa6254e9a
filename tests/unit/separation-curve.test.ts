import { describe, expect, it } from 'vitest';
import { finish } from '../../server/src/base/steps';
import { type SeparationCurve, separationCurveSteps } from '../../server/src/features/separation-curve';
import { analyse } from '../support/analyse';

/** The curve of energy against separation, along the line of centres. */

function curveOf(text: string): SeparationCurve | null {
  const { frames, pairs } = analyse(text);
  return finish(separationCurveSteps(frames[0]!.system, pairs[0]![0]!));
}

const WATERS = (distance: number) =>
  `6\nProperties=species:S:1:pos:R:3:charge:R:1\nO 0 0 0 -0.8\nH 0.757 0 0.587 0.4\nH -0.757 0 0.587 0.4\nO 0 0 ${distance} -0.8\nH 0.757 0 ${distance + 0.587} 0.4\nH -0.757 0 ${distance + 0.587} 0.4\n`;

/** Coulomb's constant, CODATA 2018 (NIST), in kJ·Å/mol/e², and one debye in e·Å, from the same. */
const COULOMB = 1389.354576;
const DEBYE = 0.20819433;

describe('the curve of two dipoles head to tail', () => {
  const text =
    '4\nfragment_atoms="1,2 3,4" fragment_dipoles="0 0 2 0 0 2"\nF 0 0 -0.4\nH 0 0 0.5\nF 0 0 5.6\nH 0 0 6.5\n';
  const curve = curveOf(text)!;

  it('is −2μ²/(4πε₀R³) for the point dipoles (handbook formula)', () => {
    for (const { distanceA, pointKJPerMol } of curve.points) {
      const expected = (-2 * COULOMB * (2 * DEBYE) ** 2) / distanceA ** 3;
      expect(pointKJPerMol! / expected).toBeCloseTo(1, 6);
    }
  });

  it('is ordered, holds the present separation inside, and falls off', () => {
    const distances = curve.points.map((point) => point.distanceA);
    expect(distances).toEqual([...distances].sort((a, b) => a - b));
    expect(distances[0]).toBeLessThan(curve.presentA);
    expect(distances[distances.length - 1]).toBeGreaterThan(1.5 * curve.presentA);
  });
});

describe('the curve of two waters with charges', () => {
  const curve = curveOf(WATERS(3.2))!;

  it('has at each separation what the two waters have there', () => {
    // The fragments are rigid copies, so the distance of the centres is that of the oxygen atoms.
    for (const k of [40, 80, 120]) {
      const { distanceA, referenceKJPerMol, pointKJPerMol, regime, contact } = curve.points[k]!;
      const [pair] = analyse(WATERS(distanceA)).pairs[0]!;
      expect(pair!.referenceKJPerMol).toBeCloseTo(referenceKJPerMol!, 6);
      expect(pair!.energies.pointDipole).toBeCloseTo(pointKJPerMol!, 6);
      expect([pair!.regime, pair!.contact]).toEqual([regime, contact]);
    }
  });

  it('begins where the two clash and ends apart', () => {
    expect(curve.points[0]!.contact).toBe('clash');
    expect(curve.points[curve.points.length - 1]!.contact).toBe('apart');
  });

  it('is far from validBeyond on', () => {
    const beyond = curve.points.filter((point) => point.distanceA > curve.validBeyondA!);
    expect(beyond.length).toBeGreaterThan(3);
    for (const point of beyond) expect(point.regime).toBe('far');
  });
});

describe('there is no curve', () => {
  it.each([
    ['where no dipole is known', '4\n\nC 0 0 0\nO 1.128 0 0\nC 0 5 0\nO 1.128 5 0\n'],
    [
      'where one encloses the other',
      '8\nfragment_atoms="1-7 8" fragment_charges="0 1" fragment_dipoles="0 0 1 0 0 0"\nC 5 0 0\nC -5 0 0\nC 0 5 0\nC 0 -5 0\nC 0 0 5\nC 0 0 -5\nC 4 4 4\nNa 0 0 0\n',
    ],
  ])('%s', (_, text) => {
    expect(curveOf(text)).toBeNull();
  });
});
