import type { Finding, TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import { quickFixesAt, safeEdits } from './quick-fixes';

/** What kind of change is offered, as editors tell them apart. */
export type ActionKind = 'quickfix' | 'source.fixAll.polewise';

export const ACTION_KINDS: readonly ActionKind[] = ['quickfix', 'source.fixAll.polewise'];

/** A change that is offered. */
export interface Action {
  readonly title: string;
  readonly kind: ActionKind;
  /** What it mends, where it mends a finding. */
  readonly finding: Finding | null;
  /** The edits that make the change; asked for only when it is looked at or chosen. */
  edits(): readonly TextEdit[];
}

/** Where changes are asked for. */
export interface ActionPlace {
  readonly findings: readonly Finding[];
  readonly span: Span;
}

/** The changes of the wanted kinds at a place; the same ones in the same order whenever the same is asked. */
export function actionsAt({ findings, span }: ActionPlace, wants: (kind: ActionKind) => boolean): Action[] {
  const actions: Action[] = [];
  if (wants('quickfix')) {
    for (const { finding, fix } of quickFixesAt(findings, span)) {
      actions.push({ title: fix.title, kind: 'quickfix', finding, edits: () => fix.edits });
    }
  }
  if (wants('source.fixAll.polewise') && safeEdits(findings).length > 0) {
    actions.push({
      title: 'Apply all safe remedies',
      kind: 'source.fixAll.polewise',
      finding: null,
      edits: () => safeEdits(findings),
    });
  }
  return actions;
}
