import type { FrameAnalysis } from '../../analysis/frame-analysis';
import type { TextEdit } from '../../base/finding';
import { AtomFlag, type CoordinateTree } from '../../formats/tree';
import { CommentLine } from './comment-line';
import { dipoleOffers } from './dipole-offers';
import { remarkInsertion, remarkSentence } from './remark-lines';
import { residuesOf, selectorOf, selectorsOfKind } from './selectors';
import { addDipoles, dipoleRemarks } from './write-dipoles';

/** Lists of more fragments are not written without need. */
const MOST_LISTED = 20;
/** Net charges this near a whole number are written as that number, e. */
const WHOLE_CHARGE_E = 0.1;

/** Annotates a frame with every key that it lacks and a value is known for; a sentence where there is none. */
export function headerEdits(file: CoordinateTree, frame: FrameAnalysis): readonly TextEdit[] | string {
  if (frame.model.fragments.count === 0) return 'The frame has no fragments.';
  return file.language === 'pdb' ? pdbHeader(file, frame) : xyzHeader(file, frame);
}

function xyzHeader(file: CoordinateTree, frame: FrameAnalysis): readonly TextEdit[] | string {
  const { model, settings } = frame;
  const { count } = model.fragments;
  const line = new CommentLine(file, model.tree);
  const add = (key: string, value: string | null) => {
    if (value !== null && line.entry(key) === undefined) line.set(key, value);
  };
  const names = model.names.map((name) => name.replace(/[\s"'\\[\]{},=]+/g, '_'));
  add('fragment_names', count <= MOST_LISTED && model.tree.groups?.areWords !== true ? names.join(' ') : null);
  const charges = chargesToWrite(frame);
  const isListed = charges.some((charge) => charge !== null && charge !== 0) || count <= MOST_LISTED;
  const hasColumn = model.tree.atoms.chargeE !== null;
  if (isListed && !hasColumn && charges.some((charge) => charge !== null)) {
    add('fragment_charges', charges.map((charge) => (charge === null ? 'nan' : String(charge))).join(' '));
  }
  const offers = dipoleOffers(frame);
  const problem = offers.length === 0 ? null : addDipoles(line, file, frame, offers);
  if (problem !== null) return problem;
  if (offers.length > 0) add('dipole_unit', 'D');
  const total = charges.includes(null) ? null : charges.reduce((sum: number, charge) => sum + charge!, 0);
  if (total !== null && Number.isInteger(total)) {
    add('total_charge', String(total));
    add('multiplicity', lowestMultiplicity(frame, line.entry('total_charge') === undefined ? total : null));
  }
  add('relative_permittivity', String(settings.relativePermittivity));
  add('temperature', String(settings.temperatureK));
  const edits = line.edits();
  return typeof edits !== 'string' && edits.length === 0 ? 'The frame has all of these keys already.' : edits;
}

/**
 * Net charges as they are to be written. None are where they would contradict the multiplicity that the file gives: a radical is not the ion
 * of the same atoms.
 */
function chargesToWrite(frame: FrameAnalysis): (number | null)[] {
  const charges = knownCharges(frame);
  const { multiplicity } = frame.model.frameNotes;
  const fromLibrary = frame.moments.chargeSource.some((source, f) => source === 'library' && charges[f] !== 0);
  if (multiplicity === null || !fromLibrary || charges.includes(null)) return charges;
  const lowest = lowestMultiplicity(
    frame,
    charges.reduce((sum: number, charge) => sum + charge!, 0),
  );
  const isOff = lowest !== null && (Number(lowest) - multiplicity.value) % 2 !== 0;
  return isOff ? charges.map((charge, f) => (frame.moments.chargeSource[f] === 'library' ? null : charge)) : charges;
}

/** Net charges as the analysis has them, `null` where nothing says so. */
function knownCharges({ moments, model }: FrameAnalysis): (number | null)[] {
  return Array.from({ length: model.fragments.count }, (_, f) => {
    const charge = moments.chargeE[f]!;
    if (moments.chargeSource[f] === 'assumed' || Number.isNaN(charge)) return null;
    const whole = Math.round(charge);
    return Math.abs(charge - whole) <= WHOLE_CHARGE_E ? whole + 0 : Number(charge.toPrecision(6));
  });
}

/** The lowest multiplicity that the electrons of a frame allow; `null` where their number is not known. */
function lowestMultiplicity({ model }: FrameAnalysis, total: number | null): string | null {
  const { atoms } = model.tree;
  let electrons = -(total ?? Number.NaN);
  for (let i = 0; i < atoms.count; i++) {
    if (atoms.flags[i]! & AtomFlag.unknownElement) return null;
    electrons += atoms.element[i]!;
  }
  if (Number.isNaN(electrons)) return null;
  return electrons % 2 === 0 ? '1' : '2';
}

function pdbHeader(file: CoordinateTree, frame: FrameAnalysis): readonly TextEdit[] | string {
  const { settings } = frame;
  const given = new Set(
    file.remarks.flatMap(({ selector, entries }) => (selector ? [] : entries.map(({ key }) => key))),
  );
  const offers = dipoleOffers(frame);
  const dipoles = offers.length === 0 ? [] : dipoleRemarks(file, frame, offers);
  const remarks = [...chargeRemarks(frame), ...(typeof dipoles === 'string' ? [] : dipoles)];
  const own = [
    ['relative_permittivity', settings.relativePermittivity],
    ['temperature', settings.temperatureK],
  ] as const;
  const missing = own.filter(([key]) => !given.has(key)).map(([key, value]) => `${key}=${value}`);
  if (missing.length > 0) remarks.push(missing.join(' '));
  if (remarks.length > 0) return [remarkInsertion(file, remarks)];
  return typeof dipoles === 'string' ? dipoles : 'The file has all of these keys already.';
}

/** Charges of ions that are the library's word, a line a kind. */
function chargeRemarks(frame: FrameAnalysis): string[] {
  const { moments, model } = frame;
  const own = new Map<string, number[]>();
  for (let f = 0; f < model.fragments.count; f++) {
    if (moments.chargeSource[f] !== 'library' || moments.chargeE[f] === 0) continue;
    const [residue, ...others] = residuesOf(frame, f);
    const name = others.length === 0 ? residue?.name : undefined;
    const key = `${name ?? `#${f}`} ${moments.chargeE[f]}`;
    const list = own.get(key);
    if (list === undefined) own.set(key, [f]);
    else list.push(f);
  }
  const lines = new Set<string>();
  for (const fragments of own.values()) {
    const [residue, ...others] = residuesOf(frame, fragments[0]!);
    const isKind = others.length === 0 && residue !== undefined;
    const selectors = isKind
      ? selectorsOfKind(frame, residue.name, fragments)
      : fragments.map((f) => selectorOf(frame, f));
    for (const selector of selectors) {
      if (selector !== null) lines.add(`fragment=${selector} charge=${moments.chargeE[fragments[0]!]}`);
    }
  }
  if (lines.size === 0) return [];
  return [...lines, ...remarkSentence('Charges of ions: those of their usual form.')];
}
