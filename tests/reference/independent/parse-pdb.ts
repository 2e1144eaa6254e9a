import { readNumbers, readPairs, readTemperature } from './annotation.js';
import { dipoleUnit } from './constants.js';
import { element, readSymbol } from './elements.js';
import { distance } from './linear.js';
import type { Annotation, Atom, ParsedFrame, Vec } from './types.js';

/** Well-formed PDB (wwPDB format 3.3) with the project's annotations in REMARK records 6 to 99. */

interface PdbAtom extends Atom {
  name: string;
  serial: number;
  altLoc: string;
  occupancy: number;
  chain: string;
  residue: string;
  /** Residue number with insertion code. */
  number: string;
  /** How many TER records came before. */
  chunk: number;
}

interface FragmentLine {
  selector: string[];
  keys: Map<string, string>;
}

interface Link {
  first: (atom: PdbAtom) => boolean;
  second: (atom: PdbAtom) => boolean;
}

export function parsePdb(text: string, periodicOption: boolean | undefined): ParsedFrame[] {
  const lines = text.split(/\r\n|\r|\n/);
  const remarks = lines.filter(
    (line) => /^REMARK +\d+ /.test(line) && remarkNumber(line) >= 6 && remarkNumber(line) <= 99,
  );
  const fileKeys = new Map<string, string>();
  const fragmentLines: FragmentLine[] = [];
  for (const remark of remarks) {
    const keys = readPairs(remark.slice(11));
    const selector = keys.get('fragment');
    if (selector === undefined) for (const [key, value] of keys) fileKeys.set(key, value);
    else fragmentLines.push({ selector: selector.split(':'), keys });
  }
  const links = lines.filter((line) => line.startsWith('CONECT')).flatMap(readConect);
  links.push(...lines.filter((line) => line.startsWith('LINK  ')).map(readLink));
  const periodic = periodicOption ?? fileKeys.get('periodic')?.toLowerCase() === 'true';
  const cell = periodic ? readCell(lines.find((line) => line.startsWith('CRYST1'))) : null;
  return readModels(lines, chargeColumns(fileKeys.get('charge_column'))).map((atoms) =>
    interpret(atoms, links, cell, fileKeys, fragmentLines),
  );
}

const remarkNumber = (line: string): number => Number(line.slice(7, 10));

/** First and last column (1-based) of the charge column. */
function chargeColumns(value: string | undefined): [number, number] | null {
  if (value === undefined) return null;
  if (value === 'occupancy') return [55, 60];
  if (value === 'bfactor') return [61, 66];
  return value.split('-').map(Number) as [number, number];
}

function readModels(lines: string[], charges: [number, number] | null): PdbAtom[][] {
  const models: PdbAtom[][] = [];
  let model: PdbAtom[] = [];
  let chunk = 0;
  const close = () => {
    if (model.length > 0) models.push(oneAlternate(model));
    model = [];
  };
  for (const line of lines) {
    const record = line.slice(0, 6).trim();
    if (record === 'MODEL' || record === 'ENDMDL') close();
    if (record === 'TER') chunk++;
    if (record === 'ATOM' || record === 'HETATM') model.push(readAtom(line, charges, chunk));
  }
  close();
  return models;
}

function readAtom(line: string, charges: [number, number] | null, chunk: number): PdbAtom {
  const field = (from: number, to: number) => line.slice(from - 1, to).trim();
  const formal = field(79, 80);
  const symbol = field(77, 78) || field(13, 14).replace(/\d/g, '');
  return {
    symbol: readSymbol(symbol),
    label: field(13, 16),
    name: field(13, 16),
    serial: Number(field(7, 11)),
    altLoc: field(17, 17),
    residue: field(18, 20),
    chain: field(22, 22),
    number: field(23, 27),
    position: [Number(field(31, 38)), Number(field(39, 46)), Number(field(47, 54))],
    occupancy: Number(field(55, 60)),
    charge: charges === null ? null : Number(field(charges[0], charges[1])),
    formal: formal === '' ? null : Number(formal.replace(/[+-]/, '')) * (formal.includes('-') ? -1 : 1),
    chunk,
  };
}

const residueKey = (atom: PdbAtom): string => `${atom.chain}:${atom.residue}:${atom.number}`;

/** One alternate location a residue, that of the highest total occupancy. */
function oneAlternate(atoms: PdbAtom[]): PdbAtom[] {
  const place = (atom: PdbAtom) => `${atom.chain}:${atom.number}`;
  const totals = new Map<string, Map<string, number>>();
  for (const atom of atoms) {
    if (atom.altLoc === '') continue;
    const residue = totals.get(place(atom)) ?? new Map<string, number>();
    residue.set(atom.altLoc, (residue.get(atom.altLoc) ?? 0) + atom.occupancy);
    totals.set(place(atom), residue);
  }
  return atoms.filter((atom) => {
    const residue = totals.get(place(atom));
    if (atom.altLoc === '' || residue === undefined) return true;
    const best = [...residue].sort((a, b) => b[1] - a[1] || (a[0] < b[0] ? -1 : 1))[0][0];
    return atom.altLoc === best;
  });
}

function readConect(line: string): Link[] {
  const serials = [7, 12, 17, 22, 27]
    .map((from) => line.slice(from - 1, from + 4).trim())
    .filter((word) => word !== '');
  const [first, ...others] = serials.map(Number);
  return others.map((other) => ({ first: (atom) => atom.serial === first, second: (atom) => atom.serial === other }));
}

function readLink(line: string): Link {
  const end = (from: number) => {
    const field = (offset: number, width: number) => line.slice(from - 1 + offset, from - 1 + offset + width).trim();
    return (atom: PdbAtom) =>
      atom.name === field(0, 4) &&
      atom.chain === field(9, 1) &&
      atom.number === field(10, 5) &&
      atom.residue === field(5, 3);
  };
  return { first: end(13), second: end(43) };
}

/** Cell vectors of CRYST1 in the standard setting: a along x, b in the xy plane. A 1×1×1 cell is none. */
function readCell(line: string | undefined): Vec[] | null {
  if (line === undefined) return null;
  const lengths = [7, 16, 25].map((from) => Number(line.slice(from - 1, from + 8)));
  const [alpha, beta, gamma] = [34, 41, 48].map((from) => (Number(line.slice(from - 1, from + 6)) * Math.PI) / 180);
  const [a, b, c] = lengths;
  if (a === 1 && b === 1 && c === 1) return null;
  const exact = (cos: number) => (Math.abs(cos) < 1e-15 ? 0 : cos);
  const [ca, cb, cg] = [exact(Math.cos(alpha)), exact(Math.cos(beta)), exact(Math.cos(gamma))];
  const sg = Math.sin(gamma);
  const cy = (ca - cb * cg) / sg;
  return [
    [a, 0, 0],
    [b * cg, b * sg, 0],
    [c * cb, c * cy, c * Math.sqrt(1 - cb * cb - cy * cy)],
  ];
}

const isBackbone = (a: PdbAtom, b: PdbAtom): boolean =>
  a.chain === b.chain && ((a.name === 'C' && b.name === 'N') || (/^O3['*]$/.test(a.name) && b.name === 'P'));

function interpret(
  atoms: PdbAtom[],
  links: Link[],
  cell: Vec[] | null,
  fileKeys: Map<string, string>,
  fragmentLines: FragmentLine[],
): ParsedFrame {
  let groups: number[][] = [];
  for (const key of new Set(atoms.map(residueKey))) {
    groups.push(atoms.flatMap((atom, i) => (residueKey(atom) === key ? [i] : [])));
  }
  const crossBonds: [number, number][] = [];

  // Peptide and nucleotide bonds to the next residue of the file, unless a TER stands between.
  for (let g = 0; g + 1 < groups.length; g++) {
    for (const i of groups[g]) {
      for (const j of groups[g + 1]) {
        const [a, b] = [atoms[i], atoms[j]];
        if (a.chunk !== b.chunk || !isBackbone(a, b)) continue;
        const reach = element(a.symbol).covalent + element(b.symbol).covalent + 0.4;
        if (distance(a.position, b.position) <= reach) crossBonds.push([i, j]);
      }
    }
  }

  // Residues joined by CONECT or LINK outside the backbone form one fragment.
  for (const link of links) {
    const i = atoms.findIndex(link.first);
    const j = atoms.findIndex(link.second);
    if (i < 0 || j < 0) continue;
    crossBonds.push([i, j]);
    const mine = groups.find((group) => group.includes(i))!;
    const other = groups.find((group) => group.includes(j))!;
    if (mine === other || isBackbone(atoms[i], atoms[j]) || isBackbone(atoms[j], atoms[i])) continue;
    groups = groups.filter((group) => group !== mine && group !== other);
    groups.push([...mine, ...other].sort((a, b) => a - b));
  }

  const temperature = fileKeys.get('temperature');
  const permittivity = fileKeys.get('relative_permittivity');
  return {
    atoms,
    cell,
    periodic: [true, true, true],
    groups,
    crossBonds,
    temperatureK: temperature === undefined ? null : readTemperature(temperature),
    relativePermittivity: permittivity === undefined ? null : Number(permittivity),
    annotate: (fragments) =>
      fragments.map((indices) => annotate(indices, atoms, fragmentLines, fileKeys.get('dipole_unit') ?? 'D')),
    // Residues joined by a declared bond carry the names of all, in file order.
    defaultName: (indices) => {
      const places = new Map(indices.map((i) => [`${atoms[i].chain}:${atoms[i].number}`, atoms[i].residue]));
      return [...places.values()].join('+');
    },
  };
}

function matches(selector: string[], atom: PdbAtom): boolean {
  const [chain, residue, number] = selector;
  return (
    (chain === '*' || chain === atom.chain || (chain === '_' && atom.chain === '')) &&
    (residue === '*' || residue === atom.residue) &&
    (number === '*' || number === atom.number)
  );
}

/** All lines that select the fragment, key by key; the selector with fewer wild cards wins. */
function annotate(indices: number[], atoms: PdbAtom[], lines: FragmentLine[], fileUnit: string): Annotation {
  const stars = (line: FragmentLine) => line.selector.filter((part) => part === '*').length;
  const merged = new Map<string, string>();
  for (const line of [...lines].sort((a, b) => stars(b) - stars(a))) {
    if (!indices.some((i) => matches(line.selector, atoms[i]))) continue;
    for (const [key, value] of line.keys) merged.set(key, value);
  }
  const unit = dipoleUnit(merged.get('dipole_unit') ?? fileUnit);
  const annotation: Annotation = {};
  const name = merged.get('name');
  const charge = merged.get('charge');
  const dipole = merged.get('dipole');
  const size = merged.get('dipole_size');
  const axis = merged.get('axis');
  const polarizability = merged.get('polarizability');
  if (name !== undefined) annotation.name = name;
  if (charge !== undefined) annotation.chargeE = Number(charge);
  if (dipole !== undefined) annotation.dipole = readNumbers(dipole).map((d) => d * unit) as Vec;
  if (size !== undefined) annotation.size = Number(size) * unit;
  if (polarizability !== undefined) annotation.polarizability = Number(polarizability);
  if (axis !== undefined) {
    const sides = axis.split('>').map((side) => side.split(','));
    const found = sides.map((names) => indices.filter((i) => names.includes(atoms[i].name)));
    const complete = sides.every((names) => names.every((n) => indices.some((i) => atoms[i].name === n)));
    if (complete) annotation.axis = { from: found[0], to: found[1] };
  }
  return annotation;
}
