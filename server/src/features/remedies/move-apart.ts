import { moveApart } from '../rewrite/move-fragment';
import { fragmentWords, type RemedyMaker } from './remedy';

/** Moves one of two fragments that clash, or have atoms at one point, out along the line of their centres. */
export const moveOut: RemedyMaker = ({ pairs }, { file, frame }) => {
  const [f, g] = pairs?.[0] ?? [-1, -1];
  if (f < 0 || g < 0 || f === g) return [];
  const move = moveApart(file, frame, f, g);
  if (move === null) return [];
  const from = fragmentWords(frame, move.fragment === f ? g : f);
  const title = `Move ${fragmentWords(frame, move.fragment)} ${move.distanceA.toFixed(2)} Å away from ${from}`;
  return [{ title, edits: move.edits }];
};
