import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import oniguruma from 'vscode-oniguruma';
import textmate, { type IGrammar, type StateStack } from 'vscode-textmate';
import { FRAME_KEYS } from '../../server/src/formats/annotation/keys';

let grammar: IGrammar;

beforeAll(async () => {
  await oniguruma.loadWASM(readFileSync('node_modules/vscode-oniguruma/release/onig.wasm'));
  const file = 'client/assets/xyz.tmLanguage.json';
  const registry = new textmate.Registry({
    onigLib: Promise.resolve({
      createOnigScanner: (patterns) => new oniguruma.OnigScanner(patterns),
      createOnigString: (text) => new oniguruma.OnigString(text),
    }),
    loadGrammar: async () => textmate.parseRawGrammar(readFileSync(file, 'utf8'), file),
  });
  grammar = (await registry.loadGrammar('source.xyz'))!;
});

/** Words of the last of some lines with their innermost scopes, blanks left out: `word scope`. */
function lastLine(...lines: string[]): string[] {
  let state: StateStack = textmate.INITIAL;
  let words: string[] = [];
  for (const line of lines) {
    const { tokens, ruleStack } = grammar.tokenizeLine(line, state);
    state = ruleStack;
    words = tokens
      .map(({ startIndex, endIndex, scopes }) => [line.slice(startIndex, endIndex).trim(), scopes.at(-1)!] as const)
      .filter(([word]) => word !== '')
      .map(([word, scope]) => `${word} ${scope.replace(/\.xyz$/, '')}`);
  }
  return words;
}

const comment = (text: string) => lastLine('1', text);
const atom = (text: string) => lastLine('1', 'comment', text);

describe('the lines of a frame', () => {
  it('begin with the count', () => {
    expect(lastLine('  24 ')).toEqual(['24 constant.numeric.count']);
  });

  it('take the line after the count as comment, even when it is a number', () => {
    expect(comment('water at 300 K')[0]).toBe('water comment.line.free-text');
    expect(comment('12')).toEqual(['12 comment.line.free-text']);
  });

  it('end the comment with its line, even when it is empty', () => {
    expect(lastLine('1', '', 'O 0 0 0')[0]).toBe('O entity.name.type.species');
  });

  it('tell symbol, coordinates and further columns apart', () => {
    expect(atom(' O  -1.1687 +.5 2e-3  -0.8 water T')).toEqual([
      'O entity.name.type.species',
      '-1.1687 constant.numeric.coordinate.x',
      '+.5 constant.numeric.coordinate.y',
      '2e-3 constant.numeric.coordinate.z',
      '-0.8 constant.numeric.column',
      'water string.unquoted.column',
      'T constant.language',
    ]);
  });

  it('show a broken number as a word', () => {
    expect(atom('C 1.2.3 0 0')[1]).toBe('1.2.3 string.unquoted.column');
  });

  it('begin again with the next count', () => {
    expect(lastLine('1', '', 'O 0 0 0', '1', 'energy=-1')[0]).toBe('energy entity.other.attribute-name');
  });
});

describe('the comment line', () => {
  it.each(FRAME_KEYS)('knows the key %s', (key) => {
    expect(comment(`free text ${key}=1`)).toContain(`${key} keyword.other.annotation-key`);
    expect(comment(`x${key}=1`)[0]).toBe(`x${key} entity.other.attribute-name`);
  });

  it('tells the columns of Properties apart', () => {
    expect(comment('Properties=species:S:1').filter((word) => !word.startsWith(':'))).toEqual([
      'Properties keyword.other.annotation-key',
      '= keyword.operator.assignment',
      'species variable.other.column',
      'S storage.type.column',
      '1 constant.numeric',
    ]);
  });

  it('finds numbers and units in a quoted value', () => {
    const words = comment('temperature="25 degC" dipole_unit=a.u.');
    expect(words).toContain('25 constant.numeric');
    expect(words).toContain('degC keyword.other.unit');
    expect(words).toContain('a.u. keyword.other.unit');
  });

  it('reads quoted keys, blanks around the sign, and nested lists', () => {
    const words = comment('"dipole" = [[0, nan], [1.5, -2]] charge=0');
    expect(words).toContain('dipole keyword.other.annotation-key');
    expect(words).toContain('nan constant.language');
    expect(words).toContain('-2 constant.numeric');
    expect(words).toContain('charge keyword.other.annotation-key');
  });

  it('lets an open quote end with the line', () => {
    expect(lastLine('1', 'fragment_names="donor', 'O 0 0 0')[0]).toBe('O entity.name.type.species');
  });
});

describe('a line of 100,000 characters is tokenized to its end', () => {
  const long: Readonly<Record<string, string>> = {
    'a list of dipoles': `fragment_dipoles="${'0.1 nan -1.855 '.repeat(6700)}"`,
    'one word': 'a'.repeat(100_000),
    'one number': `charge=${'9'.repeat(100_000)}x`,
    'open brackets': `dipole=${'['.repeat(100_000)}`,
    quotes: '"'.repeat(100_000),
    'many keys': 'key=value '.repeat(10_000),
  };

  it.each(Object.keys(long))('%s', (name) => {
    for (const lines of [['1', long[name]!], [long[name]!]]) {
      let state: StateStack = textmate.INITIAL;
      for (const line of lines) {
        const started = performance.now();
        const { tokens, ruleStack, stoppedEarly } = grammar.tokenizeLine(line, state, 20_000);
        state = ruleStack;
        expect(stoppedEarly).toBe(false);
        expect(tokens.at(-1)!.endIndex).toBeGreaterThanOrEqual(line.length);
        // Generous: a quadratic rule takes minutes.
        expect(performance.now() - started).toBeLessThan(15_000);
      }
    }
  });
});
