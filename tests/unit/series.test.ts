import { describe, expect, test } from 'vitest';
import { FileAnalysis } from '../../server/src/analysis/frame-analysis';
import { DEFAULT_REQUEST } from '../../server/src/analysis/settings';
import { finish } from '../../server/src/base/steps';
import { type Series, seriesSteps } from '../../server/src/features/series';
import { parse } from '../../server/src/formats/parse';
import type { Language } from '../../server/src/formats/tree';
import { thermalEnergyKJPerMol } from '../../server/src/physics/constants';
import { snapshotOf } from '../../server/src/text/snapshot';
import {
  type Fragment,
  frameText,
  K_KJ_A,
  known,
  pairOf,
  point,
  scaled,
  shifted,
  type Vector,
} from '../property/build-frame';
import { pdbRecord } from '../support/pdb-lines';

/** A pair over hand-made trajectories in which it is known what happens and where. */

const KT = thermalEnergyKJPerMol(298.15);

type Result = ReturnType<typeof finish<Series | { readonly ok: false; readonly reason: string }>>;

function resultOf(text: string, pair: [number, number] | null = [1, 2], language: Language = 'xyz'): Result {
  return finish(seriesSteps(new FileAnalysis(parse(snapshotOf(text), language), DEFAULT_REQUEST), pair));
}

function seriesOf(text: string, pair: [number, number] | null = [1, 2], language: Language = 'xyz'): Series {
  const result = resultOf(text, pair, language);
  if (!result.ok) throw new Error(result.reason);
  return result;
}

/** A PDB file of models. */
const models = (...all: string[][]) =>
  `${all.map((lines, k) => `MODEL     ${String(k + 1).padStart(4)}\n${lines.join('\n')}\nENDMDL`).join('\n')}\nEND\n`;

const briefly = ({ events }: Series) => events.map(({ kind, fromFrame, toFrame }) => `${kind} ${fromFrame}-${toFrame}`);

describe('a dipole that turns beside another', () => {
  const MU = 0.4;
  const R = 6;

  /** The second dipole at `degrees` from the first, both across the line of centres: E = kμ²cos/R³. */
  const turned = (degrees: number, keys = '') => {
    const angle = (degrees * Math.PI) / 180;
    const second = point([R, 0, 0], [0, MU * Math.sin(angle), MU * Math.cos(angle)]);
    return frameText([point([0, 0, 0], [0, 0, MU]), second], keys);
  };
  const energy = (degrees: number) => ((K_KJ_A * MU * MU) / R ** 3) * Math.cos((degrees * Math.PI) / 180);
  const turning = (...angles: number[]) => seriesOf(angles.map((angle) => turned(angle)).join(''));

  test('has the energy of the law in every frame', () => {
    const angles = [0, 25, 60, 110, 180];
    const { frames } = turning(...angles);
    expect(frames.map(({ frame }) => frame)).toEqual([1, 2, 3, 4, 5]);
    for (const [k, frame] of frames.entries()) {
      expect(frame.energyKJPerMol).toBeCloseTo(energy(angles[k]!), 9);
      expect(frame.multipleOfKT).toBeCloseTo(Math.abs(energy(angles[k]!)) / KT, 9);
      expect(frame).toMatchObject({ distanceA: R, first: 1, second: 2, contact: 'apart', missing: null });
    }
  });

  test('changes sign at 90°, halfway between frames at 80° and 100°', () => {
    const series = turning(0, 20, 40, 60, 80, 100, 120, 140, 160, 180);
    const signs = series.events.filter(({ kind }) => kind === 'sign');
    expect(signs).toHaveLength(1);
    expect(signs[0]).toMatchObject({ fromFrame: 5, toFrame: 6, what: '+ → −', distanceA: R });
    expect(80 + 20 * known(signs[0]!.fraction)).toBeCloseTo(90, 9);
  });

  test('changes sign between uneven frames where the straight line of the law does, near 90°', () => {
    const [event] = turning(70, 130).events;
    const line = energy(70) / (energy(70) - energy(130));
    expect(event).toMatchObject({ kind: 'sign', fromFrame: 1, toFrame: 2 });
    expect(event!.fraction).toBeCloseTo(line, 9);
    const fine = turning(...Array.from({ length: 181 }, (_, degree) => degree + 0.3));
    const crossing = fine.events.find(({ kind }) => kind === 'sign')!;
    // Frame 1 is at 0.3°, one degree a frame; a chord of the cosine across 1° is off by less than 1e-4°.
    expect(crossing.fromFrame + known(crossing.fraction) - 1 + 0.3).toBeCloseTo(90, 3);
  });

  test('has no sign at 90° itself: the change is told once, from that frame on', () => {
    const signs = turning(0, 90, 180).events.filter(({ kind }) => kind === 'sign');
    expect(signs).toHaveLength(1);
    expect(signs[0]).toMatchObject({ fromFrame: 2, toFrame: 3, what: '+ → −' });
    expect(signs[0]!.fraction).toBeCloseTo(0, 9);
    expect(briefly(turning(60, 90, 60)).filter((event) => event.startsWith('sign'))).toEqual([]);
  });

  test('tells a change back', () => {
    const signs = turning(80, 100, 80).events.filter(({ kind }) => kind === 'sign');
    expect(signs.map(({ what }) => what)).toEqual(['+ → −', '− → +']);
  });

  test('crosses kT by its own temperature in each frame', () => {
    const size = energy(0);
    // kT = E/2 in the first frame, 2E in the second: on straight lines they meet where E = E/2 + 3E/2·t, t = 1/3.
    const kelvin = (kT: number) => `temperature=${(298.15 * kT) / KT}`;
    const { events } = seriesOf(turned(0, kelvin(size / 2)) + turned(0, kelvin(2 * size)));
    expect(events).toEqual([
      expect.objectContaining({ kind: 'kT', fromFrame: 1, toFrame: 2, what: '|E| falls below kT' }),
    ]);
    expect(events[0]!.fraction).toBeCloseTo(1 / 3, 9);
  });
});

describe('two fragments drawn apart', () => {
  test('cross kT where the law says, on the straight line between two frames', () => {
    const mu = 0.5;
    const place = ((K_KJ_A * mu * mu) / KT) ** (1 / 3);
    const at = (r: number) => frameText([point([0, 0, 0], [0, 0, mu]), point([r, 0, 0], [0, 0, -mu])]);
    const distances = [0.8, 0.9, 0.999, 1.003, 1.1].map((share) => share * place);
    const { events, frames } = seriesOf(distances.map(at).join(''));
    expect(events).toHaveLength(1);
    const energies = frames.map(({ energyKJPerMol }) => known(energyKJPerMol));
    const line = (energies[2]! + KT) / (energies[2]! - energies[3]!);
    expect(events[0]).toMatchObject({ kind: 'kT', fromFrame: 3, toFrame: 4, what: '|E| falls below kT' });
    expect(events[0]!.fraction).toBeCloseTo(line, 9);
    expect(events[0]!.distanceA! / place).toBeCloseTo(1, 4);
  });

  /** Rods of 4 Å with charges at the ends, side by side and antiparallel. */
  const rod = (x: number, sign: number): Fragment => ({
    sites: [1, -1].map((end) => ({ symbol: 'F', at: [x, 2 * end, 0] as Vector, chargeE: sign * end })),
  });

  test('leave and enter the far regime at validBeyond, found without frames', () => {
    const limit = known(pairOf(rod(0, 1), rod(6, -1)).validBeyondA);
    const shares = [1.2, 1.001, 0.999, 0.9, 0.9995, 1.0005];
    const series = seriesOf(shares.map((share) => frameText([rod(0, 1), rod(limit * share, -1)])).join(''));
    const regimes = series.events.filter(({ kind }) => kind === 'regime');
    expect(regimes.map(({ fromFrame, toFrame, what }) => [fromFrame, toFrame, what])).toEqual([
      [2, 3, 'far → edge'],
      [5, 6, 'edge → far'],
    ]);
    expect(regimes[0]!.fraction).toBeNull();
    expect(series.frames[0]).toMatchObject({ basis: 'charges', energyFrom: 'reference', regime: 'far' });
    expect(series.frames[0]!.energyKJPerMol).toBe(series.frames[0]!.referenceKJPerMol);
  });

  test('change their contact where the van der Waals spheres part', () => {
    // Bondi's 1.40 Å of helium twice.
    const at = (r: number) => frameText([point([0, 0, 0], [0, 0, 0.01]), point([r, 0, 0], [0, 0, 0.01])]);
    const { events } = seriesOf([2.7, 2.79, 2.81, 3, 2.79].map(at).join(''));
    expect(events.map(({ kind, fromFrame, toFrame, what }) => [kind, fromFrame, toFrame, what])).toEqual([
      ['contact', 2, 3, 'touching → apart'],
      ['contact', 4, 5, 'apart → touching'],
    ]);
  });

  test('are followed beyond the cutoff of the pair list', () => {
    const at = (r: number) => frameText([point([0, 0, 0], [0, 0, 0.4]), point([r, 0, 0], [0, 0, 0.4])]);
    const { frames } = seriesOf(at(5) + at(500));
    expect(frames[1]).toMatchObject({ distanceA: 500, missing: null, regime: 'far' });
  });
});

const WATER = ([x, y, z]: Vector) =>
  [`O ${x} ${y} ${z} -0.8`, `H ${x + 0.757} ${y + 0.586} ${z} 0.4`, `H ${x - 0.757} ${y + 0.586} ${z} 0.4`] as const;
const AMMONIA = ([x, y, z]: Vector) =>
  [
    `N ${x} ${y} ${z} -0.9`,
    `H ${x + 0.94} ${y} ${z - 0.38} 0.3`,
    `H ${x - 0.47} ${y + 0.81} ${z - 0.38} 0.3`,
    `H ${x - 0.47} ${y - 0.81} ${z - 0.38} 0.3`,
  ] as const;

/** A frame whose fragments are found by their bonds. */
const bare = (lines: readonly string[], keys = '') =>
  `${lines.length}\nProperties=species:S:1:pos:R:3:charge:R:1 ${keys}\n${lines.join('\n')}\n`;

describe('a frame without the pair', () => {
  const two = (r: number) => bare([...WATER([0, 0, 0]), ...WATER([r, 0, 0])]);

  test('has a reason and no number, and the frames around it stand', () => {
    const series = seriesOf(two(4) + bare([...WATER([0, 0, 0])]) + two(4.1));
    expect(series.frames.map(({ missing }) => missing)).toEqual([null, 'there is no fragment 2', null]);
    expect(series.frames[1]).toEqual(
      expect.objectContaining({ frame: 2, first: null, energyKJPerMol: null, distanceA: null, regime: null }),
    );
    expect(series.events).toEqual([
      { kind: 'missing', fromFrame: 2, toFrame: 2, what: 'there is no fragment 2', fraction: null, distanceA: null },
    ]);
  });

  test('has another composition', () => {
    const series = seriesOf(two(4) + bare([...WATER([0, 0, 0]), ...AMMONIA([4, 0, 0])]) + two(4));
    expect(series.frames[1]!.missing).toBe('fragment 2 is H3N here and H2O in the first frame');
    expect(briefly(series)).toEqual(['missing 2-2']);
  });

  test('lists other atoms, so that a water of the same number need not be the same water', () => {
    const three = bare([...WATER([0, 0, 0]), ...WATER([4, 0, 0]), ...WATER([9, 0, 0])]);
    expect(seriesOf(three + two(4)).frames[1]!.missing).toMatch(/lists other atoms than the first one/);
  });

  test('has one fragment split or joined to another by its bonds', () => {
    // The proton of the second goes over to the first.
    const [o, h1, h2] = WATER([3, 0, 0]);
    const bridged = bare([...WATER([0, 0, 0]), o, h1, 'H 0.2 -0.95 0 0.4']);
    const { frames } = seriesOf(bare([...WATER([0, 0, 0]), o, h1, h2]) + bridged);
    expect(frames[1]!.missing).toMatch(
      /^the atoms of fragment 1 \(H2O\) do not stand as one: atom 1 is part of H3O; the atoms of fragment 2/,
    );
  });

  test('is told with its neighbours of the same reason as one', () => {
    const one = bare([...WATER([0, 0, 0])]);
    const other = bare([...WATER([0, 0, 0]), ...AMMONIA([4, 0, 0])]);
    expect(briefly(seriesOf(two(4) + one + one + other + two(4) + one))).toEqual([
      'missing 2-3',
      'missing 4-4',
      'missing 6-6',
    ]);
  });

  test('leaves a change of sign across it without a place', () => {
    const at = (z: number) => frameText([point([0, 0, 0], [0, 0, 0.4]), point([6, 0, 0], [0, 0, z])]);
    const alone = frameText([point([0, 0, 0], [0, 0, 0.4])]);
    const signs = seriesOf(at(0.4) + alone + at(-0.3)).events.filter(({ kind }) => kind === 'sign');
    expect(signs).toEqual([{ kind: 'sign', fromFrame: 1, toFrame: 3, what: '+ → −', fraction: null, distanceA: null }]);
  });

  test('with a coordinate that cannot be read says so', () => {
    const broken = two(4).replace('O 4 0 0', 'O 4 x 0');
    expect(seriesOf(two(4) + broken).frames[1]!.missing).toMatch(/; fragment 2 has an atom that cannot be read$/);
  });
});

describe('a pair that has no energy', () => {
  test('is too close for multipoles: distance and contact stand', () => {
    const long = (x: number): Fragment => ({
      sites: [
        { symbol: 'F', at: [x, 0, 3] },
        { symbol: 'F', at: [x, 0, -3] },
      ],
      dipoleEA: [0, 0, 0.4],
    });
    const at = (r: number) => frameText([long(0), long(r)]);
    const { frames, events } = seriesOf(at(8) + at(2.5));
    expect(frames[1]).toMatchObject({ energyKJPerMol: null, multipleOfKT: null, regime: 'near', contact: 'touching' });
    expect(frames[1]!.distanceA).toBeCloseTo(2.5, 9);
    expect(events.map(({ kind, what }) => [kind, what])).toEqual([
      ['missing', 'the centre of one lies within the extent of the other'],
      ['regime', expect.stringMatching(/ → near$/)],
      ['contact', 'apart → touching'],
    ]);
  });

  test('is told apart by its dipole, where none is known', () => {
    const text = '6\n\nO 0 0 0\nH 0.757 0.586 0\nH -0.757 0.586 0\nO 5 0 0\nH 5.757 0.586 0\nH 4.243 0.586 0\n';
    expect(seriesOf(text).frames[0]!.missing).toBe('the dipoles of fragments 1 and 2 are not known');
  });

  test('is bonded', () => {
    // Two residues whose C and N come within a peptide bond of each other and part again.
    const at = (r: number) => [
      pdbRecord({ name: ' C  ', residue: 'GLY', number: '1', element: 'C' }),
      pdbRecord({ serial: '2', name: ' N  ', residue: 'GLY', number: '2', x: r, element: 'N' }),
    ];
    const { events, frames } = seriesOf(models(at(5), at(1.33), at(5)), [1, 2], 'pdb');
    expect(frames[1]).toMatchObject({ contact: 'bonded', energyKJPerMol: null, advice: null });
    expect(events.map(({ kind, fromFrame, toFrame, what }) => [kind, fromFrame, toFrame, what])).toEqual([
      ['missing', 2, 2, 'the two are bonded: parts of one molecule'],
      ['contact', 1, 2, 'apart → bonded'],
      ['contact', 2, 3, 'bonded → apart'],
    ]);
  });

  test('has an estimate where the reference is missing, and a crossing between the two no place', () => {
    const rod = (x: number, size: number): Fragment => ({
      sites: [
        { symbol: 'F', at: [x, 2, 0] },
        { symbol: 'F', at: [x, -2, 0] },
      ],
      dipoleEA: [0, 0, size],
    });
    // The fitted charges cannot make a dipole across their line; with dipoles as long as the extents they overlap at 3.5 Å.
    const series = seriesOf(frameText([rod(0, 0.3), rod(8, 0.3)]) + frameText([rod(0, 0.3), rod(3.5, -0.3)]));
    expect(series.frames.map(({ energyFrom }) => energyFrom)).toEqual(['reference', 'point']);
    const sign = series.events.find(({ kind }) => kind === 'sign')!;
    expect(sign).toMatchObject({ what: '+ → − (reference before, point after)', fraction: null, distanceA: null });
  });
});

describe('fragments are followed', () => {
  test('by their atoms, when others before them join and the numbers shift', () => {
    const trio = (apart: number) =>
      bare(['He 0 0 20 0', `H 0 0 ${20 + apart} 0`, ...WATER([0, 0, 0]), ...WATER([4, 0, 0])]);
    const hydrogens = (apart: number) => trio(apart).replace('He 0', 'H 0');
    const { frames, events } = seriesOf(hydrogens(5) + hydrogens(0.74), [3, 4]);
    expect(frames.map(({ first, second }) => [first, second])).toEqual([
      [3, 4],
      [2, 3],
    ]);
    expect(frames[1]!.energyKJPerMol).toBe(frames[0]!.energyKJPerMol);
    expect(events).toEqual([]);
  });

  const ion = (residue: string, number: number, x: number, serial: number) =>
    pdbRecord({
      record: 'HETATM',
      serial: String(serial),
      name: residue === 'NA' ? 'NA  ' : 'CL  ',
      residue: ` ${residue}`,
      number: String(number),
      x,
      element: residue,
      charge: residue === 'NA' ? '1+' : '1-',
    });
  test('by their residues in PDB models, whatever stands before them', () => {
    const text = models(
      [ion('NA', 7, 0, 1), ion('CL', 8, 5, 2)],
      [ion('NA', 3, 30, 1), ion('NA', 7, 0, 2), ion('CL', 8, 6, 3)],
      [ion('CL', 8, 6, 1), ion('NA', 7, 0, 2)],
      [ion('NA', 7, 0, 1)],
    );
    const { frames } = seriesOf(text, [1, 2], 'pdb');
    expect(frames.map(({ first, second, distanceA }) => [first, second, distanceA])).toEqual([
      [1, 2, 5],
      [2, 3, 6],
      [2, 1, 6],
      [null, null, null],
    ]);
    expect(frames[2]!.energyKJPerMol).toBeCloseTo(frames[1]!.energyKJPerMol!, 9);
    expect(frames[3]!.missing).toMatch(/^there is no A:CL *:8$/);
  });
});

describe('a periodic cell', () => {
  const CELL = 'Lattice="20 0 0 0 20 0 0 0 20" pbc="T T T"';
  const dipoles = (x: number) =>
    frameText([point([1, 10, 10], [0, 0, 0.4]), point([((x % 20) + 20) % 20, 10, 10], [0, 0, 0.4])], CELL);

  test('is crossed without an event', () => {
    const { frames, events } = seriesOf([-2.5, -1, -0.3, 0.2, -0.1, -3].map((x) => dipoles(x - 4)).join(''));
    expect(frames.map(({ distanceA }) => known(distanceA).toFixed(6))).toEqual(
      [7.5, 6, 5.3, 4.8, 5.1, 8].map((r) => r.toFixed(6)),
    );
    expect(events).toEqual([]);
    expect(briefly(seriesOf([4.5, -4.5].map((x) => dipoles(x + 1)).join('')))).toEqual([]);
  });

  test('has no place for a sign that changes because another image is nearest', () => {
    // An ion beside a dipole along the way between them: attracted from one side, repelled from the other.
    const at = (x: number) => frameText([point([0, 10, 10], [0, 0, 0], 1), point([x, 10, 10], [0.4, 0, 0])], CELL);
    const sign = (text: string) => seriesOf(text).events.find(({ kind }) => kind === 'sign')!;
    expect(sign(at(9.8) + at(10.2))).toMatchObject({
      fraction: null,
      what: expect.stringContaining('another periodic image is nearest'),
    });
  });
});

describe('the choice of the pair', () => {
  const three = frameText([
    point([0, 0, 0], [0, 0, 0.1]),
    point([5, 0, 0], [0, 0, 0.3]),
    point([9, 0, 0], [0, 0, 0.5]),
  ]);

  test('is the strongest of the first frame where none is named', () => {
    expect(seriesOf(three, null)).toMatchObject({ first: 2, second: 3 });
  });

  test('does not depend on the order of the two', () => {
    expect(seriesOf(three, [3, 1])).toEqual(seriesOf(three, [1, 3]));
  });

  test.each([
    [[1, 4], 'the first frame has 3 fragments, no fragment 4'],
    [[0, 1], 'the first frame has 3 fragments, no fragment 0'],
    [[1.5, 2], 'the first frame has 3 fragments, no fragment 1.5'],
    [[2, 2], 'fragment 2 makes no pair with itself'],
  ] as [[number, number], string][])('is refused with a reason: %s', (pair, reason) => {
    expect(resultOf(three, pair)).toEqual({ ok: false, reason });
  });

  test('is refused where no pair has an energy, and where there is no frame', () => {
    expect(resultOf('1\n\nAr 0 0 0\n', null)).toMatchObject({ ok: false });
    expect(resultOf('', null)).toEqual({ ok: false, reason: 'there is no frame' });
  });
});

describe('the work', () => {
  test('of a single frame is one record without events', () => {
    const { frames, events } = seriesOf(frameText([point([0, 0, 0], [0, 0, 0.4]), point([6, 0, 0], [0, 0, 0.4])]));
    expect([frames.length, events.length]).toEqual([1, 0]);
  });

  test('pauses in every frame and keeps of each only flat values', () => {
    const first = point([0, 0, 0], [0, 0, 0.4]);
    const count = 50;
    const text = Array.from({ length: count }, (_, k) =>
      frameText([first, shifted(first, scaled([1, 0, 0], 5 + k / 10))]),
    ).join('');
    const steps = seriesSteps(new FileAnalysis(parse(snapshotOf(text), 'xyz'), DEFAULT_REQUEST), null);
    let pauses = 0;
    let step = steps.next();
    for (; !step.done; step = steps.next()) pauses++;
    expect(pauses).toBeGreaterThanOrEqual(count);
    if (!step.value.ok) throw new Error(step.value.reason);
    expect(step.value.frames).toHaveLength(count);
    for (const frame of step.value.frames) {
      expect(Object.values(frame).every((value) => value === null || typeof value !== 'object')).toBe(true);
    }
  });
});
