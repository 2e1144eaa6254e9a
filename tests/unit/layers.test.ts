import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve, sep } from 'node:path';
import { describe, expect, it } from 'vitest';

/** What files of a folder may import: other folders and files, by the beginnings of their paths, and packages by those of their names. */
interface Layer {
  readonly paths: readonly string[];
  readonly packages: readonly string[];
}

const server = (...folders: string[]) => folders.map((folder) => `server/src/${folder}/`);
const CORE = ['base', 'physics', 'library', 'text', 'formats', 'model', 'analysis', 'features'];

/** Each folder of the source, and what it may import besides itself. */
const LAYERS: Readonly<Record<string, Layer>> = {
  'server/src/base': { paths: [], packages: [] },
  'server/src/physics': { paths: server('base'), packages: ['mathjs'] },
  'server/src/library': { paths: server('base', 'physics'), packages: [] },
  'server/src/text': { paths: server('base'), packages: [] },
  'server/src/formats': { paths: server('base', 'physics', 'text'), packages: [] },
  'server/src/model': { paths: server('base', 'physics', 'text', 'formats'), packages: [] },
  'server/src/analysis': { paths: server('base', 'physics', 'library', 'text', 'formats', 'model'), packages: [] },
  'server/src/features': { paths: server(...CORE.slice(0, -1)), packages: [] },
  'server/src/lsp': { paths: server(...CORE), packages: ['vscode-languageserver'] },
  'server/src/cli': { paths: server(...CORE), packages: ['node:', 'commander'] },
  'server/src/entry': { paths: server('cli', 'lsp'), packages: ['node:', 'vscode-languageserver'] },
  'client/src': {
    paths: ['server/src/lsp/protocol', 'server/src/features/number-text', 'client/panel/messages', 'samples/'],
    packages: ['vscode', 'vscode-languageclient'],
  },
  // The page inside the panel is a bundle of its own, and knows neither editor nor protocol library.
  'client/panel': {
    paths: ['server/src/lsp/protocol', 'server/src/features/number-text', 'server/src/features/csv'],
    packages: [],
  },
};

function sourceFiles(folder: string): string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts'))
    .map((name) => join(folder, name));
}

interface Import {
  readonly target: string;
  /** Nothing of it is left in a bundle. */
  readonly isTypeOnly: boolean;
}

function importsOf(file: string): Import[] {
  const text = readFileSync(file, 'utf8');
  const found = text.matchAll(/^(?:import|export)\b\s*(?:([^;]*?)from )?'([^']+)'|\bimport\('([^']+)'\)/gm);
  return Array.from(found, ([, names = '', target, dynamic]) => ({
    target: (target ?? dynamic)!,
    isTypeOnly: /^type\b/.test(names),
  }));
}

const files = Object.keys(LAYERS).flatMap((folder) => sourceFiles(resolve(folder)));
const names = files.map((file) => relative('.', file).split(sep).join('/'));

describe('imports run one way', () => {
  it('finds the source', () => {
    for (const folder of Object.keys(LAYERS))
      expect(
        names.some((name) => name.startsWith(`${folder}/`)),
        folder,
      ).toBe(true);
    expect(names.length).toBeGreaterThan(200);
  });

  it.each(names)('%s', (name) => {
    const folder = Object.keys(LAYERS).find((layer) => name.startsWith(`${layer}/`))!;
    const { paths, packages } = LAYERS[folder]!;
    for (const { target, isTypeOnly } of importsOf(name)) {
      const says = `${name} imports ${target}`;
      if (!target.startsWith('.')) {
        expect(
          packages.some((allowed) =>
            allowed.endsWith(':') ? target.startsWith(allowed) : target.split('/')[0] === allowed,
          ),
          says,
        ).toBe(true);
        continue;
      }
      const other = relative('.', resolve(dirname(name), target))
        .split(sep)
        .join('/');
      // Types cross from the server to the client freely: they are the shapes of its answers.
      const isFree = isTypeOnly && folder.startsWith('client/') && other.startsWith('server/src/');
      const allowed = [`${folder}/`, ...paths];
      expect(isFree || allowed.some((path) => other.startsWith(path)), says).toBe(true);
    }
  });
});

describe('source files are short enough to read in one sitting', () => {
  it.each([...names, 'client/panel/panel.css'])('%s', (name) => {
    const lines = readFileSync(name, 'utf8').split('\n').length;
    expect(lines).toBeLessThanOrEqual(450);
  });
});
