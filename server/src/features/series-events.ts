import type { Maybe } from './records';
import type { SeriesFrame } from './series';

export type SeriesEventKind = 'sign' | 'regime' | 'kT' | 'contact' | 'missing';

/** Something that happens from one frame to a later one; frames count from 1. */
export interface SeriesEvent {
  readonly kind: SeriesEventKind;
  /** The last frame before the change; of what is missing, the first frame without it. */
  readonly fromFrame: number;
  /** The first frame after the change; of what is missing, the last frame without it. */
  readonly toFrame: number;
  readonly what: string;
  /**
   * Of a sign or a crossing of kT: how far from one frame to the other, 0 to 1, by a straight line. Null where no line joins them:
   * frames lie between, one energy is a reference and the other an estimate, or another periodic image is nearest.
   */
  readonly fraction: Maybe;
  /** Distance of the centres there, by a straight line as well. */
  readonly distanceA: Maybe;
}

/** Energies below this share of kT have no sign: what the rounding of coordinates makes of a zero. */
const NO_SIGN_KT = 1e-6;

type WithEnergy = SeriesFrame & { readonly energyKJPerMol: number; readonly kTKJPerMol: number };

/** Sees the frames of a series in their order and tells what happens between them; keeps one frame of each kind. */
export class EventWatcher {
  readonly #events: SeriesEvent[] = [];
  #energy: WithEnergy | null = null;
  #sign = 0;
  #regime: SeriesFrame | null = null;
  #contact: SeriesFrame | null = null;
  /** Place of the last event of something missing. */
  #missing = -1;

  /** What happened up to now, in order. */
  list(): readonly SeriesEvent[] {
    return this.#events;
  }

  /** @param jumped whether another periodic image is nearest than in the frame before */
  see(frame: SeriesFrame, jumped: boolean): void {
    if (frame.missing !== null) this.#miss(frame.frame, frame.missing);
    if (hasEnergy(frame)) {
      this.#seeEnergy(frame, jumped);
      this.#energy = frame;
    }
    if (frame.regime !== null || hasEnergy(frame)) {
      this.#change('regime', this.#regime, frame, this.#regime?.regime, frame.regime, jumped);
      this.#regime = frame;
    }
    if (frame.contact !== null) {
      this.#change('contact', this.#contact, frame, this.#contact?.contact, frame.contact, jumped);
      this.#contact = frame;
    }
  }

  /** Frames in a row that miss the same for the same reason are one event. */
  #miss(frame: number, what: string): void {
    const events = this.#events;
    const last = events[this.#missing];
    if (last?.what === what && last.toFrame === frame - 1) events[this.#missing] = { ...last, toFrame: frame };
    else {
      this.#missing = events.length;
      events.push({ kind: 'missing', fromFrame: frame, toFrame: frame, what, fraction: null, distanceA: null });
    }
  }

  #change(
    kind: 'regime' | 'contact',
    before: SeriesFrame | null,
    after: SeriesFrame,
    was: string | null | undefined,
    is: string | null,
    jumped: boolean,
  ): void {
    if (before === null || was === is) return;
    const what = `${was ?? 'none'} → ${is ?? 'none'}${jumped ? ` (${OTHER_IMAGE})` : ''}`;
    const [fromFrame, toFrame] = [before.frame, after.frame];
    this.#events.push({ kind, fromFrame, toFrame, what, fraction: null, distanceA: null });
  }

  #seeEnergy(after: WithEnergy, jumped: boolean): void {
    const before = this.#energy;
    const sign = signOf(after);
    // An energy of zero between two signs changes nothing by itself; the change comes with the frame that leaves zero on the other side.
    const wasSign = this.#sign;
    if (sign !== 0) this.#sign = sign;
    if (before === null) return;
    if (sign * wasSign < 0) {
      const [e1, e2] = [before.energyKJPerMol * wasSign, after.energyKJPerMol * wasSign];
      this.#cross('sign', before, after, sign > 0 ? '− → +' : '+ → −', Math.max(0, e1), e2, jumped);
    }
    const was = isAbove(before);
    if (was === isAbove(after)) return;
    // The line from one energy to the other meets kT on the side of the larger one.
    const side = Math.sign((was ? before : after).energyKJPerMol);
    const [d1, d2] = [before, after].map((frame) => side * frame.energyKJPerMol - frame.kTKJPerMol) as [number, number];
    this.#cross('kT', before, after, was ? '|E| falls below kT' : '|E| rises above kT', d1, d2, jumped);
  }

  /** Notes that something passes through zero from `d1` to `d2`, which lie on different sides of it. */
  #cross(
    kind: 'sign' | 'kT',
    before: WithEnergy,
    after: WithEnergy,
    words: string,
    d1: number,
    d2: number,
    jumped: boolean,
  ): void {
    const isOneKind = before.energyFrom === after.energyFrom;
    const isLine = isOneKind && !jumped && after.frame === before.frame + 1;
    const fraction = isLine ? d1 / (d1 - d2) : null;
    const reasons = [
      ...(isOneKind ? [] : [`${before.energyFrom} before, ${after.energyFrom} after`]),
      ...(jumped ? [OTHER_IMAGE] : []),
    ];
    this.#events.push({
      kind,
      fromFrame: before.frame,
      toFrame: after.frame,
      what: `${words}${reasons.length === 0 ? '' : ` (${reasons.join('; ')})`}`,
      fraction,
      distanceA:
        fraction === null || before.distanceA === null || after.distanceA === null
          ? null
          : before.distanceA + fraction * (after.distanceA - before.distanceA),
    });
  }
}

const OTHER_IMAGE = 'another periodic image is nearest';

function hasEnergy(frame: SeriesFrame): frame is WithEnergy {
  return frame.energyKJPerMol !== null && frame.kTKJPerMol !== null;
}

function signOf({ energyKJPerMol, kTKJPerMol }: WithEnergy): number {
  return Math.abs(energyKJPerMol) <= NO_SIGN_KT * kTKJPerMol ? 0 : Math.sign(energyKJPerMol);
}

function isAbove({ energyKJPerMol, kTKJPerMol }: WithEnergy): boolean {
  return Math.abs(energyKJPerMol) >= kTKJPerMol;
}
