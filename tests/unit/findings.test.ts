import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { CATALOGUE, FINDING_CODES } from '../../server/src/base/catalogue';
import { analyse, applyFix, underlined } from '../support/analyse';
import { FINDING_CASES } from './findings-table';

describe('each finding on its own line', () => {
  it.each(FINDING_CASES)('$fact', ({ text, language = 'xyz', periodic = false, expected, atLeast }) => {
    const { findings } = analyse(text, language, { ...DEFAULT_REQUEST, periodic });
    if (atLeast === undefined) expect(underlined(text, findings)).toEqual(expected);
    else {
      expect(underlined(text, findings)).toEqual(expect.arrayContaining([...expected]));
      expect(findings.map((finding) => finding.code)).toEqual(expect.arrayContaining([...atLeast]));
    }
  });

  it('leaves no code of the catalogue without a case', () => {
    const shown = new Set(
      FINDING_CASES.flatMap(({ expected, atLeast = [] }) => [
        ...expected.map((line) => line.split(':')[0]),
        ...atLeast,
      ]),
    );
    expect(FINDING_CODES.filter((code) => !shown.has(code))).toEqual([]);
  });

  it.each(FINDING_CODES)('%s ends every message with what to do', (code) => {
    for (const { text, language = 'xyz' } of FINDING_CASES) {
      for (const finding of analyse(text, language).findings) {
        if (finding.code === code) expect(finding.message).toContain(CATALOGUE[code].remedy);
      }
    }
  });
});

describe('fixes', () => {
  const fixable = FINDING_CASES.flatMap(({ fact, text, language = 'xyz' }) =>
    analyse(text, language)
      .findings.filter((finding) => finding.fix !== undefined)
      .map((finding) => ({ name: `${finding.code}: ${fact}`, text, language, finding })),
  );

  it.each(fixable)('$name is gone after its fix, and nothing new comes', ({ text, language, finding }) => {
    const before = analyse(text, language).findings.map((other) => other.code);
    const after = analyse(applyFix(text, finding), language).findings.map((other) => other.code);
    expect(after).not.toContain(finding.code);
    const rest = before.filter((code) => code !== finding.code);
    for (const code of after.filter((other) => CATALOGUE[other].severity === 'error')) expect(rest).toContain(code);
  });

  it('exist for count, element, key, length, unit and direction', () => {
    const codes = new Set(fixable.map(({ finding }) => finding.code));
    for (const code of [
      'count-wrong',
      'element-unknown',
      'key-misspelt',
      'array-length',
      'dipole-unit',
      'dipole-reversed',
      'dipole-rotated',
    ] as const) {
      expect(codes).toContain(code);
    }
  });
});

describe('sound files are quiet', () => {
  const sound = readdirSync('samples').filter((name) => !name.startsWith('typical-mistakes'));

  it('there are some', () => {
    expect(sound.length).toBeGreaterThan(5);
  });

  it.each(sound)('%s has no error and no warning but near field', (name) => {
    const text = readFileSync(`samples/${name}`, 'utf8');
    const { findings } = analyse(text, name.endsWith('.pdb') ? 'pdb' : 'xyz');
    const loud = findings.filter(({ severity }) => severity === 'error' || severity === 'warning');
    expect(loud.filter(({ code }) => code !== 'near-field')).toEqual([]);
  });
});

describe('silence', () => {
  it('keeps a code out of the list', () => {
    const near = FINDING_CASES.find(({ expected }) => expected[0]?.startsWith('near-field'))!;
    expect(analyse(near.text.replace('kind_axes', 'silence="near-field" kind_axes')).findings).toEqual([]);
  });
});
