import { describe, expect, it } from 'vitest';
import type { Pair } from '../../server/src/analysis/pair';
import { validBeyond } from '../../server/src/analysis/reference';
import { DEFAULT_REQUEST, DEFAULT_SETTINGS, type Knowledge } from '../../server/src/analysis/settings';
import { analyse } from '../support/analyse';

/** What a reference of estimated charges may be off by. */

const ESTIMATES: Knowledge = { library: null, estimates: true };
const WATER = [
  ['O', 0, 0, 0],
  ['H', 0.757, 0.586, 0],
  ['H', -0.757, 0.586, 0],
] as const;
const DIPOLES = 'fragment_atoms="1-3 4-6" fragment_dipoles="0 1.855 0 0 1.855 0"';
const REQUEST = { ...DEFAULT_REQUEST, settings: { ...DEFAULT_SETTINGS, cutoffA: 1000 } };

function frameText(distanceA: number, keys: string, charges: boolean): string {
  const at = (x: number) =>
    WATER.map(
      ([symbol, ax, y, z]) => `${symbol} ${ax + x} ${y} ${z}${charges ? (symbol === 'O' ? ' -0.8' : ' 0.4') : ''}`,
    );
  const properties = `Properties=species:S:1:pos:R:3${charges ? ':charge:R:1' : ''}`;
  return ['6', `${properties} ${keys}`, ...at(0), ...at(distanceA), ''].join('\n');
}

function waters(distanceA: number, knowledge: Knowledge | null, keys = DIPOLES, charges = false) {
  const { frames, pairs } = analyse(frameText(distanceA, keys, charges), 'xyz', { ...REQUEST, knowledge });
  return { system: frames[0]!.system, pair: pairs[0]![0] as Pair };
}

describe('the doubt of a reference', () => {
  it('is nothing where nothing may be estimated, and charges then start from zero', () => {
    const { system, pair } = waters(5, null);
    expect(pair).toMatchObject({ basis: 'fitted', doubtKJPerMol: 0 });
    expect(system.fittedE[1]).toBeCloseTo(system.fittedE[2]!, 12);
    expect(system.fittedE[0]! + 2 * system.fittedE[1]!).toBeCloseTo(0, 12);
    const estimated = waters(5, ESTIMATES);
    expect(estimated.pair.basis).toBe('fitted');
    expect(estimated.pair.doubtKJPerMol).toBeGreaterThan(0);
    expect(estimated.pair.energies.pointDipole).toBe(pair.energies.pointDipole);
  });

  it('is nothing for charges of the file, in use or moved', () => {
    expect(waters(5, ESTIMATES, 'fragment_atoms="1-3 4-6"', true).pair).toMatchObject({
      basis: 'charges',
      doubtKJPerMol: 0,
    });
    expect(waters(5, ESTIMATES, DIPOLES.replaceAll('1.855', '2.6'), true).pair).toMatchObject({
      basis: 'fitted',
      doubtKJPerMol: 0,
    });
  });

  it('falls by 16 between neutral molecules and by 8 beside an ion when the distance doubles', () => {
    const ratio = (keys: string) =>
      waters(500, ESTIMATES, keys).pair.doubtKJPerMol / waters(1000, ESTIMATES, keys).pair.doubtKJPerMol;
    expect(ratio(DIPOLES)).toBeCloseTo(16, 9);
    expect(ratio(`${DIPOLES} fragment_charges="1 0"`)).toBeCloseTo(8, 1);
  });

  it('is a share of the energy of the quadrupole of the charges', () => {
    const { system, pair } = waters(6, ESTIMATES);
    const theta = [0, 0, 0, 0, 0, 0, 0, 0, 0];
    for (let i = 0; i < 3; i++) {
      const r = [0, 1, 2].map((a) => system.localA[3 * i + a]!);
      const r2 = r.reduce((sum, x) => sum + x * x, 0);
      for (let k = 0; k < 9; k++) {
        const [a, b] = [k % 3, Math.floor(k / 3)];
        theta[k]! += 0.5 * system.fittedE[i]! * (3 * r[a]! * r[b]! - (a === b ? r2 : 0));
      }
    }
    const size = Math.hypot(...theta);
    expect(system.doubtEA2[0]).toBeCloseTo(size, 12);
    const dipole = system.moments.dipoleNormEA[0]!;
    expect(pair.doubtKJPerMol).toBeCloseTo((0.3 * system.couplingKJA * 2 * dipole * size) / pair.distanceA ** 4, 9);
  });

  it('counts with the error: the regime turns where `validBeyond` says', () => {
    const { system, pair } = waters(6, ESTIMATES);
    const limit = validBeyond(system, 0, 1, pair.u, pair.basis);
    expect(waters(limit * 1.0001, ESTIMATES).pair.regime).toBe('far');
    expect(waters(limit * 0.9999, ESTIMATES).pair.regime).toBe('edge');
    const unaided = waters(6, null);
    expect(limit).toBeGreaterThan(validBeyond(unaided.system, 0, 1, unaided.pair.u, unaided.pair.basis));
  });
});
