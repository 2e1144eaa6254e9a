import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Finding, FragmentPair, TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import type { CoordinateTree } from '../formats/tree';
import type { EnergyUnit } from '../physics/units';
import { frameIndexAt } from './frame-at';
import { findingsIn, safeEdits } from './quick-fixes';
import { remediesFor, silencesFor } from './remedies/table';
import { REWRITE_KINDS, type RewriteKind, rewritesAt } from './rewrite/rewrites';

/** What kind of change is offered, as editors tell them apart. */
export type ActionKind = 'quickfix' | 'source.fixAll.polewise' | `refactor.rewrite.polewise.${RewriteKind}`;

const rewriteKind = (kind: RewriteKind) => `refactor.rewrite.polewise.${kind}` as const;

export const ACTION_KINDS: readonly ActionKind[] = [
  'quickfix',
  'source.fixAll.polewise',
  ...REWRITE_KINDS.map(rewriteKind),
];

/** A change that is offered. */
export interface Action {
  readonly title: string;
  readonly kind: ActionKind;
  /** What it mends, where it mends a finding. */
  readonly finding: Finding | null;
  /** Whether it is the one that is meant most often. */
  readonly isPreferred: boolean;
  /** Whether it is to be looked at before it is made. */
  readonly needsLook: boolean;
  /** Pairs that are to be written to files of their own; then there are no edits. */
  readonly pairs: { readonly frame: number; readonly pairs: readonly FragmentPair[] } | null;
  /** The edits that make the change; asked for only when it is looked at or chosen. */
  edits(): readonly TextEdit[];
}

/** Where changes are asked for. */
export interface ActionPlace {
  readonly tree: CoordinateTree;
  readonly findings: readonly Finding[];
  readonly span: Span;
  /** The frames of {@link framesOfActions}, as far as they are there. */
  readonly frames: ReadonlyMap<number, FrameAnalysis>;
  readonly energyUnit: EnergyUnit;
}

/** So many frames are looked at for changes at one place; a selection may span thousands. */
const MOST_FRAMES = 4;

/** The frames (from 0) that changes at a place need. */
export function framesOfActions({ tree, findings, span }: Pick<ActionPlace, 'tree' | 'findings' | 'span'>): number[] {
  const indices = [
    frameIndexAt(tree, span.start),
    ...findingsIn(findings, span).map(({ start }) => frameIndexAt(tree, start)),
  ];
  return [...new Set(indices)].filter((index) => index >= 0).slice(0, MOST_FRAMES);
}

/** The changes of the wanted kinds at a place; the same ones in the same order whenever the same is asked. */
export function actionsAt(place: ActionPlace, wants: (kind: ActionKind) => boolean): Action[] {
  const { tree, findings, span, frames, energyUnit } = place;
  const plain = { finding: null, isPreferred: false, needsLook: false, pairs: null };
  const actions: Action[] = wants('quickfix') ? quickFixes(place) : [];
  if (wants('source.fixAll.polewise') && safeEdits(findings).length > 0) {
    actions.push({
      ...plain,
      title: 'Apply all safe remedies',
      kind: 'source.fixAll.polewise',
      edits: () => safeEdits(findings),
    });
  }
  const frame = frames.get(frameIndexAt(tree, span.start));
  if (frame === undefined || !REWRITE_KINDS.some((kind) => wants(rewriteKind(kind)))) return actions;
  for (const rewrite of rewritesAt(tree, frame, findings, span.start, energyUnit, (kind) => wants(rewriteKind(kind)))) {
    actions.push({ ...plain, ...rewrite, kind: rewriteKind(rewrite.kind), needsLook: true });
  }
  return actions;
}

/** What mends the findings at a place; behind all of that, what keeps each from being told. */
function quickFixes({ tree, findings, span, frames }: ActionPlace): Action[] {
  const mending: Action[] = [];
  const silencing: Action[] = [];
  for (const finding of findingsIn(findings, span)) {
    const index = frameIndexAt(tree, finding.start);
    const scene = { file: tree, frame: frames.get(index) ?? null, findings };
    for (const [order, remedy] of remediesFor(finding, scene).entries()) {
      const pairs = remedy.pairs === undefined ? null : { frame: index, pairs: remedy.pairs };
      const isPreferred = order === 0 && pairs === null;
      mending.push({ ...remedy, kind: 'quickfix', finding, isPreferred, needsLook: false, pairs });
    }
    for (const remedy of silencesFor(finding, scene)) {
      silencing.push({ ...remedy, kind: 'quickfix', finding, isPreferred: false, needsLook: false, pairs: null });
    }
  }
  const isNew = ({ title }: Action, k: number) => silencing.findIndex((other) => other.title === title) === k;
  return [...mending, ...silencing.filter(isNew)];
}
