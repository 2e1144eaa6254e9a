import type { Doubt, FragmentResult, FrameResult, PairResult } from './types.js';

/** Every number and string of the program's frames against the second calculation. */

export interface ProgramOutput {
  schema: string;
  frames: ProgramFrame[];
}

export interface ProgramFrame {
  frame: number;
  atomCount: number;
  fragments: FragmentResult[];
  pairs: Omit<PairResult, 'doubts'>[];
}

type Value = number | string | null | undefined;

/** A relative bound and an absolute floor. */
interface Bounds {
  relative: number;
  floor: number;
}

const NUMBERS: Bounds = { relative: 1e-6, floor: 1e-9 };
const ANGLES: Bounds = { relative: 1e-6, floor: 1e-5 };
const SEARCHED: Bounds = { relative: 1e-3, floor: 1e-9 };

/** Below this, kJ/mol, a reference energy is rounding, and an error relative to it too. */
const NOTHING = 1e-9;

export function differences(actual: ProgramFrame[], expected: FrameResult[]): string[] {
  const found: string[] = [];
  if (actual.length !== expected.length) found.push(`${actual.length} frames, not ${expected.length}`);
  expected.forEach((frame, i) => {
    if (actual[i] !== undefined) found.push(...frameDifferences(actual[i], frame).map((d) => `frame ${i + 1}: ${d}`));
  });
  return found;
}

function frameDifferences(actual: ProgramFrame, expected: FrameResult): string[] {
  const check = new Check();
  check.value('frame', actual.frame, expected.frame);
  check.value('atomCount', actual.atomCount, expected.atomCount);
  check.value('fragments', actual.fragments.length, expected.fragments.length);
  expected.fragments.forEach((fragment, i) => {
    if (actual.fragments[i] !== undefined) compareFragment(check, actual.fragments[i], fragment);
  });
  const key = (pair: { first: number; second: number }) => `${pair.first}-${pair.second}`;
  const listed = new Map(actual.pairs.map((pair) => [key(pair), pair]));
  for (const pair of expected.pairs) {
    const other = listed.get(key(pair));
    listed.delete(key(pair));
    if (other !== undefined) comparePair(check, `pair ${key(pair)}`, other, pair);
    else if (!pair.doubts.has('listed')) check.found.push(`pair ${key(pair)} is missing`);
  }
  for (const extra of listed.keys()) check.found.push(`pair ${extra} should not be there`);
  const order = actual.pairs.map((pair) => pair.first * actual.fragments.length + pair.second);
  if (order.some((value, i) => i > 0 && value <= order[i - 1])) check.found.push('pairs are not in order');
  return check.found;
}

class Check {
  readonly found: string[] = [];

  value(name: string, actual: Value, expected: Value, bounds: Bounds = NUMBERS): void {
    const numeric = typeof actual === 'number' && typeof expected === 'number';
    const allowed = numeric ? Math.max(bounds.floor, bounds.relative * Math.abs(expected)) : 0;
    if (numeric ? Math.abs(actual - expected) <= allowed : actual === expected) return;
    this.found.push(`${name} is ${actual}, not ${expected}`);
  }

  list(name: string, actual: Value[] | null, expected: Value[] | null): void {
    if (actual === null || expected === null || actual === undefined) {
      if (actual !== expected) this.found.push(`${name} is ${actual}, not ${expected}`);
      return;
    }
    this.value(`length of ${name}`, actual.length, expected.length);
    expected.forEach((value, i) => {
      this.value(`${name}[${i}]`, actual[i], value);
    });
  }
}

function compareFragment(check: Check, actual: FragmentResult, expected: FragmentResult): void {
  const name = (field: string) => `fragment ${expected.fragment} ${field}`;
  check.list(name('atoms'), actual.atoms, expected.atoms);
  check.list(name('centreA'), actual.centreA, expected.centreA);
  check.list(name('dipoleD'), actual.dipoleD, expected.dipoleD);
  for (const field of [
    'fragment',
    'name',
    'chargeE',
    'extentA',
    'dipoleNormD',
    'dipoleSource',
    'chargeSource',
    'polarizabilityA3',
  ] as const) {
    check.value(name(field), actual[field], expected[field]);
  }
}

function comparePair(check: Check, name: string, actual: Omit<PairResult, 'doubts'>, expected: PairResult): void {
  const { doubts } = expected;
  if (doubts.has('numbers')) return;
  const unless = (doubt: Doubt, compare: () => void) => {
    if (!doubts.has(doubt)) compare();
  };
  check.list(`${name} image`, actual.image, expected.image);
  check.value(`${name} distanceA`, actual.distanceA, expected.distanceA);

  unless('angles', () => {
    check.value(`${name} theta1Deg`, actual.theta1Deg, expected.theta1Deg, ANGLES);
    check.value(`${name} theta2Deg`, actual.theta2Deg, expected.theta2Deg, ANGLES);
    check.value(`${name} phiDeg`, sameTurn(actual.phiDeg, expected.phiDeg), expected.phiDeg, ANGLES);
    check.value(`${name} angularFactor`, actual.angularFactor, expected.angularFactor);
    unless('arrangement', () => check.value(`${name} arrangement`, actual.arrangement, expected.arrangement));
  });

  const energies = actual.energyKJPerMol;
  for (const term of Object.keys(expected.energyKJPerMol) as (keyof typeof energies)[]) {
    check.value(`${name} ${term}`, energies[term], expected.energyKJPerMol[term]);
  }
  for (const member of ['coupling', 'averageKJPerMol', 'freeEnergyKJPerMol', 'leadingKJPerMol', 'alignment'] as const) {
    check.value(`${name} ${member}`, actual.thermal[member], expected.thermal[member]);
  }
  unless('motion', () => check.value(`${name} motion`, actual.thermal.motion, expected.thermal.motion));

  check.value(`${name} contactRatio`, actual.closest.contactRatio, expected.closest.contactRatio);
  unless('closest', () => {
    check.list(`${name} closest atoms`, actual.closest.atoms, expected.closest.atoms);
    check.value(`${name} closest distanceA`, actual.closest.distanceA, expected.closest.distanceA);
  });
  unless('contact', () => check.value(`${name} contact`, actual.contact, expected.contact));

  check.value(`${name} basis`, actual.basis, expected.basis);
  check.value(`${name} referenceKJPerMol`, actual.referenceKJPerMol, expected.referenceKJPerMol);
  check.value(`${name} errorKJPerMol`, actual.errorKJPerMol, expected.errorKJPerMol);
  if (expected.referenceKJPerMol === null || Math.abs(expected.referenceKJPerMol) > NOTHING) {
    check.value(`${name} relativeError`, actual.relativeError, expected.relativeError);
  }
  check.value(`${name} validBeyondA`, actual.validBeyondA, expected.validBeyondA, SEARCHED);
  unless('regime', () => check.value(`${name} regime`, actual.regime, expected.regime));
  unless('advice', () => check.value(`${name} advice`, actual.advice, expected.advice));
}

/** The same angle, a whole number of turns away, nearest to the expected one. */
function sameTurn(actual: number | null, expected: number | null): number | null {
  if (actual === null || expected === null) return actual;
  return actual - 360 * Math.round((actual - expected) / 360);
}
