import { DEBYE } from './constants.js';
import type { Decisions } from './doubts.js';
import { isMatter } from './fragments.js';
import { add, distance, dot, eigen, length, mean, scale, subtract } from './linear.js';
import { chargeSites, type Site, siteEnergy } from './multipoles.js';
import type { Fragment, Matrix, Vec } from './types.js';

/** What the point dipole is held against: the charges, fitted charges, or dipoles of finite extent. */

export interface Reference {
  basis: 'charges' | 'fitted' | 'extent' | 'none';
  /** Vacuum energy, kJ/mol, with the second fragment moved by `shift`; `point` is the point-dipole energy there. */
  energy: ((shift: Vec, point: number) => number) | null;
}

/** A direction thinner than this (root mean square, Å) is flat. */
const FLAT = 0.02;

const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0);

/** Small against the dipole in use: 2 % of it, or 0.02 D. */
const slack = (fragment: Fragment): number => Math.max(0.02 * (fragment.dipoleSize ?? 0), 0.02 * DEBYE);

/** The dipole in use and the net charge are those of the charge column. */
function ownCharges(fragment: Fragment, decide: Decisions): boolean {
  const { dipole, chargesDipole, column, charge } = fragment;
  if (dipole === null || chargesDipole === null || column === null) return false;
  const sameDipole = decide.atMost(distance(dipole, chargesDipole), slack(fragment), 'numbers');
  const sameCharge = decide.atMost(Math.abs(charge - sum(column)), 0.1, 'numbers');
  return sameDipole && sameCharge;
}

/** The Coulomb sum alone, where the charges are the moments' own. */
export function chargesReference(first: Fragment, second: Fragment, decide: Decisions): Reference {
  if (!ownCharges(first, decide) || !ownCharges(second, decide)) return { basis: 'none', energy: null };
  const a = chargeSites(first.positions, first.column!);
  const b = chargeSites(second.positions, second.column!);
  return { basis: 'charges', energy: (shift) => siteEnergy(a, b, shift) };
}

export function bestReference(first: Fragment, second: Fragment, decide: Decisions): Reference {
  const charges = chargesReference(first, second, decide);
  if (charges.energy !== null) return charges;
  const a = fittedSites(first, decide);
  const b = fittedSites(second, decide);
  if (a !== null && b !== null) return { basis: 'fitted', energy: (shift) => siteEnergy(a, b, shift) };
  const variantsA = extentSites(first);
  const variantsB = extentSites(second);
  if (variantsA === null || variantsB === null) return { basis: 'none', energy: null };
  const energy = (shift: Vec, point: number): number => {
    const energies = variantsA.flatMap((one) => variantsB.map((other) => siteEnergy(one, other, shift)));
    return energies.reduce((worst, e) => (Math.abs(e - point) > Math.abs(worst - point) ? e : worst));
  };
  return { basis: 'extent', energy };
}

/**
 * Charges moved from their start by the least-squares change that gives the net charge and the dipole in use: with
 * positions taken from their mean, δ_i = ΔQ/n + s_i·M⁺(Δμ − ΔQ s̄), M = Σ s s^T, M⁺ its pseudo-inverse by eigenvectors.
 */
export function fittedCharges(fragment: Fragment, decide: Decisions): { positions: Vec[]; charges: number[] } | null {
  const { dipole, column, symbols, centre } = fragment;
  if (dipole === null) return null;
  const movable = symbols.map((_, i) => i).filter((i) => isMatter(symbols, i));
  if (column === null && length(dipole) === 0 && movable.length > 1) return null;
  const start = column ?? symbols.map(() => 0);
  let startDipole: Vec = [0, 0, 0];
  fragment.positions.forEach((position, i) => {
    startDipole = add(startDipole, scale(subtract(position, centre), start[i]));
  });

  const n = movable.length;
  const middle = mean(movable.map((i) => fragment.positions[i]));
  const arms = movable.map((i) => subtract(fragment.positions[i], middle));
  const chargeChange = fragment.charge - sum(start);
  const dipoleChange = subtract(subtract(dipole, startDipole), scale(subtract(middle, centre), chargeChange));
  let field: Vec = [0, 0, 0];
  for (const { value, vector } of eigen(gram(arms))) {
    const component = dot(dipoleChange, vector);
    if (decide.below(Math.sqrt(Math.max(value, 0) / n), FLAT, 'numbers')) {
      if (!decide.atMost(Math.abs(component), slack(fragment), 'numbers')) return null;
    } else {
      field = add(field, scale(vector, component / value));
    }
  }
  const charges = [...start];
  movable.forEach((i, k) => {
    charges[i] += chargeChange / n + dot(arms[k], field);
  });
  return { positions: fragment.positions, charges };
}

function fittedSites(fragment: Fragment, decide: Decisions): Site[] | null {
  const fit = fittedCharges(fragment, decide);
  return fit === null ? null : chargeSites(fit.positions, fit.charges);
}

function gram(arms: Vec[]): Matrix {
  const entry = (a: number, b: number): number => sum(arms.map((s) => s[a] * s[b]));
  const row = (a: number): Vec => [entry(a, 0), entry(a, 1), entry(a, 2)];
  return [row(0), row(1), row(2)];
}

/** The dipole as two opposite charges one extent apart, midpoint at 0, +a/4, −a/4 along it; null where that says nothing. */
function extentSites(fragment: Fragment): Site[][] | null {
  const { dipole, extent, centre, charge, column } = fragment;
  if (dipole === null) return null;
  const size = length(dipole);
  const whole: Site = { position: centre, charge, dipole };
  if (extent === 0) return [[whole]];
  if (size === 0) return column === null ? null : [[whole]];
  const along = scale(dipole, 1 / size);
  return [0, extent / 4, -extent / 4].map((offset) => {
    const end = (sign: number): Site => ({
      position: add(centre, scale(along, offset + (sign * extent) / 2)),
      charge: (sign * size) / extent,
      dipole: [0, 0, 0],
    });
    return [{ ...whole, dipole: [0, 0, 0] }, end(1), end(-1)];
  });
}
