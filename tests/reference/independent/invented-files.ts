import {
  MOLECULES,
  type Molecule,
  move,
  ownDipole,
  randomRotation,
  randomVectors,
  scatter,
  seeded,
  writeXyz,
} from './invent.js';
import { add, scale } from './linear.js';
import type { Options, Vec } from './types.js';

/** Files for the comparison, of several frames each: one for every way a moment can be known or unknown. */
export interface InventedFile {
  name: string;
  language: 'xyz' | 'pdb';
  text: string;
  options?: Options;
}

const {
  water,
  hydrogenFluoride,
  formaldehyde,
  ammonia,
  fluoroChloroMethane,
  carbonDioxide,
  ammonium,
  hydroxide,
  chain,
  sodium,
  chloride,
  argon,
  magnesium,
} = MOLECULES;

const FRAMES = 5;
const POLAR = [water, hydrogenFluoride, formaldehyde, ammonia, fluoroChloroMethane];

export function inventedFiles(): InventedFile[] {
  const xyz = (name: string, seed: number, frame: (random: () => number) => string): InventedFile => {
    const random = seeded(seed);
    return { name, language: 'xyz', text: Array.from({ length: FRAMES }, () => frame(random)).join('') };
  };
  const column = { charges: true, fragments: true };
  return [
    xyz('neutral-with-charges', 1, (random) => writeXyz(scatter(POLAR, 3.5, random), column)),
    xyz('in-contact', 2, (random) => writeXyz(scatter([...POLAR, carbonDioxide], 1.2, random), column)),
    xyz('annotated-dipoles', 3, (random) => {
      const keys = `fragment_dipoles="${randomVectors(POLAR.length, 1.8, random)}"`;
      return writeXyz(scatter(POLAR, 3.5, random), { fragments: true, keys });
    }),
    xyz('dipoles-beside-charges', 4, (random) => {
      const placed = scatter(POLAR, 3.5, random);
      const dipoles = placed.flatMap((it) => scale(ownDipole(it), [1, 1.01, 1.3][Math.floor(3 * random())]));
      const keys = `fragment_dipoles="${dipoles.map((d) => d.toFixed(8)).join(' ')}" dipole_unit=e*angstrom`;
      return writeXyz(placed, { ...column, keys });
    }),
    xyz('sizes-and-axes', 5, (random) => {
      const keys =
        'fragment_dipole_sizes="nan 0.7298 nan 0.5 nan" fragment_axes="nan 4>5 nan nan nan" dipole_unit=a.u. ' +
        'kind_dipole_sizes="H2O:0.73 CH2O:0.92" kind_axes="H2O:O>H CH2O:O>C"';
      return writeXyz(scatter(POLAR, 3.5, random), { fragments: true, keys });
    }),
    xyz('sizes-along-charges', 6, (random) => {
      const keys = 'fragment_dipole_sizes="1.855 1.82 2.33 nan 3.0"';
      return writeXyz(scatter(POLAR, 3.5, random), { ...column, keys });
    }),
    xyz('unknown-moments', 7, (random) => writeXyz(scatter([water, argon, ammonia], 5, random), { fragments: true })),
    xyz('ions-and-dipoles', 8, (random) => {
      return writeXyz(scatter([ammonium, water, chloride, formaldehyde, hydroxide], 3.2, random), column);
    }),
    xyz('ions-without-charges', 9, (random) => {
      const keys = `fragment_charges="1 0 -1 nan 2" fragment_dipoles="${randomVectors(4, 1.5, random)} nan nan nan"`;
      return writeXyz(scatter([ammonium, water, hydroxide, fluoroChloroMethane, magnesium], 4, random), {
        fragments: true,
        keys,
      });
    }),
    xyz('ions-alone', 10, (random) => {
      const keys = 'fragment_charges="1 -1 0" fragment_polarizabilities="0.2 nan 1.64"';
      return writeXyz(scatter([sodium, chloride, argon], 2.4, random), { fragments: true, keys });
    }),
    xyz('charged-pairs-far-apart', 11, (random) => {
      return writeXyz(scatter([ammonium, hydroxide, water], 14, random), column);
    }),
    xyz('atoms-with-dipoles', 12, (random) => {
      const keys = `fragment_dipoles="${randomVectors(3, 1.2, random)}"`;
      return writeXyz(scatter([argon, water, argon], 3.4, random), { fragments: true, keys });
    }),
    xyz('charge-annotation-off', 13, (random) => {
      const keys = 'fragment_charges="0.05 0.3 nan"';
      return writeXyz(scatter([water, fluoroChloroMethane, ammonia], 3.5, random), { ...column, keys });
    }),
    xyz('neighbours-beside-a-chain', 14, (random) => {
      const beside = [-3.5, 0, 3.2].map((x, i) => {
        const place: Vec = [x, i === 1 ? -3.4 : 3.6, random()];
        return move([water, ammonium, argon][i], randomRotation(random), place);
      });
      return writeXyz([chain, ...beside], column);
    }),
    xyz('listed-atoms', 15, (random) => {
      const keys = 'fragment_atoms="1-3 4,5" fragment_names="donor acceptor nan" fragment_dipole_sizes="1.9 1.8 2"';
      return writeXyz(scatter([water, hydrogenFluoride, formaldehyde], 6, random), { keys });
    }),
    xyz('a-skewed-cell', 16, skewedCell),
    xyz('polarizable-neutral', 18, (random) => {
      // Far more polarizable than they are, so that some pairs come up for review for it alone.
      const keys = 'fragment_polarizabilities="1.45 8.3 12.8 2.21 9.6"';
      return writeXyz(scatter(POLAR, 3.2, random), { ...column, keys });
    }),
    xyz('polarizable-ions', 19, (random) => {
      const keys = 'fragment_polarizabilities="1.4 1.45 5.48 2.8 nan 0" relative_permittivity=3.5';
      const molecules = [ammonium, water, chloride, formaldehyde, hydroxide, carbonDioxide];
      return writeXyz(scatter(molecules, 2.4, random), { ...column, keys });
    }),
    xyz('polarizable-in-contact', 20, (random) => {
      const keys = 'fragment_polarizabilities="0.8 1.45 2.91 1.45 0.18 4.1"';
      const molecules = [hydrogenFluoride, water, carbonDioxide, water, sodium, fluoroChloroMethane];
      return writeXyz(scatter(molecules, 1.2, random), { ...column, keys });
    }),
    xyz('polarizable-with-dipoles', 21, (random) => {
      const keys =
        `fragment_charges="0 1 nan nan -0.4" fragment_dipoles="${randomVectors(4, 1.6, random)} nan nan nan" ` +
        'fragment_polarizabilities="1.64 2.2 0 2.6 3.1"';
      return writeXyz(scatter([argon, magnesium, water, ammonia, formaldehyde], 3, random), { fragments: true, keys });
    }),
    xyz('polarizable-in-a-cell', 22, (random) => {
      return skewedCell(random, 'fragment_polarizabilities="1.45 2.8 1.4 2.3 4.2" relative_permittivity=1.8');
    }),
    ...peptides(),
  ];
}

/** Molecules of a skewed cell, every atom thrown into some cell or other; sometimes one direction is open. */
function skewedCell(random: () => number, more = ''): string {
  const cell: Vec[] = [
    [13, 0.4, -0.2],
    [-5.5, 12, 0],
    [4, -4.5, 11],
  ];
  const open = random() < 0.4;
  const molecules: Molecule[] = [];
  for (const it of [water, formaldehyde, ammonium, hydroxide, fluoroChloroMethane]) {
    const centre = cell.reduce<Vec>((sum, edge) => add(sum, scale(edge, random())), [0, 0, 0]);
    const placed = move(it, randomRotation(random), centre);
    const thrown = placed.positions.map((position) => {
      const turns = [0, 1, 2].map((k) => (open && k === 2 ? 0 : Math.floor(3 * random()) - 1));
      return cell.reduce<Vec>((sum, edge, k) => add(sum, scale(edge, turns[k])), position);
    });
    molecules.push({ ...placed, positions: thrown });
  }
  const keys = `Lattice="${cell.flat().join(' ')}" pbc="T T ${open ? 'F' : 'T'}" ${more}`;
  return writeXyz(molecules, { charges: true, fragments: true, keys });
}

interface PdbRow {
  name: string;
  symbol: string;
  residue: string;
  number: number;
  position: Vec;
  /** Formal charge as columns 79-80 have it. */
  formal?: string | undefined;
  charge?: number | undefined;
}

function pdbLine(row: PdbRow, serial: number): string {
  const name = row.symbol.length === 1 ? ` ${row.name}`.padEnd(4) : row.name.padEnd(4);
  return (
    `${row.residue === 'GLY' ? 'ATOM  ' : 'HETATM'}${String(serial).padStart(5)} ${name} ` +
    `${row.residue.padStart(3)} A${String(row.number).padStart(4)}    ` +
    `${row.position.map((x) => x.toFixed(3).padStart(8)).join('')}  1.00${(row.charge ?? 0).toFixed(2).padStart(6)}` +
    `          ${row.symbol.toUpperCase().padStart(2)}${row.formal ?? ''}`
  );
}

/** Three residues of a chain, waters, ions and a zinc joined to a water by CONECT; as annotated and as charged file. */
function peptides(): InventedFile[] {
  const random = seeded(17);
  const rows: PdbRow[] = [];
  const residue = (number: number, start: Vec, up: number) => {
    const backbone: [string, Vec][] = [
      ['N', [0, 0, 0]],
      ['CA', [1.46, 0, 0]],
      ['C', [2.0, 1.42 * up, 0]],
      ['O', [1.25, 2.4 * up, 0.1]],
    ];
    for (const [name, at] of backbone) {
      const charge = { N: -0.35, CA: 0.1, C: 0.75, O: -0.5 }[name];
      rows.push({ name, symbol: name[0], residue: 'GLY', number, position: add(start, at), charge });
    }
  };
  residue(1, [0, 0, 0], 1);
  residue(2, [3.33, 1.54, 0.1], -1);
  residue(3, [6.66, 0.05, 0], 1);
  const solvent = scatter([water, water, sodium, water, chloride], 3.2, random).map((it) =>
    move(it, (v) => v, [2, 5, 4]),
  );
  solvent.forEach((it, k) => {
    it.symbols.forEach((symbol, i) => {
      const single = it.symbols.length === 1;
      rows.push({
        name: single ? symbol.toUpperCase() : ['O', 'H1', 'H2'][i],
        symbol,
        residue: single ? symbol.toUpperCase() : 'HOH',
        number: 101 + k,
        position: it.positions[i],
        charge: Number(it.charges[i].toFixed(2)),
        formal: single ? (it.charges[i] > 0 ? '1+' : '1-') : undefined,
      });
    });
  });
  const lone: Vec = [12, -4, 3];
  rows.push({ name: 'O', symbol: 'O', residue: 'HOH', number: 110, position: lone, charge: -0.8 });
  rows.push({
    name: 'ZN',
    symbol: 'Zn',
    residue: 'ZN',
    number: 111,
    position: add(lone, [0, 0, 2.05]),
    charge: 2,
    formal: '2+',
  });
  rows.push({ name: 'O', symbol: 'O', residue: 'HOH', number: 112, position: [-5, 2, 3], charge: 0 });

  const atoms = rows.map((row, i) => pdbLine(row, i + 1));
  const moved = rows.map((row, i) =>
    pdbLine({ ...row, position: add(row.position, [0, 0, row.number > 100 ? 0.7 : 0]) }, i + 1),
  );
  const zinc = rows.findIndex((row) => row.residue === 'ZN') + 1;
  const models = [atoms, moved].flatMap((lines, k) => [
    `MODEL     ${String(k + 1).padStart(4)}`,
    ...lines.slice(0, 12),
    'TER',
    ...lines.slice(12),
    'ENDMDL',
  ]);
  const conect = `CONECT${String(zinc - 1).padStart(5)}${String(zinc).padStart(5)}`;
  const cell = 'CRYST1   17.000   16.000   18.000  80.00 100.00 110.00 P 1           1';
  const annotated = [
    'REMARK  99 fragment=*:HOH:* dipole_size=1.855 axis=O>H1,H2 polarizability=1.45',
    'REMARK  99 fragment=A:GLY:* dipole_size=3.4 axis=O>C name=link',
    'REMARK  99 fragment=A:GLY:3 dipole="0.4 -0.6 0.1" dipole_unit=a.u. charge=-1',
    'REMARK  99 relative_permittivity=4 temperature=310',
  ];
  const charged = ['REMARK  99 charge_column=bfactor relative_permittivity=2'];
  return [
    { name: 'peptide-annotated', language: 'pdb', text: [...annotated, cell, ...models, conect, 'END', ''].join('\n') },
    {
      name: 'peptide-with-charges',
      language: 'pdb',
      text: [...charged, cell, ...models, conect, 'END', ''].join('\n'),
    },
    {
      name: 'peptide-in-its-cell',
      language: 'pdb',
      text: [...charged, cell, ...models, conect, 'END', ''].join('\n'),
      options: { periodic: true },
    },
  ];
}
