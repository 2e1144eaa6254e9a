import { env, window } from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import {
  FRAME_AT_REQUEST,
  type FrameAtResult,
  PAIR_TABLE_REQUEST,
  type PairTableParams,
  type PairTableResult,
} from '../../../server/src/lsp/protocol';
import { ask } from './asking';
import { targetOf } from './target';

const TITLE = 'Polewise: making the pair table';

/** Puts the pair table of the frame at the cursor on the clipboard, as comma-separated values. */
export async function copyPairTable(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await targetOf(argument);
  if (target === null) return;
  const uri = target.document.uri.toString();
  const at = await ask<FrameAtResult>(client, TITLE, FRAME_AT_REQUEST, { uri, line: target.line });
  if (at === null) return;
  const params: PairTableParams = { uri, frame: at.frame, format: 'csv' };
  const table = await ask<PairTableResult>(client, TITLE, PAIR_TABLE_REQUEST, params);
  if (table === null) return;
  if (table.pairs === 0) {
    void window.showInformationMessage(`Frame ${at.frame} has no pairs within the cutoff; nothing was copied.`);
    return;
  }
  await env.clipboard.writeText(table.text);
  const pairs = `${table.pairs} pair${table.pairs === 1 ? '' : 's'}`;
  void window.showInformationMessage(`${pairs} of frame ${at.frame} copied as comma-separated values.`);
}
