import { FileSystemError, type QuickPickItem, Uri, window, workspace } from 'vscode';
import type { TargetFolder } from './dimer-writer';

/** A folder of the editor's file systems, wherever it lives. */
export function folderAt(folder: Uri): TargetFolder & { addressOf(name: string): Uri } {
  const addressOf = (name: string) => Uri.joinPath(folder, name);
  return {
    addressOf,
    async exists(name) {
      try {
        await workspace.fs.stat(addressOf(name));
        return true;
      } catch (error) {
        if (error instanceof FileSystemError && error.code === 'FileNotFound') return false;
        throw error;
      }
    },
    write: async (name, text) => workspace.fs.writeFile(addressOf(name), new TextEncoder().encode(text)),
    remove: async (name) => workspace.fs.delete(addressOf(name)),
  };
}

interface FolderItem extends QuickPickItem {
  readonly folder: Uri | null;
}

/** Asks for the folder to write to; `null` where none is chosen. */
export async function chooseFolder(document: Uri): Promise<Uri | null> {
  const items = likelyFolders(document);
  if (items.length === 0) return browse(undefined);
  const other: FolderItem = { label: 'Choose a folder…', folder: null };
  const chosen = await window.showQuickPick([...items, other], { title: 'Where to write the dimer files' });
  if (chosen === undefined) return null;
  return chosen.folder ?? browse(items[0]!.folder!);
}

/** Beside a file; for a text that lies nowhere, or where nothing can be written, the folders of the workspace. */
function likelyFolders(document: Uri): FolderItem[] {
  const isWritable = ({ scheme }: Uri) => workspace.fs.isWritableFileSystem(scheme) !== false;
  if (document.scheme !== 'untitled' && isWritable(document)) {
    const folder = Uri.joinPath(document, '..');
    return [{ label: 'Beside the file', description: workspace.asRelativePath(folder), folder }];
  }
  return (workspace.workspaceFolders ?? [])
    .filter(({ uri }) => isWritable(uri))
    .map(({ name, uri }) => ({ label: `In ${name}`, description: uri.path, folder: uri }));
}

async function browse(start: Uri | undefined): Promise<Uri | null> {
  const [folder] =
    (await window.showOpenDialog({
      title: 'Where to write the dimer files',
      openLabel: 'Write Here',
      canSelectFolders: true,
      canSelectFiles: false,
      ...(start === undefined ? {} : { defaultUri: start }),
    })) ?? [];
  return folder ?? null;
}
