import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { Finding, FragmentPair, TextEdit } from '../../base/finding';
import type { CoordinateTree } from '../../formats/tree';

/** What a remedy can look at: the file, the frame that its finding is in, and everything that was found. */
export interface Scene {
  readonly file: CoordinateTree;
  readonly frame: FrameAnalysis;
  readonly findings: readonly Finding[];
}

/** A remedy for a finding: edits of the file, or pairs to be written to files of their own. */
export interface Remedy {
  readonly title: string;
  edits(): readonly TextEdit[];
  /** Fragments from 0. */
  readonly pairs?: readonly FragmentPair[];
}

/** Finds the remedies for one kind of finding; of several the first is the one that is meant most often. */
export type RemedyMaker = (finding: Finding, scene: Scene) => readonly Remedy[];

/** A fragment as people name it. */
export function fragmentWords({ model }: FrameAnalysis, fragment: number): string {
  return model.labels[fragment] || `${model.names[fragment]} (fragment ${fragment + 1})`;
}

/** A remedy whose edits are known, none where they are not. */
export function offered(title: string, edits: readonly TextEdit[] | string | null): Remedy[] {
  return edits === null || typeof edits === 'string' || edits.length === 0 ? [] : [{ title, edits: () => edits }];
}
