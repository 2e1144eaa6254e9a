import { symbolOf } from '../../physics/elements';
import { evaluatePair, type Pair } from '../pair';
import { NoteKind, type PairNotes } from '../pair-notes';
import { type RuleContext, shown } from './context';

/** Atoms closer than this are at one point, Å. */
const COINCIDENT_A = 0.1;

/** Reports atoms at one point, once for each atom that lies on an earlier one. */
export function reportCoincident(context: RuleContext): void {
  const { pairs, tree, fragments } = context.frame.model;
  const reported = new Set<number>();
  for (let k = 0; k < pairs.count; k++) {
    if (pairs.distanceA[k]! >= COINCIDENT_A) continue;
    const [i, j] = [pairs.first[k]!, pairs.second[k]!];
    if (reported.has(j)) continue;
    reported.add(j);
    context.findings.add(
      'atoms-coincident',
      tree.fieldSpan(j, 'line'),
      () => `Atom ${j + 1} is ${shown(pairs.distanceA[k]!)} Å from atom ${i + 1}.`,
      () => ({
        related: [{ ...tree.fieldSpan(i, 'line'), message: `Atom ${i + 1}` }],
        pairs: [[fragments.ofAtom[i]!, fragments.ofAtom[j]!]],
      }),
    );
  }
}

/** Reports each clash of two fragments at the closest atom of the second; returns the pairs that clash. */
export function reportClashes(context: RuleContext, notes: PairNotes): Set<string> {
  const clashing = new Set<string>();
  const clashes = notes.countOf(NoteKind.clash);
  for (let k = 0; k < notes.count && clashing.size < clashes; k++) {
    if (notes.kind[k] !== NoteKind.clash) continue;
    const pair = evaluatePair(context.frame.system, notes.first[k]!, notes.second[k]!);
    clashing.add(pairId(pair.first, pair.second));
    reportClash(context, pair);
  }
  return clashing;
}

function reportClash(context: RuleContext, pair: Pair): void {
  const { system } = context.frame;
  const numbers = [system.atomNumbers[pair.closest1]!, system.atomNumbers[pair.closest2]!] as const;
  const lines = numbers.map((number) => context.atomLine(number));
  const at = lines[1] ?? lines[0];
  if (at === null || at === undefined || isCoincident(context, pair)) return;
  const atom = (index: number, number: number) => `${symbolOf(system.element[index]!)} (atom ${number})`;
  context.findings.add(
    'clash',
    at,
    () =>
      `${context.nameOf(pair.first)} and ${context.nameOf(pair.second)} clash: ${atom(pair.closest1, numbers[0])} and ` +
      `${atom(pair.closest2, numbers[1])} are ${shown(pair.closestA)} Å apart, ${shown(pair.contactRatio, 2)} of the sum of their van der Waals radii.`,
    () => ({
      related: lines[0] && lines[0] !== at ? [{ ...lines[0], message: `Atom ${numbers[0]}` }] : [],
      pairs: [[pair.first, pair.second]],
    }),
  );
}

function isCoincident(context: RuleContext, pair: Pair): boolean {
  return pair.closestA < COINCIDENT_A && context.findings.count('atoms-coincident') > 0;
}

/** Reports declared fragments a covalent distance apart, once for each pair of fragments; a clash of the two says enough. */
export function reportJoined(context: RuleContext, clashing: ReadonlySet<string>): void {
  const { pairs, fragments, tree } = context.frame.model;
  const { chains } = context.frame.system;
  const reported = new Set<string>();
  if (!fragments.declared.includes(1)) return;
  for (let k = 0; k < pairs.count; k++) {
    if (!pairs.bonded[k] || pairs.distanceA[k]! < COINCIDENT_A) continue;
    const [i, j] = [pairs.first[k]!, pairs.second[k]!];
    const f = Math.min(fragments.ofAtom[i]!, fragments.ofAtom[j]!);
    const g = Math.max(fragments.ofAtom[i]!, fragments.ofAtom[j]!);
    if (f === g || f < 0 || !fragments.declared[f] || !fragments.declared[g] || chains.areBonded(f, g)) continue;
    const id = pairId(f, g);
    if (reported.has(id) || clashing.has(id)) continue;
    reported.add(id);
    context.findings.add(
      'fragments-joined',
      tree.fieldSpan(j, 'line'),
      () =>
        `${context.nameOf(f)} and ${context.nameOf(g)} are declared separate, and atoms ${i + 1} and ${j + 1} are ` +
        `${shown(pairs.distanceA[k]!)} Å apart, a covalent bond.`,
      () => ({ related: [{ ...tree.fieldSpan(i, 'line'), message: `Atom ${i + 1}` }] }),
    );
  }
}

function pairId(f: number, g: number): string {
  return `${f} ${g}`;
}
