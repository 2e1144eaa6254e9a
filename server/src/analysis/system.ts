import { inStrides, type Steps } from '../base/steps';
import { AtomFlag } from '../formats/tree';
import type { Cell } from '../model/cell';
import type { FrameModel } from '../model/frame-model';
import { COULOMB_KJ_A_PER_MOL, DEBYE_E_A, thermalEnergyKJPerMol } from '../physics/constants';
import { eeqCharges, hasEeqParameters } from '../physics/eeq-charges';
import { fitCharges } from '../physics/fitted-charges';
import { ChainGraph } from './chain-graph';
import { MOST_ESTIMATED_ATOMS } from './model-knowledge';
import { type Moments, momentColumns, roomForMoments, wordColumns } from './moments';
import { type AnalysisSettings, ION_CHARGE_E, type Knowledge, ZERO_DIPOLE_EA } from './settings';

/** Dipoles from charges below this have no meaningful direction: coordinate rounding, e·Å. */
export const ROUNDING_DIPOLE_EA = 0.02 * DEBYE_E_A;
/** Share of the dipole, and part of a debye, within which it counts as the charges' own. */
const OWN_SHARE = 0.02;
const OWN_DIPOLE_EA = 0.02 * DEBYE_E_A;
/** Net charge and sum of the charge column may differ by this much for the column to stand for the fragment, e. */
const OWN_CHARGE_E = 0.1;

/** A frame model with its moments: one file's share of a {@link System}. */
export interface Part {
  readonly model: FrameModel;
  readonly moments: Moments;
}

/**
 * All fragments whose pairs are looked at, in flat arrays: those of a frame, and of a second file where one joins it. Fragments and
 * atoms of the second follow those of the first.
 */
export interface System {
  readonly settings: AnalysisSettings;
  /** Whether charges may be equilibrated where a fragment has no charge column. */
  readonly estimates: boolean;
  readonly kTKJPerMol: number;
  /** k_e/ε_r, kJ·Å/mol. */
  readonly couplingKJA: number;
  readonly cell: Cell | null;
  readonly count: number;
  readonly starts: Int32Array;
  /** Atoms in the order of fragments; their numbers in the frame are `atomNumbers`. */
  readonly atomNumbers: Int32Array;
  readonly element: Uint8Array;
  readonly ghost: Uint8Array;
  /** x y z of each atom about the centre of its fragment, Å. */
  readonly localA: Float64Array;
  /** Charge column; NaN where there is none. */
  readonly columnE: Float64Array;
  /** Charges moved to carry net charge and dipole in use; meaningful where {@link fitted} is 1. */
  readonly fittedE: Float64Array;
  readonly moments: Moments;
  readonly usable: Uint8Array;
  /** 1 where the fragment has a readable charge column. */
  readonly hasColumn: Uint8Array;
  /** 1 where net charge and dipole in use are those of the charge column. */
  readonly ownCharges: Uint8Array;
  readonly fitted: Uint8Array;
  /**
   * Size of the quadrupole of charges that are neither the file's nor known but estimated, by which a reference that rests on them is
   * doubted, e·Å²; 0 elsewhere.
   */
  readonly doubtEA2: Float64Array;
  /** 1 where nothing tells how the charge is spread: two or more atoms, no charges, dipole zero or unknown. */
  readonly featureless: Uint8Array;
  readonly isIon: Uint8Array;
  readonly chains: ChainGraph;
}

/** Fragments laid out between two pauses. */
const FRAGMENTS_A_STEP = 512;

/** Lays out the fragments of one or two parts for pair work, and fits the charges that the reference energy needs. */
export function* systemSteps(
  parts: readonly Part[],
  settings: AnalysisSettings,
  knowledge: Knowledge | null,
): Steps<System> {
  const moments = parts.length === 1 ? parts[0]!.moments : joinMoments(parts.map((part) => part.moments));
  const system = emptySystem(parts, moments, settings, knowledge);
  let before = 0;
  let atomsBefore = 0;
  for (const { model } of parts) {
    for (let f = 0; f < model.fragments.count; f++) {
      system.starts[before + f + 1] = atomsBefore + model.fragments.starts[f + 1]!;
    }
    const numberOffset = before === 0 ? 0 : parts[0]!.model.tree.atoms.count;
    yield* inStrides(model.fragments.count, FRAGMENTS_A_STEP, (f) =>
      layOut(system, model, f, before + f, numberOffset),
    );
    before += model.fragments.count;
    atomsBefore += model.fragments.members.length;
  }
  return system;
}

/** A system with room for all fragments of its parts, none of them laid out. */
export function emptySystem(
  parts: readonly Part[],
  moments: Moments,
  settings: AnalysisSettings,
  knowledge: Knowledge | null,
): System {
  const { count } = moments;
  const atomCount = parts.reduce((sum, { model }) => sum + model.fragments.members.length, 0);
  return {
    settings,
    estimates: knowledge?.estimates ?? false,
    kTKJPerMol: thermalEnergyKJPerMol(settings.temperatureK),
    couplingKJA: COULOMB_KJ_A_PER_MOL / settings.relativePermittivity,
    cell: parts[0]!.model.cell,
    count,
    starts: new Int32Array(count + 1),
    atomNumbers: new Int32Array(atomCount),
    element: new Uint8Array(atomCount),
    ghost: new Uint8Array(atomCount),
    localA: new Float64Array(3 * atomCount),
    columnE: new Float64Array(atomCount),
    fittedE: new Float64Array(atomCount),
    moments,
    usable: new Uint8Array(count),
    hasColumn: new Uint8Array(count),
    ownCharges: new Uint8Array(count),
    fitted: new Uint8Array(count),
    doubtEA2: new Float64Array(count),
    featureless: new Uint8Array(count),
    isIon: new Uint8Array(count),
    chains: new ChainGraph(parts.map((part) => part.model)),
  };
}

/** Writes fragment `f` of a model into a system at `fragment`, where its atoms start already; what stood there is overwritten. */
export function layOut(system: System, model: FrameModel, f: number, fragment: number, numberOffset: number): void {
  const { atoms } = model.tree;
  const { centreA } = system.moments;
  let at = system.starts[fragment]!;
  const begin = at;
  for (let k = model.fragments.starts[f]!; k < model.fragments.starts[f + 1]!; k++, at++) {
    const atom = model.fragments.members[k]!;
    system.atomNumbers[at] = atom + 1 + numberOffset;
    system.element[at] = atoms.element[atom]!;
    system.ghost[at] = atoms.flags[atom]! & AtomFlag.ghost ? 1 : 0;
    system.columnE[at] = atoms.chargeE === null ? Number.NaN : atoms.chargeE[atom]!;
    system.fittedE[at] = system.columnE[at]!;
    for (let a = 0; a < 3; a++) {
      system.localA[3 * at + a] = model.positionA[3 * atom + a]! - centreA[3 * fragment + a]!;
    }
  }
  system.usable[fragment] = model.usable[f]!;
  const flags = [system.hasColumn, system.ownCharges, system.fitted, system.featureless, system.isIon];
  for (const flag of flags) flag[fragment] = 0;
  system.doubtEA2[fragment] = 0;
  if (model.usable[f]) describeCharges(fragment, begin, at, system);
}

function describeCharges(f: number, from: number, to: number, system: System): void {
  const { localA, ghost, fittedE, moments } = system;
  const { chargeE, columnChargeE, columnDipoleEA, dipoleEA } = moments;
  const hasColumn = !Number.isNaN(columnChargeE[f]!);
  const dipole: [number, number, number] = [dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!];
  const norm = Math.hypot(...dipole);
  system.hasColumn[f] = hasColumn ? 1 : 0;
  system.isIon[f] = Math.abs(chargeE[f]!) > ION_CHARGE_E ? 1 : 0;
  // NaN compares as unknown, which tells as little as zero.
  system.featureless[f] = !moments.isAtom[f] && !hasColumn && !(norm >= ZERO_DIPOLE_EA) ? 1 : 0;
  if (hasColumn) {
    const off = Math.hypot(...dipole.map((value, a) => value - columnDipoleEA[3 * f + a]!));
    const matches = off <= Math.max(OWN_SHARE * norm, OWN_DIPOLE_EA);
    system.ownCharges[f] = matches && Math.abs(chargeE[f]! - columnChargeE[f]!) <= OWN_CHARGE_E ? 1 : 0;
  } else fittedE.fill(0, from, to);
  if (Number.isNaN(norm) || system.featureless[f]) return;
  // Ghosts are charge sites only where a charge column makes them so.
  const movable: number[] = [];
  for (let k = from; k < to; k++) if (!ghost[k] || hasColumn) movable.push(k);
  const positions = new Float64Array(3 * movable.length);
  const charges = new Float64Array(movable.length);
  for (const [index, k] of movable.entries()) {
    positions.set(localA.subarray(3 * k, 3 * k + 3), 3 * index);
    charges[index] = fittedE[k]!;
  }
  if (!hasColumn && system.estimates) equilibrate(system, movable, positions, chargeE[f]!, charges);
  const fits = fitCharges(movable.length, positions, charges, chargeE[f]!, dipole, [0, 0, 0]);
  if (!hasColumn && system.estimates && movable.length > 1) {
    system.doubtEA2[f] = quadrupoleSize(movable.length, positions, charges);
  }
  if (!fits) return;
  for (const [index, k] of movable.entries()) fittedE[k] = charges[index]!;
  system.fitted[f] = 1;
}

/** Fills in charges equilibrated by EEQ as the start of the fit; leaves the zeros where there are none. */
function equilibrate(
  system: System,
  atoms: readonly number[],
  positions: Float64Array,
  netChargeE: number,
  charges: Float64Array,
): void {
  if (atoms.length < 2 || atoms.length > MOST_ESTIMATED_ATOMS) return;
  const elements = new Uint8Array(atoms.length);
  for (let i = 0; i < atoms.length; i++) {
    elements[i] = system.element[atoms[i]!]!;
    if (!hasEeqParameters(elements[i]!)) return;
  }
  if (eeqCharges(atoms.length, elements, positions, netChargeE, charges) !== null) charges.fill(0);
}

/** √(Σ Θ_ab²) of the traceless quadrupole of some charges, e·Å². */
function quadrupoleSize(count: number, positions: Float64Array, charges: Float64Array): number {
  let [xx, xy, xz, yy, yz, zz] = [0, 0, 0, 0, 0, 0];
  for (let i = 0; i < count; i++) {
    const q = charges[i]!;
    const x = positions[3 * i]!;
    const y = positions[3 * i + 1]!;
    const z = positions[3 * i + 2]!;
    xx += q * (2 * x * x - y * y - z * z);
    yy += q * (2 * y * y - x * x - z * z);
    zz += q * (2 * z * z - x * x - y * y);
    xy += q * x * y;
    xz += q * x * z;
    yz += q * y * z;
  }
  return Math.sqrt((xx * xx + yy * yy + zz * zz) / 4 + 4.5 * (xy * xy + xz * xz + yz * yz));
}

function joinMoments(all: readonly Moments[]): Moments {
  const joined = roomForMoments(all.reduce((sum, moments) => sum + moments.count, 0));
  const columns = momentColumns(joined);
  const words = wordColumns(joined);
  let at = 0;
  for (const moments of all) {
    for (const [k, [column, width]] of momentColumns(moments).entries()) columns[k]![0].set(column, width * at);
    for (const [k, column] of wordColumns(moments).entries()) {
      for (let f = 0; f < column.length; f++) words[k]![at + f] = column[f]!;
    }
    joined.isAtom.set(moments.isAtom, at);
    at += moments.count;
  }
  return joined;
}
