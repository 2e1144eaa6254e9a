import { builtInKnowledge } from '../analysis/built-in-knowledge';
import {
  type AnalysisRequest,
  CENTRES,
  type Centre,
  DEFAULT_ENERGY_UNIT,
  DEFAULT_SETTINGS,
  type Knowledge,
} from '../analysis/settings';
import { isFindingCode, SEVERITIES, type Severity } from '../base/catalogue';
import type { HintKinds } from '../features/inlay-hints';
import { FragmentLibrary } from '../library/match';
import { readLibrary } from '../library/user-library';
import { findMedium } from '../physics/media';
import { readQuantity } from '../physics/quantity';
import { ENERGY_UNITS, type EnergyUnit } from '../physics/units';

/** Atoms above which a part is off, by part; 0 for never shown. */
export interface Limits {
  readonly hints: number;
  readonly lens: number;
  readonly outline: number;
}

/** The editor's settings for one document, checked and clamped. */
export interface ServerSettings {
  readonly request: AnalysisRequest;
  readonly energyUnit: EnergyUnit;
  readonly severities: ReadonlyMap<string, Severity | 'off'>;
  readonly maxFindings: number;
  readonly hints: HintKinds;
  readonly lens: boolean;
  readonly limits: Limits;
  readonly analysisLimit: number;
  /** The table of all pairs is off in a frame that has more. */
  readonly panelPairLimit: number;
  /** What was wrong with the settings, in words for the status. */
  readonly complaints: readonly string[];
}

const DEFAULT_MAX_FINDINGS = 200;
const DEFAULT_ANALYSIS_LIMIT = 200000;
const DEFAULT_PANEL_PAIR_LIMIT = 300_000;
const DEFAULT_LIMITS: Limits = { hints: 200000, lens: 200000, outline: 100000 };
const MOST_ATOMS = 1e7;
const MOST_LIBRARY_FILES = 20;

/** Checks settings as the editor sends them: a wrong one gives its default and a complaint, one out of range is clamped. */
export function readSettings(raw: unknown, libraryFiles: readonly LibraryFile[] = []): ServerSettings {
  const reader = new SettingsReader(raw);
  const settings = {
    ...DEFAULT_SETTINGS,
    temperatureK: reader.temperature(),
    relativePermittivity: reader.permittivity(),
    centre: reader.choice<Centre>('centre', CENTRES, DEFAULT_SETTINGS.centre),
    tolerance: reader.number('tolerance', 0.01, 1, DEFAULT_SETTINGS.tolerance),
    cutoffA: reader.number('cutoff', 1, 100, DEFAULT_SETTINGS.cutoffA),
  };
  const knowledge = reader.knowledge(libraryFiles);
  return {
    request: Object.freeze({
      settings: Object.freeze(settings),
      forced: {},
      periodic: reader.flag('periodic'),
      knowledge,
    }),
    energyUnit: reader.choice<EnergyUnit>('energyUnit', ENERGY_UNITS, DEFAULT_ENERGY_UNIT),
    severities: reader.severities(),
    hints: { fragments: reader.flag('hints.fragments', true), contacts: reader.flag('hints.contacts', true) },
    lens: reader.flag('lens.frames', true),
    limits: {
      hints: reader.number('limits.hints', 0, MOST_ATOMS, DEFAULT_LIMITS.hints),
      lens: reader.number('limits.lens', 0, MOST_ATOMS, DEFAULT_LIMITS.lens),
      outline: reader.number('limits.outline', 0, MOST_ATOMS, DEFAULT_LIMITS.outline),
    },
    maxFindings: reader.number('maxFindings', 1, 5000, DEFAULT_MAX_FINDINGS),
    panelPairLimit: reader.number('limits.panelPairs', 0, 1e6, DEFAULT_PANEL_PAIR_LIMIT),
    analysisLimit: reader.number('analysisLimit', 0, MOST_ATOMS, DEFAULT_ANALYSIS_LIMIT),
    complaints: reader.complaints,
  };
}

class SettingsReader {
  readonly complaints: string[] = [];
  readonly #raw: Readonly<Record<string, unknown>>;

  constructor(raw: unknown) {
    this.#raw = raw !== null && typeof raw === 'object' ? (raw as Record<string, unknown>) : {};
  }

  /** A setting by its name; a dot leads into a group. */
  #value(name: string): unknown {
    const [group = '', inner] = name.split('.');
    const value = this.#raw[group] ?? undefined;
    if (inner === undefined) return value;
    return (value as Readonly<Record<string, unknown>> | undefined)?.[inner] ?? undefined;
  }

  #complain<T>(name: string, reason: string, fallback: T): T {
    this.complaints.push(`polewise.${name} ${reason}; the default is used`);
    return fallback;
  }

  number(name: string, least: number, most: number, fallback: number): number {
    const value = this.#value(name);
    if (value === undefined) return fallback;
    if (typeof value !== 'number' || !Number.isFinite(value)) return this.#complain(name, 'is no number', fallback);
    return Math.min(most, Math.max(least, value));
  }

  choice<T extends string>(name: string, choices: readonly T[], fallback: T): T {
    const value = this.#value(name);
    if (value === undefined) return fallback;
    const found = choices.find((choice) => choice === value);
    return found ?? this.#complain(name, `is none of ${choices.join(', ')}`, fallback);
  }

  flag(name: string, fallback = false): boolean {
    const value = this.#value(name);
    if (value === undefined || typeof value === 'boolean') return value ?? fallback;
    return this.#complain(name, 'is neither true nor false', fallback);
  }

  knowledge(files: readonly LibraryFile[]): Knowledge | null {
    const estimates = this.flag('estimates', true);
    const known = builtInKnowledge({ library: this.flag('library', true), estimates });
    if (files.length === 0) return known;
    let entries = known?.library?.entries ?? [];
    for (const { name, text } of files) {
      const { data, reason } = parsed(text);
      const read =
        reason === null ? readLibrary(data, entries) : { entries, problems: [{ path: '', message: reason }] };
      entries = read.entries;
      const [first] = read.problems;
      if (first !== undefined) this.complaints.push(`${name}: ${first.path || '/'}: ${first.message}`);
    }
    return { library: new FragmentLibrary(entries), estimates };
  }

  temperature(): number {
    const value = this.#value('temperature');
    if (value === undefined) return DEFAULT_SETTINGS.temperatureK;
    const result = readQuantity(String(value), 'temperatureK');
    if (result.ok && result.value > 0) return result.value;
    return this.#complain('temperature', 'is no temperature above 0 K', DEFAULT_SETTINGS.temperatureK);
  }

  permittivity(): number {
    const value = this.#value('relativePermittivity');
    if (value === undefined) return DEFAULT_SETTINGS.relativePermittivity;
    const medium = typeof value === 'string' ? findMedium(value) : undefined;
    if (medium !== undefined) return medium.relativePermittivity;
    const result = readQuantity(String(value), 'number');
    if (result.ok && result.value >= 1) return result.value;
    const reason = 'is no number from 1 up and no known medium';
    return this.#complain('relativePermittivity', reason, DEFAULT_SETTINGS.relativePermittivity);
  }

  severities(): Map<string, Severity | 'off'> {
    const value = this.#value('severities');
    const severities = new Map<string, Severity | 'off'>();
    if (value === undefined) return severities;
    if (value === null || typeof value !== 'object') return this.#complain('severities', 'is no table', severities);
    for (const [code, severity] of Object.entries(value)) {
      const known = severity === 'off' || (SEVERITIES as readonly unknown[]).includes(severity);
      if (isFindingCode(code) && known) severities.set(code, severity as Severity | 'off');
      else this.complaints.push(`polewise.severities has no use for "${code}": ${JSON.stringify(severity)}`);
    }
    return severities;
  }
}

/** A file of molecules that the settings name; `null` for one that cannot be read. */
export interface LibraryFile {
  readonly name: string;
  readonly text: string | null;
}

function parsed(text: string | null): { data: unknown; reason: string | null } {
  if (text === null) return { data: null, reason: 'the file cannot be read' };
  try {
    return { data: JSON.parse(text), reason: null };
  } catch (error) {
    return { data: null, reason: (error as Error).message };
  }
}

/** The names of the library files in settings as the editor sends them. */
export function libraryFileNames(raw: unknown): string[] {
  const names = (raw as { libraryFiles?: unknown } | null | undefined)?.libraryFiles;
  return Array.isArray(names) ? names.filter((name) => typeof name === 'string').slice(0, MOST_LIBRARY_FILES) : [];
}

/** The settings of each resource, asked for once until they change. */
export class SettingsStore {
  readonly #ask: (uri: string) => Promise<ServerSettings>;
  readonly #known = new Map<string, Promise<ServerSettings>>();

  constructor(ask: (uri: string) => Promise<ServerSettings>) {
    this.#ask = ask;
  }

  /** The same object as long as the settings are the same. */
  of(uri: string): Promise<ServerSettings> {
    let settings = this.#known.get(uri);
    if (settings === undefined) {
      settings = this.#ask(uri);
      this.#known.set(uri, settings);
      // What could not be had is asked for again.
      settings.catch(() => this.#known.delete(uri));
    }
    return settings;
  }

  forget(uri: string): void {
    this.#known.delete(uri);
  }

  clear(): void {
    this.#known.clear();
  }
}
