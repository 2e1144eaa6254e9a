import type { LibraryMatch } from '../library/match';
import type { Axis, FragmentNotes } from '../model/annotation';
import type { FrameModel } from '../model/frame-model';
import { dispersionElectrons } from '../physics/dispersion';
import type { ModelKnowledge, OfferedDipole } from './model-knowledge';
import type { ChargeSource, DipoleSource, Moments } from './moments';
import { ZERO_DIPOLE_EA } from './settings';

type Vector = readonly [number, number, number];

/** Fills charge, dipole and polarizability of a fragment, whose place and column moments are known, each from the strongest source. */
export function fillSources(
  model: FrameModel,
  members: Int32Array,
  note: FragmentNotes,
  f: number,
  moments: Moments,
  known: ModelKnowledge | null,
): void {
  const declared = netCharge(model, members, note, moments.columnChargeE[f]!);
  const match = known?.match(f, declared.source === 'assumed' ? null : declared.value) ?? null;
  const charge = declared.source === 'assumed' && match !== null ? libraryCharge(match) : declared;
  moments.chargeE[f] = charge.value;
  moments.chargeSource[f] = charge.source;
  moments.ionizationEnergyEV[f] = match?.entry.ionizationEnergyEV?.value ?? Number.NaN;
  let electrons = 0;
  for (const atom of members) electrons += dispersionElectrons(model.tree.atoms.element[atom]!);
  moments.dispersionElectrons[f] = electrons;
  fillPolarizability(note, f, moments, known, match);
  if (!model.usable[f]) {
    moments.dipoleSource[f] = 'none';
    return;
  }
  // The oxygen of a water without hydrogens is no atom.
  if (match?.by === 'residue' && match.entry.molecule.elements.length > 1) moments.isAtom[f] = 0;
  moments.dipoleSource[f] = chooseDipole(model, members, note, f, moments, known, match);
}

function libraryCharge({ entry }: LibraryMatch): { value: number; source: ChargeSource } {
  return { value: entry.molecule.chargeE, source: 'library' };
}

function fillPolarizability(
  note: FragmentNotes,
  f: number,
  moments: Moments,
  known: ModelKnowledge | null,
  match: LibraryMatch | null,
): void {
  moments.polarizabilityA3[f] = note.polarizabilityA3 ?? Number.NaN;
  if (note.polarizabilityA3 !== null) moments.polarizabilitySource[f] = 'annotated';
  const offered = note.polarizabilityA3 === null ? known?.polarizability(f, match, moments.chargeE[f]!) : null;
  if (!offered) return;
  moments.polarizabilityA3[f] = offered.valueA3;
  moments.polarizabilitySource[f] = offered.source;
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
  moments: Moments,
  known: ModelKnowledge | null,
  match: LibraryMatch | null,
): DipoleSource {
  const set = (x: number, y: number, z: number) => {
    const size = Math.sqrt(x * x + y * y + z * z);
    const isZero = size < ZERO_DIPOLE_EA;
    moments.dipoleEA.set(isZero ? [0, 0, 0] : [x, y, z], 3 * f);
    moments.dipoleNormEA[f] = isZero ? 0 : size;
  };
  const centre = () => [0, 1, 2].map((a) => moments.centreA[3 * f + a]!) as unknown as Vector;
  const isLone = moments.isAtom[f] === 1;
  const offer = () => (known === null || isLone ? '' : known.dipole(f, match, moments.chargeE[f]!, centre()));
  if (note.dipoleEA !== null) {
    set(...note.dipoleEA);
    expect(f, moments, offer());
    return 'annotated';
  }
  const fromColumn = moments.columnDipoleEA.subarray(3 * f, 3 * f + 3);
  if (note.dipoleSizeEA !== null) {
    const size = note.dipoleSizeEA;
    const axis = note.axis === null ? null : axisDirection(model, note.axis);
    const told = axis ?? unitVector(fromColumn);
    const direction = told ?? (isLone ? null : (known?.direction(f, moments.chargeE[f]!, centre()) ?? null));
    if (size < ZERO_DIPOLE_EA) set(0, 0, 0);
    else if (direction !== null) set(size * direction[0], size * direction[1], size * direction[2]);
    moments.dipoleNormEA[f] = size < ZERO_DIPOLE_EA ? 0 : size;
    if (told === null && direction !== null) moments.dipoleNote[f] = 'direction estimated from the geometry';
    expect(f, moments, offer());
    return axis === null ? 'annotated' : 'axis';
  }
  const { chargeE, dipoleEA } = model.tree.atoms;
  // Ghosts beside an atom may carry charge.
  if (isLone && dipoleEA === null && (members.length === 1 || chargeE === null)) {
    set(0, 0, 0);
    return 'atom';
  }
  if (!Number.isNaN(fromColumn[0]!)) {
    set(fromColumn[0]!, fromColumn[1]!, fromColumn[2]!);
    return chargeE === null ? 'annotated' : 'charges';
  }
  const offered = offer();
  if (typeof offered === 'string') {
    moments.dipoleNote[f] = offered;
    return 'none';
  }
  const { sizeEA, direction } = offered;
  if (direction !== null || sizeEA < ZERO_DIPOLE_EA) {
    const [x, y, z] = direction ?? [0, 0, 0];
    set(sizeEA * x, sizeEA * y, sizeEA * z);
  } else moments.dipoleNormEA[f] = sizeEA;
  moments.dipoleErrorEA[f] = offered.sizeErrorEA;
  moments.dipoleAngleErrorDeg[f] = offered.angleErrorDeg;
  moments.dipoleNote[f] = offered.note;
  return offered.source;
}

/** Keeps what a dipole of the file is to be compared with. */
function expect(f: number, moments: Moments, offered: OfferedDipole | string): void {
  if (typeof offered === 'string') return;
  const { sizeEA, sizeErrorEA, angleErrorDeg, note } = offered;
  const direction = sizeEA < ZERO_DIPOLE_EA ? [0, 0, 0] : offered.direction;
  if (direction === null) return;
  moments.expectedEA.set(
    direction.map((component) => sizeEA * component),
    3 * f,
  );
  moments.dipoleErrorEA[f] = sizeErrorEA;
  moments.dipoleAngleErrorDeg[f] = angleErrorDeg;
  moments.expectedNote[f] = note;
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
