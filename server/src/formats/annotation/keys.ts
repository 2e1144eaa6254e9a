/** Keys of the comment line of an XYZ frame that have a meaning here. */
export const FRAME_KEYS = [
  'Properties',
  'Lattice',
  'pbc',
  'fragment_atoms',
  'fragment_names',
  'fragment_charges',
  'fragment_dipoles',
  'fragment_dipole_sizes',
  'fragment_axes',
  'kind_dipole_sizes',
  'kind_axes',
  'fragment_polarizabilities',
  'dipole_unit',
  'dipole',
  'total_charge',
  'charge',
  'multiplicity',
  'mult',
  'relative_permittivity',
  'temperature',
  'silence',
] as const;

/** Keys of a REMARK annotation that speak of the fragments its selector names. */
export const SELECTED_KEYS = [
  'fragment',
  'name',
  'charge',
  'dipole',
  'dipole_size',
  'axis',
  'polarizability',
  'dipole_unit',
] as const;

/** Keys of a REMARK annotation without a selector, for the whole file. */
export const FILE_KEYS = [
  'relative_permittivity',
  'temperature',
  'charge_column',
  'periodic',
  'total_charge',
  'multiplicity',
  'silence',
  'dipole_unit',
] as const;

/** Names that other programs commonly write; never taken for a misspelt key of ours (common practice, no source). */
const FOREIGN = new Set([
  'energy',
  'free_energy',
  'forces',
  'force',
  'stress',
  'virial',
  'virials',
  'config_type',
  'time',
  'step',
  'name',
  'cutoff',
  'magmom',
  'magmoms',
  'momenta',
  'comment',
  'title',
  'charges',
  'dipoles',
  'spin',
  'source',
  'origin',
  'unit',
  'units',
]);

/** The key of ours that an unknown key is most likely meant to be, or `undefined`. */
export function likelyKey(key: string, known: readonly string[]): string | undefined {
  if (known.includes(key) || FOREIGN.has(key) || key.length < 3 || key.length > 40) return undefined;
  const lower = key.toLowerCase();
  let best: string | undefined;
  let bestDistance = 3;
  for (const candidate of known) {
    const allowed = candidate.length < 6 ? 1 : 2;
    const distance = editDistance(lower, candidate.toLowerCase(), allowed);
    if (distance <= allowed && distance < bestDistance) {
      best = candidate;
      bestDistance = distance;
    }
  }
  return best;
}

/**
 * Number of insertions, deletions, replacements and swaps of neighbours between two words, or more than `limit` where it
 * exceeds it. Source: optimal string alignment, Damerau, Commun. ACM 7 (1964) 171.
 */
export function editDistance(a: string, b: string, limit: number): number {
  if (Math.abs(a.length - b.length) > limit) return limit + 1;
  let beforePrevious: number[] = [];
  let previous = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const current = [i];
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1];
      let cost = Math.min(previous[j]! + 1, current[j - 1]! + 1, previous[j - 1]! + (same ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1])
        cost = Math.min(cost, beforePrevious[j - 2]! + 1);
      current.push(cost);
    }
    beforePrevious = previous;
    previous = current;
  }
  return previous[b.length]!;
}
