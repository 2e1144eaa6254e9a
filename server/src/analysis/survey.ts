import { evaluatePair } from './pair';
import { NoteKind, noteOf, PairNotes } from './pair-notes';
import { PairSieve, Sieved } from './pair-sieve';
import { isWithinCutoff, Partners } from './partners';
import type { System } from './system';

/** What the findings need of the pairs of a frame: how many there are, and the few of which something is to be said. */
export interface PairSurvey {
  readonly pairs: number;
  readonly notes: PairNotes;
}

/** Fragments looked at between two pauses. */
const FRAGMENTS_A_STEP = 32;

/**
 * Looks through all pairs of a system in order of the first fragment, pausing now and then. Pairs that are surely apart and far are passed
 * over without being evaluated; the result is that of evaluating every one.
 */
export function* surveyPairs(system: System, partners = new Partners(system)): Generator<undefined, PairSurvey> {
  const sieve = new PairSieve(system);
  const notes = new PairNotes();
  let pairs = 0;
  for (let f = 0; f < system.count; f++) {
    const { index, vectorA, count } = partners.around(f, true);
    const begin = notes.count;
    for (let k = 0; k < count; k++) {
      const g = index[k]!;
      pairs += surveyPair(system, sieve, f, g, vectorA[3 * k]!, vectorA[3 * k + 1]!, vectorA[3 * k + 2]!, notes);
    }
    notes.sortRow(begin);
    if (f % FRAGMENTS_A_STEP === FRAGMENTS_A_STEP - 1) yield;
  }
  return { pairs, notes };
}

/** Adds what is to be said of one pair to the notes; 1 where it belongs to the list, else 0. */
function surveyPair(
  system: System,
  sieve: PairSieve,
  f: number,
  g: number,
  x: number,
  y: number,
  z: number,
  notes: PairNotes,
): 0 | 1 {
  const sieved = sieve.look(f, g, x, y, z);
  if (sieved !== Sieved.open) return sieved;
  const pair = evaluatePair(system, f, g);
  if (pair.contact === 'apart' && !isWithinCutoff(system, f, g, pair.distanceA)) return 0;
  const kind = noteOf(system, pair);
  if (kind !== NoteKind.none) notes.add(f, g, kind, pair.strengthKJPerMol);
  return 1;
}
