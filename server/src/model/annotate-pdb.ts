import type { FindingCollector } from '../base/finding';
import type { Entry } from '../formats/annotation/entries';
import { SELECTED_KEYS } from '../formats/annotation/keys';
import { listItems, valueText } from '../formats/annotation/lists';
import { meantAxis, meantCharge } from '../formats/annotation/meant';
import { selectorMatches, selectorWeight } from '../formats/pdb/remarks';
import type { FrameTree, RemarkAnnotation, Residue } from '../formats/tree';
import { atomicNumberOf } from '../physics/elements';
import { dipoleUnitEA } from '../physics/units';
import type { Snapshot } from '../text/snapshot';
import { type Axis, emptyNotes, type FragmentNotes, MOST_AXIS_NAMES, ValueReader } from './annotation';
import { atomsOf, type FragmentSet } from './fragment-set';

/**
 * Binds the REMARK annotations of a PDB file to the fragments of one of its models; of two selectors that match, the more exact
 * one wins, key by key.
 */
export function annotatePdb(
  text: Snapshot,
  frame: FrameTree,
  set: FragmentSet,
  remarks: readonly RemarkAnnotation[],
  problems: FindingCollector,
): FragmentNotes[] {
  const reader = new ValueReader(text, problems);
  const fileUnitEntry = remarks
    .filter((remark) => remark.selector === null)
    .flatMap((remark) => remark.entries)
    .find((entry) => entry.key === 'dipole_unit');
  const fileUnit = fileUnitEntry === undefined ? 'D' : reader.dipoleUnit(fileUnitEntry);
  const selected = new SelectedRemarks(remarks);
  return Array.from({ length: set.count }, (_, f) => {
    const note = emptyNotes();
    if (selected.isEmpty) return note;
    bindFragment(reader, frame, set, f, selected.entriesOf(residuesOf(frame, set, f)), fileUnit, note);
    return note;
  });
}

/** Annotation lines with a selector, found by the residue number they ask for. */
class SelectedRemarks {
  readonly isEmpty: boolean;
  readonly #byNumber = new Map<number | null, RankedRemark[]>();

  constructor(remarks: readonly RemarkAnnotation[]) {
    const ranked = remarks
      .filter((remark) => remark.selector !== null)
      .map((remark, order) => ({ remark, order, weight: selectorWeight(remark.selector!) }));
    this.isEmpty = ranked.length === 0;
    for (const entry of ranked) {
      const { number } = entry.remark.selector!;
      const list = this.#byNumber.get(number);
      if (list === undefined) this.#byNumber.set(number, [entry]);
      else list.push(entry);
    }
  }

  /** Our keys that hold for a fragment of these residues; of two that give the same key, the more exact, then the first. */
  entriesOf(residues: readonly Residue[]): Entry[] {
    const matching = new Set<RankedRemark>();
    for (const residue of residues) {
      for (const list of [this.#byNumber.get(residue.number), this.#byNumber.get(null)]) {
        for (const entry of list ?? []) if (selectorMatches(entry.remark.selector!, residue)) matching.add(entry);
      }
    }
    const byKey = new Map<string, Entry>();
    for (const { remark } of [...matching].sort((a, b) => b.weight - a.weight || a.order - b.order)) {
      for (const entry of remark.entries) {
        if (OUR_KEYS.has(entry.key) && !byKey.has(entry.key)) byKey.set(entry.key, entry);
      }
    }
    return [...byKey.values()];
  }
}

interface RankedRemark {
  readonly remark: RemarkAnnotation;
  readonly order: number;
  readonly weight: number;
}

const OUR_KEYS: ReadonlySet<string> = new Set(SELECTED_KEYS);

function residuesOf(frame: FrameTree, set: FragmentSet, f: number) {
  const indices = new Set(Array.from(atomsOf(set, f), (atom) => frame.atoms.residue![atom]!));
  return [...indices].map((index) => frame.residues![index]!);
}

function bindFragment(
  reader: ValueReader,
  frame: FrameTree,
  set: FragmentSet,
  f: number,
  entries: readonly Entry[],
  fileUnit: string | null,
  note: FragmentNotes,
): void {
  const unitEntry = entries.find((entry) => entry.key === 'dipole_unit');
  const unit = unitEntry === undefined ? fileUnit : reader.dipoleUnit(unitEntry);
  for (const entry of entries) {
    switch (entry.key) {
      case 'name':
        note.name = valueText(reader.text, entry).trim() || null;
        break;
      case 'charge':
        note.chargeE = reader.number(entry.inner, 'charge', meantCharge);
        break;
      case 'polarizability': {
        const value = reader.quantity(entry.inner, 'volumeA3', 'polarizability');
        if (value !== null && value < 0) reader.invalid(entry.value, 'A polarizability cannot be negative.');
        else note.polarizabilityA3 = value;
        break;
      }
      case 'dipole': {
        const items = listItems(reader.text, entry);
        if (items.length !== 3) {
          reader.problems.add(
            'array-length',
            entry.value,
            () => `dipole has ${items.length} numbers; a vector has three.`,
          );
        } else if (unit !== null) {
          const vector = reader.vector(items, unit, entry.value);
          note.dipoleEA = vector?.dipoleEA ?? null;
          note.writtenDipole = vector?.written ?? null;
        }
        break;
      }
      case 'dipole_size': {
        if (unit === null) break;
        const size = reader.quantity(entry.inner, 'dipoleEA', 'dipole size', dipoleUnitEA(unit)!);
        if (size !== null && size < 0)
          reader.invalid(entry.value, 'A dipole size cannot be negative; turn the axis round instead.');
        else if (size !== null) {
          note.dipoleSizeEA = size;
          note.writtenSize = { items: [entry.inner], unit, span: entry.value };
        }
        break;
      }
      case 'axis':
        note.axis = axisByNames(reader, frame, set, f, entry);
        break;
    }
  }
}

function axisByNames(reader: ValueReader, frame: FrameTree, set: FragmentSet, f: number, entry: Entry): Axis | null {
  const sides = valueText(reader.text, entry)
    .split('>')
    .map((side) => [...new Set(side.split(',').map((name) => name.trim()))]);
  if (
    sides.length !== 2 ||
    sides.some((names) => names.length > MOST_AXIS_NAMES) ||
    sides.some((names) => names.some((name) => name === ''))
  ) {
    const meant = meantAxis(reader.shown(entry.inner));
    const reason = `"${reader.shown(entry.inner)}" is no axis; write atom names as in O>H1,H2.`;
    return reader.invalid(entry.value, reason, meant, entry.inner);
  }
  const members = residuesOf(frame, set, f).flatMap((residue) =>
    residue.atoms.map((atom, k) => ({ atom, name: residue.atomNames[k]! })),
  );
  const [before, after] = sides.map((names) => names.map((name) => named(name))) as [number[][], number[][]];
  // Without one of these atoms (a water without hydrogens) the size stands, and the direction is unknown.
  if ([...before, ...after].some((atoms) => atoms.length === 0)) return null;
  return { before: before.flat(), after: after.flat(), span: entry.value };

  function named(name: string): number[] {
    const exact = members.filter((member) => member.name === name);
    if (exact.length > 0) return exact.map((member) => member.atom);
    const z = atomicNumberOf(name);
    return z > 0 ? members.filter(({ atom }) => frame.atoms.element[atom] === z).map(({ atom }) => atom) : [];
  }
}
