import { commands, Position, Selection, Uri, ViewColumn, window, workspace } from 'vscode';
import sample from '../../../samples/bare-cluster.xyz';
import { editorInView } from './target';

const NAME = 'sample-cluster';
/** So many names are tried for the sample where files have them already. */
const MOST_NAMES = 20;
/** Line of the first atom. */
const FIRST_ATOM = 2;

/** Opens the bundled cluster as a text of its own, which is saved only where that is wanted. */
export async function openSample(): Promise<void> {
  const folder = workspace.workspaceFolders?.[0]?.uri;
  // Only a disk can take an unsaved text under a name in the folder.
  const address = folder?.scheme === 'file' ? await freeAddress(folder) : null;
  const document = await (address === null
    ? workspace.openTextDocument({ language: 'xyz', content: sample })
    : workspace.openTextDocument(address));
  // Beside a walkthrough, so that both are seen.
  const isBeside = window.activeTextEditor === undefined && window.tabGroups.activeTabGroup.activeTab !== undefined;
  const editor = await window.showTextDocument(document, {
    viewColumn: isBeside ? ViewColumn.Beside : ViewColumn.Active,
    preview: false,
  });
  // Filled where it is seen: a text that is changed out of sight is shown once more by the editor.
  if (document.getText() === '') await editor.edit((edit) => edit.insert(new Position(0, 0), sample));
  const atom = new Position(Math.min(FIRST_ATOM, document.lineCount - 1), 0);
  editor.selection = new Selection(atom, atom);
}

/** An address in the folder under which there is no file yet. */
async function freeAddress(folder: Uri): Promise<Uri | null> {
  for (let number = 1; number <= MOST_NAMES; number++) {
    const address = Uri.joinPath(folder, `${NAME}${number === 1 ? '' : `-${number}`}.xyz`);
    const isTaken = await workspace.fs.stat(address).then(
      () => true,
      () => false,
    );
    if (!isTaken) return address.with({ scheme: 'untitled' });
  }
  return null;
}

/** Shows what is known of the line at the cursor, as resting on it does. */
export async function explain(): Promise<void> {
  const editor = editorInView();
  if (editor === undefined) {
    void window.showInformationMessage('Open an XYZ or PDB file first.');
    return;
  }
  const { document, selection, viewColumn } = editor;
  await window.showTextDocument(document, { selection, ...(viewColumn === undefined ? {} : { viewColumn }) });
  await commands.executeCommand('editor.action.showHover');
}
