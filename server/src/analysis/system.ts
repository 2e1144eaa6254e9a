import { AtomFlag } from '../formats/tree';
import type { Cell } from '../model/cell';
import type { FrameModel } from '../model/frame-model';
import { COULOMB_KJ_A_PER_MOL, DEBYE_E_A, thermalEnergyKJPerMol } from '../physics/constants';
import { fitCharges } from '../physics/fitted-charges';
import { ChainGraph } from './chain-graph';
import type { Moments } from './moments';
import { type AnalysisSettings, ION_CHARGE_E, ZERO_DIPOLE_EA } from './settings';

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
  /** 1 where nothing tells how the charge is spread: two or more atoms, no charges, dipole zero or unknown. */
  readonly featureless: Uint8Array;
  readonly isIon: Uint8Array;
  readonly chains: ChainGraph;
}

/** Lays out the fragments of one or two parts for pair work, and fits the charges that the reference energy needs. */
export function buildSystem(parts: readonly Part[], settings: AnalysisSettings): System {
  const moments = parts.length === 1 ? parts[0]!.moments : joinMoments(parts.map((part) => part.moments));
  const count = moments.count;
  const atomCount = parts.reduce((sum, { model }) => sum + model.fragments.members.length, 0);
  const starts = new Int32Array(count + 1);
  const atomNumbers = new Int32Array(atomCount);
  const element = new Uint8Array(atomCount);
  const ghost = new Uint8Array(atomCount);
  const localA = new Float64Array(3 * atomCount);
  const columnE = new Float64Array(atomCount).fill(Number.NaN);
  const usable = new Uint8Array(count);
  let fragment = 0;
  let at = 0;
  let numberOffset = 0;
  for (const { model } of parts) {
    const { atoms } = model.tree;
    for (let f = 0; f < model.fragments.count; f++, fragment++) {
      usable[fragment] = model.usable[f]!;
      for (let k = model.fragments.starts[f]!; k < model.fragments.starts[f + 1]!; k++, at++) {
        const atom = model.fragments.members[k]!;
        atomNumbers[at] = atom + 1 + numberOffset;
        element[at] = atoms.element[atom]!;
        ghost[at] = atoms.flags[atom]! & AtomFlag.ghost ? 1 : 0;
        if (atoms.chargeE !== null) columnE[at] = atoms.chargeE[atom]!;
        for (let a = 0; a < 3; a++) {
          localA[3 * at + a] = model.positionA[3 * atom + a]! - moments.centreA[3 * fragment + a]!;
        }
      }
      starts[fragment + 1] = at;
    }
    numberOffset += atoms.count;
  }
  const flags = {
    hasColumn: new Uint8Array(count),
    ownCharges: new Uint8Array(count),
    fitted: new Uint8Array(count),
    featureless: new Uint8Array(count),
    isIon: new Uint8Array(count),
  };
  const fittedE = columnE.slice();
  for (let f = 0; f < count; f++) {
    if (usable[f]) describeCharges(f, starts, localA, ghost, fittedE, moments, flags);
  }
  return {
    settings,
    kTKJPerMol: thermalEnergyKJPerMol(settings.temperatureK),
    couplingKJA: COULOMB_KJ_A_PER_MOL / settings.relativePermittivity,
    cell: parts[0]!.model.cell,
    count,
    starts,
    atomNumbers,
    element,
    ghost,
    localA,
    columnE,
    fittedE,
    moments,
    usable,
    ...flags,
    chains: new ChainGraph(parts.map((part) => part.model)),
  };
}

interface ChargeFlags {
  readonly hasColumn: Uint8Array;
  readonly ownCharges: Uint8Array;
  readonly fitted: Uint8Array;
  readonly featureless: Uint8Array;
  readonly isIon: Uint8Array;
}

function describeCharges(
  f: number,
  starts: Int32Array,
  localA: Float64Array,
  ghost: Uint8Array,
  fittedE: Float64Array,
  moments: Moments,
  flags: ChargeFlags,
): void {
  const { chargeE, columnChargeE, columnDipoleEA, dipoleEA } = moments;
  const from = starts[f]!;
  const to = starts[f + 1]!;
  const hasColumn = !Number.isNaN(columnChargeE[f]!);
  const dipole: [number, number, number] = [dipoleEA[3 * f]!, dipoleEA[3 * f + 1]!, dipoleEA[3 * f + 2]!];
  const norm = Math.hypot(...dipole);
  flags.hasColumn[f] = hasColumn ? 1 : 0;
  flags.isIon[f] = Math.abs(chargeE[f]!) > ION_CHARGE_E ? 1 : 0;
  // NaN compares as unknown, which tells as little as zero.
  flags.featureless[f] = !moments.isAtom[f] && !hasColumn && !(norm >= ZERO_DIPOLE_EA) ? 1 : 0;
  if (hasColumn) {
    const off = Math.hypot(...dipole.map((value, a) => value - columnDipoleEA[3 * f + a]!));
    const matches = off <= Math.max(OWN_SHARE * norm, OWN_DIPOLE_EA);
    flags.ownCharges[f] = matches && Math.abs(chargeE[f]! - columnChargeE[f]!) <= OWN_CHARGE_E ? 1 : 0;
  } else fittedE.fill(0, from, to);
  if (Number.isNaN(norm) || flags.featureless[f]) return;
  // Ghosts are charge sites only where a charge column makes them so.
  const movable: number[] = [];
  for (let k = from; k < to; k++) if (!ghost[k] || hasColumn) movable.push(k);
  const positions = new Float64Array(3 * movable.length);
  const charges = new Float64Array(movable.length);
  for (const [index, k] of movable.entries()) {
    positions.set(localA.subarray(3 * k, 3 * k + 3), 3 * index);
    charges[index] = fittedE[k]!;
  }
  if (!fitCharges(movable.length, positions, charges, chargeE[f]!, dipole, [0, 0, 0])) return;
  for (const [index, k] of movable.entries()) fittedE[k] = charges[index]!;
  flags.fitted[f] = 1;
}

function joinMoments(all: readonly Moments[]): Moments {
  const join = (pick: (moments: Moments) => Float64Array) => {
    const joined = new Float64Array(all.reduce((sum, moments) => sum + pick(moments).length, 0));
    let at = 0;
    for (const moments of all) {
      joined.set(pick(moments), at);
      at += pick(moments).length;
    }
    return joined;
  };
  return {
    count: all.reduce((sum, moments) => sum + moments.count, 0),
    isAtom: Uint8Array.from(all.flatMap((m) => [...m.isAtom])),
    centreA: join((m) => m.centreA),
    extentA: join((m) => m.extentA),
    chargeE: join((m) => m.chargeE),
    chargeSource: all.flatMap((m) => m.chargeSource),
    dipoleEA: join((m) => m.dipoleEA),
    dipoleNormEA: join((m) => m.dipoleNormEA),
    dipoleSource: all.flatMap((m) => m.dipoleSource),
    quadrupoleEA2: join((m) => m.quadrupoleEA2),
    columnDipoleEA: join((m) => m.columnDipoleEA),
    columnChargeE: join((m) => m.columnChargeE),
    polarizabilityA3: join((m) => m.polarizabilityA3),
  };
}
