import type { FragmentLibrary } from '../library/match';
import type { EnergyUnit } from '../physics/units';

/** The point that stands for a fragment. */
export const CENTRES = ['mass', 'geometry', 'nuclear-charge'] as const;
export type Centre = (typeof CENTRES)[number];

/** What an analysis depends on besides the file; a frozen argument, never shared state. */
export interface AnalysisSettings {
  readonly temperatureK: number;
  readonly relativePermittivity: number;
  readonly centre: Centre;
  /** Share of the reference energy by which the point dipole may be off. */
  readonly tolerance: number;
  /** Pairs belong to the list up to this distance between the surfaces of their extents, Å; three times that for two ions. */
  readonly cutoffA: number;
}

export const DEFAULT_SETTINGS: AnalysisSettings = Object.freeze({
  temperatureK: 298.15,
  relativePermittivity: 1,
  centre: 'mass',
  tolerance: 0.2,
  cutoffA: 12,
});

export const DEFAULT_ENERGY_UNIT: EnergyUnit = 'kJ/mol';

/** What is known of molecules besides what a file says of them. */
export interface Knowledge {
  /** Published values of kinds of molecules. */
  readonly library: FragmentLibrary | null;
  /** Whether dipoles and polarizabilities may be estimated from the geometry. */
  readonly estimates: boolean;
}

/** What was asked for expressly and so beats the file; and whether the cell is to be used where the file does not say so. */
export interface AnalysisRequest {
  readonly settings: AnalysisSettings;
  readonly forced: Partial<Pick<AnalysisSettings, 'temperatureK' | 'relativePermittivity'>>;
  readonly periodic: boolean;
  /** What may be used besides what the file says; `null` for nothing. */
  readonly knowledge: Knowledge | null;
}

export const DEFAULT_REQUEST: AnalysisRequest = Object.freeze({
  settings: DEFAULT_SETTINGS,
  forced: {},
  periodic: false,
  knowledge: null,
});

/** A fragment whose net charge exceeds this is an ion; rounded charge columns sum to a few hundredths. */
export const ION_CHARGE_E = 0.1;

/** Dipoles below this are zero, e·Å. */
export const ZERO_DIPOLE_EA = 1e-6;
