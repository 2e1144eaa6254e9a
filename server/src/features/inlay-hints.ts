import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Steps } from '../base/steps';
import { atomAtLine } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import { DEBYE_E_A } from '../physics/constants';
import { fragmentTitle } from './fragment-title';
import { pairsOfFragment } from './partner-view';

/** Which hints are wanted. */
export interface HintKinds {
  readonly fragments: boolean;
  readonly contacts: boolean;
}

/** A few words at the end of a line. */
export interface Hint {
  readonly offset: number;
  readonly text: string;
  readonly tooltip: string;
}

/** A contact farther than this many sums of van der Waals radii is none. */
const WIDEST_CONTACT = 1.1;

/**
 * The hints for the atom lines of a frame from `firstLine` to before `endLine`: at the first line of a fragment its name and dipole, at the atom
 * that comes closest to another fragment that one and the distance. Always as many decimals, so that nothing jitters while numbers change.
 */
export function* hintSteps(
  file: CoordinateTree,
  frame: FrameAnalysis,
  firstLine: number,
  endLine: number,
  kinds: HintKinds,
): Steps<Hint[]> {
  const { model } = frame;
  const { tree, fragments } = model;
  const hints = new Map<number, Hint[]>();
  const add = (atom: number, text: string, tooltip: string) => {
    const line = tree.atoms.line[atom]!;
    if (line < firstLine || line >= endLine) return;
    const list = hints.get(line) ?? [];
    list.push({ offset: tree.fieldSpan(atom, 'line').end, text, tooltip });
    hints.set(line, list);
  };
  const seen = new Set<number>();
  for (let line = firstLine; line < Math.min(endLine, file.lines.count); line++) {
    const atom = atomAtLine(tree, line);
    const f = atom < 0 ? -1 : fragments.ofAtom[atom]!;
    if (f < 0 || seen.has(f)) continue;
    seen.add(f);
    const first = fragments.members[fragments.starts[f]!]!;
    if (kinds.fragments) add(first, fragmentText(frame, f), 'Fragment, its dipole, and where that comes from');
    if (kinds.contacts) {
      const contact = closestContact(frame, f);
      if (contact !== null) add(contact.atom, contact.text, contact.tooltip);
      yield;
    }
  }
  return [...hints.keys()].sort((a, b) => a - b).flatMap((line) => hints.get(line)!);
}

function fragmentText({ model, moments }: FrameAnalysis, f: number): string {
  const name = fragmentTitle(model, f);
  const size = moments.dipoleNormEA[f]! / DEBYE_E_A;
  if (moments.dipoleSource[f] === 'atom') {
    const charge = moments.chargeE[f]!;
    return `${name} ${charge > 0 ? '+' : charge < 0 ? '−' : ''}${Math.abs(charge).toFixed(2)} e ${moments.chargeSource[f]}`;
  }
  return Number.isNaN(size) ? `${name}, no dipole` : `${name} ${size.toFixed(2)} D ${moments.dipoleSource[f]}`;
}

function closestContact(frame: FrameAnalysis, f: number): { atom: number; text: string; tooltip: string } | null {
  const { system, model } = frame;
  let best: { ratio: number; own: number; other: number; partner: number; distanceA: number } | null = null;
  for (const pair of pairsOfFragment(frame, f)) {
    if (pair.closest1 < 0 || pair.contact === 'bonded' || !(pair.contactRatio < (best?.ratio ?? WIDEST_CONTACT)))
      continue;
    const isFirst = pair.first === f;
    best = {
      ratio: pair.contactRatio,
      own: isFirst ? pair.closest1 : pair.closest2,
      other: isFirst ? pair.closest2 : pair.closest1,
      partner: isFirst ? pair.second : pair.first,
      distanceA: pair.closestA,
    };
  }
  if (best === null || best.partner >= model.fragments.count) return null;
  const partner = fragmentTitle(model, best.partner);
  const atom = system.atomNumbers[best.own]! - 1;
  const tooltip = `Closest contact with another fragment: atom ${system.atomNumbers[best.other]}, ${best.ratio.toFixed(2)} of the sum of van der Waals radii`;
  return { atom, text: `${best.distanceA.toFixed(2)} Å to ${partner}`, tooltip };
}
