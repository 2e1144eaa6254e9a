import { covalentBonds } from './independent/connectivity.js';
import { DEBYE } from './independent/constants.js';
import { chainBonds } from './independent/contact.js';
import { buildFragments } from './independent/fragments.js';
import { scale } from './independent/linear.js';
import { buildPair } from './independent/pair.js';
import { parsePdb } from './independent/parse-pdb.js';
import { parseXyz } from './independent/parse-xyz.js';
import type { Fragment, FragmentResult, FrameResult, Options, PairResult, Settings } from './independent/types.js';

export type { FrameResult, Options, PairResult } from './independent/types.js';

/**
 * A second calculation of everything `polewise pairs --format json` prints, written apart from the program: plain
 * arrays, direct sums, other algorithms. It reads well-formed files only and knows nineteen elements.
 */
export function independentFrames(text: string, language: 'xyz' | 'pdb', options: Options = {}): FrameResult[] {
  const parsed = language === 'pdb' ? parsePdb(text, options.periodic) : parseXyz(text);
  return parsed.map((given, index) => {
    const frame = options.periodic === false ? { ...given, cell: null } : given;
    const settings: Settings = {
      temperatureK: options.temperatureK ?? frame.temperatureK ?? 298.15,
      relativePermittivity: options.relativePermittivity ?? frame.relativePermittivity ?? 1,
      centre: options.centre ?? 'mass',
      tolerance: options.tolerance ?? 0.2,
      cutoffA: options.cutoffA ?? 12,
    };
    const covalent = covalentBonds(frame);
    const fragments = buildFragments(frame, covalent, settings.centre);
    const bonds = chainBonds(covalent, fragments, frame.crossBonds);
    const pairs: PairResult[] = [];
    for (let a = 0; a < fragments.length; a++) {
      for (let b = a + 1; b < fragments.length; b++) {
        const pair = buildPair(fragments[a], fragments[b], frame, settings, bonds);
        if (pair !== null) pairs.push(pair);
      }
    }
    return { frame: index + 1, atomCount: frame.atoms.length, fragments: fragments.map(fragmentResult), pairs };
  });
}

function fragmentResult(fragment: Fragment): FragmentResult {
  return {
    fragment: fragment.number,
    name: fragment.name,
    atoms: fragment.atoms.map((i) => i + 1),
    chargeE: fragment.charge,
    centreA: fragment.centre,
    extentA: fragment.extent,
    dipoleD: fragment.dipole && scale(fragment.dipole, 1 / DEBYE),
    dipoleNormD: fragment.dipoleSize === null ? null : fragment.dipoleSize / DEBYE,
    dipoleSource: fragment.dipoleSource,
    chargeSource: fragment.chargeSource,
    polarizabilityA3: fragment.polarizability,
  };
}
