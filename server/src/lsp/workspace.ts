import type { FrameAnalysis } from '../analysis/frame-analysis';
import { frameIndexAt } from '../features/frame-at';
import { type HoverData, hoverSteps } from '../features/hover';
import { type Hint, hintSteps } from '../features/inlay-hints';
import type { Language } from '../formats/tree';
import { type Analysed, analyseDocument } from './analyser';
import { type Clock, Outdated, Pace } from './pace';
import type { ServerSettings } from './settings';
import { changeDocument, type OpenDocument, openDocument, type TextChange } from './text-store';

/** What the surroundings give: ways to wait and to tell time, and the settings of a document (the same object while they are the same). */
export interface Surroundings {
  readonly clock: Clock;
  settingsOf(uri: string): Promise<ServerSettings>;
}

interface Entry {
  document: OpenDocument;
  /** Rises with every change of text or settings: what was begun before is outdated. */
  round: number;
  running: Promise<Analysed | null> | null;
  runningRound: number;
  /** The analysis of the newest version, once it is done. */
  latest: Analysed | null;
  /** The last one done, of whatever version, for the next to go on from. */
  earlier: Analysed | null;
}

/** What is told of a document's analysis as it goes on. */
export interface Listener {
  busy(uri: string): void;
  ready(analysed: Analysed): void;
  failed(uri: string, reason: string): void;
}

/**
 * The open documents and their analyses. One analysis runs for a document at a time; a change makes it outdated, and the next one starts
 * when it has noticed. A result is never given for another version than the newest.
 */
export class Workspace {
  readonly #entries = new Map<string, Entry>();
  readonly #surroundings: Surroundings;
  readonly #listener: Listener;

  constructor(surroundings: Surroundings, listener: Listener) {
    this.#surroundings = surroundings;
    this.#listener = listener;
  }

  get uris(): string[] {
    return [...this.#entries.keys()];
  }

  document(uri: string): OpenDocument | undefined {
    return this.#entries.get(uri)?.document;
  }

  open(uri: string, language: Language, version: number, text: string): void {
    const round = (this.#entries.get(uri)?.round ?? 0) + 1;
    this.#entries.set(uri, {
      document: openDocument(uri, language, version, text),
      round,
      running: null,
      runningRound: -1,
      latest: null,
      earlier: null,
    });
    void this.analysed(uri);
  }

  change(uri: string, version: number, changes: readonly TextChange[]): void {
    const entry = this.#entries.get(uri);
    if (entry === undefined) return;
    entry.document = changeDocument(entry.document, version, changes);
    this.#outdate(uri, entry);
  }

  /** Frees everything that a document held. */
  close(uri: string): void {
    const entry = this.#entries.get(uri);
    if (entry === undefined) return;
    entry.round++;
    entry.latest = null;
    entry.earlier = null;
    this.#entries.delete(uri);
  }

  /** Analyses everything anew, after a change of settings. */
  refresh(): void {
    for (const [uri, entry] of this.#entries) this.#outdate(uri, entry);
  }

  #outdate(uri: string, entry: Entry): void {
    entry.round++;
    entry.latest = null;
    void this.analysed(uri);
  }

  /** The analysis of the newest version; `null` where the document is closed or changes before it is done. */
  async analysed(uri: string): Promise<Analysed | null> {
    const entry = this.#entries.get(uri);
    if (entry === undefined) return null;
    const { round } = entry;
    if (entry.latest !== null) return entry.latest;
    if (entry.running === null || entry.runningRound !== round) {
      entry.runningRound = round;
      entry.running = this.#run(uri, entry, round);
    }
    return entry.running;
  }

  /** The last analysis that was finished, of whatever version; names and fragments can be read from it, places in the text not. */
  lastAnalysed(uri: string): Analysed | null {
    return this.#entries.get(uri)?.earlier ?? null;
  }

  /** A frame of an analysis, as long as that is the newest; `null` where it is not any more. */
  frame(analysed: Analysed, index: number): Promise<FrameAnalysis | null> {
    return this.paced(analysed, (pace) => analysed.frames.frame(index, pace));
  }

  /** Does work on an analysis in slices, as long as that is the newest and the result still wanted; `null` where it is not any more. */
  async paced<T>(
    analysed: Analysed,
    work: (pace: Pace) => Promise<T>,
    isWanted: () => boolean = () => true,
  ): Promise<T | null> {
    const pace = new Pace(this.#surroundings.clock, () => this.#isNewest(analysed) && isWanted());
    try {
      return this.#isNewest(analysed) ? await work(pace) : null;
    } catch (error) {
      if (error instanceof Outdated) return null;
      throw error;
    }
  }

  #isNewest(analysed: Analysed): boolean {
    return this.#entries.get(analysed.document.uri)?.latest === analysed;
  }

  /** The hints between two lines of an analysis, as long as that is the newest. */
  async hints(analysed: Analysed, firstLine: number, endLine: number): Promise<Hint[]> {
    const pace = new Pace(this.#surroundings.clock, () => this.#isNewest(analysed));
    const found: Hint[] = [];
    try {
      for (const { index, firstLine: from, endLine: to } of analysed.tree.frames) {
        if (to <= firstLine || from >= endLine) continue;
        const frame = await analysed.frames.frame(index, pace);
        const { hints } = analysed.settings;
        const [first, end] = [Math.max(from, firstLine), Math.min(to, endLine)];
        found.push(...(await pace.finish(hintSteps(analysed.tree, frame, first, end, hints))));
      }
      return found;
    } catch (error) {
      if (error instanceof Outdated) return [];
      throw error;
    }
  }

  /** What to show at an offset of an analysis, as long as that is the newest; `null` where it is not any more, or there is nothing. */
  async hover(analysed: Analysed, offset: number): Promise<HoverData | null> {
    const pace = new Pace(this.#surroundings.clock, () => this.#isNewest(analysed));
    const index = frameIndexAt(analysed.tree, offset);
    try {
      const frame = index < 0 ? null : await analysed.frames.frame(index, pace);
      return await pace.finish(hoverSteps(analysed.tree, offset, frame));
    } catch (error) {
      if (error instanceof Outdated) return null;
      throw error;
    }
  }

  async #run(uri: string, entry: Entry, round: number): Promise<Analysed | null> {
    const isWanted = () => this.#entries.get(uri) === entry && entry.round === round;
    this.#listener.busy(uri);
    try {
      const settings = await this.#surroundings.settingsOf(uri);
      if (!isWanted()) return null;
      const pace = new Pace(this.#surroundings.clock, isWanted);
      const analysed = await analyseDocument(entry.document, settings, pace, entry.earlier);
      if (!isWanted()) return null;
      entry.latest = analysed;
      entry.earlier = analysed;
      this.#listener.ready(analysed);
      return analysed;
    } catch (error) {
      if (!(error instanceof Outdated) && isWanted()) this.#listener.failed(uri, (error as Error).message);
      return null;
    }
  }
}
