import type { PairPlace } from '../../server/src/features/pair-place';
import {
  PANEL_MATRIX_REQUEST,
  PANEL_ROWS_REQUEST,
  PANEL_SERIES_REQUEST,
  type PanelPlace,
} from '../../server/src/lsp/protocol';

/** What the panel may ask the server, by the names of the requests; the host adds the document. */
export const PANEL_METHODS = [PANEL_ROWS_REQUEST, PANEL_MATRIX_REQUEST, PANEL_SERIES_REQUEST] as const;
export type PanelMethod = (typeof PANEL_METHODS)[number];

/** What the panel tells its host. */
export type ToHost =
  | { readonly kind: 'ready'; readonly pair: PairPlace | null }
  | { readonly kind: 'ask'; readonly id: number; readonly method: PanelMethod; readonly params: object }
  /** A pair was chosen: its atoms are to be selected, and it is to be shown; null lets the cursor decide again. */
  | { readonly kind: 'choose'; readonly pair: PairPlace | null }
  | { readonly kind: 'write'; readonly pair: PairPlace }
  | { readonly kind: 'copy'; readonly text: string; readonly what: string }
  | { readonly kind: 'save'; readonly text: string; readonly name: string };

/** What the host tells the panel. */
export type FromHost =
  | { readonly kind: 'answer'; readonly id: number; readonly result: unknown }
  | { readonly kind: 'place'; readonly uri: string; readonly file: string; readonly answer: PanelPlace }
  | { readonly kind: 'state'; readonly state: 'busy' | 'empty'; readonly text: string };

/** What the panel keeps over a reload of the window. */
export interface KeptState {
  readonly uri: string;
  readonly view: string;
  readonly pair: PairPlace | null;
}
