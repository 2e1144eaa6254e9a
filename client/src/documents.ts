import type { TextDocument, Uri } from 'vscode';

/** Our languages, wherever their text lives: on disk, untitled, remote or virtual. */
export const SELECTOR = [{ language: 'xyz' }, { language: 'pdb' }];

/** Whether a document is one of coordinates. */
export function isOurs({ languageId }: TextDocument): boolean {
  return SELECTOR.some(({ language }) => language === languageId);
}

/** The last part of an address. */
export function nameOf({ path }: Uri): string {
  return path.split('/').at(-1) || path;
}
