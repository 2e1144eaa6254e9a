import { type CodeAction, CodeActionKind, type Diagnostic, type WorkspaceEdit } from 'vscode-languageserver';
import type { TextEdit } from '../base/finding';
import type { Span } from '../base/span';
import { quickFixesAt, safeEdits } from '../features/quick-fixes';
import type { Analysed } from './analyser';
import { rangeOf } from './diagnostics';

export const FIX_ALL_KIND = `${CodeActionKind.SourceFixAll}.polewise`;

/** Whether an editor that asks for some kinds of actions wants one of another kind. */
function wants(only: readonly string[] | undefined, kind: string): boolean {
  return only === undefined || only.some((wanted) => kind === wanted || kind.startsWith(`${wanted}.`));
}

/**
 * The remedies for what is found in a span, and one that applies all safe ones. Edits are for the version that was analysed: an editor does
 * not apply them to another.
 */
export function codeActionsAt(
  analysed: Analysed,
  span: Span,
  diagnostics: readonly Diagnostic[],
  only: readonly string[] | undefined,
): CodeAction[] {
  const actions: CodeAction[] = [];
  if (wants(only, CodeActionKind.QuickFix)) {
    for (const { finding, fix } of quickFixesAt(analysed.findings, span)) {
      const range = JSON.stringify(rangeOf(analysed.document.lines, finding));
      const mended = diagnostics.filter(({ code, range: at }) => code === finding.code && JSON.stringify(at) === range);
      actions.push({
        title: fix.title,
        kind: CodeActionKind.QuickFix,
        diagnostics: mended,
        isPreferred: true,
        edit: editOf(analysed, fix.edits),
      });
    }
  }
  const safe = only !== undefined && wants(only, FIX_ALL_KIND) ? safeEdits(analysed.findings) : [];
  if (safe.length > 0) {
    actions.push({ title: 'Apply all safe remedies', kind: FIX_ALL_KIND, edit: editOf(analysed, safe) });
  }
  return actions;
}

function editOf({ document }: Analysed, edits: readonly TextEdit[]): WorkspaceEdit {
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
