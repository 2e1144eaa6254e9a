import { atomsOf } from '../../model/fragment-set';
import { elementName } from '../../physics/elements';
import { likelyLoneCharge } from '../moments';
import { ION_CHARGE_E } from '../settings';
import type { RuleContext } from './context';

/** Reports, once a kind and file, fragments without a dipole, ions with one, lone atoms that are probably ions, endless fragments. */
export function reportFragmentFacts(context: RuleContext): void {
  const { moments, model, settings } = context.frame;
  const { formulas, fragments, usable, endless, tree } = model;
  for (let f = 0; f < fragments.count; f++) {
    const kind = formulas[f]!;
    const size = fragments.starts[f + 1]! - fragments.starts[f]!;
    if (endless[f] && context.isNews(`endless ${kind}`)) {
      context.findings.add(
        'fragment-endless',
        context.placeOf(f)!,
        () => `${context.nameOf(f)} is bonded to its own periodic image.`,
      );
    }
    if (!usable[f]) continue;
    if (moments.dipoleSource[f] === 'none' && fragments.count > 1 && context.isNews(`dipole ${kind}`)) {
      context.findings.add('dipole-missing', context.placeOf(f)!, () => {
        const reason = moments.dipoleNote[f] === '' ? '' : ` ${moments.dipoleNote[f]}`;
        return `Nothing gives the dipole of ${model.labels[f] === '' ? kind : context.nameOf(f)}.${reason}`;
      });
    }
    if (lacksDirection(context, f) && context.isNews(`direction ${kind}`)) {
      context.findings.add('dipole-direction', context.placeOf(f)!, () => {
        return `The dipole of ${context.nameOf(f)} has a size and no direction.`;
      });
    }
    const known = !Number.isNaN(moments.dipoleNormEA[f]!) && moments.dipoleSource[f] !== 'atom';
    if (known && Math.abs(moments.chargeE[f]!) > ION_CHARGE_E && context.isNews(`origin ${kind}`)) {
      context.findings.add('dipole-origin', context.placeOf(f)!, () => {
        return `${context.nameOf(f)} is charged; its dipole is taken about its centre (${settings.centre}).`;
      });
    }
    if (size === 1 && moments.chargeSource[f] === 'assumed' && likelyLoneCharge(model, f) !== 0) {
      const z = tree.atoms.element[fragments.members[fragments.starts[f]!]!]!;
      if (!context.isNews(`ion ${z}`)) continue;
      const charge = likelyLoneCharge(model, f);
      const usual = `${charge > 0 ? '+' : '−'}${Math.abs(charge)}`;
      context.findings.add(
        'ion-charge-missing',
        context.placeOf(f)!,
        () => `A lone atom of ${elementName(z)} is usually an ion of charge ${usual}.`,
      );
    }
  }
}

/** Whether a dipole has a size alone; a residue without hydrogens is told of those, which is the cause. */
function lacksDirection({ frame }: RuleContext, f: number): boolean {
  const { moments, model } = frame;
  if (!(moments.dipoleNormEA[f]! > 0) || !Number.isNaN(moments.dipoleEA[3 * f]!)) return false;
  return (
    model.tree.residues === null || atomsOf(model.fragments, f).some((atom) => model.tree.atoms.element[atom] === 1)
  );
}

/** Reports a cell narrower than twice the cutoff, once a file. */
export function reportSmallCell(context: RuleContext): void {
  const { model, settings } = context.frame;
  const { cell, tree } = model;
  if (cell === null || tree.cell === null) return;
  const width = Math.min(...cell.widthsA);
  if (width >= 2 * settings.cutoffA || !context.isNews('small cell')) return;
  context.findings.add('cell-small', tree.cell.span, () => {
    return `The cell is ${width.toFixed(2)} Å wide, less than twice the cutoff of ${settings.cutoffA} Å.`;
  });
}
