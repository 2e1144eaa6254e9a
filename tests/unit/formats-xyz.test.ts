import { describe, expect, test } from 'vitest';
import { parse } from '../../server/src/formats/parse';
import { type AtomField, AtomFlag, type FrameTree } from '../../server/src/formats/tree';
import { DEBYE_E_A } from '../../server/src/physics/constants';
import { snapshotOf, snapshotOfBytes } from '../../server/src/text/snapshot';
import { analyse } from '../support/analyse';

/** Every line ends with a line feed. */
const text = (...lines: string[]) => lines.map((line) => `${line}\n`).join('');
const frames = (content: string) => parse(snapshotOf(content), 'xyz').frames;
const only = (content: string): FrameTree => {
  const [frame, ...more] = frames(content);
  expect(more).toEqual([]);
  return frame!;
};
const positions = (frame: FrameTree) => Array.from(frame.atoms.positionA);
const elements = (frame: FrameTree) => Array.from(frame.atoms.element);

/** Code and text under each finding. */
const found = (content: string) =>
  analyse(content).findings.map(({ code, start, end }) => [code, content.slice(start, end)]);
const foundOf = (content: string, ...codes: string[]) => found(content).filter(([code]) => codes.includes(code!));

describe('frames', () => {
  const one = text('1', 'a', 'He 0 0 0');
  test.each([
    ['one frame', one, [1]],
    ['two frames', one + text('2', 'b', 'He 0 0 0', 'He 0 0 5'), [1, 2]],
    ['three frames', one + one + one, [1, 1, 1]],
    ['a frame without a line end after it', one.trimEnd(), [1]],
    ['blank lines before, between and after frames', `\n \n${one}\n\t\n${one}\n\n`, [1, 1]],
    ['a comment that is a number', text('1', '7', 'He 0 0 0'), [1]],
    ['a comment that reads as an atom', text('1', 'He 9 9 9', 'He 0 0 0'), [1]],
    ['an empty comment', text('1', '', 'He 0 0 0'), [1]],
    ['a count with blanks around it', text('\t 1 \t', '', 'He 0 0 0'), [1]],
    ['a count with leading zeros', text('0001', '', 'He 0 0 0'), [1]],
    ['atoms given by atomic number', text('2', '', '2 0 0 0', '2 0 0 5') + text('1', '', '2 0 0 0'), [2, 1]],
  ])('%s', (_, content, counts) => {
    expect(frames(content).map((frame) => frame.atoms.count)).toEqual(counts);
    expect(found(content)).toEqual([]);
  });

  test('a frame knows its lines', () => {
    const [, second] = frames(text('1', 'a', 'He 0 0 0', '', '2', 'b', 'He 0 0 0', 'He 0 0 5'));
    expect([second!.index, second!.firstLine, second!.headLine, second!.endLine]).toEqual([1, 4, 5, 8]);
    expect(Array.from(second!.atoms.line)).toEqual([6, 7]);
  });
});

describe('columns', () => {
  const P = 'Properties=';
  test.each([
    ['species first', `${P}species:S:1:pos:R:3`, 'O 1 2 3'],
    ['position first', `${P}pos:R:3:species:S:1`, '1 2 3 O'],
    ['position as integers', `${P}species:S:1:pos:I:3`, 'O 1 2 3'],
    ['foreign columns before', `${P}id:I:1:forces:R:3:species:S:1:pos:R:3`, '77 9 9 9 O 1 2 3'],
    ['foreign columns between', `${P}species:S:1:tag:S:2:pos:R:3`, 'O u v 1 2 3'],
    ['foreign columns after', `${P}species:S:1:pos:R:3:move:L:3`, 'O 1 2 3 T F T'],
    ['atomic number', `${P}Z:I:1:pos:R:3`, '8 1 2 3'],
    ['atomic number last', `${P}pos:R:3:Z:I:1`, '1 2 3 8'],
    ['species beside atomic number', `${P}Z:I:1:species:S:1:pos:R:3`, '1 O 1 2 3'],
    ['a quoted value', `${P}"species:S:1:pos:R:3"`, 'O 1 2 3'],
    ['blanks around the equals sign', 'Properties = species:S:1:pos:R:3', 'O 1 2 3'],
    ['a quoted key', '"Properties"=species:S:1:pos:R:3', 'O 1 2 3'],
    ['free text before the keys', 'made by hand, twice Properties=pos:R:3:species:S:1', '1 2 3 O'],
    ['no Properties', '', 'O 1 2 3'],
  ])('%s', (_, comment, line) => {
    const content = text('1', comment, line);
    const frame = only(content);
    expect(elements(frame)).toEqual([8]);
    expect(positions(frame)).toEqual([1, 2, 3]);
    expect(found(content)).toEqual([]);
  });

  test.each(['charge', 'charges', 'initial_charges'])('the column %s holds charges', (name) => {
    const frame = only(text('2', `${P}species:S:1:pos:R:3:${name}:R:1`, 'O 0 0 0 -0.5', 'O 0 0 9 0.25'));
    expect(Array.from(frame.atoms.chargeE!)).toEqual([-0.5, 0.25]);
  });

  test('the column dipoles holds atomic dipoles', () => {
    const frame = only(text('1', `${P}species:S:1:dipoles:R:3:pos:R:3`, 'O 1 2 3 0 0 0'));
    expect(Array.from(frame.atoms.dipoleEA!)).toEqual([1, 2, 3]);
  });

  test.each([
    ['numbers', 'I', ['7', '7', '3'], ['7', '3'], false],
    ['words', 'S', ['b', 'a', 'b'], ['b', 'a'], true],
  ])('the column fragment groups atoms by %s', (_, type, values, names, areWords) => {
    const lines = values.map((value, i) => `He 0 0 ${5 * i} ${value}`);
    const frame = only(text('3', `${P}species:S:1:pos:R:3:fragment:${type}:1`, ...lines));
    expect(frame.groups).toEqual({ names, areWords });
  });

  test('an atom line that cannot be read leaves the other fragments whole', () => {
    const { frames: all } = analyse(
      text('3', `${P}species:S:1:pos:R:3:fragment:S:1`, 'He 0 0 0 a', 'He 5 0 0 b', '?? x y z b'),
    );
    const { names, usable } = all[0]!.model;
    expect(names.map((name, f) => [name, usable[f]])).toEqual([
      ['a', 1],
      ['b', 0],
    ]);
  });
});

describe('numbers', () => {
  test.each([
    ['1.5', 1.5],
    ['+1.5', 1.5],
    ['-1.5', -1.5],
    ['.5', 0.5],
    ['5.', 5],
    ['-0', -0],
    ['1.5e1', 15],
    ['1.5E+1', 15],
    ['1.5d1', 15],
    ['1.5D+01', 15],
    ['-1.5D-01', -0.15],
    ['1e-400', 0],
    ['0.1000000000000000055511151231257827', 0.1],
    ['123456789012345678901234567890e-30', 0.12345678901234568],
  ])('%s is read to the last bit', (written, value) => {
    expect(positions(only(text('1', '', `He ${written} 0 0`)))).toEqual([value, 0, 0]);
  });

  test.each(['nan', 'NaN', 'inf', '-Infinity', '1e400', '1,5', '--1', '1e', '1e+', '.', '-', '0x10', '1_0', '1.2.3'])(
    '%s is no coordinate',
    (written) => {
      const content = text('2', '', 'He 0 0 0', `He 5 ${written} 0`);
      expect(found(content)).toEqual([['number-unreadable', written]]);
      const { flags, positionA } = only(content).atoms;
      expect([flags[0], flags[1]]).toEqual([0, AtomFlag.noPosition]);
      expect(Array.from(positionA.subarray(3))).toEqual([NaN, NaN, NaN]);
    },
  );
});

describe('line ends and blanks', () => {
  const plain = text('2', 'fragment_charges="0 1"', 'He 0 0 0', 'Li 1.5 -2 3');
  test.each([
    ['CR LF', plain.replaceAll('\n', '\r\n')],
    ['CR alone', plain.replaceAll('\n', '\r')],
    ['mixed ends', '2\r\nfragment_charges="0 1"\rHe 0 0 0\nLi 1.5 -2 3'],
    ['tabs between fields', plain.replaceAll(' 0 0 0', '\t0\t0\t0')],
    ['blanks at both ends of atom lines', plain.replace('Li 1.5 -2 3', ' \t Li   1.5 \t-2\t\t3 \t ')],
    ['blanks after the count', plain.replace('2\n', '2 \t \n')],
    ['blanks after the comment', plain.replace('1"', '1" \t')],
  ])('%s', (_, content) => {
    const frame = only(content);
    expect(elements(frame)).toEqual([2, 3]);
    expect(positions(frame)).toEqual([0, 0, 0, 1.5, -2, 3]);
    const { frames: all, findings } = analyse(content);
    expect(Array.from(all[0]!.moments.chargeE)).toEqual([0, 1]);
    expect(findings).toEqual([]);
  });

  test.each([
    ['UTF-8', Uint8Array.of(0xef, 0xbb, 0xbf, ...Buffer.from(plain, 'utf8'))],
    ['UTF-16 LE', Uint8Array.of(0xff, 0xfe, ...Buffer.from(plain, 'utf16le'))],
    ['UTF-16 BE', Uint8Array.of(0xfe, 0xff, ...Buffer.from(plain, 'utf16le').swap16())],
  ])('a %s byte order mark is no part of the text', (_, bytes) => {
    const file = parse(snapshotOfBytes(bytes), 'xyz');
    expect(file.problems).toEqual([]);
    expect(positions(file.frames[0]!)).toEqual([0, 0, 0, 1.5, -2, 3]);
  });
});

describe('the first field', () => {
  const { ghost, unknownElement, deuterium, tritium } = AtomFlag;
  test.each([
    ['C', 6, 0],
    ['c', 6, 0],
    ['CL', 17, 0],
    ['cl', 17, 0],
    ['C1', 6, 0],
    ['O_2', 8, 0],
    ['H*', 1, 0],
    ['Fe2+', 26, 0],
    ['Xe', 54, 0],
    ['Xe1', 54, 0],
    ['Bi', 83, 0],
    ['Og', 118, 0],
    ['8', 8, 0],
    ['118', 118, 0],
    ['D', 1, deuterium],
    ['D2', 1, deuterium],
    ['d', 1, deuterium],
    ['T', 1, tritium],
    ['T_1', 1, tritium],
    ['Ti', 22, 0],
    ['Dy', 66, 0],
    ['X', 0, ghost],
    ['x', 0, ghost],
    ['X1', 0, ghost],
    ['Bq', 0, ghost],
    ['BqO', 0, ghost],
    ['GhO', 0, ghost],
    ['Gh', 0, ghost],
    ['0', 0, ghost],
    ['119', 0, unknownElement],
    ['-1', 0, unknownElement],
    ['Qq', 0, unknownElement],
    ['Water', 0, unknownElement],
    ['?', 0, unknownElement],
    ['Ö', 0, unknownElement],
  ])('%s', (word, z, flags) => {
    const { atoms } = only(text('2', '', 'He 9 9 9', `${word} 0 0 0`));
    expect([atoms.element[1], atoms.flags[1]]).toEqual([z, flags]);
  });
});

describe('forms of arrays', () => {
  const atoms = ['He 0 0 0', 'Ne 0 0 9'];
  test.each([
    'fragment_dipoles="1 2 3 4 5 6"',
    "fragment_dipoles='1 2 3 4 5 6'",
    'fragment_dipoles="1, 2, 3, 4, 5, 6"',
    'fragment_dipoles="1\t2\t3  4 5 6 "',
    'fragment_dipoles={1 2 3 4 5 6}',
    'fragment_dipoles=[1, 2, 3, 4, 5, 6]',
    'fragment_dipoles=[1,2,3,4,5,6]',
    'fragment_dipoles=[[1, 2, 3], [4, 5, 6]]',
    'fragment_dipoles="[[1, 2, 3], [4, 5, 6]]"',
    'fragment_dipoles = "1 2 3 4 5 6"',
    'fragment_dipoles="1d0 2.0E0 +3 4. 5 .6e1"',
    'some text fragment_dipoles="1 2 3 4 5 6" more text',
  ])('%s', (comment) => {
    const content = text('2', comment, ...atoms);
    const { dipoleEA } = analyse(content).frames[0]!.moments;
    expect(Array.from(dipoleEA, (value) => Math.round((value / DEBYE_E_A) * 1e9) / 1e9)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(foundOf(content, 'array-length', 'number-unreadable', 'value-unportable')).toEqual([]);
  });

  test.each(['"9 0 0 0 8 0 0 0 7"', '[[9, 0, 0], [0, 8, 0], [0, 0, 7]]', '{9 0 0 0 8 0 0 0 7}', '"9 8 7"'])(
    'Lattice=%s',
    (value) => {
      const cell = only(text('1', `Lattice=${value} pbc="T F T"`, 'He 0 0 0')).cell!;
      expect(Array.from(cell.vectorsA)).toEqual([9, 0, 0, 0, 8, 0, 0, 0, 7]);
      expect(cell.periodic).toEqual([true, false, true]);
    },
  );

  test.each([
    ['"1-2 3"', [2, 1]],
    ['"1,2 3"', [2, 1]],
    ['"1, 2 3"', [2, 1]],
    ['"1 ,2 3"', [2, 1]],
    ['[[1, 2], [3]]', [2, 1]],
    ['["1-2", "3"]', [2, 1]],
    ['1-2,3', [3]],
    ['"1 2 3"', [1, 1, 1]],
  ])('fragment_atoms=%s', (value, sizes) => {
    const { fragments } = analyse(text('3', `fragment_atoms=${value}`, 'He 0 0 0', 'He 5 0 0', 'He 9 0 0')).frames[0]!
      .model;
    expect(Array.from({ length: fragments.count }, (_, f) => fragments.starts[f + 1]! - fragments.starts[f]!)).toEqual(
      sizes,
    );
  });

  test.each(['"donor acceptor"', '["donor", "acceptor"]', '[donor, acceptor]', '{donor acceptor}'])(
    'fragment_names=%s',
    (value) => {
      expect(analyse(text('2', `fragment_names=${value}`, ...atoms)).frames[0]!.model.names).toEqual([
        'donor',
        'acceptor',
      ]);
    },
  );
});

describe('later frames', () => {
  const head = text('2', 'fragment_atoms="1-2" fragment_names=pair', 'He 0 0 0', 'Ne 0 0 5');
  test.each([
    ['take fragments and names of the first', text('2', '', 'He 0 0 0', 'Ne 0 0 6'), ['pair']],
    ['keep their own', text('2', 'fragment_atoms="1 2" fragment_names="a b"', 'He 0 0 0', 'Ne 0 0 6'), ['a', 'b']],
    ['of other elements stand alone', text('2', '', 'Ne 0 0 0', 'He 0 0 6'), ['Ne', 'He']],
    ['of another length stand alone', text('1', '', 'He 0 0 0'), ['He']],
  ])('%s', (_, later, names) => {
    expect(analyse(head + later).frames[1]!.model.names).toEqual(names);
  });
});

describe('where fields stand', () => {
  const comment = 'Properties=pos:R:3:id:I:1:species:S:1:charge:R:1:fragment:S:1';
  const line = '\t-1.5D0   +2.\t3e0  17 Cl_1   -0.25\tleft \t';
  test.each([
    ['line', line.trim()],
    ['x', '-1.5D0'],
    ['y', '+2.'],
    ['z', '3e0'],
    ['element', 'Cl_1'],
    ['charge', '-0.25'],
  ] as [AtomField, string][])('%s', (field, expected) => {
    for (const end of ['\n', '\r\n', '\r']) {
      const content = ['1', comment, line, ''].join(end);
      const { start, end: stop } = only(content).fieldSpan(0, field);
      expect(content.slice(start, stop)).toBe(expected);
    }
  });
});

describe('where findings stand', () => {
  const he2 = ['He 0 0 0', 'He 0 0 5'];
  test.each([
    ['count-wrong', '5', text(' 5 ', '', ...he2)],
    ['count-wrong', 'He 0 0 0', text('  He 0 0 0  ', 'He 0 0 5')],
    ['count-wrong', 'two atoms', text('two atoms', '', ...he2)],
    ['count-wrong', 'rubbish', text('2', '', ...he2, ' rubbish ', 'more')],
    ['field-missing', 'He 0 5', text('2', '', he2[0]!, '\tHe 0 5 \t')],
    ['field-missing', '', text('2', '', he2[0]!, '', he2[1]!)],
    ['element-unknown', 'Qq', text('2', '', he2[0]!, ' Qq\t0 0 5')],
    ['element-unknown', '119', text('2', 'Properties=pos:R:3:Z:I:1', '0 0 0 2', '0 0 5 119')],
    ['number-unreadable', 'x1', text('2', '', he2[0]!, 'He 0 x1 5')],
    ['number-unreadable', '?', text('2', 'Properties=species:S:1:pos:R:3:charge:R:1', 'He 0 0 0 0', 'He 0 0 5 ?')],
    ['columns-off', 'species:S:1', text('2', 'Properties=species:S:1', ...he2)],
    ['columns-off', '7 8', text('2', 'Properties=species:S:1:pos:R:3', `${he2[0]} 7 8 `, he2[1]!)],
    ['extra-columns', '7\t8', text('2', '', `${he2[0]}  7\t8 `, he2[1]!)],
    ['array-length', '"0 1 2"', text('2', 'fragment_charges="0 1 2"', ...he2)],
    ['array-length', '[0]', text('2', 'fragment_charges=[0]', ...he2)],
    ['array-length', '"1 2"', text('2', 'Lattice="1 2"', ...he2)],
    ['array-length', '"1 2"', text('2', 'dipole="1 2"', ...he2)],
    ['number-unreadable', 'b', text('2', 'fragment_charges="0 b"', ...he2)],
    ['number-unreadable', '1e999', text('2', 'Lattice="9 1e999 9"', ...he2)],
    ['value-invalid', '2-3', text('2', 'fragment_atoms="1 2 2-3"', ...he2)],
    ['value-invalid', '2-1', text('2', 'fragment_atoms="1 2 2-1"', ...he2)],
    ['value-invalid', '"T T"', text('2', 'pbc="T T"', ...he2)],
    ['value-invalid', '-3', text('2', 'temperature=-3', ...he2)],
    ['value-invalid', '0.5', text('2', 'relative_permittivity=0.5', ...he2)],
    ['value-invalid', '0', text('2', 'multiplicity=0', ...he2)],
    ['value-invalid', '-1', text('2', 'fragment_polarizabilities="1 -1"', ...he2)],
    ['value-invalid', '1>9', text('2', 'fragment_dipole_sizes="1 1" fragment_axes="nan 1>9"', ...he2)],
    ['value-invalid', 'He', text('2', 'kind_dipole_sizes="He"', ...he2)],
    ['unit-unknown', 'furlong', text('2', 'dipole_unit=furlong', ...he2)],
    ['selector-unmatched', 'H2O', text('2', 'kind_dipole_sizes="He:0 H2O:1.8"', ...he2)],
    ['key-repeated', 'charge', text('2', 'total_charge=0 charge=0', ...he2)],
    ['fragments-overlap', '1-2', text('2', 'fragment_atoms="1 1-2"', ...he2)],
    ['cell-unusable', '"9 0 0 18 0 0 0 0 9"', text('2', 'Lattice="9 0 0 18 0 0 0 0 9"', ...he2)],
    ['key-misspelt', 'fragment_chrages', text('2', 'fragment_chrages="0 0"', ...he2)],
    ['value-unportable', '"0 0', text('2', 'fragment_charges="0 0', ...he2)],
    ['atoms-ungrouped', '"1"', text('2', 'fragment_atoms="1"', ...he2)],
  ])('%s at %j', (code, under, content) => {
    for (const end of ['\n', '\r\n', '\r']) expect(found(content.replaceAll('\n', end))).toEqual([[code, under]]);
  });

  test('a wrong count does not condemn the lines', () => {
    expect(found(text('1', '', 'He 0 0 0', 'He 0 0 5', 'He 0 0 9'))).toEqual([['count-wrong', '1']]);
  });

  test('a frame cut short is one finding, and the next frame stands', () => {
    const content = text('4', '', 'He 0 0 0', 'He 0 0 5', '1', '', 'He 0 0 0');
    expect(frames(content).map((frame) => frame.atoms.count)).toEqual([2, 1]);
    expect(found(content)).toEqual([['count-wrong', '4']]);
  });

  test('text beyond 0xFFFF and lone surrogates count as the units they are', () => {
    const content = text('2', '\u{1F600}\uD800 Å fragment_atoms="1 9"', 'He 0 0 0', '\u{1F600} 0 0 5');
    expect(found(content)).toEqual([
      ['atoms-ungrouped', '"1 9"'],
      ['value-invalid', '9'],
      ['element-unknown', '\u{1F600}'],
    ]);
  });
});

describe('cells', () => {
  const cell = (lattice: string, pbc: string) => text('2', `Lattice="${lattice}" pbc="${pbc}"`, 'He 0 0 0', 'He 0 0 5');
  test.each([
    ['of size zero', '0 0 0 0 0 0 0 0 0', 'T T T'],
    ['thin as a needle', '0.01 0 0 0 0.01 0 0 0 1000', 'T T T'],
    ['skewed to a needle', '100 0 0 99.9 0.1 0 0 0 100', 'T T T'],
    ['singular', '9 0 0 0 9 0 9 9 0', 'T T T'],
    ['of two equal vectors', '9 0 0 9 0 0 0 0 9', 'T T T'],
    ['huge', '1e300 0 0 0 1e300 0 0 0 1e300', 'T T T'],
    ['with one periodic direction of length zero', '0 0 0 0 9 0 0 0 9', 'T F F'],
  ])('%s cannot be used', (_, lattice, pbc) => {
    expect(found(cell(lattice, pbc))).toEqual([['cell-unusable', `"${lattice}"`]]);
  });

  test.each([
    ['with one periodic direction and nothing else', '50 0 0 0 0 0 0 0 0', 'T F F'],
    ['without a periodic direction', '0 0 0 0 0 0 0 0 0', 'F F F'],
    ['skewed far, but wide', '50 0 0 5000 50 0 -900 7000 50', 'T T T'],
    ['left-handed', '0 50 0 50 0 0 0 0 50', 'T T T'],
  ])('%s can be used', (_, lattice, pbc) => {
    expect(found(cell(lattice, pbc))).toEqual([]);
    expect(analyse(cell(lattice, pbc)).frames[0]!.system.count).toBe(2);
  });

  test.each(['1e300', '-1e308', '1e15', '5e-324'])('coordinates of %s in a cell do no harm', (value) => {
    for (const comment of ['', 'Lattice="50 0 0 0 50 0 0 0 50"']) {
      const lines = [`He ${value} 0 0`, `He 0 ${value} ${value}`];
      expect(() => analyse(text('4', comment, 'He 0 0 0', 'He 0 0 5', ...lines))).not.toThrow();
    }
  });
});
