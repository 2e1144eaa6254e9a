import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { builtInKnowledge } from '../../server/src/analysis/built-in-knowledge';
import { pairsToCompute, strongestPair } from '../../server/src/analysis/pairs-of-note';
import { type AnalysisRequest, DEFAULT_REQUEST, DEFAULT_SETTINGS } from '../../server/src/analysis/settings';
import { surveySteps } from '../../server/src/analysis/survey';
import { finish } from '../../server/src/base/steps';
import { waterBox } from '../bench/water';
import { type Analysed, analyse } from '../support/analyse';

/** The strongest pair and those to compute, beside what looking at every single pair gives. */

const knowledge = builtInKnowledge({ library: true, estimates: true });
const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const BOX = waterBox(600);

const SETTINGS: readonly (readonly [string, Partial<typeof DEFAULT_SETTINGS>])[] = [
  ['as they are', {}],
  ['in a polar medium', { relativePermittivity: 80 }],
  ['with any tolerance', { tolerance: 1 }],
  ['when cold', { temperatureK: 5 }],
  ['when hot', { temperatureK: 5000 }],
];

function requestOf(settings: Partial<typeof DEFAULT_SETTINGS>): AnalysisRequest {
  return { ...DEFAULT_REQUEST, settings: { ...DEFAULT_SETTINGS, ...settings }, knowledge };
}

function compareAll({ frames, pairs }: Analysed): void {
  for (const [n, frame] of frames.entries()) {
    const all = pairs[n]!;
    const survey = finish(surveySteps(frame.system, frame.partners));
    const flat = all.filter(({ advice }) => advice === 'compute').flatMap(({ first, second }) => [first, second]);
    expect(finish(pairsToCompute(frame, survey))).toEqual(flat);
    const best = [...all].sort((a, b) => b.strengthKJPerMol - a.strengthKJPerMol)[0];
    const { pair, isSearched } = finish(strongestPair(frame, survey));
    expect(isSearched).toBe(true);
    if (best === undefined || best.strengthKJPerMol === 0) expect(pair).toBeNull();
    else expect([pair?.first, pair?.second]).toEqual([best.first, best.second]);
  }
}

describe.each(SETTINGS)('%s', (_, settings) => {
  it.each(SAMPLES)('in %s', (name) => {
    const text = readFileSync(`samples/${name}`, 'utf8');
    compareAll(analyse(text, name.endsWith('.pdb') ? 'pdb' : 'xyz', requestOf(settings)));
  });

  it('in a box of water', () => {
    compareAll(analyse(BOX.xyz, 'xyz', requestOf(settings)));
  });
});

const WATERS = 'O 0 0 0\nH 0.76 0.59 0\nH -0.76 0.59 0\nO 0 3 0\nH 0.76 3.59 0\nH -0.76 3.59 0\n';

describe('the strongest pair, where nothing is noted of it,', () => {
  const strongest = (text: string, settings: Partial<typeof DEFAULT_SETTINGS> = {}) => {
    const [frame] = analyse(text, 'xyz', requestOf(settings)).frames;
    const survey = finish(surveySteps(frame!.system, frame!.partners));
    const { pair } = finish(strongestPair(frame!, survey));
    const noted = Array.from({ length: survey.notes.count }, (_, k) => [survey.notes.first[k], survey.notes.second[k]]);
    return { pair: [pair?.first, pair?.second], noted };
  };

  it.each([6, 12, 30])('is that of two ions %s Å apart, with no other to compare', (gap) => {
    const text = `4\nfragment_atoms="1 2 3 4" fragment_charges="1 -1 0 0"
Na 0 0 0
Cl ${gap} 0 0
Ar 40 0 0
Ar 44 0 0
`;
    expect(strongest(text)).toEqual({ pair: [0, 1], noted: [] });
  });

  it('is that of two ions, a little stronger than a noted pair of waters', () => {
    const text = `8\nfragment_atoms="1-3 4-6 7 8" fragment_charges="0 0 0.5 -0.5"\n${WATERS}Na 60 0 0\nCl 80 0 0\n`;
    expect(strongest(text)).toEqual({ pair: [2, 3], noted: [[0, 1]] });
  });

  it('is that of touching waters, which count without the medium', () => {
    const text = `8\nfragment_atoms="1 2 3-5 6-8" fragment_charges="1.7 -1.7 0 0"\nNa 60 0 0\nCl 65 0 0\n${WATERS}`;
    const settings = { temperatureK: 2000, relativePermittivity: 80, tolerance: 0.9 };
    expect(strongest(text, settings)).toEqual({ pair: [2, 3], noted: [] });
  });
});
