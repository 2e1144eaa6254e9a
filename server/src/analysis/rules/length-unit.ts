import { type ClosePairs, findClosePairs, solidAtoms } from '../../model/close-pairs';
import type { FrameModel } from '../../model/frame-model';
import { BOHR_A } from '../../physics/constants';
import { isMetal, isNobleGas } from '../../physics/elements';
import type { RuleContext } from './context';

const NANOMETRE_A = 10;
/** Nearest neighbours of real atoms are never typically closer than this, Å. */
const CLOSEST_USUAL_A = 0.5;

/**
 * Reports coordinates that seem to be in bohr or nanometres, or denser than any matter. Returns true where it does: the distances
 * then mean nothing, and no finding that rests on them should follow.
 */
export function reportLengthUnit(context: RuleContext): boolean {
  const { model } = context.frame;
  const atoms = solidAtoms(model.tree.atoms);
  if (atoms.length < 2) return false;
  if (model.pairs.tooDense || typicalDistanceIsTiny(model.pairs, atoms.length)) {
    const scaled = scaledPairs(model, NANOMETRE_A);
    if (!scaled.tooDense && scaled.bonded.includes(1) && !typicalDistanceIsTiny(scaled, atoms.length)) {
      context.findings.add(
        'unit-nanometre',
        context.headSpan(),
        () => 'Neighbouring atoms are less than 0.5 Å apart, and bonded if the numbers are nanometres.',
      );
      return true;
    }
  }
  if (model.pairs.tooDense) {
    context.findings.add(
      'too-dense',
      context.headSpan(),
      () => `${atoms.length} atoms lie within a space that holds a small part of them.`,
    );
    return true;
  }
  if (!model.pairs.bonded.includes(1)) {
    const scaled = scaledPairs(model, BOHR_A);
    if (looksMolecular(model, scaled, atoms.length)) {
      context.findings.add(
        'unit-bohr',
        context.headSpan(),
        () => 'No two atoms are bonded as read, and most are if the numbers are bohr.',
      );
      return true;
    }
  }
  return false;
}

function scaledPairs(model: FrameModel, factor: number): ClosePairs {
  return findClosePairs(
    model.tree.atoms,
    model.tree.atoms.positionA.map((value) => value * factor),
    null,
  );
}

/** Whether more than half of the atoms have a neighbour closer than half an ångström. */
function typicalDistanceIsTiny(pairs: ClosePairs, atoms: number): boolean {
  const crowded = new Set<number>();
  for (let k = 0; k < pairs.count; k++) {
    if (pairs.distanceA[k]! >= CLOSEST_USUAL_A) continue;
    crowded.add(pairs.first[k]!).add(pairs.second[k]!);
  }
  return crowded.size > atoms / 2;
}

/** Whether at least half of the atoms are bonded, among them an H or C to a non-metal that is no noble gas. */
function looksMolecular(model: FrameModel, pairs: ClosePairs, atoms: number): boolean {
  const { element } = model.tree.atoms;
  const bonded = new Set<number>();
  let organic = false;
  const isPartner = (z: number) => !isMetal(z) && !isNobleGas(z);
  for (let k = 0; k < pairs.count; k++) {
    if (!pairs.bonded[k]) continue;
    const [i, j] = [pairs.first[k]!, pairs.second[k]!];
    bonded.add(i).add(j);
    const [z1, z2] = [element[i]!, element[j]!];
    organic ||= ((z1 === 1 || z1 === 6) && isPartner(z2)) || ((z2 === 1 || z2 === 6) && isPartner(z1));
  }
  return organic && bonded.size >= atoms / 2;
}
