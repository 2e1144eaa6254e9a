import type { FindingCollector } from '../base/finding';
import type { Entry } from '../formats/annotation/entries';
import { listItems, valueText } from '../formats/annotation/lists';
import { selectorMatches, selectorWeight } from '../formats/pdb/remarks';
import type { FrameTree, RemarkAnnotation } from '../formats/tree';
import { atomicNumberOf } from '../physics/elements';
import { dipoleUnitEA } from '../physics/units';
import type { Snapshot } from '../text/snapshot';
import { type Axis, emptyNotes, type FragmentNotes, ValueReader } from './annotation';
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
  const selected = remarks
    .filter((remark) => remark.selector !== null)
    .map((remark, order) => ({ remark, order, weight: selectorWeight(remark.selector!) }))
    .sort((a, b) => b.weight - a.weight || a.order - b.order);
  return Array.from({ length: set.count }, (_, f) => {
    const note = emptyNotes();
    if (selected.length === 0) return note;
    const residues = residuesOf(frame, set, f);
    const entries: Entry[] = [];
    for (const { remark } of selected) {
      if (!residues.some((residue) => selectorMatches(remark.selector!, residue))) continue;
      for (const entry of remark.entries) {
        if (!entries.some((earlier) => earlier.key === entry.key)) entries.push(entry);
      }
    }
    bindFragment(reader, frame, set, f, entries, fileUnit, note);
    return note;
  });
}

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
        note.chargeE = reader.number(entry.inner, 'charge');
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
    .map((side) => side.split(',').map((name) => name.trim()));
  if (sides.length !== 2 || sides.some((names) => names.some((name) => name === ''))) {
    return reader.invalid(entry.value, `"${reader.shown(entry.inner)}" is no axis; write atom names as in O>H1,H2.`);
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
