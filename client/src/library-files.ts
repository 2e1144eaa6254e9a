import { type Disposable, Uri, workspace } from 'vscode';
import type { ReadFilesParams } from '../../server/src/lsp/protocol';

/** Longest file that is handed on: a library of thousands of molecules is smaller. */
const MOST_BYTES = 5_000_000;

/** The texts of files of the workspace, wherever it lives; `null` for one that cannot be read. */
export async function readWorkspaceFiles({ uri, names }: ReadFilesParams): Promise<(string | null)[]> {
  const folder = workspace.getWorkspaceFolder(Uri.parse(uri)) ?? workspace.workspaceFolders?.[0];
  return Promise.all(
    names.map(async (name) => {
      if (folder === undefined) return null;
      try {
        const bytes = await workspace.fs.readFile(Uri.joinPath(folder.uri, name));
        return bytes.length > MOST_BYTES ? null : new TextDecoder().decode(bytes);
      } catch {
        return null;
      }
    }),
  );
}

/** Calls `changed` whenever a JSON file that some setting names is made, saved or deleted. */
export function watchLibraryFiles(changed: () => void): Disposable {
  const watcher = workspace.createFileSystemWatcher('**/*.json');
  const isNamed = (uri: Uri) => {
    const names = workspace.getConfiguration('polewise', uri).get<string[]>('libraryFiles', []);
    return names.some((name) => uri.path.endsWith(`/${name.replace(/^\.\//, '')}`));
  };
  const check = (uri: Uri) => {
    if (isNamed(uri)) changed();
  };
  watcher.onDidChange(check);
  watcher.onDidCreate(check);
  watcher.onDidDelete(check);
  return watcher;
}
