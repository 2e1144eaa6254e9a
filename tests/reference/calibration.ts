import type { FrameAnalysis } from '../../server/src/analysis/frame-analysis';
import { evaluatePair, type Pair } from '../../server/src/analysis/pair';
import { type Basis, errorBound, type Regime, regimeOf } from '../../server/src/analysis/reference';
import { DEFAULT_REQUEST, type Knowledge } from '../../server/src/analysis/settings';
import type { System } from '../../server/src/analysis/system';
import { DEBYE_E_A } from '../../server/src/physics/constants';
import { eeqCharges } from '../../server/src/physics/eeq-charges';
import { atomicNumberOf, symbolOf, VDW_RADIUS_A } from '../../server/src/physics/elements';
import { analyse } from '../support/analyse';
import { type Geometry, geometryOf, massCentre } from './data/geometry';
import { IONS } from './data/ions';
import { MMFF94 } from './data/mmff94-charges';
import { MOLECULES } from './data/molecules';
import { type Atom, seeded, xyz } from './data/outside-program';

/**
 * How often the program judges a point dipole as it would if it knew the charges. Each pair of molecules with charges is taken through the
 * program twice: with its charge column, where the regime rests on `charges`, and with nothing but net charge and dipole of each molecule.
 */

interface Subject {
  readonly name: string;
  readonly isIon: boolean;
  readonly atoms: readonly Atom[];
}

/** Where the charges of a study come from. */
export type Charges = 'force fields' | 'scaled EEQ';

export interface Judged {
  readonly charges: Charges;
  readonly names: readonly [string, string];
  readonly hasIon: boolean;
  readonly distanceA: number;
  readonly touching: boolean;
  /** The larger of reference and point estimate in size, in kT. */
  readonly strengthKT: number;
  /** By basis: `charges` is what is to be met. */
  readonly regime: Readonly<Record<'charges' | Way, Regime>>;
}

/**
 * How a pair without charges is judged: by basis, and by what may be used: nothing (charges start from zero), estimates (they start from
 * EEQ, and the doubt of a reference counts), or estimates without the doubt.
 */
export const WAYS = [
  'fitted, no estimates',
  'fitted, EEQ without doubt',
  'fitted, EEQ',
  'extent, no estimates',
  'extent, EEQ',
] as const;
export type Way = (typeof WAYS)[number];

const ESTIMATES: Knowledge = { library: null, estimates: true };
/** No pair stands farther apart, Å. */
const FARTHEST_A = 15;
/** The closest contact of a pair, as a share of the van der Waals radii: hydrogen bonds go down to about this. */
const CLOSEST_RATIO = 0.75;
/** How many pairs: of two neutral molecules, and of an ion and a neutral one. */
const PAIRS: Readonly<Record<Charges, readonly [number, number]>> = {
  'force fields': [4000, 3000],
  'scaled EEQ': [2000, 1000],
};
/** One molecule in so many is a water. */
const WATER_SHARE = 4;

/** Bond (Å), angle (°), charge of a hydrogen (e), distance of the negative charge from O (Å); sources in outside-charge-models.test.ts. */
const WATERS = [
  ['SPC', 1, 109.47, 0.41, 0],
  ['SPC/E', 1, 109.47, 0.4238, 0],
  ['TIP3P', 0.9572, 104.52, 0.417, 0],
  ['TIP4P/2005', 0.9572, 104.52, 0.5564, 0.1546],
] as const;

const LONE_IONS = [
  ['Li', 1],
  ['Na', 1],
  ['K', 1],
  ['Mg', 2],
  ['F', -1],
  ['Cl', -1],
  ['Br', -1],
] as const;

function waters(): Subject[] {
  return WATERS.map(([name, bondA, angleDeg, chargeE, siteA]) => {
    const half = (angleDeg * Math.PI) / 360;
    const [x, y] = [bondA * Math.cos(half), bondA * Math.sin(half)];
    const oxygen: Atom = ['O', 0, 0, 0, siteA === 0 ? -2 * chargeE : 0];
    const site: Atom[] = siteA === 0 ? [] : [['X', siteA, 0, 0, -2 * chargeE]];
    return { name, isIon: false, atoms: [oxygen, ['H', x, y, 0, chargeE], ['H', x, -y, 0, chargeE], ...site] };
  });
}

function atomsOf({ count, elements, positionsA }: Geometry, chargesE: ArrayLike<number>): Atom[] {
  return Array.from({ length: count }, (_, i) => [
    symbolOf(elements[i]!),
    positionsA[3 * i]!,
    positionsA[3 * i + 1]!,
    positionsA[3 * i + 2]!,
    chargesE[i]!,
  ]);
}

/** Molecules and ions with MMFF94 charges, the rounding of their sum spread over the atoms. */
function forceFieldSubjects(): Subject[] {
  return MMFF94.map(({ name, chargesE, atoms }) => {
    const known = MOLECULES.find((row) => row.name === name) ?? IONS.find((row) => row.name === name);
    const geometry = geometryOf(atoms ?? known!.atoms);
    const sum = chargesE.reduce((total, q) => total + q, 0);
    const over = (sum - Math.round(sum)) / geometry.count;
    const even = chargesE.map((q) => q - over);
    return { name, isIon: Math.round(sum) !== 0, atoms: atomsOf(geometry, even) };
  });
}

/** Neutral molecules whose EEQ charges, multiplied by one number (½ to 2), have a dipole of the published size. */
function scaledSubjects(): Subject[] {
  return MOLECULES.flatMap(({ name, published, dipoleD, atoms }) => {
    const geometry = geometryOf(atoms);
    const size = Math.hypot(...dipoleD) * DEBYE_E_A;
    const chargesE = new Float64Array(geometry.count);
    if (!published || size === 0) return [];
    if (eeqCharges(geometry.count, geometry.elements, geometry.positionsA, 0, chargesE) !== null) return [];
    const centre = massCentre(geometry);
    const own = [0, 1, 2].map((a) =>
      chargesE.reduce((sum, q, i) => sum + q * (geometry.positionsA[3 * i + a]! - centre[a]!), 0),
    );
    const scale = size / Math.hypot(...own);
    if (!(scale > 0.5 && scale < 2)) return [];
    const scaled = chargesE.map((q) => q * scale);
    return [{ name, isIon: false, atoms: atomsOf(geometry, scaled) }];
  });
}

const loneIons = (): Subject[] =>
  LONE_IONS.map(([symbol, chargeE]) => ({ name: symbol, isIon: true, atoms: [[symbol, 0, 0, 0, chargeE]] }));

type Random = () => number;

/** The atoms about their mean position, turned at random (Shoemake's quaternions). */
function turned(atoms: readonly Atom[], random: Random): Atom[] {
  const [u1, u2, u3] = [random(), 2 * Math.PI * random(), 2 * Math.PI * random()];
  const [a, b] = [Math.sqrt(1 - u1), Math.sqrt(u1)];
  const [x, y, z, w] = [a * Math.sin(u2), a * Math.cos(u2), b * Math.sin(u3), b * Math.cos(u3)];
  const rows = [
    [1 - 2 * (y * y + z * z), 2 * (x * y - z * w), 2 * (x * z + y * w)],
    [2 * (x * y + z * w), 1 - 2 * (x * x + z * z), 2 * (y * z - x * w)],
    [2 * (x * z - y * w), 2 * (y * z + x * w), 1 - 2 * (x * x + y * y)],
  ];
  const mean = [1, 2, 3].map((k) => atoms.reduce((sum, atom) => sum + (atom[k] as number), 0) / atoms.length);
  return atoms.map((atom) => {
    const r = [1, 2, 3].map((k) => (atom[k] as number) - mean[k - 1]!);
    const [px, py, pz] = rows.map((row) => row[0]! * r[0]! + row[1]! * r[1]! + row[2]! * r[2]!);
    return [atom[0], px!, py!, pz!, atom[4]] as Atom;
  });
}

const shifted = (atoms: readonly Atom[], x: number): Atom[] =>
  atoms.map(([symbol, ax, y, z, q]) => [symbol, ax + x, y, z, q] as Atom);

/** Smallest distance over the sum of van der Waals radii, ghosts aside. */
function contactRatio(first: readonly Atom[], second: readonly Atom[], x: number): number {
  let smallest = Number.POSITIVE_INFINITY;
  for (const a of first) {
    for (const b of second) {
      if (a[0] === 'X' || b[0] === 'X') continue;
      const sum = VDW_RADIUS_A[atomicNumberOf(a[0])]! + VDW_RADIUS_A[atomicNumberOf(b[0])]!;
      smallest = Math.min(smallest, Math.hypot(b[1] + x - a[1], b[2] - a[2], b[3] - a[3]) / sum);
    }
  }
  return smallest;
}

/** Two molecules at random orientations, their separation even between contact and the farthest. */
function placed(one: Subject, two: Subject, random: Random): [Atom[], Atom[]] {
  const first = turned(one.atoms, random);
  const second = turned(two.atoms, random);
  let contact = FARTHEST_A;
  while (contact > 0.1 && contactRatio(first, second, contact - 0.05) > CLOSEST_RATIO) contact -= 0.05;
  return [first, shifted(second, contact + (FARTHEST_A - contact) * random())];
}

/** The pair with nothing but net charge and dipole of each molecule, as the program has them from the charges. */
function stripped(first: readonly Atom[], second: readonly Atom[], { moments }: FrameAnalysis): string {
  const real = [first, second].map((atoms) => atoms.flatMap((a) => (a[0] === 'X' ? [] : [a.slice(0, 4)])) as unknown);
  const [one, two] = real as [Atom[], Atom[]];
  const dipoles = [...moments.dipoleEA].map((value) => value / DEBYE_E_A).join(' ');
  const groups = `fragment_atoms="1-${one.length} ${one.length + 1}-${one.length + two.length}"`;
  return xyz(
    [...one, ...two],
    `${groups} fragment_charges="${moments.chargeE.join(' ')}" fragment_dipoles="${dipoles}" dipole_unit=D`,
  );
}

function judge(charges: Charges, one: Subject, two: Subject, random: Random): Judged | null {
  const [first, second] = placed(one, two, random);
  const groups = `fragment_atoms="1-${first.length} ${first.length + 1}-${first.length + second.length}"`;
  const [frame] = analyse(xyz([...first, ...second], groups)).frames;
  const { system } = frame!;
  const truth = evaluatePair(system, 0, 1);
  if (truth.basis !== 'charges') throw new Error(`${one.name}, ${two.name}: the charges are not taken.`);
  // Within a fragment no basis judges.
  if (truth.enclosed) return null;
  const text = stripped(first, second, frame!);
  const [unaided, aided] = [null, ESTIMATES].map(
    (knowledge) => analyse(text, 'xyz', { ...DEFAULT_REQUEST, knowledge }).frames[0]!.system,
  ) as [System, System];
  const on = (bare: System, basis: Basis): Pair & { regime: Regime } => {
    const pair = evaluatePair(basis === 'fitted' ? bare : { ...bare, fitted: new Uint8Array(2) }, 0, 1);
    // Where no charges have the dipole the program falls back on the extent.
    if (pair.regime === null || (pair.basis !== basis && pair.basis !== 'extent'))
      throw new Error(`${one.name}, ${two.name}: ${pair.basis} where ${basis} was to be tried.`);
    return pair as Pair & { regime: Regime };
  };
  const withDoubt = on(aided, 'fitted');
  const { errorKJPerMol, referenceKJPerMol } = withDoubt;
  return {
    charges,
    names: [one.name, two.name],
    hasIon: one.isIon || two.isIon,
    distanceA: truth.distanceA,
    touching: truth.contact === 'touching',
    strengthKT: truth.strengthKJPerMol / system.kTKJPerMol,
    regime: {
      charges: truth.regime!,
      'fitted, no estimates': on(unaided, 'fitted').regime,
      'fitted, EEQ without doubt': Number.isNaN(errorKJPerMol)
        ? withDoubt.regime
        : regimeOf(errorKJPerMol, errorBound(aided, referenceKJPerMol)),
      'fitted, EEQ': withDoubt.regime,
      'extent, no estimates': on(unaided, 'extent').regime,
      'extent, EEQ': on(aided, 'extent').regime,
    },
  };
}

/** All pairs of the study; for one seed always the same. */
export function calibrate(seed: number): Judged[] {
  const random = seeded(seed);
  const pick = (list: readonly Subject[]) => list[Math.floor(random() * list.length)]!;
  const fields = forceFieldSubjects();
  const ions = [...loneIons(), ...fields.filter(({ isIon }) => isIon)];
  const neutral: Readonly<Record<Charges, readonly Subject[]>> = {
    'force fields': fields.filter(({ isIon }) => !isIon),
    'scaled EEQ': scaledSubjects(),
  };
  const judged: Judged[] = [];
  for (const charges of ['force fields', 'scaled EEQ'] as const) {
    const any = () =>
      charges === 'force fields' && random() * WATER_SHARE < 1 ? pick(waters()) : pick(neutral[charges]);
    for (const [kind, count] of PAIRS[charges].entries()) {
      for (let made = 0; made < count; ) {
        const pair = judge(charges, kind === 0 ? any() : pick(ions), any(), random);
        if (pair === null) continue;
        judged.push(pair);
        made++;
      }
    }
  }
  return judged;
}

const RANK: Readonly<Record<Regime, number>> = { far: 0, edge: 1, near: 2 };

/** Shares of some pairs judged the same, too optimistically and too pessimistically. */
export interface Score {
  readonly pairs: number;
  readonly same: number;
  readonly optimistic: number;
  readonly pessimistic: number;
  /** Judged far where true charges say near. */
  readonly grave: number;
}

export function score(pairs: readonly Judged[], way: Way): Score {
  const counts = [0, 0, 0];
  for (const { regime } of pairs) counts[1 + Math.sign(RANK[regime[way]] - RANK[regime.charges])]!++;
  const [optimistic, same, pessimistic] = counts.map((count) => count / Math.max(1, pairs.length));
  const graves = pairs.filter(({ regime }) => regime[way] === 'far' && regime.charges === 'near').length;
  const grave = graves / Math.max(1, pairs.length);
  return { pairs: pairs.length, same: same!, optimistic: optimistic!, pessimistic: pessimistic!, grave };
}
