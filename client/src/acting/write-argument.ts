import { Uri } from 'vscode';
import type { DimerPairs } from '../../../server/src/lsp/protocol';
import type { ExistingFiles } from './dimer-writer';
import type { WantedPairs } from './pair-choice';

/** What the argument of the command that writes dimers settles; the rest is asked for. */
export interface WriteArgument {
  readonly wanted: WantedPairs | null;
  readonly folder: Uri | null;
  readonly existing: (() => Promise<ExistingFiles>) | null;
}

/** Reads `{ frame, pairs, folder?, existing? }`, as a key binding or another command gives it; what makes no sense is asked for instead. */
export function readWriteArgument(argument: unknown): WriteArgument {
  type Given = Partial<DimerPairs> & { readonly folder?: unknown; readonly existing?: unknown };
  const { frame, pairs, folder, existing } = (argument ?? {}) as Given;
  const isPair = (pair: unknown) => Array.isArray(pair) && pair.length === 2 && pair.every(Number.isInteger);
  const isSettled = Number.isInteger(frame) && Array.isArray(pairs) && pairs.every(isPair);
  return {
    wanted: isSettled ? { frame: frame!, pairs: pairs!, advice: null } : null,
    folder: typeof folder === 'string' ? Uri.parse(folder) : null,
    existing: existing === 'overwrite' || existing === 'keep' ? async () => existing : null,
  };
}
