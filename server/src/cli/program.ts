import { Command, CommanderError, InvalidArgumentError, Option } from 'commander';
import type { Advice } from '../analysis/advice';
import { DEFAULT_ENERGY_UNIT } from '../analysis/settings';
import { ENERGY_UNITS } from '../physics/units';
import { readCompanion } from './companion';
import { type DimersOptions, dimersCommand } from './dimers-command';
import { type FindingsOptions, findingsCommand } from './findings-command';
import { UsageError } from './input';
import { type AnalysisFlags, positive, requestOf, withAnalysisFlags } from './options';
import { type PairsOptions, pairsCommand } from './pairs-command';
import { type SeriesOptions, seriesCommand } from './series-command';
import { VERSION } from './version';

const ADVICE: readonly Advice[] = ['accept', 'review', 'compute', 'repair'];

function frameNumber(text: string): number | 'all' {
  if (text === 'all') return 'all';
  if (/^[1-9]\d*$/.test(text)) return Number(text);
  throw new InvalidArgumentError('It is a frame number from 1, or all.');
}

function adviceList(text: string): Advice[] {
  const words = text.split(',').map((word) => word.trim());
  const wrong = words.find((word) => !(ADVICE as readonly string[]).includes(word));
  if (wrong !== undefined) throw new InvalidArgumentError(`"${wrong}" is none of ${ADVICE.join(', ')}.`);
  return words as Advice[];
}

function withFrameFlags(command: Command): Command {
  return command
    .addOption(new Option('--frame <N>', 'frame number, or all').argParser(frameNumber).default('all'))
    .option('--focus <selector>', 'only pairs with this fragment: a number, a name, or chain:residue:number')
    .addOption(withFlag());
}

function withFlag(): Option {
  return new Option('--with <file>', 'a file whose fragments join every frame, such as a receptor');
}

type Status = { value: number };

/** The command line: every command with its flags. Runs are reported through `status`. */
function buildProgram(status: Status): Command {
  const program = new Command('polewise')
    .description('Electrostatic triage of fragment pairs in XYZ and PDB files.')
    .version(VERSION)
    .showHelpAfterError('(--help shows the flags)')
    .exitOverride();

  withAnalysisFlags(program.command('findings').argument('<file...>', 'coordinate files, - for standard input'))
    .description('print what is wrong or noteworthy, with its place')
    .addOption(new Option('--format <format>').choices(['text', 'json', 'sarif']).default('text'))
    .addOption(
      new Option('--fail-on <severity>', 'status 1 from this severity on')
        .choices(['error', 'warning', 'information'])
        .default('error'),
    )
    .addOption(withFlag())
    .action(async (files: string[], options: AnalysisFlags & FindingsOptions) => {
      status.value = await findingsCommand(files, requestOf(options), options);
    });

  withFrameFlags(
    withAnalysisFlags(program.command('pairs').argument('<file...>', 'coordinate files, - for standard input')),
  )
    .description('print every pair of fragments with its estimate, its error and the advice')
    .addOption(new Option('--format <format>').choices(['text', 'json', 'jsonl', 'csv']).default('text'))
    .addOption(
      new Option('--unit <unit>', 'energy unit of the text table').choices(ENERGY_UNITS).default(DEFAULT_ENERGY_UNIT),
    )
    .action(async (files: string[], options: AnalysisFlags & PairsOptions) => {
      status.value = await pairsCommand(files, requestOf(options), options);
    });

  withAnalysisFlags(
    program.command('series').argument('<file>', 'a coordinate file of several frames, - for standard input'),
  )
    .description('print one pair over all frames, and where its sign, regime, contact or rank beside kT changes')
    .option(
      '--pair <A,B>',
      'two fragments of the first frame, each a number, a name, or chain:residue:number (default the strongest pair)',
    )
    .addOption(new Option('--format <format>').choices(['text', 'json', 'csv']).default('text'))
    .addOption(
      new Option('--unit <unit>', 'energy unit of the text table').choices(ENERGY_UNITS).default(DEFAULT_ENERGY_UNIT),
    )
    .addOption(withFlag())
    .action(async (file: string, options: AnalysisFlags & SeriesOptions & { with?: string }) => {
      const request = requestOf(options);
      const companion = options.with === undefined ? null : await readCompanion(options.with, request);
      status.value = await seriesCommand(file, request, options, companion);
    });

  withFrameFlags(
    withAnalysisFlags(program.command('dimers').argument('<file>', 'a coordinate file, - for standard input')),
  )
    .description('write the pairs worth computing as files of their own')
    .requiredOption('--out <folder>', 'folder for the files')
    .addOption(
      new Option('--advice <list>', 'advice to write, joined by commas').argParser(adviceList).default(['compute']),
    )
    .addOption(
      new Option('--min-energy <energy>', 'only pairs from this strength on, kJ/mol or with a unit').argParser(
        positive('energyKJPerMol', 'The energy'),
      ),
    )
    .option('--force', 'overwrite files that exist')
    .action(
      async (
        file: string,
        options: AnalysisFlags & DimersOptions & { minEnergy?: number; with?: string; force?: boolean },
      ) => {
        const request = requestOf(options);
        const companion = options.with === undefined ? null : await readCompanion(options.with, request);
        const chosen = { ...options, minEnergyKJPerMol: options.minEnergy ?? 0, force: options.force ?? false };
        status.value = await dimersCommand(file, request, chosen, companion);
      },
    );
  return program;
}

const USAGE_STATUS = 2;

/** Runs the command line on arguments without the program's own name; returns the exit status. */
export async function runCommandLine(argv: readonly string[]): Promise<number> {
  const status = { value: 0 };
  const program = buildProgram(status);
  try {
    if (argv.length === 0) {
      program.outputHelp({ error: true });
      return USAGE_STATUS;
    }
    await program.parseAsync(argv, { from: 'user' });
    return status.value;
  } catch (error) {
    if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : USAGE_STATUS;
    if (error instanceof UsageError) {
      process.stderr.write(`polewise: ${error.message}\n`);
      return USAGE_STATUS;
    }
    throw error;
  }
}
