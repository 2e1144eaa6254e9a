import { fragmentWords, type RemedyMaker } from './remedy';

/** Offers to write the pairs that are to be computed as files of their own. */
export const writePairs: RemedyMaker = ({ pairs = [] }, { frame }) => {
  const [worst] = pairs;
  if (worst === undefined) return [];
  const [f, g] = worst;
  const one = `Write ${fragmentWords(frame, f)} and ${fragmentWords(frame, g)} as a file of their own…`;
  const all = `Write the ${pairs.length} pairs named here as files of their own…`;
  const edits = () => [];
  return [{ title: one, edits, pairs: [worst] }, ...(pairs.length > 1 ? [{ title: all, edits, pairs }] : [])];
};
