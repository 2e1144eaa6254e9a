import type { Uri } from 'vscode';
import { commands, window, workspace } from 'vscode';
import type { BaseLanguageClient } from 'vscode-languageclient';
import {
  DIMERS_REQUEST,
  type DimersParams,
  type DimersResult,
  FRAME_AT_REQUEST,
  type FrameAtResult,
} from '../../../server/src/lsp/protocol';
import { ask } from './asking';
import {
  type ExistingFiles,
  existingInWords,
  outcomeInWords,
  refusedInWords,
  type WritingOutcome,
  writeFiles,
} from './dimer-writer';
import { choosePairs, type WantedPairs } from './pair-choice';
import { type Target, targetOf } from './target';
import { chooseFolder, folderAt } from './target-folder';
import { readWriteArgument } from './write-argument';

const TITLE = 'Polewise: making dimer files';

/** Writes pairs of fragments as files of their own; asks for what the argument leaves open. */
export async function writeDimers(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await targetOf(argument);
  if (target === null) return;
  const given = readWriteArgument(argument);
  const wanted = given.wanted ?? (await pairsToWrite(client, target));
  if (wanted === null) return;
  const params: DimersParams = { uri: target.document.uri.toString(), ...wanted };
  const dimers = await ask<DimersResult>(client, TITLE, DIMERS_REQUEST, params);
  if (dimers === null) return;
  const { files, refused } = dimers;
  if (refused.length > 0) void window.showWarningMessage(refusedInWords(refused));
  if (files.length === 0) {
    if (refused.length === 0) void window.showInformationMessage('There is no such pair; nothing was written.');
    return;
  }
  const folder = given.folder ?? (await chooseFolder(target.document.uri));
  if (folder === null) return;
  const outcome = await writeFiles(files, folderAt(folder), given.existing ?? decideOnExisting);
  if (!outcome.isCancelled) void tell(outcome, files.length, folder);
}

async function pairsToWrite(client: BaseLanguageClient, { document, line }: Target): Promise<WantedPairs | null> {
  const at = await ask<FrameAtResult>(client, TITLE, FRAME_AT_REQUEST, { uri: document.uri.toString(), line });
  return at === null ? null : choosePairs(client, document, at);
}

async function decideOnExisting(existing: readonly string[]): Promise<ExistingFiles> {
  const { message, detail } = existingInWords(existing);
  const overwrite = { title: 'Overwrite' };
  const keep = { title: existing.length === 1 ? 'Keep Existing One' : 'Keep Existing Ones' };
  const answer = await window.showWarningMessage(message, { modal: true, detail }, overwrite, keep);
  return answer === overwrite ? 'overwrite' : answer === keep ? 'keep' : 'cancel';
}

const OPEN_FIRST = 'Open First';
const SHOW_IN_EXPLORER = 'Show in Explorer';

async function tell(outcome: WritingOutcome, wanted: number, folder: Uri): Promise<void> {
  const words = outcomeInWords(outcome, wanted);
  const [name] = outcome.written;
  if (name === undefined) {
    void (outcome.failed === null ? window.showInformationMessage(words) : window.showErrorMessage(words));
    return;
  }
  const first = folderAt(folder).addressOf(name);
  // The explorer shows the folders of the workspace alone.
  const actions = workspace.getWorkspaceFolder(first) === undefined ? [OPEN_FIRST] : [OPEN_FIRST, SHOW_IN_EXPLORER];
  const show = outcome.failed === null ? window.showInformationMessage : window.showErrorMessage;
  const action = await show(words, ...actions);
  if (action === OPEN_FIRST) await commands.executeCommand('vscode.open', first);
  if (action === SHOW_IN_EXPLORER) await commands.executeCommand('revealInExplorer', first);
}
