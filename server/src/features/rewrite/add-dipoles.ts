import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import type { CoordinateTree } from '../../formats/tree';
import { dipoleOffers } from './dipole-offers';
import { dipoleEdits } from './write-dipoles';

/**
 * Writes down the published or estimated dipole of every fragment of a frame of which the file gives none, with its source; a sentence
 * where there is nothing to add.
 */
export function addDipolesEdits(file: CoordinateTree, frame: FrameAnalysis): readonly TextEdit[] | string {
  const offers = dipoleOffers(frame);
  if (offers.length === 0) {
    const { dipoleSource } = frame.moments;
    return dipoleSource.includes('none')
      ? 'Neither the library nor an estimate gives the dipoles that are missing.'
      : 'The file gives the dipole of every fragment, or charges that give it.';
  }
  const edits = dipoleEdits(file, frame, offers);
  return typeof edits !== 'string' && edits.length === 0
    ? 'The dipoles have no known direction, so they cannot be written as vectors.'
    : edits;
}
