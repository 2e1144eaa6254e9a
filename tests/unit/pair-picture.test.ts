import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type PairPictureInput, pairPicture } from '../../server/src/features/pair-picture';
import { ENERGY_UNITS } from '../../server/src/physics/units';

const MOST_BYTES = 8000;

const BASE: PairPictureInput = {
  name1: 'water',
  name2: 'ammonia',
  distanceA: 4.5,
  extent1A: 1.5,
  extent2A: 2,
  charge1E: 0,
  charge2E: 0,
  dipole1D: 2,
  dipole2D: 1,
  theta1Deg: 30,
  theta2Deg: 120,
  phiDeg: 40,
  pointKJPerMol: -10,
  referenceKJPerMol: -12.5,
  kTKJPerMol: 2.5,
  unit: 'kJ/mol',
  unitsPerKJPerMol: 1,
  theme: null,
};

function picture(changes: Partial<PairPictureInput> = {}) {
  const { svg, text } = pairPicture({ ...BASE, ...changes });
  return { svg, text, tags: tagsOf(svg), words: wordsIn(svg) };
}

interface Tag {
  readonly name: string;
  readonly attributes: Readonly<Record<string, string>>;
}

/** Elements of a well-formed document; throws where it is not. */
function tagsOf(svg: string): Tag[] {
  const open: string[] = [];
  const tags: Tag[] = [];
  let rest = svg;
  while (rest !== '') {
    const match =
      /^<\/(?<close>[a-z]+)>|^<(?<name>[a-z]+)(?<list>(?: [a-zA-Z0-9-]+="(?:[^<>&"]|&(?:amp|lt|gt|quot);)*")*)(?<empty>\/?)>|^(?:[^<>&]|&(?:amp|lt|gt|quot);)+/.exec(
        rest,
      );
    if (match === null) throw new Error(`not well-formed at: ${rest.slice(0, 60)}`);
    const { close, name, list = '', empty } = match.groups ?? {};
    if (close !== undefined && open.pop() !== close) throw new Error(`</${close}> closes nothing`);
    if (name !== undefined) {
      const pairs = [...list.matchAll(/ ([a-zA-Z0-9-]+)="([^"]*)"/g)].map((m) => [m[1]!, m[2]!] as const);
      const attributes = Object.fromEntries(pairs);
      if (Object.keys(attributes).length !== pairs.length) throw new Error(`an attribute twice in <${name}>`);
      tags.push({ name, attributes });
      if (empty === '') open.push(name);
    }
    rest = rest.slice(match[0].length);
    if (open.length === 0 && rest !== '') throw new Error('more than one root');
  }
  return tags;
}

function wordsIn(svg: string): string[] {
  return [...svg.matchAll(/<text[^>]*>([^<]*)<\/text>/g)].map((m) => m[1]!);
}

function numberOf(tag: Tag | undefined, key: string): number {
  return Number(tag?.attributes[key]);
}

/** Discs of the fragments: the faint circles on the line of centres. */
function discsOf(tags: readonly Tag[]): Tag[] {
  const faint = tags.filter(({ name, attributes }) => name === 'circle' && attributes['fill-opacity'] !== undefined);
  return faint.slice(0, 2);
}

/** Distance between the signs of each dipole, less what stands between arrow and sign: the length of its arrow. */
function arrowLengths(svg: string): number[] {
  const places = (sign: string) =>
    [...svg.matchAll(new RegExp(`<text x="([^"]+)" y="([^"]+)"[^>]*>${sign}</text>`, 'g'))].map((m) => [
      Number(m[1]),
      Number(m[2]),
    ]);
  const minus = places('−');
  return places('\\+').map(([x, y], i) => Math.hypot(x! - minus[i]![0]!, y! - minus[i]![1]!) - 14);
}

describe('a picture of a pair', () => {
  it('is a small document of its own, without scripts, styles or references', () => {
    const { svg, tags } = picture();
    expect(tags[0]!.attributes).toMatchObject({ xmlns: 'http://www.w3.org/2000/svg', width: '360', role: 'img' });
    expect(new Set(tags.map(({ name }) => name))).toEqual(new Set(['svg', 'circle', 'line', 'path', 'rect', 'text']));
    expect(svg.replace('http://www.w3.org/2000/svg', '')).not.toMatch(/href|url\(|style=|class=|script|http|@import/);
    expect(Buffer.byteLength(svg)).toBeLessThan(MOST_BYTES);
  });

  it('says what it shows, in itself and in words', () => {
    const { words, text, tags } = picture();
    expect(words).toEqual(
      expect.arrayContaining([
        '1 water',
        '2 ammonia',
        'θ₁ 30°',
        'θ₂ 120°',
        'φ 40°',
        'R 4.50 Å',
        'attractive',
        'repulsive',
        'reference −12.50 kJ/mol',
        'point dipole −10.00 kJ/mol',
        '±kT = 2.50 kJ/mol',
      ]),
    );
    expect(text).toBe(
      '1: water, dipole 2.00 D at 30° to the line of centres; 2: ammonia, dipole 1.00 D at 120° to the line of ' +
        'centres, 4.50 Å apart, φ 40°. Attractive: reference −12.50 kJ/mol, point dipole −10.00 kJ/mol, kT 2.50 kJ/mol.',
    );
    expect(tags[0]!.attributes['aria-label']).toBe(text);
  });

  it('draws discs, distance and dipoles to scale', () => {
    const { svg, tags } = picture();
    const [first, second] = discsOf(tags);
    const apart = numberOf(second, 'cx') - numberOf(first, 'cx');
    expect(apart / numberOf(first, 'r')).toBeCloseTo(4.5 / 1.5, 2);
    expect(apart / numberOf(second, 'r')).toBeCloseTo(4.5 / 2, 2);
    const [one, two] = arrowLengths(svg);
    expect(one! / two!).toBeCloseTo(2, 1);
  });

  it('draws the energies to scale on both sides of zero', () => {
    const bar = (changes: Partial<PairPictureInput>) => {
      const rects = picture(changes).tags.filter(({ name }) => name === 'rect');
      return { band: rects[0], reference: rects[1] };
    };
    const { band, reference } = bar({});
    expect(numberOf(reference, 'width') / numberOf(band, 'width')).toBeCloseTo(12.5 / 5, 2);
    expect(numberOf(reference, 'x') + numberOf(reference, 'width')).toBeCloseTo(180, 5);
    expect(numberOf(bar({ referenceKJPerMol: 12.5 }).reference, 'x')).toBeCloseTo(180, 5);
  });

  it.each([
    [-12.5, 'attractive', 'Attractive'],
    [12.5, 'repulsive', 'Repulsive'],
    [0, undefined, 'Neither'],
  ])('%d kJ/mol is %s', (referenceKJPerMol, bold, start) => {
    const { svg, text } = picture({ referenceKJPerMol });
    expect(/<text[^>]*bold[^>]*>(attractive|repulsive)</.exec(svg)?.[1]).toBe(bold);
    expect(text).toContain(`. ${start}`);
  });

  it('writes energies in the unit asked for', () => {
    expect(picture({ unit: 'cm-1', unitsPerKJPerMol: 83.5935 }).words).toContain('reference −1045 cm⁻¹');
    expect(picture({ unit: 'kT', unitsPerKJPerMol: 0.4 }).words).toEqual(
      expect.arrayContaining(['reference −5.00 kT', '±kT']),
    );
  });

  it('sharpens its tones for a known theme', () => {
    const themes = [null, 'light', 'dark', 'high-contrast'] as const;
    expect(new Set(themes.map((theme) => picture({ theme }).svg)).size).toBe(4);
  });
});

describe('what is not known is left out', () => {
  it('a dipole', () => {
    const { words, text } = picture({ dipole2D: null, theta2Deg: null, phiDeg: null });
    expect(words.filter((word) => word.startsWith('θ'))).toEqual(['θ₁ 30°']);
    expect(words).toEqual(expect.arrayContaining(['μ ?', 'φ –']));
    expect(text).toContain('ammonia, dipole not known');
  });

  it('the direction of a zero dipole', () => {
    const { words } = picture({ dipole1D: 0, theta1Deg: null, phiDeg: null });
    expect(words).toContain('μ 0');
    expect(picture({ theta1Deg: null }).text).toContain('water, dipole 2.00 D of unknown direction');
    expect(words.filter((word) => word.startsWith('θ'))).toEqual(['θ₂ 120°']);
  });

  it('an ion shows its charge instead', () => {
    const none = { dipole1D: null, dipole2D: null, theta1Deg: null, theta2Deg: null, phiDeg: null };
    const { words, text } = picture({ ...none, charge1E: 1, charge2E: -1.96 });
    expect(words).toEqual(expect.arrayContaining(['+1', '−2']));
    expect(words.some((word) => /[θφμ]|seen/.test(word))).toBe(false);
    expect(text).toContain('water, charge +1, dipole not known');
    expect(picture({ charge1E: 1 }).words).toEqual(expect.arrayContaining(['1 water (+1)', 'θ₁ 30°']));
  });

  it('energies', () => {
    const none = picture({ referenceKJPerMol: null, pointKJPerMol: null });
    expect(none.words).toContain('energy not known');
    expect(none.text).toContain('No energy is known.');
    const point = picture({ referenceKJPerMol: null });
    expect(point.words.filter((word) => /reference|point/.test(word))).toEqual(['point dipole −10.00 kJ/mol']);
  });

  it('arrows where one fragment encloses the centre of the other', () => {
    const { words, text } = picture({ distanceA: 1.9, charge2E: 1 });
    expect(words).toEqual(expect.arrayContaining(['one encloses', '2 ammonia (+1)']));
    expect(words.some((word) => word.startsWith('θ'))).toBe(false);
    expect(text).toContain('one encloses the centre of the other');
  });
});

it('names can hold anything and stay in their place', () => {
  const { svg, words, text } = picture({ name1: '<b>&"\'\u0000\ud800\u202e', name2: 'x'.repeat(100_000) });
  expect(words).toContain("1 &lt;b&gt;&amp;&quot;'���");
  expect(svg).not.toMatch(/<b>/);
  expect(text.length).toBeLessThan(400);
  expect(Buffer.byteLength(svg)).toBeLessThan(MOST_BYTES);
});

it('holds no nonsense and cuts nothing, whatever the numbers', () => {
  const any = fc.option(
    fc.oneof(fc.double(), fc.double({ min: 0, max: 20, noNaN: true }), fc.constantFrom(0, 1e-300, 1e308)),
  );
  const degrees = (min: number) => fc.option(fc.oneof(fc.double({ min, max: 180, noNaN: true }), fc.double()));
  const inputs = fc.record<PairPictureInput>({
    name1: fc.string({ unit: fc.constantFrom('a', '<', '&', '中', '\n') }),
    name2: fc.constant('b'),
    distanceA: any,
    extent1A: any,
    extent2A: any,
    charge1E: any,
    charge2E: any,
    dipole1D: any,
    dipole2D: any,
    theta1Deg: degrees(0),
    theta2Deg: degrees(0),
    phiDeg: degrees(-180),
    pointKJPerMol: any,
    referenceKJPerMol: any,
    kTKJPerMol: fc.oneof(fc.double(), fc.constant(2.5)),
    unit: fc.constantFrom(...ENERGY_UNITS),
    unitsPerKJPerMol: fc.oneof(fc.double(), fc.constant(1)),
    theme: fc.constantFrom(null, 'light', 'dark', 'high-contrast'),
  });
  fc.assert(
    fc.property(inputs, (input) => {
      const { svg, text } = pairPicture(input);
      expect(svg + text).not.toMatch(/NaN|undefined|Infinity|null/);
      expect(Buffer.byteLength(svg)).toBeLessThan(MOST_BYTES);
      expect(pairPicture(input)).toEqual({ svg, text });
      for (const { attributes } of tagsOf(svg)) {
        for (const [key, most] of [
          ['x', 360],
          ['cx', 360],
          ['x1', 360],
          ['x2', 360],
          ['y', 164],
          ['cy', 164],
        ] as const) {
          const value = attributes[key];
          if (value === undefined) continue;
          expect(Number(value)).toBeGreaterThanOrEqual(0);
          expect(Number(value)).toBeLessThanOrEqual(most);
        }
      }
    }),
    { numRuns: 2000 },
  );
});
