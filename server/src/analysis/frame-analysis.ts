import { FindingCollector } from '../base/finding';
import type { CoordinateTree } from '../formats/tree';
import { buildFrameModel, type FirstFrame, type FrameModel, inheritableFragments } from '../model/frame-model';
import { computeMoments, type Moments } from './moments';
import { evaluatePair, type Pair } from './pair';
import { isWithinCutoff, Partners } from './partners';
import type { AnalysisRequest, AnalysisSettings } from './settings';
import { buildSystem, type Part, type System } from './system';

/** A frame with its fragments, their moments, and the means to look at their pairs. */
export interface FrameAnalysis {
  readonly index: number;
  readonly model: FrameModel;
  readonly moments: Moments;
  readonly settings: AnalysisSettings;
  readonly system: System;
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
    const problems = new FindingCollector();
    const first = index === 0 ? null : this.#firstFrame();
    const model = buildFrameModel(this.file, this.file.frames[index]!, first, this.request.periodic, problems);
    if (index === 0) this.#first = { tree: model.tree, fragments: inheritableFragments(model) };
    const { forced } = this.request;
    const settings = {
      ...this.request.settings,
      temperatureK: forced.temperatureK ?? model.frameNotes.temperatureK ?? this.request.settings.temperatureK,
      relativePermittivity:
        forced.relativePermittivity ??
        model.frameNotes.relativePermittivity ??
        this.request.settings.relativePermittivity,
    };
    const moments = computeMoments(model, settings.centre);
    const parts = [{ model, moments }, ...(this.#companion === null ? [] : [this.#companion])];
    return { index, model, moments, settings, system: buildSystem(parts, settings), problems };
  }

  #firstFrame(): FirstFrame {
    if (this.#first === null) {
      const tree = this.file.frames[0]!;
      const model = buildFrameModel(this.file, tree, null, this.request.periodic, new FindingCollector());
      this.#first = { tree, fragments: inheritableFragments(model) };
    }
    return this.#first;
  }
}

/** Every pair of the list, in order of first and second fragment. */
export function* pairsOf(system: System): Generator<Pair> {
  const partners = new Partners(system);
  for (let f = 0; f < system.count; f++) {
    for (const g of partners.of(f, true)) {
      const pair = evaluatePair(system, f, g);
      if (pair.contact !== 'apart' || isWithinCutoff(system, f, g, pair.distanceA)) yield pair;
    }
  }
}
