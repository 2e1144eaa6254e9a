import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import { build } from 'esbuild';
import { beforeAll, describe, expect, test, vi } from 'vitest';

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
let pairs = 0, longestAxis = 0;
for (let index = 0; index < file.frames.length; index++) {
  const frame = analysis.frame(index);
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
  pairs, longestAxis,
  mostRelated: list.reduce((most, finding) => Math.max(most, finding.related.length), 0),
});
`;

/** Past this a case counts as hanging; the slowest sound one takes a few seconds. */
const HANGS_AFTER_MS = 60_000;
const MOST_HEAP_MB = 2048;
let code = '';

vi.setConfig({ testTimeout: 2.5 * HANGS_AFTER_MS });

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
      // The stack that a program's main thread has.
      resourceLimits: { maxOldGenerationSizeMb: MOST_HEAP_MB, stackSizeMb: 1 },
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
    ['a count alone', '3', { 'no-frame': 1 }],
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
    ['NUL bytes beside atoms', xyz('He\0 0 0 0\nHe 5 0 0\n'), {}],
    ['100,000 unknown elements', xyz(grid(1e5, 'Qq')), { 'element-unknown': 100, 'no-frame': 1 }],
    ['100,000 unknown elements beside one atom', xyz(`He -9 0 0\n${grid(1e5, 'Qq')}`), { 'element-unknown': 100 }],
    ['20,000 frames that are cut short', '999999\n\nHe 0 0 0\n'.repeat(20_000), { 'count-wrong': 100 }],
    ['50,000 frames without atoms', `1\n\nHe 0 0 0\n${'0\n\n'.repeat(50_000)}`, {}],
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

describe('crowds', () => {
  test.each([10, 1000])('%i atoms at one point are said to be at one point', async (n) => {
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

describe('annotation without measure', () => {
  const he2 = 'He 0 0 0\nHe 0 0 5\n';
  const many = (n: number, item: (i: number) => string, separator = ' ') =>
    Array.from({ length: n }, (_, i) => item(i)).join(separator);
  const water = (n: number) =>
    lines(n, (i) => `O ${9 * (i % 20)} ${9 * Math.floor(i / 20)} 0`) +
    lines(n, (i) => `H ${9 * (i % 20)} ${9 * Math.floor(i / 20)} 0.96`) +
    lines(n, (i) => `H ${9 * (i % 20)} ${9 * Math.floor(i / 20)} -0.96`);
  test.each([
    [
      'a list of a million numbers for two fragments',
      xyz(he2, `fragment_charges="${'0 '.repeat(1e6)}"`),
      { 'array-length': 1 },
    ],
    [
      'a list of a million numbers that fits nothing',
      xyz(he2, `Lattice="${'9 '.repeat(1e6)}" dipole="${'0 '.repeat(1e6)}"`),
      { 'array-length': 2 },
    ],
    [
      'a list of 100,000 numbers that cannot be read',
      xyz(grid(1e5, 'He', 20), `fragment_charges="${'x '.repeat(1e5)}"`),
      { 'number-unreadable': 100 },
    ],
    ['nesting 100,000 deep', xyz(he2, `fragment_dipoles=${'['.repeat(1e5)}0, 0, 0, 0, 0, 0${']'.repeat(1e5)}`), {}],
    ['nesting 100,000 deep and never closed', xyz(he2, `fragment_dipoles=${'[{'.repeat(5e4)}0 0 0 0 0 0`), {}],
    [
      'parentheses 100,000 deep in a quantity',
      xyz(he2, `temperature="${'('.repeat(1e5)}300 K"`),
      { 'value-invalid': 1 },
    ],
    [
      '100,000 foreign keys',
      xyz(
        he2,
        many(1e5, (i) => `foreign_key_${i}=${i}`),
      ),
      {},
    ],
    [
      '100,000 misspelt keys',
      xyz(
        he2,
        many(1e5, (i) => `fragment_atom${i % 10}=1`),
      ),
      { 'key-misspelt': 100 },
    ],
    ['one key 100,000 times', xyz(he2, 'total_charge=0 '.repeat(1e5)), { 'key-repeated': 100 }],
    ['a range to 999,999,999,999', xyz(he2, 'fragment_atoms="1-999999999999"'), { 'value-invalid': 1 }],
    [
      '100,000 overlapping ranges',
      xyz(grid(5000, 'He', 20), `fragment_atoms="${'1-5000 '.repeat(1e5)}"`),
      { 'fragments-overlap': 100 },
    ],
    [
      '100,000 kinds that do not occur',
      xyz(he2, `kind_dipole_sizes="${many(1e5, (i) => `C${(i % 99000) + 1}H:0`)}"`),
      { 'selector-unmatched': 100 },
    ],
    ['100,000 times the same kind', xyz(grid(20_000, 'He', 20), `kind_dipole_sizes="${'He:0 '.repeat(1e5)}"`), {}],
    ['100,000 words to silence', xyz(he2, `silence="${many(1e5, (i) => `code-${i}`)}"`), {}],
    ['1000 flags of 19,000 digits', xyz(he2, `pbc="${'1'.repeat(19_000)}x" `.repeat(1000)), { 'key-repeated': 100 }],
    ['a column width of 10^9', xyz(he2, 'Properties=species:S:1:pos:R:3:more:R:1000000000'), { 'columns-off': 1 }],
    ['300,000 columns', xyz(he2, `Properties=species:S:1:pos:R:3${':a:R:1'.repeat(3e5)}`), { 'columns-off': 1 }],
    ['a name of a million letters', xyz(`${he2}He 0 0 6\n`, `fragment_names="b ${'n'.repeat(1e6)} c"`), { clash: 1 }],
    [
      '100,000 groups',
      xyz(
        lines(1e5, (i) => `He ${20 * i} 0 0 g${i}`),
        'Properties=species:S:1:pos:R:3:fragment:S:1',
      ),
      {},
    ],
  ])('%s', async (_, content, expected) => {
    expect((await inspect(content)).codes).toMatchObject(expected);
  });

  test.each([
    [
      'an axis by ranges',
      xyz(grid(5000), `fragment_atoms="1-5000" fragment_dipole_sizes=1 fragment_axes="${'1-5000,'.repeat(5000)}1>2"`),
      5001,
    ],
    ['an axis by symbols', xyz(water(200), `kind_dipole_sizes="H2O:1.8" kind_axes="H2O:${'O,'.repeat(1e5)}O>H"`), 10],
  ])('%s that repeats itself does not fill the memory', async (_, content, most) => {
    expect((await inspect(content)).longestAxis).toBeLessThanOrEqual(most);
  });

  test('how many more findings there are is said once and right', async () => {
    const frame = xyz(grid(200, 'He', 20), `fragment_charges="${'x '.repeat(200)}"`);
    const { codes, messages } = await inspect(frame + frame);
    expect(codes).toMatchObject({ 'number-unreadable': 100 });
    const said = messages.flatMap((message) => message.match(/\d+ more like this/g) ?? []);
    expect(said).toEqual(['300 more like this']);
  });
});

describe('PDB files without measure', () => {
  const remark = (words: string) => `REMARK  99 ${words}\n`;
  const box = lines(5000, (i) => pdbAtom(i));
  const conect = (...serials: number[]) => `CONECT${serials.map((serial) => String(serial).padStart(5)).join('')}`;
  /** One residue of many atoms with names of their own. */
  const giant = (n: number, residue: string, number: number, shift: number) =>
    lines(n, (i) => pdbAtom(i, residue, number, 5 * (i % 40) + shift).replace(' HE ', i.toString(36).padStart(4, '.')));
  test.each([
    [
      '10,000 selectors',
      lines(1e4, (i) => remark(`fragment=A:UNK:${i} charge=0`).trim()) + lines(1e4, (i) => pdbAtom(i)),
      {},
    ],
    [
      '50,000 selectors that match nothing',
      lines(5e4, (i) => remark(`fragment=B:UNK:${i} charge=0`).trim()) + box,
      { 'selector-unmatched': 100 },
    ],
    [
      'the same selector 50,000 times',
      remark('fragment=*:UNK:* charge=0').repeat(5e4) + lines(500, (i) => pdbAtom(i)),
      { 'key-repeated': 100 },
    ],
    [
      'a selector with 20,000 foreign keys',
      remark(`fragment=*:*:* charge=0 ${Array.from({ length: 2e4 }, (_, i) => `k${i}=1`).join(' ')}`) +
        lines(200, (i) => pdbAtom(i)),
      {},
    ],
    [
      'a selector of a million letters',
      remark(`fragment=A:${'U'.repeat(1e6)}:1`) + pdbAtom(1),
      { 'selector-unmatched': 1 },
    ],
    [
      '100,000 CONECT lines',
      box + lines(1e5, (i) => conect(i % 5000, (i + 1) % 5000, (i + 2) % 5000, (i + 3) % 5000, (i + 4) % 5000)),
      {},
    ],
    [
      '20,000 CONECT lines for 2000 models',
      lines(2000, (i) => `MODEL\n${pdbAtom(1, 'UNK', 1, i)}`) + `${conect(1, 2, 3, 4, 5)}\n`.repeat(2e4),
      {},
    ],
    [
      '10,000 annotations for 2000 models',
      remark('fragment=*:UNK:* foreign=0 charge=0').repeat(1e4) +
        lines(2000, (i) => `MODEL\n${pdbAtom(1, 'UNK', 1, i)}`),
      { 'key-repeated': 100 },
    ],
    ['a residue of 50,000 atoms', giant(50_000, 'BIG', 1, 0), {}],
    ['a residue of 50,000 atoms with one name', lines(50_000, (i) => pdbAtom(i, 'BIG', 1)), {}],
    [
      'two residues of 20,000 atoms that CONECT joins 20,000 times',
      giant(2e4, 'BIG', 1, 0) +
        giant(2e4, 'BIG', 2, 2.5).replaceAll(
          /^ATOM {2}([ \d]{5})/gm,
          (_, serial: string) => `ATOM  ${String(Number(serial) + 2e4).padStart(5)}`,
        ) +
        lines(2e4, (i) => conect(i, i + 2e4, i + 2e4, i + 2e4, i + 2e4)),
      {},
    ],
    [
      'an axis of 100,000 names',
      remark(`fragment=*:*:* dipole_size=1 axis=${'HE,'.repeat(1e5)}HE>HE`) + lines(200, (i) => pdbAtom(i)),
      {},
    ],
  ])('%s', async (_, content, expected) => {
    const { codes, longestAxis } = await inspect(content, 'pdb');
    expect(codes).toMatchObject(expected);
    expect(longestAxis).toBeLessThanOrEqual(10);
  });
});

describe('fragments without measure', () => {
  const COLUMNS = 'Properties=species:S:1:pos:R:3:charge:R:1:fragment:I:1';
  test.each([
    [
      '20,000 long fragments far from one another',
      xyz(
        lines(2e4, (i) => `He ${1000 * i} 0 0 0 ${i}\nHe ${1000 * i} 25 0 0 ${i}`),
        COLUMNS,
      ),
      {},
    ],
    [
      'two fragments of 20,000 atoms',
      xyz(
        lines(4e4, (i) => `He ${5 * (i % 30)} ${5 * (Math.floor(i / 30) % 30)} ${5 * Math.floor(i / 900)} 0 ${i % 2}`),
        COLUMNS,
      ),
      {},
    ],
    [
      '4000 charged fragments about one centre',
      xyz(
        lines(4000, (i) => `He ${12 + 3 * i} 0 0 1 ${i}\nHe ${-12 - 3 * i} 0 0 -1 ${i}`),
        COLUMNS,
      ),
      { 'near-field': 1 },
    ],
    [
      '1000 hydrogens of one fragment beside 1000 oxygens of another',
      xyz(`${'H 0 0 0 0 1\n'.repeat(1000)}${'O 0 0 1.3 0 2\n'.repeat(1000)}`, COLUMNS),
      {},
    ],
  ])('%s', async (_, content, expected) => {
    expect((await inspect(content)).codes).toMatchObject(expected);
  });
});
