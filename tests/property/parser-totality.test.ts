import { readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { FileFindings } from '../../server/src/analysis/findings';
import { FileAnalysis } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import type { Finding } from '../../server/src/base/finding';
import { languageOfName, parse } from '../../server/src/formats/parse';
import type { CoordinateTree, Language } from '../../server/src/formats/tree';
import { printXyzFrame } from '../../server/src/formats/xyz/print';
import { type Snapshot, snapshotOf, snapshotOfBytes } from '../../server/src/text/snapshot';

const SEED = 20250611;
const RUNS = { seed: SEED, numRuns: 150 } as const;
const LANGUAGES: readonly Language[] = ['xyz', 'pdb'];

const folder = fileURLToPath(new URL('../../samples', import.meta.url));
/** The sample files, cut so that a run takes milliseconds. */
const SAMPLES = readdirSync(folder)
  .filter((name) => languageOfName(name) !== undefined)
  .map((name) => ({ name, language: languageOfName(name)!, text: readFileSync(`${folder}/${name}`, 'utf8') }))
  .map((sample) => ({ ...sample, text: sample.text.slice(0, 9000) }));

interface Outcome {
  readonly file: CoordinateTree;
  readonly findings: Finding[];
  readonly pairs: number;
}

/** The whole pipeline: parse, understand each frame, take every pair, list the findings. */
function pipeline(snapshot: Snapshot, language: Language): Outcome {
  const file = parse(snapshot, language);
  const analysis = new FileAnalysis(file, DEFAULT_REQUEST);
  const gathered = new FileFindings(file);
  let pairs = 0;
  for (const index of file.frames.keys()) for (const _ of gathered.pairsOfFrame(analysis.frame(index))) pairs++;
  return { file, findings: gathered.list(), pairs };
}

const inLanguage = (text: string, language: Language) => pipeline(snapshotOf(text), language);

/** What was read, without places. */
function content({ frames, remarks }: CoordinateTree) {
  return {
    frames: frames.map(({ atoms, groups, entries, cell, residues, bonds }) => ({
      element: atoms.element,
      flags: atoms.flags,
      positionA: atoms.positionA,
      line: atoms.line,
      chargeE: atoms.chargeE,
      dipoleEA: atoms.dipoleEA,
      group: atoms.group,
      formalE: atoms.formalE,
      residue: atoms.residue,
      groups,
      keys: entries.map(({ key, form, closed }) => [key, form, closed]),
      cell: cell === null ? null : [cell.vectorsA, cell.periodic],
      residues: residues?.map(({ chain, name, number, insertion, segment, atomNames, atoms: members }) => {
        return { chain, name, number, insertion, segment, atomNames, atoms: members };
      }),
      bonds,
    })),
    remarks: remarks.map(({ line, selector, entries }) => [line, selector, entries.map(({ key }) => key)]),
  };
}

/** Findings by line and column; lines that a remedy adds with the given end. */
function placed({ file, findings }: Outcome, lineEnd = '\n') {
  const place = ({ start, end }: { start: number; end: number }) => [
    file.lines.positionAt(start),
    file.lines.positionAt(end),
  ];
  return findings.map(({ code, message, related, fix, ...span }) => ({
    code,
    message,
    at: place(span),
    related: related.map((other) => [other.message, ...place(other)]),
    fix:
      fix === undefined
        ? null
        : [fix.title, fix.edits.map((edit) => [edit.text.replaceAll('\n', lineEnd), ...place(edit)])],
  }));
}

function checkPlaces({ file, findings }: Outcome): void {
  const { length } = file.text;
  for (const finding of findings) {
    for (const { start, end } of [finding, ...finding.related, ...(finding.fix?.edits ?? [])]) {
      expect(start).toBeGreaterThanOrEqual(0);
      expect(end).toBeGreaterThanOrEqual(start);
      expect(end).toBeLessThanOrEqual(length);
      for (const offset of [start, end]) {
        const { line, column } = file.lines.positionAt(offset);
        const width = file.lines.end(line) - file.lines.starts[line]!;
        expect(line).toBeLessThan(file.lines.count);
        expect(column).toBeGreaterThanOrEqual(0);
        expect(column).toBeLessThanOrEqual(width);
      }
    }
  }
  const order = findings.map(({ start, end, code }) => ({ start, end, code }));
  const sorted = [...order].sort((a, b) => a.start - b.start || a.end - b.end || (a.code < b.code ? -1 : 1));
  expect(order).toEqual(sorted);
}

type Mutation = (text: string) => string;

const unusual = fc.constantFrom(
  '\uD800',
  '\uDC00',
  '\u{1F600}',
  '\u2028',
  '\u0085',
  '\u00A0',
  '\uFEFF',
  'Å',
  '−',
  '\0',
  '\x7F',
  '\x0B',
);
const telling = fc.constantFrom(
  ' ',
  '\t',
  '\n',
  '\r',
  '\r\n',
  '\n\n',
  '0',
  '9',
  '-',
  '.',
  'e',
  'D',
  '"',
  "'",
  '[',
  ']',
  '{',
  '}',
  '=',
  ',',
  ':',
  '>',
  '*',
  '\\',
  'nan',
  '1e400',
  'MODEL\n',
  'TER\n',
  'END\n',
  'REMARK  99 ',
  'CONECT',
  'fragment=*:*:* ',
  'fragment_atoms="1-3 2"',
  'silence=clash ',
);
const piece = fc.oneof(telling, unusual, fc.string({ unit: 'binary', maxLength: 6 }));
const where = fc.double({ min: 0, max: 1, noNaN: true });
const offset = (text: string, share: number) => Math.floor(share * text.length);

function onLines(change: (lines: string[], i: number, j: number) => void): fc.Arbitrary<Mutation> {
  return fc.tuple(where, where).map(([a, b]) => (text) => {
    const lines = text.split(/(?<=\n)/);
    change(lines, Math.floor(a * lines.length), Math.floor(b * lines.length));
    return lines.join('');
  });
}

const mutation: fc.Arbitrary<Mutation> = fc.oneof(
  fc.tuple(where, piece).map(
    ([at, s]): Mutation =>
      (t) =>
        t.slice(0, offset(t, at)) + s + t.slice(offset(t, at)),
  ),
  fc.tuple(where, piece).map(
    ([at, s]): Mutation =>
      (t) =>
        t.slice(0, offset(t, at)) + s + t.slice(offset(t, at) + s.length),
  ),
  fc.tuple(where, fc.nat(30)).map(
    ([at, n]): Mutation =>
      (t) =>
        t.slice(0, offset(t, at)) + t.slice(offset(t, at) + n),
  ),
  where.map(
    (at): Mutation =>
      (t) =>
        t.slice(0, offset(t, at)),
  ),
  fc.tuple(where, fc.nat(7)).map(
    ([at, bit]): Mutation =>
      (t) => {
        const i = offset(t, at);
        return i >= t.length ? t : t.slice(0, i) + String.fromCharCode(t.charCodeAt(i) ^ (1 << bit)) + t.slice(i + 1);
      },
  ),
  onLines((lines, i) => lines.splice(i, 0, lines[i] ?? '')),
  onLines((lines, i) => lines.splice(i, 1)),
  onLines((lines, i, j) => {
    [lines[i], lines[j]] = [lines[j] ?? '', lines[i] ?? ''];
  }),
);

/** A sample with a few changes, and the language it is read as: mostly its own. */
const mutated = fc
  .record({
    sample: fc.constantFrom(...SAMPLES),
    changes: fc.array(mutation, { minLength: 1, maxLength: 6 }),
    other: fc.nat(9),
  })
  .map(({ sample, changes, other }) => ({
    text: changes.reduce((text, change) => change(text), sample.text),
    language: other === 0 ? LANGUAGES.find((language) => language !== sample.language)! : sample.language,
  }));

describe('any bytes', () => {
  test('go through the whole pipeline, every finding at a place in the text', () => {
    const bytes = fc.oneof(fc.uint8Array({ maxLength: 400 }), fc.uint8Array({ maxLength: 400, max: 127 }));
    fc.assert(
      fc.property(bytes, fc.constantFrom(...LANGUAGES), (file, language) =>
        checkPlaces(pipeline(snapshotOfBytes(file), language)),
      ),
      { ...RUNS, numRuns: 1000 },
    );
  });

  test('so does any text of telling pieces', () => {
    const words = fc.array(fc.oneof(piece, fc.constantFrom('1\n', 'H 0 0 0\n', 'He 0 0 1.5 ', '\nO 3 0 1\n')), {
      maxLength: 60,
    });
    fc.assert(
      fc.property(words, fc.constantFrom(...LANGUAGES), (parts, language) =>
        checkPlaces(inLanguage(parts.join(''), language)),
      ),
      { ...RUNS, numRuns: 1000 },
    );
  });
});

describe('samples', () => {
  test.each(SAMPLES)('$name, cut at every place in turn, is read to its end', ({ text, language }) => {
    const step = Math.max(1, Math.floor(text.length / 150));
    for (let end = 0; end <= text.length; end += step) checkPlaces(inLanguage(text.slice(0, end), language));
  });

  test('with a few changes are read to their end', () => {
    fc.assert(
      fc.property(mutated, ({ text, language }) => checkPlaces(inLanguage(text, language))),
      { ...RUNS, numRuns: 400 },
    );
  });
});

describe('reading is the same', () => {
  test('twice over', () => {
    fc.assert(
      fc.property(mutated, ({ text, language }) => {
        const [one, two] = [inLanguage(text, language), inLanguage(text, language)];
        expect(content(two.file)).toEqual(content(one.file));
        expect([two.findings, two.pairs]).toEqual([one.findings, one.pairs]);
      }),
      RUNS,
    );
  });

  test('from the string and from its bytes', () => {
    fc.assert(
      fc.property(mutated, ({ text, language }) => {
        // A lone surrogate has no bytes, and a mark at the beginning is no part of a file's text.
        const writable = text.replace(/\p{Surrogate}/gu, '\uFFFD').replace(/^\uFEFF+/, '');
        const string = inLanguage(writable, language);
        const bytes = pipeline(snapshotOfBytes(new TextEncoder().encode(writable)), language);
        expect(content(bytes.file)).toEqual(content(string.file));
        expect([bytes.findings, bytes.pairs]).toEqual([string.findings, string.pairs]);
      }),
      { ...RUNS, numRuns: 250 },
    );
  });

  test('with CR LF as line ends, but for offsets', () => {
    fc.assert(
      fc.property(mutated, ({ text, language }) => {
        const plain = text.replace(/\r/g, '');
        const one = inLanguage(plain, language);
        const two = inLanguage(plain.replaceAll('\n', '\r\n'), language);
        expect(content(two.file)).toEqual(content(one.file));
        expect([placed(two), two.pairs]).toEqual([placed(one, '\r\n'), one.pairs]);
      }),
      { ...RUNS, numRuns: 250 },
    );
  });
});

describe('fixes', () => {
  /** Applies edits, which must not overlap. */
  function applied(text: string, edits: NonNullable<Finding['fix']>['edits']): string {
    let result = text;
    let last = text.length;
    for (const { start, end, text: replacement } of [...edits].sort((a, b) => b.start - a.start)) {
      expect(end).toBeLessThanOrEqual(last);
      result = result.slice(0, start) + replacement + result.slice(end);
      last = start;
    }
    return result;
  }

  /** A fix takes its finding away: none of the code is left at its place, and there are not more of it than before. */
  function checkFixes(text: string, language: Language): void {
    const { findings } = inLanguage(text, language);
    for (const { code, start, end, fix } of findings.filter((finding) => finding.fix !== undefined).slice(0, 12)) {
      const { edits, title } = fix!;
      const clue = `${code}: ${title} at ${JSON.stringify(text.slice(start, end))}`;
      expect(edits.length, clue).toBeGreaterThan(0);
      const after = inLanguage(applied(text, edits), language).findings;
      const left = after.filter((finding) => finding.code === code);
      expect(left.filter((finding) => finding.start === start).length, clue).toBe(0);
    }
  }

  test.each(SAMPLES)('of $name take their findings away', ({ text, language }) => checkFixes(text, language));

  const HE2 = 'He 0 0 0\nHe 0 0 5\n';
  const WATER = 'O 0 0 0 -0.8\nH 0 0.76 0.59 0.4\nH 0 -0.76 0.59 0.4\n';
  const COLUMNS = 'Properties=species:S:1:pos:R:3:charge:R:1';
  test.each([
    ['a bare list that is too short', `2\nfragment_charges=0\n${HE2}`],
    ['a bare list that is too long', `2\nfragment_charges=0,1,2\n${HE2}`],
    ['an empty list', `2\nfragment_charges=""\n${HE2}`],
    ['a bare list before another key', `1\nfragment_atoms="1" fragment_names=a,b pbc="F F F"\nHe 0 0 0\n`],
    ['a nested list that is too long', `2\nfragment_dipoles=[[0, 0, 1], [0, 0, 1], [0, 0, 1]]\n${HE2}`],
    ['a nested list that is too short', `2\nfragment_dipoles=[[0, 0, 1]]\n${HE2}`],
    ['a list that is never closed', `2\nfragment_charges="0\n${HE2}`],
    ['a misspelt key', `2\nfragment_chrages="0 0"\n${HE2}`],
    ['a wrong count', `5\n\n${HE2}`],
    ['no count', HE2],
    ['no count, and CR LF', HE2.replaceAll('\n', '\r\n')],
    ['an unknown element', '2\n\nHe 0 0 0\nCq 0 0 5\n'],
    ['a dipole turned round', `3\n${COLUMNS} fragment_dipoles="0 0 -2.27"\n${WATER}`],
    ['a dipole turned round, with a Fortran exponent', `3\n${COLUMNS} fragment_dipoles="0 0 -2.27d0"\n${WATER}`],
    ['a dipole in another unit', `3\n${COLUMNS} fragment_dipoles="0 0 0.472"\n${WATER}`],
    ['a dipole in another unit, with a Fortran exponent', `3\n${COLUMNS} fragment_dipoles="0 0 0.472d0"\n${WATER}`],
    ['a dipole in another orientation', `3\n${COLUMNS} fragment_dipoles="2.27 0 0"\n${WATER}`],
    ['an axis turned round', `3\n${COLUMNS} fragment_dipole_sizes=2.27 fragment_axes=2,3>1\n${WATER}`],
    ['a size in another unit', `3\n${COLUMNS} fragment_dipole_sizes=0.472 fragment_axes=1>2,3\n${WATER}`],
    ['a size with its unit', `3\n${COLUMNS} fragment_dipole_sizes=[0.472D] fragment_axes=1>2,3\n${WATER}`],
  ])('of %s', (_, text) => {
    expect(inLanguage(text, 'xyz').findings.some((finding) => finding.fix !== undefined)).toBe(true);
    checkFixes(text, 'xyz');
  });
});

describe('printing', () => {
  test('what was printed is read back to the last bit', () => {
    const number = fc.double({ noNaN: true, noDefaultInfinity: true });
    const atom = fc.record({
      symbol: fc.constantFrom('H', 'D', 'T', 'C', 'Cl', 'Og', 'X'),
      positionA: fc.tuple(number, number, number),
      chargeE: number,
      fragment: fc.integer({ min: 1, max: 5 }),
    });
    fc.assert(
      fc.property(fc.array(atom, { minLength: 1, maxLength: 8 }), fc.boolean(), (given, charged) => {
        const atoms = given.map((one) => ({ ...one, chargeE: charged ? one.chargeE : null }));
        const text = printXyzFrame(atoms, [['fragment_names', 'a b']], 'note');
        const { frames, problems } = parse(snapshotOf(text), 'xyz');
        expect(problems).toEqual([]);
        const read = frames[0]!.atoms;
        // toEqual tells −0 from 0.
        expect(Array.from(read.positionA)).toEqual(atoms.flatMap((one) => one.positionA));
        expect(read.chargeE === null ? null : Array.from(read.chargeE)).toEqual(
          charged ? given.map((one) => one.chargeE) : null,
        );
        expect(Array.from(read.group!, (group) => frames[0]!.groups!.names[group])).toEqual(
          atoms.map((one) => String(one.fragment)),
        );
      }),
      { ...RUNS, numRuns: 500 },
    );
  });
});
