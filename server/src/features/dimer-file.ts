import type { FrameAnalysis } from '../analysis/frame-analysis';
import type { Pair } from '../analysis/pair';
import type { Part } from '../analysis/system';
import { AtomFlag } from '../formats/tree';
import { type PrintableAtom, printXyzFrame } from '../formats/xyz/print';
import type { FrameModel } from '../model/frame-model';
import { DEBYE_E_A } from '../physics/constants';
import { symbolOf } from '../physics/elements';
import type { FragmentName } from './records';

/** Net charges this near a whole number are written as that number, e. */
const WHOLE_CHARGE_E = 0.1;

/**
 * A pair as an extended XYZ file of two fragments, each whole and the second in the image nearest to the first, with charge,
 * multiplicity and what the source file says of them.
 */
export function dimerFile(
  frame: FrameAnalysis,
  companion: Part | null,
  pair: Pair,
  nameOf: (fragment: number) => FragmentName,
  source: string,
): string {
  const sides = [pair.first, pair.second].map((f) => sideOf(frame, companion, f));
  const { moments, settings } = frame.system;
  const fragments = [pair.first, pair.second];
  const hasCharges = fragments.every((f) => frame.system.hasColumn[f] === 1);
  const hasDipoles = sides.every(({ model, members }) => {
    const { dipoleEA } = model.tree.atoms;
    return dipoleEA !== null && members.every((atom) => Number.isFinite(dipoleEA[3 * atom]!));
  });
  const shift = shiftOf(frame, pair);
  const atoms: PrintableAtom[] = sides.flatMap(({ model, members }, side) =>
    members.map((atom) => ({
      symbol: writtenSymbol(model, atom),
      positionA: [0, 1, 2].map((a) => model.positionA[3 * atom + a]! + (side === 1 ? shift[a]! : 0)),
      chargeE: hasCharges ? model.tree.atoms.chargeE![atom]! : null,
      dipoleEA: hasDipoles ? Array.from(model.tree.atoms.dipoleEA!.subarray(3 * atom, 3 * atom + 3)) : null,
      fragment: side + 1,
    })),
  );
  const charges = fragments.map((f) => moments.chargeE[f]!);
  const total = rounded(charges[0]! + charges[1]!);
  const keys: [string, string][] = [
    ['fragment_names', fragments.map((f) => nameOf(f).name.replace(/[\s"\\[\]{},=]+/g, '_')).join(' ')],
    ['fragment_charges', charges.map((charge) => String(rounded(charge))).join(' ')],
    ...dipoleKeys(frame, fragments),
    ['total_charge', String(total)],
    ['multiplicity', String(multiplicityOf(frame, sides, total))],
    ['temperature', String(settings.temperatureK)],
    ['relative_permittivity', String(settings.relativePermittivity)],
  ];
  const note = `Pair ${pair.first + 1}-${pair.second + 1} of frame ${frame.index + 1} of ${source.replace(/[^\w.+-]+/g, '_')}`;
  return printXyzFrame(atoms, keys, note);
}

interface Side {
  readonly model: FrameModel;
  readonly members: readonly number[];
}

function sideOf(frame: FrameAnalysis, companion: Part | null, fragment: number): Side {
  const own = frame.model.fragments.count;
  const [model, f] = fragment < own ? [frame.model, fragment] : [companion!.model, fragment - own];
  const { members, starts } = model.fragments;
  return { model, members: Array.from(members.subarray(starts[f]!, starts[f + 1]!)) };
}

function shiftOf(frame: FrameAnalysis, pair: Pair): number[] {
  const cell = frame.system.cell;
  if (cell === null) return [0, 0, 0];
  return [0, 1, 2].map((a) => pair.image.reduce((sum, n, k) => sum + n * cell.vectorsA[3 * k + a]!, 0));
}

function writtenSymbol(model: FrameModel, atom: number): string {
  const flags = model.tree.atoms.flags[atom]!;
  if (flags & AtomFlag.deuterium) return 'D';
  if (flags & AtomFlag.tritium) return 'T';
  return symbolOf(model.tree.atoms.element[atom]!);
}

/** Dipoles that the charge column does not carry by itself. */
function dipoleKeys({ system }: FrameAnalysis, fragments: readonly number[]): [string, string][] {
  const { dipoleEA, dipoleNormEA, dipoleSource } = system.moments;
  const given = (f: number) =>
    dipoleSource[f] !== 'charges' && dipoleSource[f] !== 'atom' && dipoleSource[f] !== 'none';
  const number = (value: number) => String(Number((value / DEBYE_E_A).toPrecision(10)));
  const vectors = fragments.map((f) =>
    given(f) && !Number.isNaN(dipoleEA[3 * f]!)
      ? [0, 1, 2].map((a) => number(dipoleEA[3 * f + a]!)).join(' ')
      : 'nan nan nan',
  );
  const sizes = fragments.map((f) =>
    given(f) && Number.isNaN(dipoleEA[3 * f]!) && !Number.isNaN(dipoleNormEA[f]!) ? number(dipoleNormEA[f]!) : 'nan',
  );
  const keys: [string, string][] = [];
  if (vectors.some((text) => !text.startsWith('nan'))) keys.push(['fragment_dipoles', vectors.join(' ')]);
  if (sizes.some((text) => text !== 'nan')) keys.push(['fragment_dipole_sizes', sizes.join(' ')]);
  return keys.length === 0 ? keys : [...keys, ['dipole_unit', 'D']];
}

function rounded(charge: number): number {
  const whole = Math.round(charge);
  return Math.abs(charge - whole) <= WHOLE_CHARGE_E ? whole + 0 : Number(charge.toPrecision(10));
}

/** The file's multiplicity where the pair is the whole frame, else the lowest that the number of electrons allows. */
function multiplicityOf(frame: FrameAnalysis, sides: readonly Side[], totalCharge: number): number {
  const given = frame.model.frameNotes.multiplicity;
  if (given !== null && frame.system.count === 2) return given.value;
  let electrons = -Math.round(totalCharge);
  for (const { model, members } of sides) for (const atom of members) electrons += model.tree.atoms.element[atom]!;
  return Math.abs(electrons) % 2 === 0 ? 1 : 2;
}
