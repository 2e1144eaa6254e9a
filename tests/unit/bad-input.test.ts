import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import { build } from 'esbuild';
import { beforeAll, describe, expect, test } from 'vitest';

/** What the whole pipeline says of a file. */
interface Outcome {
  /** How often each code was found. */
  readonly codes: Readonly<Record<string, number>>;
  readonly messages: readonly string[];
  /** Text under each finding, cut at 60 units. */
  readonly under: readonly string[];
  readonly outOfBounds: number;
  readonly messageUnits: number;
  readonly frames: number;
  readonly pairs: number;
  readonly fragments: number;
  /** Most atoms that an annotated axis holds on one side. */
  readonly longestAxis: number;
  readonly mostRelated: number;
}

const PIPELINE = `
import { parentPort, workerData } from 'node:worker_threads';
import { parse } from './formats/parse';
import { snapshotOfBytes } from './text/snapshot';
import { FileAnalysis } from './analysis/frame-analysis';
import { FileFindings } from './analysis/findings';
import { DEFAULT_REQUEST } from './analysis/settings';
const text = snapshotOfBytes(workerData.bytes);
const file = parse(text, workerData.language);
const analysis = new FileAnalysis(file, DEFAULT_REQUEST);
const gathered = new FileFindings(file);
let pairs = 0, fragments = 0, longestAxis = 0;
for (let index = 0; index < file.frames.length; index++) {
  const frame = analysis.frame(index);
  fragments += frame.model.fragments.count;
  for (const { axis } of frame.model.notes) {
    if (axis !== null) longestAxis = Math.max(longestAxis, axis.before.length, axis.after.length);
  }
  for (const _ of gathered.pairsOfFrame(frame)) pairs++;
}
const list = gathered.list();
const codes = {};
for (const { code } of list) codes[code] = (codes[code] ?? 0) + 1;
const edits = (finding) => [finding, ...finding.related, ...(finding.fix?.edits ?? [])];
parentPort.postMessage({
  codes,
  messages: list.slice(0, 500).map((finding) => finding.message.slice(0, 300)),
  under: list.map((finding) => text.slice(finding.start, Math.min(finding.end, finding.start + 60))),
  outOfBounds: list.flatMap(edits).filter(({ start, end }) => !(start >= 0 && start <= end && end <= text.length)).length,
  messageUnits: list.reduce((sum, f) => sum + f.message.length + f.related.reduce((s, r) => s + r.message.length, 0), 0),
  frames: file.frames.length,
  pairs, fragments, longestAxis,
  mostRelated: list.reduce((most, finding) => Math.max(most, finding.related.length), 0),
});
`;

/** Past this a case counts as hanging; the slowest sound one takes a few seconds. */
const HANGS_AFTER_MS = 90_000;
const MOST_HEAP_MB = 2048;
let code = '';

beforeAll(async () => {
  const server = fileURLToPath(new URL('../../server/src', import.meta.url));
  const { outputFiles } = await build({
    stdin: { contents: PIPELINE, resolveDir: server, loader: 'ts' },
    bundle: true,
    platform: 'node',
    format: 'cjs',
    write: false,
  });
  code = outputFiles[0]!.text;
});

/** Runs the pipeline in a thread of its own, so that a hang or a full heap fails one test and not all. */
function run(content: string | Uint8Array, language: 'xyz' | 'pdb'): Promise<Outcome> {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
  return new Promise((resolve, reject) => {
    const worker = new Worker(code, {
      eval: true,
      workerData: { bytes, language },
      resourceLimits: { maxOldGenerationSizeMb: MOST_HEAP_MB },
    });
    const clock = setTimeout(() => {
      reject(new Error('The pipeline hangs.'));
      void worker.terminate();
    }, HANGS_AFTER_MS);
    const settle = (action: () => void) => {
      clearTimeout(clock);
      action();
      void worker.terminate();
    };
    worker.once('message', (outcome: Outcome) => settle(() => resolve(outcome)));
    worker.once('error', (error) => settle(() => reject(error)));
    worker.once('exit', () => settle(() => reject(new Error('The thread ended without a result.'))));
  });
}

/** Runs and checks what holds for any input. */
async function inspect(content: string | Uint8Array, language: 'xyz' | 'pdb' = 'xyz'): Promise<Outcome> {
  const outcome = await run(content, language);
  expect(outcome.outOfBounds).toBe(0);
  for (const [name, count] of Object.entries(outcome.codes)) expect(count, name).toBeLessThanOrEqual(100);
  expect(outcome.mostRelated).toBeLessThanOrEqual(10);
  expect(outcome.messageUnits).toBeLessThan(1e6);
  return outcome;
}

const lines = (n: number, line: (i: number) => string) => Array.from({ length: n }, (_, i) => `${line(i)}\n`).join('');
/** Helium atoms on a grid, 5 Å apart: nothing touches, nothing is bonded. */
const grid = (n: number, symbol = 'He', step = 5) => {
  const side = Math.ceil(Math.cbrt(n));
  return lines(
    n,
    (i) =>
      `${symbol} ${step * (i % side)} ${step * (Math.floor(i / side) % side)} ${step * Math.floor(i / side / side)}`,
  );
};
const xyz = (atoms: string, comment = '') => `${atoms.split('\n').length - 1}\n${comment}\n${atoms}`;
const pdbAtom = (
  i: number,
  residue = 'UNK',
  number = i,
  x = 5 * (i % 40),
  y = 5 * (Math.floor(i / 40) % 40),
  z = 5 * Math.floor(i / 1600),
) =>
  `ATOM  ${String(i % 100000).padStart(5)}  HE  ${residue} A${String(number % 10000).padStart(4)}    ` +
  `${[x, y, z].map((value) => value.toFixed(3).padStart(8)).join('')}  1.00  0.00          HE`;

describe('no coordinate file at all', () => {
  const jpeg = Uint8Array.from({ length: 50_000 }, (_, i) => (i * 2654435761) >>> (i % 24));
  jpeg.set([0xff, 0xd8, 0xff, 0xe0, 0, 16, 0x4a, 0x46, 0x49, 0x46, 0, 1]);
  const printable = Uint8Array.from({ length: 9000 }, (_, i) => 128 + ((i * 97) % 128));
  test.each([
    ['an empty file', '', 'no-frame'],
    ['a blank', ' ', 'no-frame'],
    ['one line', 'one line', 'no-frame'],
    ['a count alone', '3', 'no-frame'],
    ['a byte order mark alone', Uint8Array.of(0xef, 0xbb, 0xbf), 'no-frame'],
    ['prose', lines(1000, (i) => `line ${i} of a story about nothing`), 'no-frame'],
    ['a million blank lines', '\n'.repeat(1e6), 'no-frame'],
    ['a million CR', '\r'.repeat(1e6), 'no-frame'],
    ['a million "="', '='.repeat(1e6), 'no-frame'],
    ['a million quotes', '"'.repeat(1e6), 'no-frame'],
    ['a line of a million letters', 'x'.repeat(1e6), 'no-frame'],
    ['a line of a million blanks', ' '.repeat(1e6), 'no-frame'],
    ['NUL bytes', '\0'.repeat(1e5), 'not-text'],
    ['NUL bytes between words', 'H\0 0\0 0\0', 'not-text'],
    ['a JPEG', jpeg, 'not-text'],
    ['bytes without a meaning in UTF-8', printable, 'not-text'],
  ])('%s', async (_, content, expected) => {
    for (const language of ['xyz', 'pdb'] as const) {
      const { codes, frames, under } = await inspect(content, language);
      expect([codes, frames]).toEqual([{ [expected]: 1 }, 0]);
      expect(under[0]!.length).toBeLessThanOrEqual(200);
    }
  });
});

describe('counts and lines', () => {
  test.each([
    ['a count of 10^12', '1000000000000\n\nHe 0 0 0\n', { 'count-wrong': 1 }],
    ['a count of a million digits', `${'9'.repeat(1e6)}\n\nHe 0 0 0\n`, { 'count-wrong': 1 }],
    ['half a frame', '4\n\nHe 0 0 0\nHe 0 0', { 'count-wrong': 1, 'field-missing': 1 }],
    ['a comment of a million units', xyz('He 0 0 0\n', 'x'.repeat(1e6)), {}],
    ['a comment of a million "="', xyz('He 0 0 0\n', '='.repeat(1e6)), {}],
    ['a comment of a million quotes', xyz('He 0 0 0\n', `"${'"\\'.repeat(5e5)}`), {}],
    ['a coordinate of a million digits', xyz(`He 0.${'3'.repeat(1e6)} 0 0\n`), {}],
    ['a coordinate of a million letters', xyz(`He 0 0 0\nHe ${'3x'.repeat(5e5)} 0 0\n`), { 'number-unreadable': 1 }],
    ['a symbol of a million letters', xyz(`He 0 0 0\n${'He'.repeat(5e5)} 5 0 0\n`), { 'element-unknown': 1 }],
    ['a million further fields', xyz(`He 0 0 0${' 1'.repeat(1e6)}\n`), { 'extra-columns': 1 }],
    ['NaN and 1e400', xyz('He 0 0 0\nHe nan 0 0\nHe 0 1e400 0\n'), { 'number-unreadable': 2 }],
    ['NUL bytes beside atoms', xyz('He\0 0 0 0\nHe 5 0 0\n'), {}],
    ['100,000 unknown elements', xyz(grid(1e5, 'Qq')), { 'element-unknown': 100, 'no-frame': 1 }],
    ['100,000 unknown elements beside one atom', xyz(`He -9 0 0\n${grid(1e5, 'Qq')}`), { 'element-unknown': 100 }],
    ['20,000 frames that are cut short', '999999\n\nHe 0 0 0\n'.repeat(20_000), { 'count-wrong': 100 }],
    ['50,000 frames without atoms', `1\n\nHe 0 0 0\n${'0\n\n'.repeat(50_000)}`, {}],
    ['a million blank lines before', `${'\n'.repeat(1e6)}1\n\nHe 0 0 0\n`, {}],
    ['a million blank lines after', `1\n\nHe 0 0 0\n${'\n'.repeat(1e6)}`, {}],
    ['a million blank lines between frames', `1\n\nHe 0 0 0\n${'\n'.repeat(1e6)}1\n\nHe 0 0 0\n`, {}],
    ['a million blank lines between atoms', `2\n\nHe 0 0 0\n${'\n'.repeat(1e6)}He 0 0 5\n`, { 'field-missing': 100 }],
  ])('%s', async (_, content, expected) => {
    expect((await inspect(content)).codes).toEqual(expected);
  });

  test.each([
    ['a line cut in half', `${pdbAtom(1)}\n${pdbAtom(2).slice(0, 30)}\n`, { 'field-missing': 1 }],
    ['a line of a million units', `${pdbAtom(1)}${'x'.repeat(1e6)}\n`, {}],
    ['200,000 records of a model without atoms', `${'MODEL\n'.repeat(2e5)}${pdbAtom(1)}\n`, {}],
    [
      'NaN as coordinate',
      `${pdbAtom(1)}\n${pdbAtom(2).slice(0, 30)}     nan   0.000   0.000\n`,
      { 'number-unreadable': 1 },
    ],
    [
      '200,000 alternate locations',
      lines(2e5, (i) => pdbAtom(i).replace('HE  ', i % 2 ? 'HE B' : 'HE A')).replaceAll('1.00  0.00', '0.50  0.00') +
        lines(2e5, (i) => pdbAtom(i).replace('HE  ', 'HE C')),
      { 'alternate-locations': 1 },
    ],
  ])('PDB: %s', async (_, content, expected) => {
    expect((await inspect(content, 'pdb')).codes).toMatchObject(expected);
  });
});

describe('cells', () => {
  const he2 = 'He 0 0 0\nHe 0 0 5\n';
  const cell = (lattice: string, pbc = 'T T T') => xyz(he2, `Lattice="${lattice}" pbc="${pbc}"`);
  test.each([
    ['of size zero', cell('0 0 0 0 0 0 0 0 0'), 'cell-unusable'],
    ['thin as a needle', cell('0.01 0 0 0 0.01 0 0 0 1000'), 'cell-unusable'],
    ['skewed to a needle', cell('100 0 0 99.9 0.1 0 0 0 100'), 'cell-unusable'],
    ['singular', cell('9 0 0 0 9 0 9 9 0'), 'cell-unusable'],
    ['of two equal vectors', cell('9 0 0 9 0 0 0 0 9'), 'cell-unusable'],
    ['huge', cell('1e300 0 0 0 1e300 0 0 0 1e300'), 'cell-unusable'],
    ['not finite', cell('1e400 0 0 0 9 0 0 0 9'), 'number-unreadable'],
    ['with one periodic direction of length zero', cell('0 0 0 0 9 0 0 0 9', 'T F F'), 'cell-unusable'],
  ])('%s', async (_, content, expected) => {
    expect((await inspect(content)).codes).toEqual({ [expected]: 1 });
  });

  test.each([
    ['with one periodic direction and nothing else', cell('50 0 0 0 0 0 0 0 0', 'T F F'), 1],
    ['skewed far, but wide', cell('50 0 0 5000 50 0 -900 7000 50'), 1],
    ['left-handed', cell('0 50 0 50 0 0 0 0 50'), 1],
  ])('%s is used', async (_, content, pairs) => {
    const outcome = await inspect(content);
    expect([outcome.codes, outcome.pairs]).toEqual([{}, pairs]);
  });

  test.each(['1e300', '-1e308', '1e15', '5e-324'])('coordinates of %s in a cell do no harm', async (value) => {
    for (const comment of ['', 'Lattice="50 0 0 0 50 0 0 0 50"']) {
      await inspect(xyz(`${he2}He ${value} 0 0\nHe 0 ${value} ${value}\n`, comment));
    }
  });
});

describe('crowds', () => {
  test.each([10, 1000, 3000])('%i atoms at one point are said to be at one point', async (n) => {
    const { codes } = await inspect(xyz('C 0 0 0\n'.repeat(n)));
    expect(codes).toMatchObject({ 'atoms-coincident': Math.min(100, n - 1) });
    expect(codes).not.toHaveProperty('unit-nanometre');
  });

  test.each([
    ['C', {}],
    ['H', {}],
    ['Na', {}],
  ])('100,000 atoms of %s at one point are too dense', async (symbol) => {
    expect((await inspect(xyz(`${symbol} 0 0 0\n`.repeat(1e5)))).codes).toEqual({ 'too-dense': 1 });
  });

  test('too many atoms at one point are one finding, whatever is annotated', async () => {
    expect((await inspect(xyz('C 0 0 0\n'.repeat(6000), 'fragment_charges=0 fragment_names=a'))).codes).toEqual({
      'too-dense': 1,
    });
  });

  test('heaps of 900 atoms each, 100,000 in all, do not fill the memory', async () => {
    const { codes } = await inspect(xyz(lines(1e5, (i) => `C ${100 * Math.floor(i / 900)} 0 0`)));
    expect(Object.keys(codes).some((name) => name === 'atoms-coincident' || name === 'too-dense')).toBe(true);
  });

  const box = grid(10_000, 'He', 6);
  test.each(['1e5 0 0', '0 -1e5 0', '1e5 1e5 0', '1e5 1e5 1e5', '1e9 1e9 1e9'])(
    'one atom at %s changes nothing for a box of 10,000',
    async (far) => {
      const near = await inspect(xyz(box));
      const both = await inspect(xyz(`${box}He ${far}\n`));
      expect([both.codes, both.pairs]).toEqual([near.codes, near.pairs]);
    },
  );
});
