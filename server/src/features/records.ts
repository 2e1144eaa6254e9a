import type { Advice } from '../analysis/advice';
import type { Arrangement } from '../analysis/arrangement';
import type { Contact } from '../analysis/contact';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import { inductionOfFrame } from '../analysis/frame-induction';
import type { ChargeSource, DipoleSource } from '../analysis/moments';
import type { Pair } from '../analysis/pair';
import { anglesOf, thermalOf, uncertaintyOf, validBeyondOf } from '../analysis/pair-detail';
import type { Basis, Regime } from '../analysis/reference';
import type { Centre } from '../analysis/settings';
import type { System } from '../analysis/system';
import type { Severity } from '../base/catalogue';
import type { Finding } from '../base/finding';
import type { Span } from '../base/span';
import { DEBYE_E_A } from '../physics/constants';
import type { LineIndex } from '../text/lines';

/** A number that may not exist. */
export type Maybe = number | null;

/** The settings a frame was analysed with. */
export interface SettingsRecord {
  readonly temperatureK: number;
  readonly relativePermittivity: number;
  readonly centre: Centre;
  readonly tolerance: number;
  readonly cutoffA: number;
  readonly periodic: boolean;
}

/** A fragment as plain data; numbers from 1. */
export interface FragmentRecord {
  readonly fragment: number;
  readonly name: string;
  /** `chain:residue:number` in a PDB model, else null. */
  readonly label: string | null;
  readonly atoms: readonly number[];
  readonly chargeE: Maybe;
  readonly centreA: readonly number[] | null;
  readonly extentA: Maybe;
  readonly dipoleD: readonly number[] | null;
  readonly dipoleNormD: Maybe;
  readonly dipoleSource: DipoleSource;
  readonly chargeSource: ChargeSource;
  readonly polarizabilityA3: Maybe;
  /** Mean error of a dipole that is published or estimated: of its size, and of its direction (null where symmetry fixes it). */
  readonly dipoleErrorD: Maybe;
  readonly dipoleAngleErrorDeg: Maybe;
  /** Where such a dipole comes from, or why there is none; null where the file gives it. */
  readonly dipoleNote: string | null;
  readonly polarizabilitySource: string | null;
  readonly ionizationEnergyEV: Maybe;
}

/** A pair as plain data; numbers from 1. */
export interface PairRecord {
  readonly first: number;
  readonly second: number;
  readonly image: readonly number[];
  readonly distanceA: Maybe;
  readonly theta1Deg: Maybe;
  readonly theta2Deg: Maybe;
  readonly phiDeg: Maybe;
  readonly angularFactor: Maybe;
  readonly arrangement: Arrangement | null;
  readonly energyKJPerMol: Readonly<Record<keyof Pair['energies'], Maybe>>;
  readonly thermal: {
    readonly coupling: Maybe;
    readonly averageKJPerMol: Maybe;
    readonly freeEnergyKJPerMol: Maybe;
    readonly leadingKJPerMol: Maybe;
    readonly alignment: Maybe;
    readonly motion: 'free' | 'hindered' | 'locked' | null;
    /** Debye induction averaged over orientations. */
    readonly inductionKJPerMol: Maybe;
  };
  readonly closest: {
    readonly atoms: readonly number[] | null;
    readonly distanceA: Maybe;
    readonly contactRatio: Maybe;
  };
  readonly contact: Contact;
  readonly regime: Regime | null;
  readonly basis: Basis;
  readonly referenceKJPerMol: Maybe;
  readonly errorKJPerMol: Maybe;
  readonly relativeError: Maybe;
  /** Mean error of the energy for the errors of published or estimated dipoles; null where the file gives both. */
  readonly dipoleUncertaintyKJPerMol: Maybe;
  /** By how much the reference may be off because it rests on estimated charges; the regime counts it with the error. */
  readonly doubtKJPerMol: Maybe;
  readonly validBeyondA: Maybe;
  readonly advice: Advice | null;
}

/** A place in a file; lines and columns from 1, columns in UTF-16 units, the end column after the last unit. */
export interface PlaceRecord {
  readonly line: number;
  readonly column: number;
  readonly endLine: number;
  readonly endColumn: number;
}

/** A finding as plain data. */
export interface FindingRecord extends PlaceRecord {
  readonly code: string;
  readonly severity: Severity;
  readonly message: string;
  readonly related: readonly ({ readonly message: string } & PlaceRecord)[];
}

export function known(value: number): Maybe {
  return Number.isFinite(value) ? value : null;
}

function knownVector(array: Float64Array, at: number, scale = 1): number[] | null {
  const vector = [array[at]! / scale, array[at + 1]! / scale, array[at + 2]! / scale];
  return vector.every(Number.isFinite) ? vector : null;
}

export function settingsRecord({ settings, model }: FrameAnalysis): SettingsRecord {
  const { temperatureK, relativePermittivity, centre, tolerance, cutoffA } = settings;
  return { temperatureK, relativePermittivity, centre, tolerance, cutoffA, periodic: model.cell !== null };
}

/** A fragment of a system by its index; one of a companion file has no name of this frame. */
export function fragmentRecord(
  frame: FrameAnalysis,
  f: number,
  nameOf: (fragment: number) => FragmentName,
): FragmentRecord {
  const { system } = frame;
  const { moments } = system;
  const { name, label } = nameOf(f);
  const isOffered = moments.dipoleSource[f] === 'library' || moments.dipoleSource[f] === 'estimated';
  return {
    fragment: f + 1,
    name,
    label,
    atoms: Array.from(system.atomNumbers.subarray(system.starts[f]!, system.starts[f + 1]!)),
    chargeE: known(moments.chargeE[f]!),
    centreA: knownVector(moments.centreA, 3 * f),
    extentA: known(moments.extentA[f]!),
    dipoleD: knownVector(moments.dipoleEA, 3 * f, DEBYE_E_A),
    dipoleNormD: known(moments.dipoleNormEA[f]! / DEBYE_E_A),
    dipoleSource: moments.dipoleSource[f]!,
    chargeSource: moments.chargeSource[f]!,
    polarizabilityA3: known(moments.polarizabilityA3[f]!),
    // Beside a dipole of the file the errors are those of what it is compared with.
    dipoleErrorD: isOffered ? known(moments.dipoleErrorEA[f]! / DEBYE_E_A) : null,
    dipoleAngleErrorDeg: isOffered ? known(moments.dipoleAngleErrorDeg[f]!) : null,
    dipoleNote: moments.dipoleNote[f] || null,
    polarizabilitySource: moments.polarizabilitySource[f] || null,
    ionizationEnergyEV: known(moments.ionizationEnergyEV[f]!),
  };
}

/** Induction of a whole frame as plain data; without numbers there is a reason. */
export interface InductionRecord {
  readonly energyKJPerMol: Maybe;
  readonly pairSumKJPerMol: Maybe;
  /** What mutual induction adds to the sum of the pairs. */
  readonly nonAdditiveKJPerMol: Maybe;
  /** Below 1 the induced dipoles are stable; near 1 they answer wildly. */
  readonly largestEigenvalue: Maybe;
  readonly reason: string | null;
}

export function inductionRecord(frame: FrameAnalysis): InductionRecord {
  const induction = inductionOfFrame(frame);
  if (!induction.ok) {
    const { reason } = induction;
    return { energyKJPerMol: null, pairSumKJPerMol: null, nonAdditiveKJPerMol: null, largestEigenvalue: null, reason };
  }
  const { energyKJPerMol, pairSumKJPerMol, nonAdditiveKJPerMol, largestEigenvalue } = induction;
  return { energyKJPerMol, pairSumKJPerMol, nonAdditiveKJPerMol, largestEigenvalue, reason: null };
}

/** What a fragment is called. */
export interface FragmentName {
  readonly name: string;
  readonly label: string | null;
}

export function pairRecord(system: System, pair: Pair): PairRecord {
  const angles = anglesOf(system, pair);
  const thermal = thermalOf(system, pair);
  const relative = pair.errorKJPerMol / Math.abs(pair.referenceKJPerMol);
  const hasAtoms = pair.closest1 >= 0;
  const energies = Object.fromEntries(Object.entries(pair.energies).map(([term, value]) => [term, known(value)]));
  return {
    first: pair.first + 1,
    second: pair.second + 1,
    image: pair.image,
    distanceA: known(pair.distanceA),
    theta1Deg: known(angles.theta1Deg),
    theta2Deg: known(angles.theta2Deg),
    phiDeg: known(angles.phiDeg),
    angularFactor: known(angles.angularFactor),
    arrangement: angles.arrangement,
    energyKJPerMol: energies as PairRecord['energyKJPerMol'],
    thermal: {
      coupling: known(thermal.coupling),
      averageKJPerMol: known(thermal.averageKJPerMol),
      freeEnergyKJPerMol: known(thermal.freeEnergyKJPerMol),
      leadingKJPerMol: known(thermal.leadingKJPerMol),
      alignment: known(thermal.alignment),
      motion: thermal.motion,
      inductionKJPerMol: known(thermal.inductionKJPerMol),
    },
    closest: {
      atoms: hasAtoms ? [system.atomNumbers[pair.closest1]!, system.atomNumbers[pair.closest2]!] : null,
      distanceA: known(pair.closestA),
      contactRatio: known(pair.contactRatio),
    },
    contact: pair.contact,
    regime: pair.regime,
    basis: pair.basis,
    referenceKJPerMol: known(pair.referenceKJPerMol),
    errorKJPerMol: known(pair.errorKJPerMol),
    relativeError: known(relative),
    dipoleUncertaintyKJPerMol: known(uncertaintyOf(system, pair)),
    doubtKJPerMol: Number.isNaN(pair.errorKJPerMol) ? null : pair.doubtKJPerMol,
    validBeyondA: known(validBeyondOf(system, pair)),
    advice: pair.advice,
  };
}

function placeRecord(lines: LineIndex, span: Span): PlaceRecord {
  const start = lines.positionAt(span.start);
  const end = lines.positionAt(span.end);
  return { line: start.line + 1, column: start.column + 1, endLine: end.line + 1, endColumn: end.column + 1 };
}

export function findingRecord(lines: LineIndex, finding: Finding): FindingRecord {
  return {
    code: finding.code,
    severity: finding.severity,
    message: finding.message,
    ...placeRecord(lines, finding),
    related: finding.related.map((related) => ({ message: related.message, ...placeRecord(lines, related) })),
  };
}
