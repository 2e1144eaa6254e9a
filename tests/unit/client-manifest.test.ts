import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { CENTRES, DEFAULT_ENERGY_UNIT, DEFAULT_SETTINGS } from '../../server/src/analysis/settings';
import { CATALOGUE, FINDING_CODES, SEVERITIES } from '../../server/src/base/catalogue';
import { COMMAND_DOCS } from '../../server/src/features/command-docs';
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

  it('runs nothing before one of its languages is opened, one of its commands is chosen, or its panel is restored', () => {
    expect(manifest.activationEvents).toEqual(['onWebviewPanel:polewise.pairs']);
    expect(readFileSync('client/src/panel.ts', 'utf8')).toContain("PANEL_TYPE = 'polewise.pairs'");
  });
});

interface CommandEntry {
  readonly command: string;
  readonly title: string;
  readonly category: string;
}

const COMMANDS: readonly CommandEntry[] = manifest.contributes.commands;
const names = COMMANDS.map(({ command }) => command);

/** The names that the client registers commands by: as they stand in its source, or by a constant of the protocol. */
function registeredNames(): string[] {
  const read = (file: string) => readFileSync(file, 'utf8');
  const source = readdirSync('client/src', { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts'))
    .map((name) => read(join('client/src', name)))
    .join('\n');
  const constants = [...read('server/src/lsp/protocol.ts').matchAll(/const (\w+) = '(polewise\.\w+)'/g)];
  const byConstant = constants.filter(
    ([, constant]) => source.includes(`[${constant}]`) || source.includes(`(${constant},`),
  );
  const written = [...source.matchAll(/(?<=registerCommand\(|^\s*)'(polewise\.\w+)'(?=[:,])/gm)].map(
    ([, name]) => name!,
  );
  return [...written, ...byConstant.map(([, , name]) => name!)];
}

describe('the commands of the manifest', () => {
  it.each(COMMANDS)(
    '$command has a title in title case, our category, and an explanation',
    ({ command, title, category }) => {
      expect(title).toMatch(/^[A-Z]/);
      for (const word of title.split(' ')) expect(word, title).toMatch(/^[A-Z]|^(?:of|the|a|an|to|for|and|or|in|as)$/);
      expect(category).toBe('Polewise');
      expect(COMMAND_DOCS[command]).toMatch(/\.$/);
      expect(readFileSync('README.md', 'utf8')).toContain(`\`${command}\``);
    },
  );

  it('are registered by the client, and the client registers no other', () => {
    expect(registeredNames().sort()).toEqual([...names].sort());
  });

  it('are explained, and nothing else is', () => {
    expect(Object.keys(COMMAND_DOCS).sort()).toEqual([...names].sort());
  });

  it('are in menus by names that exist', () => {
    const menus: Record<string, { command: string }[]> = manifest.contributes.menus;
    for (const { command } of Object.values(menus).flat()) expect(names).toContain(command);
  });

  it('are offered in the palette where a file of ours is open, and the sample always', () => {
    const entries: { command: string; when: string }[] = manifest.contributes.menus.commandPalette;
    const always = names.filter((name) => !entries.some(({ command }) => command === name));
    expect(always).toEqual(['polewise.openSample']);
    expect(new Set(entries.map(({ when }) => when))).toEqual(new Set(['editorLangId == xyz || editorLangId == pdb']));
  });
});

interface WalkthroughStep {
  readonly id: string;
  readonly description: string;
  readonly media: { readonly markdown: string };
  readonly completionEvents: readonly string[];
}

describe('the walkthrough', () => {
  const [walkthrough, ...others] = manifest.contributes.walkthroughs;
  const steps: readonly WalkthroughStep[] = walkthrough.steps;
  const packed = readFileSync('.vscodeignore', 'utf8');

  it('is one, of three to five steps', () => {
    expect(others).toEqual([]);
    expect(steps.length).toBeGreaterThanOrEqual(3);
    expect(steps.length).toBeLessThanOrEqual(5);
  });

  it.each(steps)(
    'step $id has a button for a command of ours, and is done when that was run',
    ({ description, completionEvents }) => {
      const [, command] = /^\[[^\]]+\]\(command:([\w.]+)\)$/m.exec(description)!;
      expect(names).toContain(command);
      expect(completionEvents).toEqual([`onCommand:${command}`]);
    },
  );

  it.each(steps)(
    'step $id has a page whose pictures are there and say in words what they show',
    ({ media: { markdown } }) => {
      const pictures = [...readFileSync(markdown, 'utf8').matchAll(/!\[([^\]]*)\]\(([^)]+)\)/g)];
      expect(pictures.length).toBeGreaterThan(0);
      for (const [, words, name] of pictures) {
        expect(words!.length).toBeGreaterThan(20);
        expect(existsSync(join(dirname(markdown), name!))).toBe(true);
      }
      expect(packed).toContain(`!${dirname(markdown)}/*`);
    },
  );

  it('ends with the dimer files', () => {
    expect(steps.at(-1)!.completionEvents).toEqual(['onCommand:polewise.writeDimers']);
  });
});
