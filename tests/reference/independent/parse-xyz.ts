import { readNumber, readNumbers, readPairs, readRanges, readSize, readTemperature, readWords } from './annotation.js';
import { dipoleUnit } from './constants.js';
import { hillFormula, readSymbol, sameComposition } from './elements.js';
import type { Annotation, Atom, ParsedFrame, Vec } from './types.js';

/** Well-formed plain and extended XYZ (https://github.com/libAtoms/extxyz), with the project's annotation keys. */

interface RawFrame {
  keys: Map<string, string>;
  atoms: Atom[];
  /** Value of the fragment column of each atom, or null without the column. */
  column: string[] | null;
}

const CHARGE_COLUMNS = ['charge', 'charges', 'initial_charges'];

export function parseXyz(text: string): ParsedFrame[] {
  const lines = text.split(/\r\n|\r|\n/);
  const raw: RawFrame[] = [];
  for (let at = 0; at < lines.length; ) {
    if (lines[at].trim() === '') {
      at++;
      continue;
    }
    const count = Number(lines[at].trim());
    raw.push(readFrame(lines[at + 1], lines.slice(at + 2, at + 2 + count)));
    at += 2 + count;
  }
  return raw.map((frame) => interpret(frame, raw[0]));
}

function readFrame(comment: string, lines: string[]): RawFrame {
  const keys = readPairs(comment);
  const layout = readWords((keys.get('Properties') ?? 'species:S:1:pos:R:3').replace(/:/g, ' '));
  const start = new Map<string, number>();
  let width = 0;
  for (let i = 0; i < layout.length; i += 3) {
    start.set(layout[i], width);
    width += Number(layout[i + 2]);
  }
  const species = start.get('species') ?? start.get('Z') ?? 0;
  const position = start.get('pos') ?? 1;
  const chargeName = CHARGE_COLUMNS.find((name) => start.has(name));
  const fragment = start.get('fragment');
  const rows = lines.map(readWords);
  return {
    keys,
    atoms: rows.map((row) => ({
      symbol: readSymbol(row[species]),
      label: row[species],
      position: [0, 1, 2].map((k) => readNumber(row[position + k])) as Vec,
      charge: chargeName === undefined ? null : readNumber(row[start.get(chargeName)!]),
      formal: null,
    })),
    column: fragment === undefined ? null : rows.map((row) => row[fragment]),
  };
}

/** Fragments, names and kinds of the first frame hold for later ones of the same elements that say nothing themselves. */
function interpret(frame: RawFrame, first: RawFrame): ParsedFrame {
  const elements = (of: RawFrame) => of.atoms.map((atom) => atom.symbol).join(' ');
  const inherits = elements(frame) === elements(first);
  const key = (name: string) => frame.keys.get(name) ?? (inherits ? first.keys.get(name) : undefined);
  const saysFragments = frame.column !== null || frame.keys.has('fragment_atoms') || !inherits;
  const speaker = saysFragments ? frame : first;
  const column = speaker.column;
  const ranges = speaker.keys.get('fragment_atoms');

  let groups: number[][] = [];
  if (column !== null) {
    const byValue = new Map<string, number[]>();
    column.forEach((value, i) => {
      byValue.set(value, [...(byValue.get(value) ?? []), i]);
    });
    groups = [...byValue.values()];
  } else if (ranges !== undefined) {
    groups = readWords(ranges).map((word) => readRanges(word).sort((a, b) => a - b));
  }

  const lattice = frame.keys.get('Lattice');
  const pbc = frame.keys.get('pbc');
  const periodic =
    pbc === undefined ? [true, true, true] : readWords(pbc.replace(/[,[\]]/g, ' ')).map((w) => /^[t1]/i.test(w));
  const temperature = frame.keys.get('temperature');
  const permittivity = frame.keys.get('relative_permittivity');
  return {
    atoms: frame.atoms,
    cell: lattice === undefined || !periodic.includes(true) ? null : readCell(readNumbers(lattice)),
    periodic: periodic as [boolean, boolean, boolean],
    groups,
    crossBonds: [],
    temperatureK: temperature === undefined ? null : readTemperature(temperature),
    relativePermittivity: permittivity === undefined ? null : readNumber(permittivity),
    annotate: (fragments) => annotate(fragments, frame, key),
    defaultName: (atoms) => {
      const word = column?.[atoms[0]];
      if (word !== undefined && Number.isNaN(Number(word))) return word;
      return hillFormula(atoms.map((i) => frame.atoms[i].symbol).filter((symbol) => symbol !== 'X'));
    },
  };
}

function readCell(nine: number[]): Vec[] {
  return [0, 3, 6].map((i) => [nine[i], nine[i + 1], nine[i + 2]]);
}

function annotate(
  fragments: number[][],
  frame: RawFrame,
  inherited: (name: string) => string | undefined,
): Annotation[] {
  const own = (name: string) => frame.keys.get(name);
  const unit = dipoleUnit(own('dipole_unit') ?? 'D');
  const names = readWords(inherited('fragment_names') ?? '');
  const charges = readNumbers(own('fragment_charges') ?? '');
  const dipoles = readNumbers(own('fragment_dipoles') ?? '');
  const sizes = readNumbers(own('fragment_dipole_sizes') ?? '');
  const axes = readWords(own('fragment_axes') ?? '');
  const polarizabilities = readNumbers(own('fragment_polarizabilities') ?? '');
  const kindSizes = readKinds(inherited('kind_dipole_sizes'));
  const kindAxes = readKinds(inherited('kind_axes'));
  const kindUnit = frame.keys.has('kind_dipole_sizes') ? unit : dipoleUnit(inherited('dipole_unit') ?? 'D');

  return fragments.map((atoms, f) => {
    const symbols = atoms.map((i) => frame.atoms[i].symbol).filter((symbol) => symbol !== 'X');
    const kindSize = kindSizes.find(([formula]) => sameComposition(formula, symbols))?.[1];
    const kindAxis = kindAxes.find(([formula]) => sameComposition(formula, symbols))?.[1];
    const annotation: Annotation = {};
    if (given(names[f])) annotation.name = names[f];
    if (!Number.isNaN(charges[f] ?? Number.NaN)) annotation.chargeE = charges[f];
    const dipole = dipoles.slice(3 * f, 3 * f + 3);
    if (dipole.length === 3 && !dipole.some(Number.isNaN)) annotation.dipole = dipole.map((d) => d * unit) as Vec;
    if (!Number.isNaN(sizes[f] ?? Number.NaN)) annotation.size = sizes[f] * unit;
    else if (kindSize !== undefined) annotation.size = readSize(kindSize, kindUnit);
    const axis = given(axes[f])
      ? axes[f].split('>').map(readRanges)
      : kindAxis?.split('>').map((s) => pick(s, atoms, frame));
    if (axis !== undefined) annotation.axis = { from: axis[0], to: axis[1] };
    if (!Number.isNaN(polarizabilities[f] ?? Number.NaN)) annotation.polarizability = polarizabilities[f];
    return annotation;
  });
}

function given(word: string | undefined): boolean {
  return word !== undefined && word.toLowerCase() !== 'nan';
}

function readKinds(value: string | undefined): [string, string][] {
  return readWords(value ?? '').map((word) => word.split(':') as [string, string]);
}

/** Atoms of a fragment named by element symbols or labels: `O` or `H1,H2`. */
function pick(side: string, atoms: number[], frame: RawFrame): number[] {
  const names = side.split(',');
  return atoms.filter((i) => names.includes(frame.atoms[i].symbol) || names.includes(frame.atoms[i].label));
}
