import { inStrides, type Steps } from '../base/steps';
import { AtomFlag } from '../formats/tree';
import type { Axis, FragmentNotes } from '../model/annotation';
import type { FrameModel } from '../model/frame-model';
import { DEUTERIUM_MASS_U, TRITIUM_MASS_U } from '../physics/element-table';
import { ATOMIC_WEIGHT_U, usualIonCharge } from '../physics/elements';
import { type Centre, ZERO_DIPOLE_EA } from './settings';

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
}

interface FragmentPlace {
  centre: [number, number, number];
  extent: number;
  isAtom: boolean;
}

/** Fragments computed between two pauses. */
const FRAGMENTS_A_STEP = 512;

/** Computes the moments of every fragment; unusable ones keep NaN. Linear in the atoms. */
export function* momentSteps(model: FrameModel, centre: Centre): Steps<Moments> {
  const moments = emptyMoments(model.fragments.count);
  yield* inStrides(moments.count, FRAGMENTS_A_STEP, (f) => fillMoments(model, centre, f, moments));
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
  };
}

/** Computes the moments of one fragment whose entries hold nothing yet. */
export function fillMoments(model: FrameModel, centre: Centre, f: number, moments: Moments): void {
  const { fragments, notes, usable } = model;
  const members = fragments.members.subarray(fragments.starts[f]!, fragments.starts[f + 1]!);
  const note = notes[f]!;
  moments.polarizabilityA3[f] = note.polarizabilityA3 ?? Number.NaN;
  if (usable[f]) {
    const place = placeFragment(model, members, centre);
    moments.centreA.set(place.centre, 3 * f);
    moments.extentA[f] = place.extent;
    moments.isAtom[f] = place.isAtom ? 1 : 0;
    addColumnMoments(model, members, place.centre, f, moments);
  }
  const charge = netCharge(model, members, note, moments.columnChargeE[f]!);
  moments.chargeE[f] = charge.value;
  moments.chargeSource[f] = charge.source;
  moments.dipoleSource[f] = usable[f] ? chooseDipole(model, members, note, f, moments) : 'none';
  // An atom without charges of its own beside it has no quadrupole about itself.
  if (moments.isAtom[f] && usable[f] && Number.isNaN(moments.quadrupoleEA2[6 * f]!)) {
    moments.quadrupoleEA2.fill(0, 6 * f, 6 * f + 6);
  }
}

/** Forgets what is known of one fragment. */
export function clearMoments(moments: Moments, f: number): void {
  moments.isAtom[f] = 0;
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

function netCharge(
  model: FrameModel,
  members: Int32Array,
  note: FragmentNotes,
  columnCharge: number,
): { value: number; source: ChargeSource } {
  if (note.chargeE !== null) return { value: note.chargeE, source: 'annotated' };
  const total = model.frameNotes.totalChargeE;
  if (total !== null && model.fragments.count === 1 && Number.isNaN(columnCharge)) {
    return { value: total.value, source: 'annotated' };
  }
  if (!Number.isNaN(columnCharge)) return { value: columnCharge, source: 'charges' };
  const { formalE } = model.tree.atoms;
  if (formalE !== null) {
    let sum = 0;
    let given = false;
    for (const atom of members) {
      if (Number.isNaN(formalE[atom]!)) continue;
      given = true;
      sum += formalE[atom]!;
    }
    if (given) return { value: sum, source: 'formal' };
  }
  return { value: 0, source: 'assumed' };
}

/** Fills the dipole of a fragment from the strongest source there is, and returns that source. */
function chooseDipole(
  model: FrameModel,
  members: Int32Array,
  note: FragmentNotes,
  f: number,
  out: { isAtom: Uint8Array; dipoleEA: Float64Array; dipoleNormEA: Float64Array; columnDipoleEA: Float64Array },
): DipoleSource {
  const set = (x: number, y: number, z: number) => {
    const size = Math.sqrt(x * x + y * y + z * z);
    const isZero = size < ZERO_DIPOLE_EA;
    out.dipoleEA.set(isZero ? [0, 0, 0] : [x, y, z], 3 * f);
    out.dipoleNormEA[f] = isZero ? 0 : size;
  };
  if (note.dipoleEA !== null) {
    set(...note.dipoleEA);
    return 'annotated';
  }
  const fromColumn = out.columnDipoleEA.subarray(3 * f, 3 * f + 3);
  if (note.dipoleSizeEA !== null) {
    const size = note.dipoleSizeEA;
    const axis = note.axis === null ? null : axisDirection(model, note.axis);
    const direction = axis ?? unitVector(fromColumn);
    if (size < ZERO_DIPOLE_EA) set(0, 0, 0);
    else if (direction !== null) set(size * direction[0], size * direction[1], size * direction[2]);
    out.dipoleNormEA[f] = size < ZERO_DIPOLE_EA ? 0 : size;
    return axis === null ? 'annotated' : 'axis';
  }
  const { chargeE, dipoleEA } = model.tree.atoms;
  // Ghosts beside an atom may carry charge.
  if (out.isAtom[f] && dipoleEA === null && (members.length === 1 || chargeE === null)) {
    set(0, 0, 0);
    return 'atom';
  }
  if (!Number.isNaN(fromColumn[0]!)) {
    set(fromColumn[0]!, fromColumn[1]!, fromColumn[2]!);
    return chargeE === null ? 'annotated' : 'charges';
  }
  return 'none';
}

/** Unit vector of an axis, or `null` where its two ends coincide. */
function axisDirection(model: FrameModel, axis: Axis): [number, number, number] | null {
  const mean = (atoms: readonly number[], a: number) =>
    atoms.reduce((sum, atom) => sum + model.positionA[3 * atom + a]!, 0) / atoms.length;
  return unitVector([0, 1, 2].map((a) => mean(axis.after, a) - mean(axis.before, a)));
}

function unitVector(v: ArrayLike<number>): [number, number, number] | null {
  const length = Math.hypot(v[0]!, v[1]!, v[2]!);
  return length > 1e-9 ? [v[0]! / length, v[1]! / length, v[2]! / length] : null;
}

/** Charge that a lone atom probably carries where none is given, for the finding that asks for it. */
export function likelyLoneCharge(model: FrameModel, f: number): number {
  const { starts, members } = model.fragments;
  return starts[f + 1]! - starts[f]! === 1 ? usualIonCharge(model.tree.atoms.element[members[starts[f]!]!]!) : 0;
}
