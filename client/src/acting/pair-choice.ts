import { type QuickPickItem, type TextDocument, window } from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import { fixed } from '../../../server/src/features/number-text';
import {
  type DimersParams,
  type FrameAtResult,
  PAIR_CHOICES_REQUEST,
  type PairChoicesParams,
  type PairChoicesResult,
} from '../../../server/src/lsp/protocol';
import { ask } from './asking';

/** Which pairs are to be written. */
export type WantedPairs = Omit<DimersParams, 'uri'>;

interface SetItem extends QuickPickItem {
  /** `null` for a list to choose from. */
  readonly wanted: WantedPairs | null;
}

/** Asks which pairs of a frame are to be written; `null` where none are. */
export async function choosePairs(
  client: BaseLanguageClient,
  document: TextDocument,
  { frame, frames }: FrameAtResult,
): Promise<WantedPairs | null> {
  const params: PairChoicesParams = { uri: document.uri.toString(), frame };
  const choices = await ask<PairChoicesResult>(client, 'Polewise: looking at the pairs', PAIR_CHOICES_REQUEST, params);
  if (choices === null) return null;
  if (choices.pairs.length === 0) {
    void window.showInformationMessage(`Frame ${frame} has no pairs within the cutoff.`);
    return null;
  }
  const title = frames === 1 ? 'Write dimer files' : `Write dimer files of frame ${frame} of ${frames}`;
  const set = await window.showQuickPick(setsOf(choices, frame, frames), { title });
  if (set === undefined) return null;
  if (set.wanted !== null) return set.wanted;
  const pairs = await pickPairs(choices);
  if (pairs.length === 0) return null;
  // Pairs are named by number, which may mean others in a text that changed since.
  if (document.version !== choices.version) {
    void window.showInformationMessage('The text changed meanwhile; choose the pairs again.');
    return null;
  }
  return { frame, pairs, advice: null };
}

function setsOf({ counts }: PairChoicesResult, frame: number, frames: number): SetItem[] {
  const { compute, review } = counts;
  const items: SetItem[] = [];
  if (compute > 0) {
    items.push({
      label: `Pairs to compute (${compute})`,
      detail: 'Those worth a quantum calculation.',
      wanted: { frame, pairs: null, advice: ['compute'] },
    });
  }
  if (review > 0) {
    items.push({
      label: `Pairs to compute or review (${compute + review})`,
      detail: 'Those, and the ones to be looked at.',
      wanted: { frame, pairs: null, advice: ['compute', 'review'] },
    });
  }
  if (frames > 1) {
    items.push({
      label: `Pairs to compute in all ${frames} frames`,
      detail: 'Those worth a quantum calculation, of every frame.',
      wanted: { frame: null, pairs: null, advice: ['compute'] },
    });
  }
  return [...items, { label: 'Choose pairs…', detail: 'From a list, strongest first.', wanted: null }];
}

async function pickPairs({ pairs, counts, energyUnit }: PairChoicesResult): Promise<(readonly [number, number])[]> {
  const items = pairs.map(({ first, second, names, distanceA, energy, advice }) => ({
    label: `${first}–${second}  ${names.join(' · ')}`,
    description: `${fixed(distanceA, 2)} Å, ${fixed(energy, 2)} ${energyUnit}, ${advice}`,
    picked: advice === 'compute',
    pair: [first, second] as const,
  }));
  const all = Object.values(counts).reduce((sum, count) => sum + count, 0);
  const chosen = await window.showQuickPick(items, {
    title: all > pairs.length ? `The ${pairs.length} strongest of ${all} pairs` : 'Pairs to write',
    placeHolder: 'Fragments, distance, energy, advice',
    canPickMany: true,
    matchOnDescription: true,
  });
  return (chosen ?? []).map(({ pair }) => pair);
}
