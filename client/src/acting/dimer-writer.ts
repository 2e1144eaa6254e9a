/** A file to be written. */
export interface FileToWrite {
  readonly name: string;
  readonly text: string;
}

/** The folder that files are written to. */
export interface TargetFolder {
  exists(name: string): Promise<boolean>;
  write(name: string, text: string): Promise<void>;
  remove(name: string): Promise<void>;
}

/** What to do about files that exist. */
export type ExistingFiles = 'overwrite' | 'keep' | 'cancel';

/** What became of the files. */
export interface WritingOutcome {
  readonly written: readonly string[];
  /** Existing files that were left as they are. */
  readonly kept: readonly string[];
  readonly isCancelled: boolean;
  /** The file at which writing ended. */
  readonly failed: { readonly name: string; readonly reason: string } | null;
}

/**
 * Writes files one after another, and asks once before the first where some exist. Writing ends at the first file that fails, and a file
 * that was begun is taken away again where there was none before.
 */
export async function writeFiles(
  files: readonly FileToWrite[],
  folder: TargetFolder,
  decide: (existing: readonly string[]) => Promise<ExistingFiles>,
): Promise<WritingOutcome> {
  const existing = new Set<string>();
  const written: string[] = [];
  const outcome = (more: Partial<WritingOutcome>): WritingOutcome => {
    return { written, kept: [], isCancelled: false, failed: null, ...more };
  };
  for (const { name } of files) {
    try {
      if (await folder.exists(name)) existing.add(name);
    } catch (error) {
      return outcome({ failed: { name, reason: reasonOf(error) } });
    }
  }
  const decision = existing.size === 0 ? 'overwrite' : await decide([...existing]);
  if (decision === 'cancel') return outcome({ isCancelled: true });
  const kept = decision === 'keep' ? [...existing] : [];
  for (const { name, text } of files) {
    if (kept.includes(name)) continue;
    try {
      await folder.write(name, text);
    } catch (error) {
      if (!existing.has(name)) await folder.remove(name).catch(() => undefined);
      return outcome({ kept, failed: { name, reason: reasonOf(error) } });
    }
    written.push(name);
  }
  return outcome({ kept });
}

function reasonOf(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

const MOST_NAMES = 5;
const dimerFiles = (count: number) => `${count} dimer file${count === 1 ? '' : 's'}`;

/** The question before files are overwritten. */
export function existingInWords(existing: readonly string[]): { message: string; detail: string } {
  const more = existing.length - MOST_NAMES;
  const names = [...existing.slice(0, MOST_NAMES), ...(more > 0 ? [`and ${more} more`] : [])];
  const message =
    existing.length === 1 ? '1 of the files exists already.' : `${existing.length} of the files exist already.`;
  return { message, detail: names.join('\n') };
}

/** What became of the files, in words. */
export function outcomeInWords({ written, kept, failed }: WritingOutcome, wanted: number): string {
  if (failed !== null) {
    const some =
      written.length === 0
        ? 'No file was'
        : `${written.length} of ${wanted} files ${written.length === 1 ? 'was' : 'were'}`;
    return `${failed.name} could not be written: ${failed.reason.replace(/\.?\s*$/, '.')} ${some} written.`;
  }
  if (written.length === 0)
    return `No file written: ${kept.length === 1 ? 'it exists' : `all ${kept.length} exist`} already.`;
  const left = kept.length === 0 ? '' : `, ${kept.length} existing one${kept.length === 1 ? '' : 's'} kept`;
  return `${dimerFiles(written.length)} written${left}.`;
}

/** A pair that was not written, and why. */
export interface RefusedPair {
  readonly frame: number;
  readonly first: number;
  readonly second: number;
  readonly reason: string;
}

const MOST_REFUSED = 3;

/** Which pairs are not written, and why. */
export function refusedInWords(refused: readonly RefusedPair[]): string {
  const named = refused
    .slice(0, MOST_REFUSED)
    .map(({ first, second, reason }) => `${first}–${second}, since ${reason}`);
  const more = refused.length - named.length;
  const pairs = refused.length === 1 ? 'pair is' : 'pairs are';
  return `${refused.length} ${pairs} not written: ${named.join('; ')}${more > 0 ? `; and ${more} more` : ''}.`;
}
