import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

/** A box of water as text: one molecule a lattice place (0.1 atoms/Å³), shaken and turned at random from a fixed seed. */
export interface WaterBox {
  readonly atoms: number;
  readonly xyz: string;
  readonly pdb: string;
}

const SPACING_A = 3.107;
const SHAKE_A = 0.15;
const BOND_A = 0.9572;
const HALF_ANGLE = (104.52 / 2) * (Math.PI / 180);

export function waterBox(atLeast: number): WaterBox {
  const random = mulberry(20260101);
  const molecules = Math.ceil(atLeast / 3);
  const side = Math.ceil(Math.cbrt(molecules));
  const xyz = [`${3 * molecules}`, 'water'];
  const pdb: string[] = [];
  for (let m = 0; m < molecules; m++) {
    const shaken = (n: number) => (n + 0.5) * SPACING_A + (random() - 0.5) * 2 * SHAKE_A;
    const o = [shaken(m % side), shaken(Math.floor(m / side) % side), shaken(Math.floor(m / side / side))];
    const [p, q] = perpendicular(random);
    const hydrogens = [1, -1].map((sign) =>
      o.map((c, k) => c + BOND_A * (Math.cos(HALF_ANGLE) * p[k]! + sign * Math.sin(HALF_ANGLE) * q[k]!)),
    );
    for (const [n, place] of [o, ...hydrogens].entries()) {
      const symbol = n === 0 ? 'O' : 'H';
      xyz.push(`${symbol} ${place.map((c) => c.toFixed(5).padStart(10)).join('')}`);
      const serial = String((3 * m + n + 1) % 100000).padStart(5);
      const name = ['O', 'H1', 'H2'][n]!.padEnd(3);
      const residue = `HOH W${String((m + 1) % 10000).padStart(4)}`;
      const coordinates = place.map((c) => c.toFixed(3).padStart(8)).join('');
      pdb.push(`HETATM${serial}  ${name} ${residue}    ${coordinates}  1.00  0.00           ${symbol}  `);
    }
  }
  return { atoms: 3 * molecules, xyz: `${xyz.join('\n')}\n`, pdb: `${pdb.join('\n')}\nEND\n` };
}

/** Two random unit vectors at right angles. */
function perpendicular(random: () => number): [number[], number[]] {
  const draw = () => unit([random() - 0.5, random() - 0.5, random() - 0.5]);
  const p = draw();
  const raw = draw();
  const along = raw.reduce((sum, c, k) => sum + c * p[k]!, 0);
  return [p, unit(raw.map((c, k) => c - along * p[k]!))];
}

function unit(v: number[]): number[] {
  const length = Math.hypot(...v) || 1;
  return v.map((c) => c / length);
}

export function mulberry(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Writes the texts of a box where the C reference reads them; returns their folder. */
export function writeBox({ atoms, xyz, pdb }: WaterBox, folder: string): string {
  const data = join(folder, String(atoms));
  mkdirSync(data, { recursive: true });
  writeFileSync(join(data, 'water.xyz'), xyz);
  writeFileSync(join(data, 'water.pdb'), pdb);
  return data;
}
