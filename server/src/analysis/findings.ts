import { type Finding, FindingCollector } from '../base/finding';
import { finish, type Steps } from '../base/steps';
import type { CoordinateTree } from '../formats/tree';
import { type FrameAnalysis, pairsOf } from './frame-analysis';
import type { Pair } from './pair';
import { NoteKind, noteOf, PairNotes } from './pair-notes';
import { reportClashes, reportCoincident, reportJoined } from './rules/contacts';
import { RuleContext } from './rules/context';
import { reportDipolesAgainstCharges } from './rules/dipole-charges';
import { reportDipolesAgainstKnowledge } from './rules/dipole-expected';
import { reportFragmentFacts, reportSmallCell } from './rules/fragment-facts';
import { reportChargeSum, reportDipoleSum, reportElectronParity } from './rules/frame-charge';
import { reportLengthUnit } from './rules/length-unit';
import { reportNearField } from './rules/near-field';
import { reportResidues } from './rules/residues';
import type { PairSurvey } from './survey';

/** Gathers the findings of a file frame by frame. */
export class FileFindings {
  readonly #file: CoordinateTree;
  readonly #findings = new FindingCollector();
  readonly #said = new Set<string>();
  readonly #silenced = new Set<string>();

  constructor(file: CoordinateTree) {
    this.#file = file;
    for (const problem of file.problems) this.#findings.push(problem);
  }

  /** Adds the findings of a frame whose pairs have been looked through. */
  addFrame(frame: FrameAnalysis, survey: PairSurvey): void {
    finish(this.frameSteps(frame, survey));
  }

  /** The same with pauses. */
  *frameSteps(frame: FrameAnalysis, { notes }: PairSurvey): Steps<void> {
    const context = yield* this.#begin(frame);
    yield;
    if (context !== null) yield* reportPairs(context, notes);
  }

  /**
   * Yields every pair of the frame's list in order, and adds the findings of the frame when the last one is taken: a caller who
   * wants the pairs anyway need not have them looked through as well.
   */
  *pairsOfFrame(frame: FrameAnalysis): Generator<Pair> {
    const context = finish(this.#begin(frame));
    const notes = new PairNotes();
    for (const pair of pairsOf(frame)) {
      const kind = noteOf(frame.system, pair);
      if (kind !== NoteKind.none) notes.add(pair.first, pair.second, kind, pair.strengthKJPerMol);
      yield pair;
    }
    if (context !== null) finish(reportPairs(context, notes));
  }

  /** Reports all that needs no pairs; `null` where nothing should be said of them. */
  *#begin(frame: FrameAnalysis): Steps<RuleContext | null> {
    const { model } = frame;
    for (const code of model.frameNotes.silence) this.#silenced.add(code);
    for (const problem of frame.problems.list()) this.#findings.push(problem);
    const context = new RuleContext(this.#file, frame, this.#findings, this.#said);
    reportElectronParity(context);
    reportResidues(context);
    yield;
    // Distances in the wrong unit would bring a finding for every atom, and fragments that overlap touch: one cause each.
    if (reportLengthUnit(context) || frame.problems.count('fragments-overlap') > 0) return null;
    reportCoincident(context);
    yield;
    reportChargeSum(context);
    reportDipoleSum(context);
    reportDipolesAgainstCharges(context);
    reportDipolesAgainstKnowledge(context);
    yield;
    // A fragment that could not be read whole is of no kind that anything should be said of.
    if (!this.#hasErrors(frame)) reportFragmentFacts(context);
    reportSmallCell(context);
    return context;
  }

  #hasErrors({ model, problems }: FrameAnalysis): boolean {
    if (problems.list().some((problem) => problem.severity === 'error')) return true;
    const { starts } = this.#file.lines;
    const [from, to] = [starts[model.tree.firstLine]!, starts[model.tree.endLine]!];
    return this.#file.problems.some(({ severity, start }) => severity === 'error' && start >= from && start < to);
  }

  /** Everything found so far, in the order of the text, without what the file does not want to hear. */
  list(): Finding[] {
    return this.#findings
      .list()
      .filter((entry) => !this.#silenced.has(entry.code))
      .map(({ more, ...entry }) =>
        more === undefined ? entry : { ...entry, message: `${entry.message} (${more} more like this are not listed.)` },
      );
  }
}

function* reportPairs(context: RuleContext, notes: PairNotes): Steps<void> {
  reportJoined(context, reportClashes(context, notes));
  yield;
  reportNearField(context, notes);
}
