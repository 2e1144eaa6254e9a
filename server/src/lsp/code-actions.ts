import type { CodeAction, Command, Diagnostic, WorkspaceEdit } from 'vscode-languageserver';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import { type Action, type ActionKind, actionsAt } from '../features/actions';
import type { Snapshot } from '../text/snapshot';
import type { Analysed } from './analyser';
import { rangeOf } from './diagnostics';
import { type DimerPairs, WRITE_DIMERS_COMMAND } from './protocol';

/** What an action that came without its edits is found again by. */
interface ActionKey {
  readonly uri: string;
  readonly version: number;
  readonly span: Span;
  readonly kind: ActionKind;
  /** Which of that kind at that place. */
  readonly index: number;
  readonly title: string;
}

/** What an editor asks for: the kinds it wants (all but the sweeping ones where it names none), and how it takes edits. */
export interface ActionRequest {
  readonly span: Span;
  readonly diagnostics: readonly Diagnostic[];
  readonly only: readonly string[] | undefined;
  /** Whether the edits are asked for later. */
  readonly isLazy: boolean;
  /** Whether edits can be looked at before they are made. */
  readonly hasPreviews: boolean;
}

/** The frames that actions at a place need, as far as they are there. */
export type ActionFrames = ReadonlyMap<number, FrameAnalysis>;

/** Whether an editor wants actions of a kind. What changes a whole file at once is for those who ask for it. */
function wants(only: readonly string[] | undefined, kind: string): boolean {
  if (only === undefined) return !kind.startsWith('source.');
  return only.some((wanted) => wanted === '' || kind === wanted || kind.startsWith(`${wanted}.`));
}

/** The actions at a place. Edits are for the version that was analysed: an editor does not apply them to another. */
export function codeActionsAt(
  analysed: Analysed,
  frames: ActionFrames,
  { span, diagnostics, only, isLazy, hasPreviews }: ActionRequest,
): CodeAction[] {
  const { uri, version, lines } = analysed.document;
  const counts = new Map<ActionKind, number>();
  const { energyUnit } = analysed.settings;
  return actionsAt({ ...analysed, span, frames, energyUnit }, (kind) => wants(only, kind)).map((action) => {
    const { title, kind, finding, isPreferred, pairs } = action;
    const index = counts.get(kind) ?? 0;
    counts.set(kind, index + 1);
    const key: ActionKey = { uri, version, span, kind, index, title };
    const range = finding === null ? null : JSON.stringify(rangeOf(lines, finding));
    const mended = diagnostics.filter(({ code, range: at }) => code === finding?.code && JSON.stringify(at) === range);
    return {
      title,
      kind,
      ...(finding === null ? {} : { diagnostics: mended }),
      ...(isPreferred ? { isPreferred } : {}),
      ...(pairs !== null
        ? { command: writeCommand(title, uri, pairs) }
        : isLazy
          ? { data: key }
          : { edit: editFor(analysed, action, hasPreviews) }),
    };
  });
}

/** The edits of an action that came without them; `null` where the document is another by now. */
export function resolvedEdit(
  analysed: Analysed,
  frames: ActionFrames,
  action: CodeAction,
  hasPreviews: boolean,
): WorkspaceEdit | null {
  const { uri, version, span, kind, index, title } = action.data as ActionKey;
  if (analysed.document.uri !== uri || analysed.document.version !== version) return null;
  const { energyUnit } = analysed.settings;
  const all = actionsAt({ ...analysed, span, frames, energyUnit }, (wanted) => wanted === kind);
  const again: Action | undefined = all[index];
  return again?.title === title ? editFor(analysed, again, hasPreviews) : null;
}

/** The command of the editor that writes pairs; numbers from 1 there. */
function writeCommand(title: string, uri: string, { frame, pairs }: NonNullable<Action['pairs']>): Command {
  const argument: DimerPairs = { uri, frame: frame + 1, pairs: pairs.map(([f, g]) => [f + 1, g + 1]) };
  return { title, command: WRITE_DIMERS_COMMAND, arguments: [argument] };
}

/** The edits of an action; where it is to be looked at first, and the editor can do that, it is asked to. */
function editFor(analysed: Analysed, action: Action, hasPreviews: boolean): WorkspaceEdit {
  const edits = action.edits();
  if (!action.needsLook || !hasPreviews) return editOf(analysed, edits);
  const { uri, version, lines } = analysed.document;
  const annotationId = action.kind;
  const whole = asOne(analysed.document.snapshot, edits);
  return {
    documentChanges: [
      {
        textDocument: { uri, version },
        edits: [{ range: rangeOf(lines, whole), newText: whole.text, annotationId }],
      },
    ],
    changeAnnotations: { [annotationId]: { label: action.title, needsConfirmation: true } },
  };
}

/**
 * Edits as one, with what stands between them: an editor that shows edits before they are made lets each be left out, and half of a turned
 * molecule is none.
 */
function asOne(snapshot: Snapshot, edits: readonly TextEdit[]): TextEdit {
  const ascending = [...edits].sort((a, b) => a.start - b.start);
  const [first] = ascending;
  if (first === undefined) return { start: 0, end: 0, text: '' };
  let { text, end } = first;
  for (const edit of ascending.slice(1)) {
    text += snapshot.slice(end, edit.start) + edit.text;
    end = edit.end;
  }
  return { start: first.start, end, text };
}

/** The place that an action which came without its edits was offered at; `null` where it does not tell. */
export function spanOfAction({ data }: CodeAction): Span | null {
  return ((data ?? {}) as Partial<ActionKey>).span ?? null;
}

/** The document that an action was offered for, `null` where it does not tell. */
export function uriOfAction({ data }: CodeAction): string | null {
  const { uri } = (data ?? {}) as Partial<ActionKey>;
  return typeof uri === 'string' ? uri : null;
}

/** Edits of an analysed text as the protocol has them, for that version alone. */
export function editOf({ document }: Pick<Analysed, 'document'>, edits: readonly TextEdit[]): WorkspaceEdit {
  const { uri, version, lines } = document;
  return {
    documentChanges: [
      {
        textDocument: { uri, version },
        edits: edits.map((edit) => ({ range: rangeOf(lines, edit), newText: edit.text })),
      },
    ],
  };
}
