import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve, sep } from 'node:path';
import { describe, expect, it } from 'vitest';

const SOURCE = resolve('server/src');

/** What each folder may import besides itself, by its own folders and by packages. */
const MAY_IMPORT: Readonly<Record<string, { folders: readonly string[]; packages: readonly string[] }>> = {
  base: { folders: [], packages: [] },
  physics: { folders: ['base'], packages: ['mathjs'] },
  library: { folders: ['base', 'physics'], packages: [] },
  text: { folders: ['base'], packages: [] },
  formats: { folders: ['base', 'physics', 'text'], packages: [] },
  model: { folders: ['base', 'physics', 'library', 'text', 'formats'], packages: [] },
  analysis: { folders: ['base', 'physics', 'library', 'text', 'formats', 'model'], packages: [] },
  features: { folders: ['base', 'physics', 'library', 'text', 'formats', 'model', 'analysis'], packages: [] },
  lsp: {
    folders: ['base', 'physics', 'library', 'text', 'formats', 'model', 'analysis', 'features'],
    packages: ['vscode-languageserver'],
  },
  cli: {
    folders: ['base', 'physics', 'library', 'text', 'formats', 'model', 'analysis', 'features'],
    packages: ['node:', 'commander'],
  },
  entry: { folders: ['cli', 'lsp'], packages: ['node:', 'vscode-languageserver'] },
};

function sourceFiles(folder: string): string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts'))
    .map((name) => join(folder, name));
}

function importsOf(file: string): string[] {
  const text = readFileSync(file, 'utf8');
  return [...text.matchAll(/^(?:import|export)\b[^;]*?from '([^']+)'|\bimport\('([^']+)'\)/gm)].map(
    (m) => m[1] ?? m[2]!,
  );
}

const files = sourceFiles(SOURCE);

describe('imports run one way', () => {
  it('finds the source', () => {
    expect(files.length).toBeGreaterThan(50);
  });

  it.each(files.map((file) => relative(SOURCE, file)))('%s', (name) => {
    const folder = name.split(sep)[0]!;
    const { folders, packages } = MAY_IMPORT[folder]!;
    for (const target of importsOf(join(SOURCE, name))) {
      if (target.startsWith('.')) {
        const other = relative(SOURCE, resolve(dirname(join(SOURCE, name)), target)).split(sep)[0]!;
        expect([folder, ...folders], `${name} imports ${target}`).toContain(other);
      } else {
        expect(
          packages.some((allowed) => target.startsWith(allowed)),
          `${name} imports ${target}`,
        ).toBe(true);
      }
    }
  });
});

describe('source files are short enough to read in one sitting', () => {
  it.each(files.map((file) => relative(SOURCE, file)))('%s', (name) => {
    const lines = readFileSync(join(SOURCE, name), 'utf8').split('\n').length;
    expect(lines).toBeLessThanOrEqual(450);
  });
});
