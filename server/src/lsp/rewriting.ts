import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { TextEdit } from '../base/finding';
import { frameIndexAt } from '../features/frame-at';
import { addDipolesEdits } from '../features/rewrite/add-dipoles';
import { fileSettingEdits } from '../features/rewrite/file-setting';
import { headerEdits } from '../features/rewrite/insert-header';
import type { Analysed } from './analyser';
import { rangeOf } from './diagnostics';
import {
  ADD_DIPOLES_REQUEST,
  type EditAnswer,
  type FileSettingParams,
  INSERT_HEADER_REQUEST,
  type LineParams,
  SET_FILE_SETTING_REQUEST,
} from './protocol';
import type { Session } from './session';
import { offsetOf } from './text-store';

/** Answers the commands that write annotation: with an edit for the version that was looked at, or with the reason why there is none. */
export function serveRewriting(session: Session): void {
  const { connection } = session;
  connection.onRequest(INSERT_HEADER_REQUEST, (params: LineParams) =>
    answer(session, params, ({ tree }, frame) => headerEdits(tree, frame)),
  );
  connection.onRequest(ADD_DIPOLES_REQUEST, (params: LineParams) =>
    answer(session, params, ({ tree }, frame) => addDipolesEdits(tree, frame)),
  );
  connection.onRequest(SET_FILE_SETTING_REQUEST, (params: FileSettingParams) =>
    answer(session, params, ({ tree }, { model }) => {
      if (params.key !== 'temperature' && params.key !== 'relative_permittivity') return 'There is no such setting.';
      return fileSettingEdits(tree, model.tree, params.key, String(params.value));
    }),
  );
}

async function answer(
  { workspace }: Session,
  { uri, line }: LineParams,
  editsOf: (analysed: Analysed, frame: FrameAnalysis) => readonly TextEdit[] | string,
): Promise<EditAnswer> {
  const analysed = await workspace.analysed(uri);
  if (analysed === null) return refusal('The text has changed meanwhile, or is not open.');
  if (analysed.limited) return refusal('The file is larger than polewise.analysisLimit allows to analyse.');
  const { tree, document } = analysed;
  if (tree.frames.length === 0) return refusal('The file holds no frame.');
  const at = frameIndexAt(tree, offsetOf(document, { line, character: 0 }));
  // Between frames, and before the first, the nearest one before is meant.
  const before = tree.frames.reduce((last, { firstLine, index }) => (firstLine <= line ? index : last), 0);
  const frame = await workspace.frame(analysed, at < 0 ? before : at);
  if (frame === null) return refusal('The text has changed meanwhile.');
  const edits = editsOf(analysed, frame);
  if (typeof edits === 'string') return refusal(edits);
  const { version, lines } = document;
  const written = edits.map((edit) => ({ range: rangeOf(lines, edit), newText: edit.text }));
  return { edit: { documentChanges: [{ textDocument: { uri, version }, edits: written }] }, reason: null };
}

function refusal(reason: string): EditAnswer {
  return { edit: null, reason };
}
