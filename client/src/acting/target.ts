import { type TextDocument, type TextEditor, Uri, window, workspace } from 'vscode';
import { isOurs, nameOf } from '../documents';

/** The document and line that a command is for. */
export interface Target {
  readonly document: TextDocument;
  /** From 0. */
  readonly line: number;
}

/** The editor a person means: the active one, or one that is seen beside what else is active. */
export function editorInView(): TextEditor | undefined {
  const { activeTextEditor, visibleTextEditors } = window;
  if (activeTextEditor !== undefined && isOurs(activeTextEditor.document)) return activeTextEditor;
  return visibleTextEditors.find(({ document }) => isOurs(document));
}

/** The address in the argument of a command: menus give it alone, others as `uri` of an object. */
function addressOf(argument: unknown): Uri | null {
  if (argument instanceof Uri) return argument;
  const uri = (argument as { uri?: unknown } | null | undefined)?.uri;
  if (uri instanceof Uri) return uri;
  return typeof uri === 'string' ? Uri.parse(uri) : null;
}

/** What a command is for; says so where there is nothing. */
export async function targetOf(argument: unknown): Promise<Target | null> {
  const address = addressOf(argument);
  const editor = editorInView();
  if (address === null && editor === undefined) {
    void window.showInformationMessage('Open an XYZ or PDB file first.');
    return null;
  }
  const document = address === null ? editor!.document : await workspace.openTextDocument(address);
  if (!isOurs(document)) {
    void window.showInformationMessage(`${nameOf(document.uri)} is no XYZ or PDB file.`);
    return null;
  }
  const shown = [editor, ...window.visibleTextEditors].find((other) => other?.document === document);
  return { document, line: shown?.selection.active.line ?? 0 };
}
