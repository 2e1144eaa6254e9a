import {
  type CodeLens,
  type Command,
  LSPErrorCodes,
  ResponseError,
  type ServerCapabilities,
} from 'vscode-languageserver';
import { type FrameLens, lensSteps } from '../features/lens';
import { fixed } from '../features/number-text';
import { type EnergyUnit, energyUnitsPerKJPerMol } from '../physics/units';
import type { Analysed } from './analyser';
import { rangeOf } from './diagnostics';
import { isOff } from './limits';
import { OPEN_PANEL_COMMAND, WRITE_DIMERS_COMMAND } from './protocol';
import type { Session } from './session';
import type { Workspace } from './workspace';

export const LENS_CAPABILITIES: ServerCapabilities = { codeLensProvider: { resolveProvider: true } };

/** Of a long trajectory the first frames get lenses. */
const MOST_FRAMES = 200;
/** More pairs than this are not for a click. */
const MOST_WRITTEN_PAIRS = 5000;

const PARTS = ['strongest', 'compute', 'panel'] as const;
type Part = (typeof PARTS)[number];

/** What a lens that came without its words is found again by; the frame counts from 0. */
interface LensKey {
  readonly uri: string;
  readonly version: number;
  readonly index: number;
  readonly part: Part;
}

/** Answers with the lenses above frames; what they say is made when they come into view. */
export function serveLens({ connection, workspace }: Session): void {
  const sums = new FrameSums(workspace);

  connection.onCodeLens(async ({ textDocument: { uri } }, token): Promise<CodeLens[]> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null || token.isCancellationRequested) return [];
    return lensesOf(analysed);
  });

  connection.onCodeLensResolve(async (lens): Promise<CodeLens> => {
    const { uri, version, index, part } = lens.data as LensKey;
    const analysed = await workspace.analysed(uri);
    const sum = analysed?.document.version === version ? await sums.of(analysed, index) : null;
    if (analysed === null || sum === null) {
      throw new ResponseError(LSPErrorCodes.ContentModified, 'The text has changed since this was asked for.');
    }
    return { ...lens, command: commandOf(part, uri, sum, analysed.settings.energyUnit) };
  });
}

function lensesOf(analysed: Analysed): CodeLens[] {
  const { document, tree, settings } = analysed;
  if (!settings.lens || isOff('lens', analysed)) return [];
  const { uri, version, lines } = document;
  return tree.frames.slice(0, MOST_FRAMES).flatMap(({ index, firstLine }) => {
    const range = rangeOf(lines, { start: lines.starts[firstLine]!, end: lines.end(firstLine) });
    return PARTS.map((part): CodeLens => {
      if (part === 'panel') return { range, command: panelCommand(uri, index + 1) };
      const data: LensKey = { uri, version, index, part };
      return { range, data };
    });
  });
}

/** The sums of frames that were asked for, each made once for an analysis. */
class FrameSums {
  readonly #workspace: Workspace;
  readonly #known = new WeakMap<Analysed, Map<number, Promise<FrameLens | null>>>();

  constructor(workspace: Workspace) {
    this.#workspace = workspace;
  }

  of(analysed: Analysed, index: number): Promise<FrameLens | null> {
    const known = this.#known.get(analysed) ?? new Map<number, Promise<FrameLens | null>>();
    this.#known.set(analysed, known);
    const sum = known.get(index) ?? this.#make(analysed, index);
    known.set(index, sum);
    return sum;
  }

  async #make(analysed: Analysed, index: number): Promise<FrameLens | null> {
    if (analysed.tree.frames[index] === undefined) return null;
    return this.#workspace.paced(analysed, async (pace) => {
      const { frame, survey } = await analysed.frames.surveyed(index, pace);
      return pace.finish(lensSteps(frame, survey));
    });
  }
}

function panelCommand(uri: string, frame: number): Command {
  return { title: 'Open panel', command: OPEN_PANEL_COMMAND, arguments: [{ uri, frame }] };
}

/** A lens that says something and does nothing. */
function words(title: string): Command {
  return { title, command: '' };
}

function commandOf(part: Part, uri: string, sum: FrameLens, unit: EnergyUnit): Command {
  const { frame } = sum;
  if (part === 'panel') return panelCommand(uri, frame);
  if (part === 'strongest') return strongestCommand(uri, sum, unit);
  const { compute } = sum;
  if (compute.length === 0) return words('no pair to compute');
  const title = `${compute.length} pair${compute.length === 1 ? '' : 's'} to compute`;
  if (compute.length > MOST_WRITTEN_PAIRS) return words(title);
  return { title, command: WRITE_DIMERS_COMMAND, arguments: [{ uri, frame, pairs: compute }] };
}

function strongestCommand(uri: string, sum: FrameLens, unit: EnergyUnit): Command {
  const { frame, strongest, kTKJPerMol, pairs, isSearched } = sum;
  if (pairs === 0) return words('no pair');
  if (!isSearched) return words('no pair above 0.5 kT');
  if (strongest === null) return words('no pair with a known energy');
  const { first, second, name1, name2, energyKJPerMol, verdict } = strongest;
  const inKT = energyKJPerMol === null ? null : Math.abs(energyKJPerMol) / kTKJPerMol;
  const inUnit = energyKJPerMol === null ? null : energyKJPerMol * energyUnitsPerKJPerMol(unit, kTKJPerMol);
  const energy =
    inUnit === null
      ? 'energy not known'
      : `${fixed(inUnit, 1)} ${unit}${unit === 'kT' ? '' : `, ${fixed(inKT, 1)} kT`}`;
  return {
    title: `${plain(name1)} – ${plain(name2)}: ${energy}, ${verdict}`,
    command: OPEN_PANEL_COMMAND,
    arguments: [{ uri, frame, first, second }],
  };
}

/** A name of the file; editors draw `$(…)` in a lens as an icon. */
function plain(name: string): string {
  return name.replaceAll('$(', '$ (');
}
