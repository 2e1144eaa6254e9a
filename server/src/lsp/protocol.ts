/**
 * What client, panel and server say to each other beyond the standard protocol: names of methods and the shapes of their parameters. Plain
 * data; nothing here needs a package, so that every side can read it.
 */

import type { Advice } from '../analysis/advice';
import type { Dimer, DimerHarvest } from '../features/dimers';
import type { PairChoice } from '../features/pair-choices';
import type { PairRow, RowQuery } from '../features/pair-list';
import type { PictureTheme } from '../features/pair-picture-parts';
import type { PairPlace } from '../features/pair-place';
import type { PlaceData } from '../features/panel-place';
import type { Maybe } from '../features/records';
import type { SeriesFrame } from '../features/series';
import type { SeriesEvent } from '../features/series-events';
import type { EnergyUnit } from '../physics/units';

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

/** What a question is answered with: the result, or a sentence that says why there is none. */
export type Answer<T> =
  | { readonly result: T; readonly reason: null }
  /** `isOutdated`: the document changed while it was being answered; asking again may help. */
  | { readonly result: null; readonly reason: string; readonly isOutdated: boolean };

/** Which frame a line of a document ({@link LineParams}) belongs to, answered with {@link FrameAtResult}. */
export const FRAME_AT_REQUEST = 'polewise/frameAt';

export interface FrameAtResult {
  /** From 1. */
  readonly frame: number;
  readonly frames: number;
  readonly version: number;
}

/** The pairs of a frame to choose from, strongest first. */
export const PAIR_CHOICES_REQUEST = 'polewise/pairChoices';

export interface PairChoicesParams {
  readonly uri: string;
  readonly frame: number;
}

export interface PairChoicesResult {
  readonly counts: Readonly<Record<Advice, number>>;
  /** Energies in the unit that the settings ask for. */
  readonly pairs: readonly (Omit<PairChoice, 'energyKJPerMol'> & { readonly energy: number | null })[];
  readonly energyUnit: string;
  readonly version: number;
}

/** The texts of dimer files, as the command line writes them. */
export const DIMERS_REQUEST = 'polewise/dimers';

export interface DimersParams {
  readonly uri: string;
  /** From 1; null for every frame. */
  readonly frame: number | null;
  /** Pairs of fragments, from 1; null for all pairs of the list. */
  readonly pairs: readonly (readonly [number, number])[] | null;
  /** Of those only the ones with this advice; null for any. */
  readonly advice: readonly Advice[] | null;
}

export interface DimersResult {
  readonly files: readonly (Dimer & PairPlace)[];
  readonly refused: DimerHarvest['refused'];
  readonly version: number;
}

/** The pair table, as the command line writes it. */
export const PAIR_TABLE_REQUEST = 'polewise/pairTable';

export interface PairTableParams {
  readonly uri: string;
  /** From 1; null for every frame. */
  readonly frame: number | null;
  readonly format: 'csv';
}

export interface PairTableResult {
  readonly text: string;
  /** A name for a file that holds it. */
  readonly name: string;
  readonly pairs: number;
  readonly version: number;
}

/** The named media. */
export const MEDIA_REQUEST = 'polewise/media';

export interface MediumEntry {
  readonly name: string;
  readonly otherNames: readonly string[];
  readonly relativePermittivity: number;
  /** Of the tabulated value; null for vacuum. */
  readonly temperatureK: number | null;
}

/** Asks the editor for the texts of files by their names in the workspace of a document: a list of texts, null for what cannot be read. */
export const READ_FILES_REQUEST = 'polewise/readFiles';

export interface ReadFilesParams {
  readonly uri: string;
  readonly names: readonly string[];
}

/** Command of the editor that opens the panel; its argument is a {@link DocumentPair} or the first part of one. */
export const OPEN_PANEL_COMMAND = 'polewise.openPanel';

/** Tells that such a file has changed. */
export const FILES_CHANGED_NOTIFICATION = 'polewise/filesChanged';

/** A pair of a document; frame and fragments from 1. */
export interface DocumentPair extends PairPlace {
  readonly uri: string;
}

/** What every answer to the panel carries: of which version of the text it speaks, and how energies are to be written. */
export interface PanelAnswer {
  readonly version: number;
  readonly unit: EnergyUnit;
  readonly unitsPerKJPerMol: number;
  readonly kTKJPerMol: number;
}

/** Asks what the panel leads with for a place; answers null where the text has changed or is closed. */
export const PANEL_PLACE_REQUEST = 'polewise/panelPlace';

export interface PanelPlaceParams {
  readonly uri: string;
  readonly position: TextPlace;
  /** A pair that was chosen; shown as long as the cursor is on one of its fragments, or on none. */
  readonly pair: PairPlace | null;
}

export interface PanelPlace extends PanelAnswer {
  /** `null` where the document holds no frame. */
  readonly place: PlaceData | null;
}

/** Asks for some rows of the table of all pairs of a frame. */
export const PANEL_ROWS_REQUEST = 'polewise/panelRows';

export interface PanelRowsParams {
  readonly uri: string;
  readonly frame: number;
  readonly query: RowQuery;
  readonly from: number;
  readonly count: number;
}

export interface PanelRows extends PanelAnswer {
  readonly frame: number;
  readonly from: number;
  readonly rows: readonly PairRow[];
  /** Rows that the query wants, and pairs that the frame has. */
  readonly matching: number;
  readonly pairs: number;
  /** Why there is no table, where there is none. */
  readonly reason: string | null;
}

/** Asks for the energies of all fragments of a frame with each other. */
export const PANEL_MATRIX_REQUEST = 'polewise/panelMatrix';

export interface PanelFrameParams {
  readonly uri: string;
  readonly frame: number;
}

export interface PanelMatrix extends PanelAnswer {
  readonly frame: number;
  readonly titles: readonly string[];
  /** Columns of the pairs that the frame has; fragments from 1. */
  readonly first: readonly number[];
  readonly second: readonly number[];
  readonly energyKJPerMol: readonly Maybe[];
  readonly advice: readonly (Advice | null)[];
  readonly reason: string | null;
}

/** Asks for a pair over the frames of its document. */
export const PANEL_SERIES_REQUEST = 'polewise/panelSeries';

export type PanelSeriesParams = DocumentPair;

export interface PanelSeries extends PanelAnswer {
  readonly frame: number;
  readonly titles: readonly [string, string];
  readonly frames: readonly SeriesFrame[];
  readonly events: readonly SeriesEvent[];
  readonly reason: string | null;
}

/** Asks where the atoms of some fragments of a frame stand: ranges of lines, from 0, the end line included. */
export const FRAGMENT_LINES_REQUEST = 'polewise/fragmentLines';

export interface FragmentLinesParams extends PanelFrameParams {
  readonly fragments: readonly number[];
}

export interface FragmentLines {
  readonly version: number;
  readonly runs: readonly { readonly firstLine: number; readonly lastLine: number }[];
}

/** A place in a document, as the standard protocol counts: from 0, in UTF-16 units. */
export interface TextPlace {
  readonly line: number;
  readonly character: number;
}

/** A change of documents in the shape of the standard protocol's workspace edit, which an editor takes as it is. */
export interface DocumentEdit {
  readonly documentChanges: readonly {
    readonly textDocument: { readonly uri: string; readonly version: number };
    readonly edits: readonly {
      readonly range: { readonly start: TextPlace; readonly end: TextPlace };
      readonly newText: string;
    }[];
  }[];
}

/** A change that was asked for, or the sentence that says why there is none. */
export interface EditAnswer {
  readonly edit: DocumentEdit | null;
  readonly reason: string | null;
}

/** A line of a document, from 0; what is asked for concerns the frame that holds it. */
export interface LineParams {
  readonly uri: string;
  readonly line: number;
}

/** Asks for the edit that annotates a frame with all keys it lacks; answered with {@link EditAnswer}. */
export const INSERT_HEADER_REQUEST = 'polewise/insertHeader';

/** Asks for the edit that writes down the dipoles which the frame does not give itself; answered with {@link EditAnswer}. */
export const ADD_DIPOLES_REQUEST = 'polewise/addDipoles';

/** Asks for the edit that sets temperature or medium for a frame (XYZ) or file (PDB); answered with {@link EditAnswer}. */
export const SET_FILE_SETTING_REQUEST = 'polewise/setFileSetting';

export interface FileSettingParams extends LineParams {
  readonly key: 'temperature' | 'relative_permittivity';
  /** As it is to stand in the file: `310`, `25 degC`, `4.0`, `water`. */
  readonly value: string;
}

/** Command of the editor that writes pairs as dimer files; its argument is a {@link DimerPairs}. */
export const WRITE_DIMERS_COMMAND = 'polewise.writeDimers';

/** Pairs of one frame; frame and fragments counted from 1. */
export interface DimerPairs {
  readonly uri: string;
  readonly frame: number;
  readonly pairs: readonly (readonly [first: number, second: number])[];
}
