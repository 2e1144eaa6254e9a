import type { ClientCapabilities, Connection } from 'vscode-languageserver';
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

/** What the editor at the other end can do. */
export interface ClientAbilities {
  /** Answers what settings it has. */
  readonly configuration: boolean;
  /** Asks for findings, rather than being sent them. */
  readonly pull: boolean;
  /** Asks for findings again where it is told to. */
  readonly refresh: boolean;
  /** Asks for the edits of an action later. */
  readonly lazyEdits: boolean;
  /** Asks for lenses and hints again where it is told to. */
  readonly refreshLenses: boolean;
  readonly refreshHints: boolean;
  /** Takes completions with places to fill in. */
  readonly snippets: boolean;
  /** Takes links that tell what they lead from. */
  readonly links: boolean;
  /** Lets edits be looked at before they are made. */
  readonly previews: boolean;
}

export const NO_ABILITIES: ClientAbilities = {
  configuration: false,
  pull: false,
  refresh: false,
  lazyEdits: false,
  links: false,
  snippets: false,
  refreshLenses: false,
  refreshHints: false,
  previews: false,
};

/** What an editor says at the start that it can do. */
export function abilitiesOf({ workspace, textDocument }: ClientCapabilities): ClientAbilities {
  const { codeAction } = textDocument ?? {};
  return {
    configuration: workspace?.configuration === true,
    pull: textDocument?.diagnostic !== undefined,
    refresh: workspace?.diagnostics?.refreshSupport === true,
    previews: workspace?.workspaceEdit?.changeAnnotationSupport !== undefined,
    lazyEdits: codeAction?.dataSupport === true && codeAction.resolveSupport?.properties.includes('edit') === true,
    refreshLenses: workspace?.codeLens?.refreshSupport === true,
    refreshHints: workspace?.inlayHint?.refreshSupport === true,
    snippets: textDocument?.completion?.completionItem?.snippetSupport === true,
    links: textDocument?.definition?.linkSupport === true,
  };
}

/** What every group of requests is answered with. */
export interface Session {
  readonly connection: Connection;
  readonly platform: Platform;
  readonly workspace: Workspace;
  readonly client: ClientAbilities;
  /** The kind of theme that the editor shows, where it told. */
  readonly theme: ThemeKind | null;
}
