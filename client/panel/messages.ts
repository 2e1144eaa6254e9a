import type { DocumentPair, PanelPlace } from '../../server/src/lsp/protocol';

/** What the panel may ask the server, by the names of the requests; the host adds the document. */
export type PanelMethod = 'polewise/panelRows' | 'polewise/panelMatrix' | 'polewise/panelSeries';

/** A pair of a frame, both from 1. */
export type PanelPair = Omit<DocumentPair, 'uri'>;

/** What the panel tells its host. */
export type ToHost =
  | { readonly kind: 'ready'; readonly pair: PanelPair | null }
  | { readonly kind: 'ask'; readonly id: number; readonly method: PanelMethod; readonly params: object }
  /** A pair was chosen: its atoms are to be selected, and it is to be shown; null lets the cursor decide again. */
  | { readonly kind: 'choose'; readonly pair: PanelPair | null }
  | { readonly kind: 'write'; readonly pair: PanelPair }
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
  readonly pair: PanelPair | null;
}
