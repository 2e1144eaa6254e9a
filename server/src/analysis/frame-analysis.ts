import { FindingCollector } from '../base/finding';
import { finish, type Steps } from '../base/steps';
import type { CoordinateTree } from '../formats/tree';
import { type FirstFrame, type FrameModel, frameModelSteps, inheritableFragments } from '../model/frame-model';
import { type Moments, momentSteps } from './moments';
import { evaluatePair, type Pair } from './pair';
import { isWithinCutoff, Partners } from './partners';
import type { AnalysisRequest, AnalysisSettings, Knowledge } from './settings';
import { type Part, type System, systemSteps } from './system';

/** A frame with its fragments, their moments, and the means to look at their pairs. */
export interface FrameAnalysis {
  readonly index: number;
  readonly model: FrameModel;
  readonly moments: Moments;
  readonly settings: AnalysisSettings;
  readonly knowledge: Knowledge | null;
  readonly system: System;
  readonly partners: Partners;
  /** Problems met while understanding the frame (annotation, cell, fragments). */
  readonly problems: FindingCollector;
}

/** Analyses the frames of a file one after another; later frames may take fragments, names and kinds from the first. */
export class FileAnalysis {
  readonly file: CoordinateTree;
  readonly request: AnalysisRequest;
  readonly #companion: Part | null;
  #first: FirstFrame | null = null;

  /** @param companion fragments of another file that join every frame */
  constructor(file: CoordinateTree, request: AnalysisRequest, companion: Part | null = null) {
    this.file = file;
    this.request = request;
    this.#companion = companion;
  }

  frame(index: number): FrameAnalysis {
    return finish(this.frameSteps(index));
  }

  /** The same with pauses. */
  *frameSteps(index: number): Steps<FrameAnalysis> {
    const problems = new FindingCollector();
    const first = index === 0 ? null : (this.#first ?? (yield* this.#firstSteps()));
    const tree = this.file.frames[index]!;
    const model = yield* frameModelSteps(this.file, tree, first, this.request.periodic, problems);
    if (index === 0) this.#first = { tree, fragments: inheritableFragments(model) };
    const settings = settingsOf(this.request, model);
    const moments = yield* momentSteps(model, settings.centre, this.request.knowledge);
    const parts = [{ model, moments }, ...(this.#companion === null ? [] : [this.#companion])];
    const system = yield* systemSteps(parts, settings, this.request.knowledge);
    yield;
    const partners = new Partners(system);
    yield;
    const { knowledge } = this.request;
    return { index, model, moments, settings, knowledge, system, partners, problems };
  }

  *#firstSteps(): Steps<FirstFrame> {
    const tree = this.file.frames[0]!;
    const model = yield* frameModelSteps(this.file, tree, null, this.request.periodic, new FindingCollector());
    this.#first = { tree, fragments: inheritableFragments(model) };
    return this.#first;
  }
}

/** The settings that hold for a frame: what was asked for expressly beats the file, which beats the rest. */
function settingsOf({ forced, settings }: AnalysisRequest, { frameNotes }: FrameModel): AnalysisSettings {
  return {
    ...settings,
    temperatureK: forced.temperatureK ?? frameNotes.temperatureK ?? settings.temperatureK,
    relativePermittivity:
      forced.relativePermittivity ?? frameNotes.relativePermittivity ?? settings.relativePermittivity,
  };
}

/** Every pair of the list, in order of first and second fragment. */
export function* pairsOf({ system, partners }: Pick<FrameAnalysis, 'system' | 'partners'>): Generator<Pair> {
  for (let f = 0; f < system.count; f++) {
    for (const g of partners.of(f, true)) {
      const pair = evaluatePair(system, f, g);
      if (pair.contact !== 'apart' || isWithinCutoff(system, f, g, pair.distanceA)) yield pair;
    }
  }
}
