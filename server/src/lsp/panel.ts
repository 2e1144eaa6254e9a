import type { Analysed } from './analyser';
import type { Pace } from './pace';
import { PanelAnswers } from './panel-answers';
import {
  FRAGMENT_LINES_REQUEST,
  type FragmentLinesParams,
  PANEL_MATRIX_REQUEST,
  PANEL_PLACE_REQUEST,
  PANEL_ROWS_REQUEST,
  PANEL_SERIES_REQUEST,
  type PanelFrameParams,
  type PanelPlaceParams,
  type PanelRowsParams,
  type PanelSeriesParams,
} from './protocol';
import type { Session } from './session';

/** Answers what the panel asks, always for the newest version of the text: null where that is not at hand any more. */
export function servePanel(session: Session): void {
  const { connection, workspace } = session;
  const known = new WeakMap<Analysed, PanelAnswers>();

  const answersOf = (analysed: Analysed): PanelAnswers => {
    let answers = known.get(analysed);
    if (answers === undefined) {
      answers = new PanelAnswers(analysed);
      known.set(analysed, answers);
    }
    return answers;
  };

  const serve = <P extends { readonly uri: string }, R>(
    method: string,
    answer: (answers: PanelAnswers, params: P, pace: Pace) => Promise<R | null>,
  ) =>
    connection.onRequest(method, async (params: P): Promise<R | null> => {
      const analysed = await workspace.analysed(params.uri);
      if (analysed === null) return null;
      return workspace.paced(analysed, (pace) => answer(answersOf(analysed), params, pace));
    });

  serve(PANEL_PLACE_REQUEST, (answers, params: PanelPlaceParams, pace) => answers.place(params, session.theme, pace));
  serve(PANEL_ROWS_REQUEST, (answers, params: PanelRowsParams, pace) => answers.rows(params, pace));
  serve(PANEL_MATRIX_REQUEST, (answers, params: PanelFrameParams, pace) => answers.matrix(params, pace));
  serve(PANEL_SERIES_REQUEST, (answers, params: PanelSeriesParams, pace) => answers.series(params, pace));
  serve(FRAGMENT_LINES_REQUEST, (answers, params: FragmentLinesParams, pace) => answers.lines(params, pace));
}
