import { randomFrom } from './random-edits';

export interface WaterOptions {
  /** Dipoles by composition. */
  readonly kinds?: boolean;
  /** A charge column. */
  readonly charges?: boolean;
  /** A dipole for every fragment. */
  readonly list?: boolean;
  /** One behind the other, so that few see each other. */
  readonly row?: boolean;
  /** Edge of a cubic cell, Å. */
  readonly cellA?: number;
}

/** Extended XYZ of waters on a loose lattice, turned at random. */
export function waterBoxXyz(molecules: number, { kinds, charges, list, row, cellA }: WaterOptions): string {
  const random = randomFrom(molecules);
  const side = Math.ceil(Math.cbrt(molecules));
  const spacing = cellA === undefined ? 3.1 : cellA / side;
  const rows: string[] = [];
  const write = (symbol: string, at: readonly number[], charge: number) =>
    rows.push([symbol, ...at.map((x) => x.toFixed(4)), ...(charges ? [charge] : [])].join(' '));
  for (let m = 0; m < molecules; m++) {
    const place = row ? [m, 0, 0] : [m % side, Math.floor(m / side) % side, Math.floor(m / side / side)];
    const o = place.map((n) => (n + 0.4 * random()) * spacing);
    const turn = random() * 2 * Math.PI;
    const along = (angle: number) => [
      o[0]! + 0.96 * Math.cos(angle),
      o[1]! + 0.96 * Math.sin(angle),
      o[2]! + 0.1 * random(),
    ];
    write('O', o, -0.8);
    write('H', along(turn), 0.4);
    write('H', along(turn + 1.82), 0.4);
  }
  const keys = [
    ...(charges ? ['Properties=species:S:1:pos:R:3:charge:R:1'] : []),
    ...(kinds ? ['kind_dipole_sizes=H2O:1.85 kind_axes=H2O:O>H'] : []),
    ...(list ? [`fragment_dipoles="${Array.from({ length: 3 * molecules }, (_, k) => (k % 3) - 0.7).join(' ')}"`] : []),
    ...(cellA === undefined ? [] : [`Lattice="${cellA} 0 0 0 ${cellA} 0 0 0 ${cellA}" pbc="T T T"`]),
  ];
  return [rows.length, keys.join(' '), ...rows, ''].join('\n');
}

/** PDB records of a stretched chain of glycines with a water beside each, and charges in the occupancy columns of a remark. */
export function proteinLikePdb(residues: number): string {
  const random = randomFrom(residues);
  const rows: string[] = ['REMARK  99 fragment=*:HOH:* dipole_size=1.85 axis=O>H1,H2'];
  let serial = 0;
  const atom = (
    record: string,
    name: string,
    residue: string,
    number: number,
    at: readonly number[],
    element: string,
  ) => {
    const place = at.map((x) => x.toFixed(3).padStart(8)).join('');
    const named = name.length < 4 ? ` ${name}`.padEnd(4) : name;
    rows.push(
      `${record.padEnd(6)}${String(++serial).padStart(5)} ${named} ${residue} A${String(number).padStart(4)}    ${place}  1.00  0.00          ${element.padStart(2)}  `,
    );
  };
  for (let n = 0; n < residues; n++) {
    const x = 3.6 * n;
    const shaken = (place: readonly number[]) => place.map((c) => c + 0.1 * random());
    atom('ATOM', 'N', 'GLY', n + 1, shaken([x, 0, 0]), 'N');
    atom('ATOM', 'CA', 'GLY', n + 1, shaken([x + 1.1, 0.8, 0]), 'C');
    atom('ATOM', 'C', 'GLY', n + 1, shaken([x + 2.3, 0, 0]), 'C');
    atom('ATOM', 'O', 'GLY', n + 1, shaken([x + 2.3, -1.2, 0]), 'O');
    atom('ATOM', 'H', 'GLY', n + 1, shaken([x, -1, 0.1]), 'H');
  }
  for (let n = 0; n < residues; n++) {
    const o = [3.6 * n + 1, 3.4 + random(), 0.5 * random()];
    atom('HETATM', 'O', 'HOH', residues + n + 1, o, 'O');
    atom('HETATM', 'H1', 'HOH', residues + n + 1, [o[0]! + 0.76, o[1]! + 0.58, o[2]!], 'H');
    atom('HETATM', 'H2', 'HOH', residues + n + 1, [o[0]! - 0.76, o[1]! + 0.58, o[2]!], 'H');
  }
  return [...rows, 'END', ''].join('\n');
}
