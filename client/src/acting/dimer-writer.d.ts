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
  readonly failed: {
    readonly name: string;
    readonly reason: string;
  } | null;
}
/**
 * Writes files one after another, and asks once before the first where some exist. Writing ends at the first file that fails, and a file
 * that was begun is taken away again where there was none before.
 */
export declare function writeFiles(
  files: readonly FileToWrite[],
  folder: TargetFolder,
  decide: (existing: readonly string[]) => Promise<ExistingFiles>,
): Promise<WritingOutcome>;
/** The question before files are overwritten. */
export declare function existingInWords(existing: readonly string[]): {
  message: string;
  detail: string;
};
/** What became of the files, in words. */
export declare function outcomeInWords({ written, kept, failed }: WritingOutcome, wanted: number): string;
/** A pair that was not written, and why. */
export interface RefusedPair {
  readonly frame: number;
  readonly first: number;
  readonly second: number;
  readonly reason: string;
}
/** Which pairs are not written, and why. */
export declare function refusedInWords(refused: readonly RefusedPair[]): string;
