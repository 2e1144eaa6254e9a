import { describe, expect, it } from 'vitest';
import { dimerFile } from '../../server/src/features/dimer-file';
import { namesOf } from '../../server/src/features/partner-view';
import { analyse } from '../support/analyse';

/** Two waters with what a column gives each atom. */
const waters = (properties: string, more: (atom: number) => string) =>
  [
    '6',
    `Properties=species:S:1:pos:R:3${properties}`,
    ...[0, 4]
      .flatMap((z) => [`O 0 0 ${z}`, `H 0.757 0.586 ${z}`, `H -0.757 0.586 ${z}`])
      .map((line, k) => line + more(k)),
    '',
  ].join('\n');

describe('a dimer file', () => {
  it.each([
    ['atomic charges', ':charge:R:1', (k: number) => (k % 3 ? ' 0.4' : ' -0.8')],
    [
      'atomic charges and dipoles',
      ':charge:R:1:dipoles:R:3',
      (k: number) => `${k % 3 ? ' 0.4' : ' -0.8'} 0.01 0.03 -0.02`,
    ],
    ['atomic dipoles alone', ':dipoles:R:3', (k: number) => ` 0 ${k < 3 ? 0.1 : 0.12} 0.02`],
  ])('of %s has the energy of its pair', (_, properties, more) => {
    const { frames, pairs } = analyse(waters(properties, more));
    const [pair] = pairs[0]!;
    const [again] = analyse(dimerFile(frames[0]!, null, pair!, namesOf(frames[0]!), 'x.xyz')).pairs[0]!;
    expect(pair!.energies.pointDipole).not.toBeNaN();
    expect(again!.energies.pointDipole).toBeCloseTo(pair!.energies.pointDipole, 8);
  });
});
