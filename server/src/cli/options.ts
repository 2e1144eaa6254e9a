import { type Command, InvalidArgumentError, Option } from 'commander';
import { builtInKnowledge } from '../analysis/built-in-knowledge';
import { type AnalysisRequest, CENTRES, type Centre, DEFAULT_SETTINGS, type Knowledge } from '../analysis/settings';
import type { Language } from '../formats/tree';
import { FragmentLibrary } from '../library/match';
import { findMedium } from '../physics/media';
import { type Dimension, readQuantity } from '../physics/quantity';
import { withUserEntries } from './library-file';

/** The analysis flags that all commands share. */
export interface AnalysisFlags {
  readonly temperature?: number;
  readonly permittivity?: number;
  readonly centre?: Centre;
  readonly tolerance?: number;
  readonly cutoff?: number;
  readonly periodic?: boolean;
  readonly language?: Language;
  readonly library?: boolean;
  readonly estimates?: boolean;
  readonly libraryFile?: readonly string[];
}

/** A parser for a flag that must be a quantity above zero. */
export function positive(dimension: Dimension, what: string): (text: string) => number {
  return (text) => {
    const result = readQuantity(text, dimension);
    if (!result.ok) throw new InvalidArgumentError(result.reason);
    if (result.value > 0) return result.value;
    throw new InvalidArgumentError(`${what} must be above zero.`);
  };
}

/** A share such as `0.2` or `20%`, above 0 and up to 1. */
function share(text: string): number {
  const percent = /^(.*\d)\s*%$/.exec(text.trim());
  const result = readQuantity(percent?.[1] ?? text, 'number');
  const value = result.ok ? result.value / (percent === null ? 1 : 100) : Number.NaN;
  if (value > 0 && value <= 1) return value;
  throw new InvalidArgumentError('It is a share above 0 and up to 1, such as 0.2 or 20%.');
}

function permittivity(text: string): number {
  const medium = findMedium(text);
  if (medium !== undefined) return medium.relativePermittivity;
  const result = readQuantity(text, 'number');
  if (result.ok && result.value >= 1) return result.value;
  throw new InvalidArgumentError('It is a number from 1 up, or the name of a medium such as water or toluene.');
}

/** Adds the shared flags to a command. */
export function withAnalysisFlags(command: Command): Command {
  return command
    .addOption(
      new Option('--temperature <T>', 'temperature, K or with a unit such as "25 degC" (default 298.15)').argParser(
        positive('temperatureK', 'The temperature'),
      ),
    )
    .addOption(
      new Option(
        '--permittivity <value>',
        'relative permittivity, a number or a medium such as water (default 1)',
      ).argParser(permittivity),
    )
    .addOption(new Option('--centre <which>', 'the point that stands for a fragment (default mass)').choices(CENTRES))
    .addOption(
      new Option(
        '--tolerance <share>',
        'share of the reference by which the point dipole may be off (default 0.2)',
      ).argParser(share),
    )
    .addOption(
      new Option(
        '--cutoff <distance>',
        'between the extents of two fragments, Å or with a unit (default 12)',
      ).argParser(positive('lengthA', 'The cutoff')),
    )
    .option('--periodic', 'use the cell of the file even where the format by itself does not')
    .option('--no-library', 'use no published values of molecules that the file does not describe')
    .option('--no-estimates', 'estimate no dipole or polarizability from the geometry')
    .addOption(
      new Option(
        '--library-file <file>',
        'a JSON file of further molecules, or of other values (may be repeated)',
      ).argParser((file: string, others: readonly string[] = []) => [...others, file]),
    )
    .addOption(new Option('--language <format>', 'format of the files').choices(['xyz', 'pdb']));
}

function knowledgeOf({ library = true, estimates = true, libraryFile = [] }: AnalysisFlags): Knowledge | null {
  const known = builtInKnowledge({ library, estimates });
  if (libraryFile.length === 0) return known;
  return { library: new FragmentLibrary(withUserEntries(known?.library?.entries ?? [], libraryFile)), estimates };
}

/** The request that the flags make: a flag beats the file's key, which beats the default. */
export function requestOf(flags: AnalysisFlags): AnalysisRequest {
  return {
    settings: {
      ...DEFAULT_SETTINGS,
      centre: flags.centre ?? DEFAULT_SETTINGS.centre,
      tolerance: flags.tolerance ?? DEFAULT_SETTINGS.tolerance,
      cutoffA: flags.cutoff ?? DEFAULT_SETTINGS.cutoffA,
    },
    forced: {
      ...(flags.temperature === undefined ? {} : { temperatureK: flags.temperature }),
      ...(flags.permittivity === undefined ? {} : { relativePermittivity: flags.permittivity }),
    },
    periodic: flags.periodic ?? false,
    knowledge: knowledgeOf(flags),
  };
}
