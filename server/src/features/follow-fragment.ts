import { AtomFlag, type FrameTree } from '../formats/tree';
import { atomsOf } from '../model/fragment-set';
import { type FrameModel, sameElements } from '../model/frame-model';

/** Said of any fragment where there is nothing better to say. */
export const OTHER_ATOMS = 'the frame lists other atoms than the first one, so nothing tells which fragment is which';

/** Finds a fragment of the first frame again in later ones, whatever its number is there. */
export class FollowedFragment {
  readonly #first: FrameTree;
  readonly #number: number;
  readonly #formula: string;
  /** `chain:residue:number`, where the first frame has it once. */
  readonly #label: string | null;
  readonly #atoms: Int32Array;
  readonly #title: string;

  /** @param f fragment of the first frame, from 0 */
  constructor(first: FrameModel, f: number) {
    this.#first = first.tree;
    this.#number = f + 1;
    this.#formula = first.formulas[f]!;
    this.#atoms = atomsOf(first.fragments, f).slice();
    const label = first.labels[f]!;
    const isOnly = label !== '' && first.labels.indexOf(label) === first.labels.lastIndexOf(label);
    this.#label = isOnly ? label : null;
    this.#title = isOnly ? label : `fragment ${f + 1}`;
  }

  /** The fragment of another frame, from 0, or why it is not there. */
  find(model: FrameModel): number | string {
    if (model.pairs.tooDense) return 'the atoms lie too close together to tell fragments';
    const found = this.#label === null ? this.#findByAtoms(model) : this.#findByLabel(model, this.#label);
    if (typeof found === 'string') return found;
    const formula = model.formulas[found]!;
    if (formula !== this.#formula) return this.#otherwiseComposed(formula);
    if (model.usable[found] === 1) return found;
    return model.endless[found] ? `${this.#title} is bonded to its own periodic image` : this.#unreadable();
  }

  #unreadable(): string {
    return `${this.#title} has an atom that cannot be read`;
  }

  #otherwiseComposed(formula: string): string {
    return `${this.#title} is ${formula} here and ${this.#formula} in the first frame`;
  }

  #findByLabel({ labels }: FrameModel, label: string): number | string {
    const at = labels.indexOf(label);
    if (at < 0) return `there is no ${label}`;
    return labels.lastIndexOf(label) === at ? at : `there is more than one ${label}`;
  }

  /** By the places of its atoms in the file, which mean something only where the file lists the same atoms again. */
  #findByAtoms({ tree, fragments, formulas }: FrameModel): number | string {
    const atoms = this.#atoms;
    if (!sameElements(this.#first, tree) && tree !== this.#first) {
      const formula = formulas[this.#number - 1];
      if (formula === undefined) return `there is no ${this.#title}`;
      if (formula !== this.#formula) return this.#otherwiseComposed(formula);
      return OTHER_ATOMS;
    }
    if (atoms.some((atom) => (tree.atoms.flags[atom]! & (AtomFlag.unknownElement | AtomFlag.noPosition)) !== 0)) {
      return this.#unreadable();
    }
    const f = fragments.ofAtom[atoms[0]!]!;
    if (f < 0) return `atom ${atoms[0]! + 1} of ${this.#title} belongs to no fragment`;
    const members = atomsOf(fragments, f);
    if (members.length === atoms.length && members.every((atom, k) => atom === atoms[k])) return f;
    return `the atoms of ${this.#title} (${this.#formula}) do not stand as one: atom ${atoms[0]! + 1} is part of ${formulas[f]}`;
  }
}
