import { MOST_OUTLINED_FRAGMENTS } from '../features/outline';
import type { Analysed } from './analyser';
import type { Limits } from './settings';

type Measured = Pick<Analysed, 'tree' | 'settings' | 'fragments'>;

/** The parts that switch off by themselves, each in words. */
const PARTS: Readonly<Record<keyof Limits, string>> = {
  hints: 'hints at the ends of lines',
  lens: 'lenses above the frames',
  outline: 'fragments in the outline',
};

function atomsIn({ tree }: Measured): number {
  return tree.frames.reduce((sum, frame) => sum + frame.atoms.count, 0);
}

/** Whether a document has more atoms than a part is meant for. */
export function isOff(part: keyof Limits, measured: Measured): boolean {
  return atomsIn(measured) > measured.settings.limits[part];
}

/** A part that is off because of the size of a document. */
export interface PartOff {
  readonly part: string;
  /** In words, with what rules it. */
  readonly reason: string;
  /** Whether a setting rules it; a frame of very many fragments is never listed. */
  readonly isBySetting: boolean;
}

/** The parts that are off because a document is large; one that is never wanted is not missed. */
export function partsOff(measured: Measured): PartOff[] {
  const { tree, settings, fragments } = measured;
  const parts = Object.keys(PARTS) as (keyof Limits)[];
  return parts.flatMap((part): PartOff[] => {
    const limit = settings.limits[part];
    if (limit === 0) return [];
    // Of several frames the outline lists no fragments, whatever the size.
    if (part === 'outline' && tree.frames.length !== 1) return [];
    if (isOff(part, measured)) {
      return [{ part, reason: `${PARTS[part]} (polewise.limits.${part} is ${limit})`, isBySetting: true }];
    }
    if (part !== 'outline' || fragments <= MOST_OUTLINED_FRAGMENTS) return [];
    return [{ part, reason: `${PARTS[part]} (never more than ${MOST_OUTLINED_FRAGMENTS})`, isBySetting: false }];
  });
}
