import type { Connection } from 'vscode-languageserver';
import type { Clock } from './pace';
import type { ThemeKind } from './protocol';
import type { Workspace } from './workspace';

/** What the entry gives the server of its platform. */
export interface Platform {
  readonly clock: Clock;
  readonly version: string;
  /** Base64 of the UTF-8 bytes of a text. */
  base64(text: string): string;
}

/** What every group of requests is answered with. */
export interface Session {
  readonly connection: Connection;
  readonly platform: Platform;
  readonly workspace: Workspace;
  /** The kind of theme that the editor shows, where it told. */
  readonly theme: ThemeKind | null;
}
