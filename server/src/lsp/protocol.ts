/**
 * What client, panel and server say to each other beyond the standard protocol: names of methods and the shapes of their parameters. Plain
 * data; nothing here needs a package, so that every side can read it.
 */

import type { PictureTheme } from '../features/pair-picture-parts';

/** What the status item of the editor shows for a document. */
export interface StatusParams {
  readonly uri: string;
  readonly state: 'idle' | 'busy' | 'limited' | 'failed';
  /** A few words. */
  readonly text: string;
  /** A sentence or two. */
  readonly detail: string;
}

export const STATUS_NOTIFICATION = 'polewise/status';

/** The kind of colour theme: a picture in a hover cannot see it. */
export type ThemeKind = PictureTheme;

export interface ThemeParams {
  readonly themeKind: ThemeKind;
}

export const THEME_NOTIFICATION = 'polewise/theme';

/** Asks the editor for the texts of files by their names in the workspace of a document: a list of texts, null for what cannot be read. */
export const READ_FILES_REQUEST = 'polewise/readFiles';

export interface ReadFilesParams {
  readonly uri: string;
  readonly names: readonly string[];
}

/** Tells that such a file has changed. */
export const FILES_CHANGED_NOTIFICATION = 'polewise/filesChanged';
