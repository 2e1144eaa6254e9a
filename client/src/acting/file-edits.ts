import {
  WorkspaceEdit as CodeEdit,
  FilePermission,
  type QuickPickItem,
  type TextDocument,
  type TextEdit,
  window,
  workspace,
} from 'vscode';
import type { BaseLanguageClient, WorkspaceEdit } from 'vscode-languageclient';
import {
  ADD_DIPOLES_REQUEST,
  type EditAnswer,
  type FileSettingParams,
  INSERT_HEADER_REQUEST,
  type LineParams,
  MEDIA_REQUEST,
  type MediumEntry,
  SET_FILE_SETTING_REQUEST,
} from '../../../server/src/lsp/protocol';
import { nameOf } from '../documents';
import { request } from './asking';
import { type Target, targetOf } from './target';

const TITLE = 'Polewise: preparing the change';

/** Annotates the frame at the cursor with the keys that it lacks. */
export async function insertHeader(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await writableTarget(argument);
  if (target !== null) await change(client, target, INSERT_HEADER_REQUEST, {});
}

/** Writes down the dipoles that the frame at the cursor does not give itself. */
export async function addDipoles(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await writableTarget(argument);
  if (target !== null) await change(client, target, ADD_DIPOLES_REQUEST, {});
}

/** Asks for a temperature and writes it into the file. */
export async function chooseTemperature(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await writableTarget(argument);
  if (target === null) return;
  const value = await enterSetting(client, target, {
    key: 'temperature',
    title: 'Temperature',
    prompt: 'A number in kelvin, or with a unit such as 25 degC',
  });
  if (value !== null) await change(client, target, SET_FILE_SETTING_REQUEST, { key: 'temperature', value });
}

interface MediumItem extends QuickPickItem {
  /** `null` for a number to be entered. */
  readonly medium: string | null;
}

/** Asks for a medium, or a relative permittivity, and writes it into the file. */
export async function chooseMedium(client: BaseLanguageClient, argument: unknown): Promise<void> {
  const target = await writableTarget(argument);
  if (target === null) return;
  const media = await request<readonly MediumEntry[]>(client, TITLE, MEDIA_REQUEST, {});
  if (media === null) return;
  const items: MediumItem[] = [{ label: 'A number…', medium: null }, ...media.map(mediumItem)];
  const title = 'Medium';
  const chosen = await window.showQuickPick(items, { title, matchOnDescription: true });
  if (chosen === undefined) return;
  const prompt = 'Relative permittivity: a number from 1 up';
  const key = 'relative_permittivity';
  const value = chosen.medium ?? (await enterSetting(client, target, { key, title, prompt }));
  if (value !== null) await change(client, target, SET_FILE_SETTING_REQUEST, { key, value });
}

function mediumItem({ name, otherNames, relativePermittivity, temperatureK }: MediumEntry): MediumItem {
  const at = temperatureK === null ? '' : ` at ${temperatureK} K`;
  const names = otherNames.length === 0 ? '' : ` (${otherNames.join(', ')})`;
  return { label: name, description: `${relativePermittivity}${at}${names}`, medium: name };
}

interface SettingQuestion extends Pick<FileSettingParams, 'key'> {
  readonly title: string;
  readonly prompt: string;
}

/** Lets a value be entered; the server says what is wrong with it. */
async function enterSetting(
  client: BaseLanguageClient,
  { document, line }: Target,
  { key, title, prompt }: SettingQuestion,
): Promise<string | null> {
  const uri = document.uri.toString();
  const value = await window.showInputBox({
    title,
    prompt,
    validateInput: async (text) => {
      const params: FileSettingParams = { uri, line, key, value: text.trim() };
      const answer = await client.sendRequest<EditAnswer>(SET_FILE_SETTING_REQUEST, params);
      return answer.edit === null ? answer.reason : null;
    },
  });
  return value?.trim() || null;
}

/** The document that a command is to change; says so where it cannot be changed. */
async function writableTarget(argument: unknown): Promise<Target | null> {
  const target = await targetOf(argument);
  if (target === null || !(await isReadOnly(target.document))) return target;
  void window.showWarningMessage(`${nameOf(target.document.uri)} is read-only; nothing was changed.`);
  return null;
}

async function isReadOnly({ uri, isUntitled }: TextDocument): Promise<boolean> {
  if (isUntitled) return false;
  if (workspace.fs.isWritableFileSystem(uri.scheme) === false) return true;
  try {
    const { permissions = 0 } = await workspace.fs.stat(uri);
    return (permissions & FilePermission.Readonly) !== 0;
  } catch {
    // Deleted meanwhile, or of no file system: the edit will tell.
    return false;
  }
}

/** Applies the edit that the server makes for the newest text; shows the reason where there is none. */
async function change(
  client: BaseLanguageClient,
  { document, line }: Target,
  method: string,
  more: Omit<FileSettingParams, keyof LineParams> | Record<string, never>,
): Promise<void> {
  const params: LineParams = { uri: document.uri.toString(), line, ...more };
  for (let attempt = 0; attempt < 2; attempt++) {
    const { version } = document;
    const answer = await request<EditAnswer>(client, TITLE, method, params);
    if (answer === null) return;
    const { edit, reason } = answer;
    if (edit === null && document.version !== version) continue;
    if (edit === null) {
      void window.showInformationMessage(reason ?? 'There is nothing to change.');
      return;
    }
    const converted = await client.protocol2CodeConverter.asWorkspaceEdit(edit as WorkspaceEdit);
    if (edit.documentChanges.some(({ textDocument }) => textDocument.version !== document.version)) continue;
    if (!(await apply(document, converted.get(document.uri)))) {
      void window.showWarningMessage(`${nameOf(document.uri)} could not be changed; it is read-only or was closed.`);
    }
    return;
  }
  void window.showInformationMessage('The text changed meanwhile; nothing was changed by the command.');
}

/** Applies edits where the text is seen, if it is: an editor that was made read-only refuses them there, and only there. */
async function apply(document: TextDocument, edits: readonly TextEdit[]): Promise<boolean> {
  const editor = window.visibleTextEditors.find((other) => other.document === document);
  if (editor === undefined) {
    const unseen = new CodeEdit();
    unseen.set(document.uri, [...edits]);
    return workspace.applyEdit(unseen);
  }
  const { version } = document;
  const isTaken = await editor.edit((edit) => {
    for (const { range, newText } of edits) edit.replace(range, newText);
  });
  return isTaken && document.version !== version;
}
