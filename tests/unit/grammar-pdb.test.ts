import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import oniguruma from 'vscode-oniguruma';
import textmate, { type IGrammar, type StateStack } from 'vscode-textmate';
import { FILE_KEYS, SELECTED_KEYS } from '../../server/src/formats/annotation/keys';
import { ATOM_COLUMNS } from '../../server/src/formats/pdb/fields';

let grammar: IGrammar;

beforeAll(async () => {
  await oniguruma.loadWASM(readFileSync('node_modules/vscode-oniguruma/release/onig.wasm'));
  const file = 'client/assets/pdb.tmLanguage.json';
  const registry = new textmate.Registry({
    onigLib: Promise.resolve({
      createOnigScanner: (patterns) => new oniguruma.OnigScanner(patterns),
      createOnigString: (text) => new oniguruma.OnigString(text),
    }),
    loadGrammar: async () => textmate.parseRawGrammar(readFileSync(file, 'utf8'), file),
  });
  grammar = (await registry.loadGrammar('source.pdb'))!;
});

interface Token {
  readonly word: string;
  readonly scope: string;
  readonly start: number;
  readonly end: number;
}

function tokens(line: string): Token[] {
  return grammar.tokenizeLine(line, textmate.INITIAL).tokens.map(({ startIndex, endIndex, scopes }) => ({
    word: line.slice(startIndex, endIndex).trim(),
    scope: scopes.at(-1)!.replace(/\.pdb$/, ''),
    start: startIndex,
    end: endIndex,
  }));
}

/** Words with their innermost scopes, blanks left out: `word scope`. */
function words(line: string): string[] {
  return tokens(line)
    .filter(({ word }) => word !== '')
    .map(({ word, scope }) => `${word} ${scope}`);
}

/** Every column filled, by width: 6 record, 5 serial, 1, 4 name, 1, 4 residue, 1, 4 number, 1, 3, 3 × 8, 2 × 6, 6, 4, 2, 2. */
const FULL = [
  ...['HETATM', '12345', ' ', " C1'", 'A', 'LIG ', 'B', ' 401', 'C', '   ', ' -12.345', '-100.000', ' 999.999'],
  ...['  0.50', ' 20.00', '      ', 'SEG1', ' C', '1-'],
].join('');

const SCOPES: Readonly<Record<keyof typeof ATOM_COLUMNS, string>> = {
  serial: 'constant.numeric.serial',
  name: 'entity.name.tag.atom-name',
  altLoc: 'keyword.operator.alternate-location',
  residueName: 'entity.name.type.residue',
  chain: 'storage.type.chain',
  residueNumber: 'constant.numeric.residue-number',
  insertion: 'keyword.operator.insertion-code',
  x: 'constant.numeric.coordinate.x',
  y: 'variable.other.coordinate.y',
  z: 'constant.numeric.coordinate.z',
  occupancy: 'variable.other.occupancy',
  temperatureFactor: 'constant.numeric.temperature-factor',
  element: 'entity.name.class.element',
  formalCharge: 'constant.language.formal-charge',
};

describe('an atom record', () => {
  it.each(Object.keys(SCOPES) as (keyof typeof ATOM_COLUMNS)[])(
    'has %s in the columns that the parser reads',
    (name) => {
      const [start, end] = ATOM_COLUMNS[name];
      expect(tokens(FULL)).toContainEqual({ word: FULL.slice(start, end).trim(), scope: SCOPES[name], start, end });
    },
  );

  it('parts coordinates that touch', () => {
    expect(words(FULL)).toContain('-12.345 constant.numeric.coordinate.x');
    expect(words(FULL)).toContain('-100.000 variable.other.coordinate.y');
  });

  it.each([4, 6, 9, 11, 14, 20, 28, 33, 54, 60, 75, 79])(
    'that ends after %i characters keeps its columns',
    (length) => {
      const whole = tokens(FULL);
      for (const { scope, start, end } of tokens(FULL.slice(0, length))) {
        if (length < 6 || scope === 'source') continue;
        const before = whole.find((token) => token.start === start);
        expect({ scope, end: Math.min(end, length) }).toEqual({
          scope: before!.scope,
          end: Math.min(before!.end, length),
        });
      }
    },
  );
});

describe('other records', () => {
  it('tell bonded serials apart that touch', () => {
    expect(words('CONECT1234512346')).toEqual([
      'CONECT keyword.control.record',
      '12345 constant.numeric.serial',
      '12346 variable.other.serial',
    ]);
  });

  it('name the edges of the cell', () => {
    expect(words('CRYST1   52.000   58.600   61.900  90.00  90.00  90.00 P 21 21 21    8')).toContain(
      '58.600 variable.other.cell.b',
    );
  });

  it.each(['MODEL        1', 'ENDMDL', 'END', 'TER', 'TITLE     WATER', 'SHEET    1   A 5 THR A 107'])('%s', (line) => {
    expect(words(line)[0]).toBe(`${line.split(' ')[0]} keyword.control.record`);
  });
});

describe('a REMARK', () => {
  it.each([...new Set([...SELECTED_KEYS, ...FILE_KEYS])])('of the free range knows the key %s', (key) => {
    expect(words(`REMARK  99 ${key}=1`)).toContain(`${key} keyword.other.annotation-key`);
    expect(words(`REMARK   6 ${key}="1"`)).toContain(`${key} keyword.other.annotation-key`);
  });

  it('shows units, axes and selectors', () => {
    const found = words('REMARK  99 fragment=*:HOH:12 dipole_size="1.855 D" axis=O>H1,H2');
    expect(found).toContain('HOH string.unquoted.value');
    expect(found).toContain('12 constant.numeric');
    expect(found).toContain('D keyword.other.unit');
    expect(found).toContain('> keyword.operator.axis');
    expect(found).toContain('H2 string.unquoted.value');
  });

  it.each(['REMARK   5 charge=1', 'REMARK 290 charge=1', 'REMARK 100 charge=1'])(
    'outside it has no keys: %s',
    (line) => {
      expect(words(line).at(-1)).toBe('charge=1 comment.line.remark');
    },
  );
});

describe('a line of 100,000 characters is tokenized to its end', () => {
  const long: Readonly<Record<string, string>> = {
    atom: FULL + 'x'.repeat(100_000),
    remark: `REMARK  99 ${'a'.repeat(100_000)}`,
    'a list in a remark': `REMARK  99 dipole="${'0.1 nan -1.855 '.repeat(6700)}"`,
    'open brackets': `REMARK  99 dipole=${'['.repeat(100_000)}`,
    'an unknown record': `SHEET  ${'1.5 A '.repeat(17_000)}`,
    'no record': '1'.repeat(100_000),
  };

  it.each(Object.keys(long))('%s', (name) => {
    const line = long[name]!;
    const started = performance.now();
    const result = grammar.tokenizeLine(line, null as StateStack | null, 20_000);
    expect(result.stoppedEarly).toBe(false);
    expect(result.tokens.at(-1)!.endIndex).toBeGreaterThanOrEqual(line.length);
    // Generous: a quadratic rule takes minutes.
    expect(performance.now() - started).toBeLessThan(15_000);
  });
});
