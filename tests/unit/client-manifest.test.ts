import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { CENTRES, DEFAULT_ENERGY_UNIT, DEFAULT_SETTINGS } from '../../server/src/analysis/settings';
import { CATALOGUE, FINDING_CODES, SEVERITIES } from '../../server/src/base/catalogue';
import { ENERGY_UNITS } from '../../server/src/physics/units';

const manifest = JSON.parse(readFileSync('package.json', 'utf8'));
const properties: Record<string, Record<string, unknown>> = manifest.contributes.configuration.properties;
const setting = (name: string) => properties[`polewise.${name}`]!;

describe('the settings of the manifest', () => {
  it.each(Object.keys(properties))('%s has a default, an explanation and the scope of a resource', (name) => {
    expect(properties[name]).toMatchObject({ default: expect.anything(), scope: 'resource' });
    expect(properties[name]!.markdownDescription).toMatch(/\.$/);
  });

  it('have the defaults of the program', () => {
    expect(setting('temperature').default).toBe(DEFAULT_SETTINGS.temperatureK);
    expect(setting('relativePermittivity').default).toBe(DEFAULT_SETTINGS.relativePermittivity);
    expect(setting('centre').default).toBe(DEFAULT_SETTINGS.centre);
    expect(setting('cutoff').default).toBe(DEFAULT_SETTINGS.cutoffA);
    expect(setting('tolerance').default).toBe(DEFAULT_SETTINGS.tolerance);
    expect(setting('energyUnit').default).toBe(DEFAULT_ENERGY_UNIT);
  });

  it('offer the choices of the program', () => {
    expect(setting('centre').enum).toEqual([...CENTRES]);
    expect(setting('energyUnit').enum).toEqual([...ENERGY_UNITS]);
  });

  it('list every finding with its title and severity, as the catalogue has them', () => {
    const expected = Object.fromEntries(
      FINDING_CODES.map((code) => [
        code,
        {
          description: `${CATALOGUE[code].title} (${CATALOGUE[code].severity})`,
          enum: [...SEVERITIES, 'off'],
        },
      ]),
    );
    expect(setting('severities').properties).toEqual(expected);
  });
});

describe('the manifest', () => {
  const { languages, grammars } = manifest.contributes;
  const files: string[] = [
    manifest.icon,
    ...languages.map(({ configuration }: { configuration: string }) => configuration),
    ...grammars.map(({ path }: { path: string }) => path),
  ];

  it.each(files)('names a file that is there: %s', (file) => {
    expect(existsSync(file)).toBe(true);
  });

  it('has a grammar for every language', () => {
    expect(grammars.map(({ language }: { language: string }) => language)).toEqual(
      languages.map(({ id }: { id: string }) => id),
    );
  });

  it.each(['xyz', 'pdb'])('takes a number with its sign and exponent as one word in %s', (language) => {
    const { wordPattern } = JSON.parse(readFileSync(`client/assets/${language}.language-configuration.json`, 'utf8'));
    const words = (text: string) => text.match(new RegExp(wordPattern, 'g'));
    expect(words('O  -1.25e-3 +.5 12.')).toEqual(['O', '-1.25e-3', '+.5', '12.']);
    expect(words('-12.345-100.000')).toEqual(['-12.345', '-100.000']);
    expect(words("silence=near-field 1HB O5'")).toEqual(['silence', 'near-field', '1HB', "O5'"]);
    expect(''.match(new RegExp(wordPattern))).toBeNull();
  });

  it('runs nothing before one of its languages is opened', () => {
    expect(manifest.activationEvents).toEqual([]);
    expect(manifest.contributes.commands ?? []).toEqual([]);
  });
});
