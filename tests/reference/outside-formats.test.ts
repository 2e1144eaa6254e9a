import { describe, expect, it } from 'vitest';
import { type Entry, scanEntries } from '../../server/src/formats/annotation/entries';
import { type TypedValue, typedValue } from '../../server/src/formats/annotation/values';
import { parse } from '../../server/src/formats/parse';
import { scanNumber } from '../../server/src/text/numbers';
import { snapshotOf } from '../../server/src/text/snapshot';
import { seeded } from './data/outside-program';

/**
 * Extended XYZ: what its specification (libAtoms/extxyz, README and kv_tests.md) accepts, rejects and means. Left out, because its
 * documents or readers disagree: `t` and `f` as booleans (listed, but not in the grammar), single quotes (one reader takes them,
 * the list rejects them), and words without `=` (rejected there, free text here on purpose).
 */

function entriesOf(line: string): { entries: Entry[]; values: TypedValue[] } {
  const text = snapshotOf(line);
  const entries = scanEntries(text, 0, text.length);
  return { entries, values: entries.map((entry) => typedValue(text, entry)) };
}

function typed(written: string): TypedValue {
  const { values } = entriesOf(`key=${written}`);
  expect(values).toHaveLength(1);
  return values[0]!;
}

describe('numbers of the comment line in every spelling', () => {
  const SIGNS = ['', '+', '-'];
  it.each(['12', '012'])('%s is an integer with every sign', (digits) => {
    for (const sign of SIGNS) {
      expect(typed(sign + digits)).toEqual({ kind: 'int', shape: [], items: [sign === '-' ? -12 : 12] });
    }
  });

  const MAIN = ['12.0', '012.0', '12', '012', '0.12', '00.12', '0.012'];
  const EXPONENTS = ['e', 'E', 'd', 'D'].flatMap((letter) =>
    SIGNS.flatMap((sign) => ['0', '12'].map((digits) => letter + sign + digits)),
  );
  it.each(MAIN)('%s is a float with every sign and exponent', (main) => {
    for (const sign of SIGNS) {
      for (const exponent of main.includes('.') ? ['', ...EXPONENTS] : EXPONENTS) {
        const value = Number(sign + main + exponent.toLowerCase().replace('d', 'e'));
        expect(typed(sign + main + exponent)).toEqual({ kind: 'float', shape: [], items: [value] });
      }
    }
  });

  it.each(['1.3k7', '12d', '1e', 'e5', '--1', '1.2.3', '0x10', 'TRuE', 'tRUE', 'nan'])(
    '%s is a bare string',
    (word) => {
      expect(typed(word)).toEqual({ kind: 'string', shape: [], items: [word] });
    },
  );

  it.each([
    ['T', true],
    ['true', true],
    ['True', true],
    ['TRUE', true],
    ['F', false],
    ['false', false],
    ['False', false],
    ['FALSE', false],
  ])('%s is the boolean %s', (word, expected) => {
    expect(typed(word)).toEqual({ kind: 'bool', shape: [], items: [expected] });
  });
});

describe('values that must be read', () => {
  const rows: [written: string, kind: TypedValue['kind'], shape: number[], items: (number | boolean | string)[]][] = [
    ['abc', 'string', [], ['abc']],
    ["!#$%&'()*+-./:;<>?@^_`|~", 'string', [], ["!#$%&'()*+-./:;<>?@^_`|~"]],
    ['"abc"', 'string', [], ['abc']],
    ['"a b c"', 'string', [], ['a b c']],
    [String.raw`"line one\nline two"`, 'string', [], ['line one\nline two']],
    [String.raw`"abc\"def"`, 'string', [], ['abc"def']],
    [String.raw`"abc\\def"`, 'string', [], ['abc\\def']],
    ['"=,[]{}"', 'string', [], ['=,[]{}']],
    // Lists separated by blanks; one item is a scalar.
    ['"1 2 3"', 'int', [3], [1, 2, 3]],
    ['{1 2 3}', 'int', [3], [1, 2, 3]],
    ['"1.0 2.0 3.0"', 'float', [3], [1, 2, 3]],
    ['"1 2.0 3"', 'float', [3], [1, 2, 3]],
    ['{1.0 2 3}', 'float', [3], [1, 2, 3]],
    ['"T F True FALSE"', 'bool', [4], [true, false, true, false]],
    ['{T F}', 'bool', [2], [true, false]],
    ['{a b c}', 'string', [3], ['a', 'b', 'c']],
    ['{"a b" c}', 'string', [2], ['a b', 'c']],
    ['"3"', 'int', [], [3]],
    ['{3}', 'int', [], [3]],
    ['"1 T"', 'string', [], ['1 T']],
    ['"1 two"', 'string', [], ['1 two']],
    // Lists in brackets.
    ['[1, 2, 3]', 'int', [3], [1, 2, 3]],
    ['[ 1,2.0 ,3 ]', 'float', [3], [1, 2, 3]],
    ['[T, F, True, FALSE]', 'bool', [4], [true, false, true, false]],
    ['[3]', 'int', [1], [3]],
    ['[a,b]', 'string', [2], ['a', 'b']],
    ['[ a, b ]', 'string', [2], ['a', 'b']],
    ['["a","b"]', 'string', [2], ['a', 'b']],
    ['[ "a", "b" ]', 'string', [2], ['a', 'b']],
    ['[ a, "b", c ]', 'string', [3], ['a', 'b', 'c']],
    ['[ "a, b", "c]" ]', 'string', [2], ['a, b', 'c]']],
    ['[ "c]", "a, b" ]', 'string', [2], ['c]', 'a, b']],
    ['[ T, F, bob ]', 'string', [3], ['T', 'F', 'bob']],
    ['[ T, F, "bob", TRUE ]', 'string', [4], ['T', 'F', 'bob', 'TRUE']],
    ['[1, T]', 'string', [2], ['1', 'T']],
    // Two dimensions.
    ['[[1,2,3]]', 'int', [1, 3], [1, 2, 3]],
    ['[[1,2],[3,4]]', 'int', [2, 2], [1, 2, 3, 4]],
    ['[ [1, 2] , [3.0, 4] ]', 'float', [2, 2], [1, 2, 3, 4]],
    ['[[T,F],[F,T]]', 'bool', [2, 2], [true, false, false, true]],
    ['[[a,b],["c",d]]', 'string', [2, 2], ['a', 'b', 'c', 'd']],
    ['[[ "a, b", "c]" ],[ "a, b", "c]" ]]', 'string', [2, 2], ['a, b', 'c]', 'a, b', 'c]']],
    ['[[T,F],[a,b]]', 'string', [2, 2], ['T', 'F', 'a', 'b']],
    ['[[1,2],[a,b]]', 'string', [2, 2], ['1', '2', 'a', 'b']],
    ['[[T,F],[1,2],[a,b],["c","d"]]', 'string', [4, 2], ['T', 'F', '1', '2', 'a', 'b', 'c', 'd']],
  ];
  it.each(rows)('%s is %s of shape %j', (written, kind, shape, items) => {
    expect(typed(written)).toEqual({ kind, shape, items });
  });
});

describe('values that must be rejected', () => {
  it.each([
    'abc"def',
    'abc=def',
    'abc,def',
    String.raw`abc\def`,
    'abc[def',
    'abc]def',
    'abc{def',
    'abc}def',
    '',
    '"abc',
    `"abc'`,
    '{1 2',
    '[1,2',
    '[[1,2],[3,4]',
    '[1,2,]',
    '[,1,2]',
    '[1,,2]',
    '[1 2 3]',
    '[a b, c]',
    '[[1,2],[3]]',
    '[[1,2],3]',
    '[[1,2][3,4]]',
    '[[[1,2],[3,4]],[[5,6],[7,8]]]',
    '[]',
    '{}',
  ])('key=%s', (written) => {
    expect(typed(written).kind).toBe('invalid');
  });
});

describe('keys', () => {
  it.each([
    ['key=5', ['key']],
    ['key =5', ['key']],
    ['key= 5', ['key']],
    ['key = 5', ['key']],
    ['key\t=\t5', ['key']],
    ['"key"=5', ['key']],
    ['"my key" = 5', ['my key']],
    ['a=1 b="2 3" c=[4, 5] d={6 7} e=T', ['a', 'b', 'c', 'd', 'e']],
    ['a="b=c" d=[ "e=f", g ] h=1', ['a', 'd', 'h']],
    ['', []],
  ])('%j holds the keys %j', (line, keys) => {
    expect(entriesOf(line).entries.map(({ key }) => key)).toEqual(keys);
  });
});

describe('frames', () => {
  const WATER = 'O 0 0 0\nH 0.9572 0 0\nH -0.24 0.9266 0\n';
  const frames = (text: string) => parse(snapshotOf(text), 'xyz');
  const codes = (text: string) => frames(text).problems.map(({ severity, code }) => `${severity} ${code}`);

  it.each([
    ['one frame', `3\n\n${WATER}`, 1],
    ['frames one after another', `3\n\n${WATER}3\nframe 2\n${WATER}`, 2],
    ['blanks around the count', `  3  \n\n${WATER}`, 1],
    ['blank lines at the end', `3\n\n${WATER}\n\n`, 1],
    ['no line end at the end', `3\n\n${WATER}`.trimEnd(), 1],
    ['Windows line ends', `3\n\n${WATER}`.replace(/\n/g, '\r\n'), 1],
    ['tabs between the fields', `3\n\n${WATER.replace(/ /g, '\t')}`, 1],
  ])('%s: read without a problem', (_, text, count) => {
    const tree = frames(text);
    expect(tree.frames.map(({ atoms }) => atoms.count)).toEqual(Array(count).fill(3));
    expect(tree.problems).toEqual([]);
  });

  it.each([
    ['species:S:1:pos:R:3', 'Ar 1 2 3', []],
    ['pos:R:3:species:S:1', '1 2 3 Ar', []],
    ['Z:I:1:pos:R:3', '18 1 2 3', []],
    ['species:S:1:pos:R:3:flag:L:2:note:S:1', 'Ar 1 2 3 T F word', []],
    ['species:S:1:forces:R:3:pos:R:3', 'Ar 9 9 9 1 2 3', []],
    ['species:S:1:pos:R:3', 'Ar 1 2 3 4', ['error columns-off']],
    ['species:S:1:pos:R:3:charge:R:1', 'Ar 1 2 3', ['error field-missing']],
    ['species:S:1:pos:Q:3', 'Ar 1 2 3', ['error columns-off']],
    ['species:S:1:pos:R:0', 'Ar 1 2 3', ['error columns-off']],
    ['species:S:1:pos:R', 'Ar 1 2 3', ['error columns-off']],
  ])('Properties=%s with the line "%s" has the problems %j', (properties, line, problems) => {
    const text = `1\nProperties=${properties}\n${line}\n`;
    expect(codes(text)).toEqual(problems);
    if (problems.length > 0) return;
    const { atoms } = frames(text).frames[0]!;
    expect([atoms.element[0], ...atoms.positionA]).toEqual([18, 1, 2, 3]);
  });

  it('a species that is no chemical symbol is an error', () => {
    expect(codes('2\nProperties=species:S:1:pos:R:3\nAr 1 2 3\nQq 4 5 6\n')).toEqual(['error element-unknown']);
  });

  it('without Properties the second line is free text and columns after the fourth are not read', () => {
    const tree = frames('1\nwater, charge first\nAr 1 2 3 -0.8 7\n');
    expect(tree.frames[0]!.atoms.chargeE).toBeNull();
    expect([...tree.frames[0]!.atoms.positionA]).toEqual([1, 2, 3]);
    expect(tree.problems.filter(({ severity }) => severity === 'error' || severity === 'warning')).toEqual([]);
  });

  const CELL = [10, 0, 0, 1, 11, 0, 2, 3, 12];
  it.each([
    ['nine numbers in quotes', 'Lattice="10 0 0 1 11 0 2 3 12"', CELL, [true, true, true]],
    ['three rows in brackets', 'Lattice=[[10, 0, 0], [1, 11, 0], [2, 3, 12]]', CELL, [true, true, true]],
    ['nine numbers in braces', 'Lattice={10 0 0 1 11 0 2 3 12}', CELL, [true, true, true]],
    ['a diagonal', 'Lattice="10 11 12"', [10, 0, 0, 0, 11, 0, 0, 0, 12], [true, true, true]],
    ['pbc in quotes', 'Lattice="10 0 0 1 11 0 2 3 12" pbc="T F T"', CELL, [true, false, true]],
    ['pbc in brackets', 'Lattice="10 0 0 1 11 0 2 3 12" pbc=[F, F, T]', CELL, [false, false, true]],
  ])('the cell: %s', (_, keys, vectors, periodic) => {
    const { cell } = frames(`1\n${keys} Properties=species:S:1:pos:R:3\nAr 1 2 3\n`).frames[0]!;
    expect([...cell!.vectorsA]).toEqual(vectors);
    expect(cell!.periodic).toEqual(periodic);
  });

  it('without Lattice there is no cell', () => {
    expect(frames('1\nProperties=species:S:1:pos:R:3\nAr 1 2 3\n').frames[0]!.cell).toBeNull();
  });

  it('coordinates may have Fortran exponents', () => {
    const { atoms } = frames('1\n\nAr 1.5d0 -2.5D-1 0.3E+1\n').frames[0]!;
    expect([...atoms.positionA]).toEqual([1.5, -0.25, 3]);
  });
});

describe('numbers equal Number() to the last bit', () => {
  const scan = (token: string) => {
    const text = snapshotOf(token);
    return scanNumber(text, 0, text.length);
  };

  it.each([
    // Numbers next to a boundary of binary floating point (common practice, no source).
    '9007199254740992',
    '9007199254740993',
    '9007199254740995e0',
    '1e22',
    '1e23',
    '8.5e22',
    '123456789012345678e-5',
    '0.000123456789012345678901234567890',
    '2.2250738585072011e-308',
    '2.2250738585072014e-308',
    '4.9406564584124654e-324',
    '2.4703282292062327e-324',
    '1.7976931348623157e308',
    '1.7976931348623159e308',
    '-0',
    '-0.0e5',
    '5e-400',
    '.5',
    '5.',
    '+7',
  ])('%s', (token) => {
    expect(Object.is(scan(token), Number(token))).toBe(true);
  });

  it('100,000 random tokens, with Fortran exponents among them', () => {
    const random = seeded(1957);
    const whole = (below: number) => Math.floor(random() * below);
    const digits = (count: number) => Array.from({ length: count }, () => whole(10)).join('');
    const wrong: string[] = [];
    for (let k = 0; k < 100_000; k++) {
      const sign = ['', '', '-', '+'][whole(4)]!;
      const before = digits(whole(3) === 0 ? whole(25) : 1 + whole(4));
      const point = whole(5) > 0;
      const after = point ? digits(whole(4) === 0 ? whole(25) : whole(9)) : '';
      const main = before + after === '' ? '7' : before;
      const size = whole(3) === 0 ? whole(345) : whole(30);
      const exponent = whole(2) === 0 ? '' : 'eEdD'[whole(4)]! + ['', '-', '+'][whole(3)]! + size;
      const token = sign + main + (point ? '.' : '') + after + exponent;
      if (!Object.is(scan(token), Number(token.replace(/[dD]/, 'e')))) wrong.push(token);
    }
    expect(wrong).toEqual([]);
  });

  it.each([
    '',
    '-',
    '.',
    '+.',
    '1e',
    '1e+',
    'e5',
    '0x10',
    '1_000',
    'nan',
    'inf',
    'Infinity',
    '1.2.3',
    '1,5',
    '--1',
    '1 2',
    '１',
  ])('"%s" is no number', (token) => {
    expect(scan(token)).toBeNaN();
  });
});
