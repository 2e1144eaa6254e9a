import type { FindingCollector } from '../../base/finding';
import type { Snapshot } from '../../text/snapshot';
import type { Entry } from './entries';
import { portable, removal } from './entry-fixes';
import { likelyKey } from './keys';
import { typedValue } from './values';

/** Keys that mean the same. */
const SAME_AS = new Map([
  ['charge', 'total_charge'],
  ['mult', 'multiplicity'],
]);

/** Longest value whose syntax is checked for other readers. */
const LONGEST_CHECKED = 20000;

/**
 * Reports keys given twice, keys that look like a misspelt one of ours, and values that other readers of the convention would
 * reject. `known` are the keys with a meaning at this place.
 */
export function reportKeys(
  text: Snapshot,
  entries: readonly Entry[],
  known: readonly string[],
  problems: FindingCollector,
): void {
  const first = new Map<string, Entry>();
  // What a misspelt key would become must not be there already.
  const taken = new Set(entries.map(({ key }) => meaningOf(key)));
  for (const entry of entries) {
    if (!known.includes(entry.key)) {
      reportMisspelt(entry, known, taken, problems);
      continue;
    }
    const meaning = meaningOf(entry.key);
    const earlier = first.get(meaning);
    if (earlier === undefined) first.set(meaning, entry);
    else {
      problems.add(
        'key-repeated',
        entry.keySpan,
        () => `"${entry.key}" is given a second time; the first one is used.`,
        () => ({
          related: [{ ...earlier.keySpan, message: 'The first one stands here.' }],
          fix: removal(text, entry),
        }),
      );
    }
    reportSyntax(text, entry, problems);
  }
}

function meaningOf(key: string): string {
  return SAME_AS.get(key) ?? key;
}

function reportMisspelt(entry: Entry, known: readonly string[], taken: Set<string>, problems: FindingCollector): void {
  const meant = likelyKey(entry.key, known);
  if (meant === undefined) return;
  const isFree = !taken.has(meaningOf(meant));
  taken.add(meaningOf(meant));
  problems.add(
    'key-misspelt',
    entry.keySpan,
    () => `"${entry.key}" is no key; did you mean "${meant}"?`,
    () => (isFree ? { fix: { title: `Replace by ${meant}`, edits: [{ ...entry.keySpan, text: meant }] } } : {}),
  );
}

function reportSyntax(text: Snapshot, entry: Entry, problems: FindingCollector): void {
  if (entry.form === 'bare' && entry.value.end > entry.value.start) return;
  if (entry.value.end - entry.value.start > LONGEST_CHECKED) return;
  const value = typedValue(text, entry);
  if (value.kind === 'invalid') {
    problems.add(
      'value-unportable',
      entry.value,
      () => `Other readers of extended XYZ will not take this value. ${value.reason}`,
      () => portable(text, entry),
    );
  }
}
