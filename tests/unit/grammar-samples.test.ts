import { readdirSync, readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import oniguruma from 'vscode-oniguruma';
import textmate, { type IGrammar, type StateStack } from 'vscode-textmate';

/** Both grammars on whole files, and what a line may cost. */

const LANGUAGES = ['xyz', 'pdb'] as const;
const SAMPLES = readdirSync('samples').filter((name) => /\.(xyz|pdb)$/.test(name));
const grammars = new Map<string, IGrammar>();
/** How often the engine was asked for the next match since the last reset. */
let searches = 0;

beforeAll(async () => {
  await oniguruma.loadWASM(readFileSync('node_modules/vscode-oniguruma/release/onig.wasm'));
  class CountingScanner extends oniguruma.OnigScanner {
    override findNextMatchSync(...args: Parameters<oniguruma.OnigScanner['findNextMatchSync']>) {
      searches++;
      return super.findNextMatchSync(...args);
    }
  }
  const registry = new textmate.Registry({
    onigLib: Promise.resolve({
      createOnigScanner: (patterns) => new CountingScanner(patterns),
      createOnigString: (text) => new oniguruma.OnigString(text),
    }),
    loadGrammar: async (scope) => {
      const file = `client/assets/${scope.replace('source.', '')}.tmLanguage.json`;
      return textmate.parseRawGrammar(readFileSync(file, 'utf8'), file);
    },
  });
  for (const language of LANGUAGES) grammars.set(language, (await registry.loadGrammar(`source.${language}`))!);
});

/** Words of a text that no rule has coloured: `line: word`. */
function uncoloured(language: string, text: string): string[] {
  let state: StateStack = textmate.INITIAL;
  const rest: string[] = [];
  for (const [index, line] of text.split('\n').entries()) {
    const { tokens, ruleStack } = grammars.get(language)!.tokenizeLine(line, state);
    state = ruleStack;
    let at = 0;
    for (const { startIndex, endIndex, scopes } of tokens) {
      expect(startIndex).toBe(at);
      at = endIndex;
      const word = line.slice(startIndex, endIndex).trim();
      const innermost = scopes.at(-1)!;
      if (word !== '' && (/^source\./.test(innermost) || /^meta\./.test(innermost))) rest.push(`${index + 1}: ${word}`);
    }
    expect(at).toBeGreaterThanOrEqual(line.length);
  }
  return rest;
}

describe('a sample leaves no word without a colour', () => {
  it.each(SAMPLES)('%s', (name) => {
    expect(uncoloured(name.split('.').at(-1)!, readFileSync(`samples/${name}`, 'utf8'))).toEqual([]);
  });
});

describe('the check itself', () => {
  it('sees a word that no rule has', () => {
    expect(uncoloured('pdb', 'atom 1\nEND')).toEqual(['1: atom 1']);
  });
});

/** Lines that grow, of a kind that a rule might go over again and again. */
const GROWING: Readonly<Record<string, readonly [(typeof LANGUAGES)[number], string, (n: number) => string]>> = {
  'a comment of numbers': ['xyz', '1', (n) => `note="${'0.1 nan '.repeat(n / 8)}" charge=0`],
  'a comment of words': ['xyz', '1', (n) => 'word '.repeat(n / 5)],
  'one word': ['xyz', '1', (n) => 'a'.repeat(n)],
  'an atom line with many columns': ['xyz', '', (n) => `O 0 0 0 ${'1.5 '.repeat(n / 4)}`],
  'a remark of lists': ['pdb', '', (n) => `REMARK  99 dipole="${'0.1 -1.855 '.repeat(n / 11)}"`],
  'a record of words': ['pdb', '', (n) => `SHEET  ${'1.5 A '.repeat(n / 6)}`],
};

describe('a line of a million characters', () => {
  it.each(Object.keys(GROWING))(
    'is coloured to its end, in steps that grow as it does: %s',
    { timeout: 120_000 },
    (name) => {
      const [language, before, line] = GROWING[name]!;
      const steps = (n: number): number => {
        const grammar = grammars.get(language)!;
        const { ruleStack } = grammar.tokenizeLine(before, textmate.INITIAL);
        searches = 0;
        const text = line(n);
        const { tokens, stoppedEarly } = grammar.tokenizeLine(text, ruleStack);
        expect(stoppedEarly).toBe(false);
        expect(tokens.at(-1)!.endIndex).toBeGreaterThanOrEqual(text.length);
        return searches;
      };
      const half = steps(500_000);
      const whole = steps(1_000_000);
      expect(whole).toBeLessThanOrEqual(2.1 * half + 10);
      // No more of them than characters.
      expect(whole).toBeLessThan(2_000_000);
    },
  );
});
