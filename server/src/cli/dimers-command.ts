import { mkdir, rename, stat, unlink, writeFile } from 'node:fs/promises';
import { basename, join } from 'node:path';
import type { Advice } from '../analysis/advice';
import type { AnalysisRequest } from '../analysis/settings';
import type { Part } from '../analysis/system';
import { dimerStem, dimerTitle, planDimer } from '../features/dimers';
import { UsageError } from './input';
import { Pacer } from './output';
import { openForReport, type PairsOptions } from './pairs-command';

export interface DimersOptions extends Pick<PairsOptions, 'frame' | 'focus' | 'language'> {
  readonly out: string;
  readonly advice: readonly Advice[];
  readonly minEnergyKJPerMol: number;
  readonly force: boolean;
}

interface Planned {
  readonly path: string;
  readonly text: string;
}

/** Writes each pair with the advice asked for as a file of its own; returns the exit status. */
export async function dimersCommand(
  name: string,
  request: AnalysisRequest,
  options: DimersOptions,
  companion: Part | null,
): Promise<number> {
  const pacer = new Pacer();
  const opened = await openForReport(name, request, options, companion);
  const source = { name: basename(name), stem: name === '-' ? 'stdin' : dimerStem(basename(name)) };
  const planned: Planned[] = [];
  const refused: string[] = [];
  for (let place = 0; place < opened.frameNumbers.length; place++) {
    const { frame, pairs, nameOf } = opened.frameAt(place);
    for (const pair of pairs) {
      await pacer.pause(() => `${name}: frame ${frame.index + 1}`);
      if (pair.advice === null || !options.advice.includes(pair.advice)) continue;
      if (pair.strengthKJPerMol < options.minEnergyKJPerMol) continue;
      const dimer = planDimer(frame, companion, pair, nameOf, source);
      if (dimer.ok) planned.push({ path: join(options.out, dimer.dimer.name), text: dimer.dimer.text });
      else refused.push(`pair ${dimerTitle(frame, pair)} is not written: ${dimer.reason}`);
    }
  }
  pacer.done();
  for (const line of refused) process.stderr.write(`polewise: ${line}\n`);
  if (!options.force) await refuseToOverwrite(planned);
  if (planned.length > 0)
    await mkdir(options.out, { recursive: true }).catch((error: NodeJS.ErrnoException) => {
      throw new UsageError(`${options.out}: cannot be made: ${error.message}`);
    });
  for (const file of planned) await writeWhole(file);
  // Told when all is done: whoever stops listening must not stop the writing.
  process.stdout.write(planned.map(({ path }) => `${path}\n`).join(''));
  const count = `${planned.length} file${planned.length === 1 ? '' : 's'}`;
  process.stderr.write(
    `polewise: ${count} written to ${options.out}${refused.length > 0 ? `, ${refused.length} refused` : ''}\n`,
  );
  return 0;
}

async function refuseToOverwrite(planned: readonly Planned[]): Promise<void> {
  const existing: string[] = [];
  for (const { path } of planned) {
    const found = await stat(path).catch(() => null);
    if (found !== null) existing.push(path);
  }
  if (existing.length === 0) return;
  const more = existing.length > 1 ? ` and ${existing.length - 1} more` : '';
  throw new UsageError(`${existing[0]}${more} exist already; nothing was written (--force overwrites)`);
}

/** Writes under another name first, so that no half-written file ever stands under the final one. */
async function writeWhole({ path, text }: Planned): Promise<void> {
  const draft = `${path}.part-${process.pid}`;
  try {
    await writeFile(draft, text);
    await rename(draft, path);
  } catch (error) {
    await unlink(draft).catch(() => undefined);
    throw new UsageError(`${path}: cannot be written: ${(error as Error).message}`);
  }
}
