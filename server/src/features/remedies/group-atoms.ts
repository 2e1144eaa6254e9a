import { atomsOf } from '../../model/fragment-set';
import { CommentLine } from '../rewrite/comment-line';
import { offered, type RemedyMaker } from './remedy';

/** More fragments are not listed one by one. */
const MOST_FRAGMENTS = 500;

/** Lists the atoms that are in no declared fragment, as the fragments that their bonds form. */
export const groupAtoms: RemedyMaker = (_, { file, frame }) => {
  const { fragments, tree } = frame.model;
  const open = Array.from(fragments.declared.keys()).filter((f) => fragments.declared[f] === 0);
  if (open.length === 0 || open.length > MOST_FRAGMENTS) return [];
  const line = new CommentLine(file, tree);
  line.append(
    'fragment_atoms',
    open.map((f) => runs(atomsOf(fragments, f))),
  );
  return offered('List them as the fragments that their bonds form', line.edits());
};

/** Atom numbers in runs: `1-3,7`. */
function runs(atoms: ArrayLike<number>): string {
  const pieces: string[] = [];
  for (let k = 0; k < atoms.length; ) {
    let last = k;
    while (last + 1 < atoms.length && atoms[last + 1] === atoms[last]! + 1) last++;
    pieces.push(last === k ? String(atoms[k]! + 1) : `${atoms[k]! + 1}-${atoms[last]! + 1}`);
    k = last + 1;
  }
  return pieces.join(',');
}
