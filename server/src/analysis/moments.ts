import { inStrides, type Steps } from '../base/steps';
import { AtomFlag } from '../formats/tree';
import type { FrameModel } from '../model/frame-model';
import { DEUTERIUM_MASS_U, TRITIUM_MASS_U } from '../physics/element-table';
import { ATOMIC_WEIGHT_U, usualIonCharge } from '../physics/elements';
import { fillSources } from './fragment-sources';
import { ModelKnowledge } from './model-knowledge';
import type { Centre, Knowledge } from './settings';

/** Where a dipole comes from, strongest first. */
export const DIPOLE_SOURCES = ['annotated', 'axis', 'charges', 'atom', 'library', 'estimated', 'none'] as const;
export type DipoleSource = (typeof DIPOLE_SOURCES)[number];

/** Where a net charge comes from, strongest first. */
export const CHARGE_SOURCES = ['annotated', 'charges', 'formal', 'library', 'assumed'] as const;
export type ChargeSource = (typeof CHARGE_SOURCES)[number];

/**
 * Moments of all fragments of a frame, as columns; NaN where a number is not known. Lengths in Å, charges in e, dipoles in e·Å,
 * traceless quadrupoles (xx xy xz yy yz zz) in e·Å², both about {@link centreA}.
 */
export interface Moments {
  readonly count: number;
  /** 1 for a single atom (ghosts aside), whose charge is an exact point charge. */
  readonly isAtom: Uint8Array;
  readonly centreA: Float64Array;
  /** Distance from the centre to the farthest atom. */
  readonly extentA: Float64Array;
  readonly chargeE: Float64Array;
  readonly chargeSource: ChargeSource[];
  /** NaN where size or direction is unknown. */
  readonly dipoleEA: Float64Array;
  /** Known where the size is, even without a direction. */
  readonly dipoleNormEA: Float64Array;
  readonly dipoleSource: DipoleSource[];
  readonly quadrupoleEA2: Float64Array;
  /** Dipole and sum of the charge column; NaN without one. */
  readonly columnDipoleEA: Float64Array;
  readonly columnChargeE: Float64Array;
  readonly polarizabilityA3: Float64Array;
  /** Mean error of a dipole that the file does not give: of its size, e·Å, and of its direction, degrees; NaN where none is known. */
  readonly dipoleErrorEA: Float64Array;
  readonly dipoleAngleErrorDeg: Float64Array;
  /** For a dipole that the file gives: the one it can be compared with, published or estimated, e·Å. */
  readonly expectedEA: Float64Array;
  /** eV, where published. */
  readonly ionizationEnergyEV: Float64Array;
  /** Electrons that take part in dispersion. */
  readonly dispersionElectrons: Float64Array;
  /** In words, '' for none: where the dipole comes from or why there is none; what it is compared with; where the polarizability is from. */
  readonly dipoleNote: string[];
  readonly expectedNote: string[];
  readonly polarizabilitySource: string[];
}

interface FragmentPlace {
  centre: [number, number, number];
  extent: number;
  isAtom: boolean;
}

/** Fragments computed between two pauses. */
const FRAGMENTS_A_STEP = 512;

/** Computes the moments of every fragment; unusable ones keep NaN. Linear in the atoms. */
export function* momentSteps(model: FrameModel, centre: Centre, knowledge: Knowledge | null): Steps<Moments> {
  const known = knowledge === null ? null : new ModelKnowledge(model, knowledge);
  const moments = emptyMoments(model.fragments.count);
  yield* inStrides(moments.count, FRAGMENTS_A_STEP, (f) => fillMoments(model, centre, f, moments, known));
  return moments;
}

/** Moments of so many fragments of which nothing is known. */
function emptyMoments(n: number): Moments {
  const moments = roomForMoments(n);
  for (const [column] of momentColumns(moments)) column.fill(Number.NaN);
  return moments;
}

/** Room for the moments of so many fragments, yet to be filled or cleared. */
export function roomForMoments(n: number): Moments {
  const unknown = (size: number) => new Float64Array(size);
  return {
    count: n,
    isAtom: new Uint8Array(n),
    centreA: unknown(3 * n),
    extentA: unknown(n),
    chargeE: unknown(n),
    chargeSource: new Array<ChargeSource>(n).fill('assumed'),
    dipoleEA: unknown(3 * n),
    dipoleNormEA: unknown(n),
    dipoleSource: new Array<DipoleSource>(n).fill('none'),
    quadrupoleEA2: unknown(6 * n),
    columnDipoleEA: unknown(3 * n),
    columnChargeE: unknown(n),
    polarizabilityA3: unknown(n),
    dipoleErrorEA: unknown(n),
    dipoleAngleErrorDeg: unknown(n),
    expectedEA: unknown(3 * n),
    ionizationEnergyEV: unknown(n),
    dispersionElectrons: unknown(n),
    dipoleNote: new Array<string>(n).fill(''),
    expectedNote: new Array<string>(n).fill(''),
    polarizabilitySource: new Array<string>(n).fill(''),
  };
}

/** Computes the moments of one fragment whose entries hold nothing yet. `known` is what may be used besides the file. */
export function fillMoments(
  model: FrameModel,
  centre: Centre,
  f: number,
  moments: Moments,
  known: ModelKnowledge | null,
): void {
  const { fragments, notes, usable } = model;
  const members = fragments.members.subarray(fragments.starts[f]!, fragments.starts[f + 1]!);
  const note = notes[f]!;
  if (usable[f]) {
    const place = placeFragment(model, members, centre);
    moments.centreA.set(place.centre, 3 * f);
    moments.extentA[f] = place.extent;
    moments.isAtom[f] = place.isAtom ? 1 : 0;
    addColumnMoments(model, members, place.centre, f, moments);
  }
  fillSources(model, members, note, f, moments, usable[f] ? known : null);
  // An atom without charges of its own beside it has no quadrupole about itself.
  if (moments.isAtom[f] && usable[f] && Number.isNaN(moments.quadrupoleEA2[6 * f]!)) {
    moments.quadrupoleEA2.fill(0, 6 * f, 6 * f + 6);
  }
}

/** Forgets what is known of one fragment. */
export function clearMoments(moments: Moments, f: number): void {
  moments.isAtom[f] = 0;
  moments.dipoleNote[f] = '';
  moments.expectedNote[f] = '';
  moments.polarizabilitySource[f] = '';
  for (const [column, width] of momentColumns(moments)) column.fill(Number.NaN, width * f, width * (f + 1));
}

/** The columns of numbers, each with how many a fragment has. */
export function momentColumns(moments: Moments): (readonly [Float64Array, number])[] {
  return [
    [moments.centreA, 3],
    [moments.extentA, 1],
    [moments.chargeE, 1],
    [moments.dipoleEA, 3],
    [moments.dipoleNormEA, 1],
    [moments.quadrupoleEA2, 6],
    [moments.columnDipoleEA, 3],
    [moments.columnChargeE, 1],
    [moments.polarizabilityA3, 1],
    [moments.dipoleErrorEA, 1],
    [moments.dipoleAngleErrorDeg, 1],
    [moments.expectedEA, 3],
    [moments.ionizationEnergyEV, 1],
    [moments.dispersionElectrons, 1],
  ];
}

/** The columns of words. */
export function wordColumns(moments: Moments): string[][] {
  return [
    moments.chargeSource,
    moments.dipoleSource,
    moments.dipoleNote,
    moments.expectedNote,
    moments.polarizabilitySource,
  ];
}

/** Mass of an atom, u; 0 for ghosts and unknown elements. */
export function atomMassU(element: number, flags: number): number {
  if (flags & AtomFlag.ghost) return 0;
  if (flags & AtomFlag.deuterium) return DEUTERIUM_MASS_U;
  return flags & AtomFlag.tritium ? TRITIUM_MASS_U : ATOMIC_WEIGHT_U[element]!;
}

function placeFragment(model: FrameModel, members: Int32Array, centre: Centre): FragmentPlace {
  const { atoms } = model.tree;
  const weigh = (weightOf: (atom: number) => number): [number, number, number] | null => {
    let total = 0;
    const sum: [number, number, number] = [0, 0, 0];
    for (const atom of members) {
      const weight = weightOf(atom);
      total += weight;
      for (let a = 0; a < 3; a++) sum[a as 0]! += weight * model.positionA[3 * atom + a]!;
    }
    return total > 0 ? [sum[0] / total, sum[1] / total, sum[2] / total] : null;
  };
  const isReal = (atom: number) => (atoms.flags[atom]! & AtomFlag.ghost) === 0;
  let point: [number, number, number] | null;
  if (centre === 'mass') point = weigh((atom) => atomMassU(atoms.element[atom]!, atoms.flags[atom]!));
  else if (centre === 'nuclear-charge') point = weigh((atom) => (isReal(atom) ? atoms.element[atom]! : 0));
  else point = weigh((atom) => (isReal(atom) ? 1 : 0));
  // A fragment of ghosts alone has only its geometry.
  point ??= weigh(() => 1)!;
  const hasReal = members.some(isReal);
  let extent2 = 0;
  for (const atom of members) {
    if (!isReal(atom) && hasReal) continue;
    const dx = model.positionA[3 * atom]! - point[0];
    const dy = model.positionA[3 * atom + 1]! - point[1];
    const dz = model.positionA[3 * atom + 2]! - point[2];
    extent2 = Math.max(extent2, dx * dx + dy * dy + dz * dz);
  }
  const isAtom = members.filter(isReal).length === 1 || members.length === 1;
  return { centre: point, extent: isAtom ? 0 : Math.sqrt(extent2), isAtom };
}

/** Sums over the charge and atomic-dipole columns; what a missing or unreadable entry spoils stays NaN. */
function addColumnMoments(
  model: FrameModel,
  members: Int32Array,
  centre: readonly [number, number, number],
  f: number,
  out: { columnChargeE: Float64Array; columnDipoleEA: Float64Array; quadrupoleEA2: Float64Array },
): void {
  const { chargeE, dipoleEA } = model.tree.atoms;
  if (chargeE === null && dipoleEA === null) return;
  let charge = 0;
  const dipole = [0, 0, 0];
  const theta = [0, 0, 0, 0, 0, 0];
  for (const atom of members) {
    const r = [0, 1, 2].map((a) => model.positionA[3 * atom + a]! - centre[a as 0]) as [number, number, number];
    const r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
    const q = chargeE?.[atom] ?? 0;
    charge += q;
    const m = [0, 1, 2].map((a) => dipoleEA?.[3 * atom + a] ?? 0) as [number, number, number];
    const rm = r[0] * m[0] + r[1] * m[1] + r[2] * m[2];
    let k = 0;
    for (let a = 0; a < 3; a++) {
      dipole[a]! += q * r[a as 0] + m[a as 0];
      for (let b = a; b < 3; b++) {
        const fromCharge = 0.5 * q * (3 * r[a as 0] * r[b as 0] - (a === b ? r2 : 0));
        const fromDipole = 1.5 * (r[a as 0] * m[b as 0] + r[b as 0] * m[a as 0]) - (a === b ? rm : 0);
        theta[k]! += fromCharge + fromDipole;
        k++;
      }
    }
  }
  if (chargeE !== null) {
    out.columnChargeE[f] = charge;
    out.quadrupoleEA2.set(theta, 6 * f);
  }
  out.columnDipoleEA.set(dipole, 3 * f);
}

/** Charge that a lone atom probably carries where none is given, for the finding that asks for it. */
export function likelyLoneCharge(model: FrameModel, f: number): number {
  const { starts, members } = model.fragments;
  return starts[f + 1]! - starts[f]! === 1 ? usualIonCharge(model.tree.atoms.element[members[starts[f]!]!]!) : 0;
}
