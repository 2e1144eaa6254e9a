import type { CodeAction, Diagnostic, WorkspaceEdit } from 'vscode-languageserver';
import type { TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import { type Action, type ActionKind, actionsAt } from '../features/actions';
import type { Analysed } from './analyser';
import { rangeOf } from './diagnostics';

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
}

/** Whether an editor wants actions of a kind. What changes a whole file at once is for those who ask for it. */
function wants(only: readonly string[] | undefined, kind: string): boolean {
  if (only === undefined) return !kind.startsWith('source.');
  return only.some((wanted) => wanted === '' || kind === wanted || kind.startsWith(`${wanted}.`));
}

/** The actions at a place. Edits are for the version that was analysed: an editor does not apply them to another. */
export function codeActionsAt(analysed: Analysed, { span, diagnostics, only, isLazy }: ActionRequest): CodeAction[] {
  const { uri, version, lines } = analysed.document;
  const counts = new Map<ActionKind, number>();
  return actionsAt({ ...analysed, span }, (kind) => wants(only, kind)).map((action) => {
    const { title, kind, finding } = action;
    const index = counts.get(kind) ?? 0;
    counts.set(kind, index + 1);
    const key: ActionKey = { uri, version, span, kind, index, title };
    const range = finding === null ? null : JSON.stringify(rangeOf(lines, finding));
    const mended = diagnostics.filter(({ code, range: at }) => code === finding?.code && JSON.stringify(at) === range);
    return {
      title,
      kind,
      ...(finding === null ? {} : { diagnostics: mended, isPreferred: true }),
      ...(isLazy ? { data: key } : { edit: editOf(analysed, action.edits()) }),
    };
  });
}

/** The edits of an action that came without them; `null` where the document is another by now. */
export function resolvedEdit(analysed: Analysed, action: CodeAction): WorkspaceEdit | null {
  const { uri, version, span, kind, index, title } = action.data as ActionKey;
  if (analysed.document.uri !== uri || analysed.document.version !== version) return null;
  const again: Action | undefined = actionsAt({ ...analysed, span }, (wanted) => wanted === kind)[index];
  return again?.title === title ? editOf(analysed, again.edits()) : null;
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
