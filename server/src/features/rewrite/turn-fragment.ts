import type { FrameAnalysis } from '../../analysis/frame-analysis';
import { evaluatePair, type Pair } from '../../analysis/pair';
import { isWithinCutoff } from '../../analysis/partners';
import { ZERO_DIPOLE_EA } from '../../analysis/settings';
import { WhatIf } from '../../analysis/what-if';
import type { TextEdit } from '../../base/finding';
import { AtomFlag, type CoordinateTree } from '../../formats/tree';
import { atomsOf } from '../../model/fragment-set';
import { dipoleUnitEA } from '../../physics/units';
import { coordinateEdits, decimalsOf } from './coordinates';
import { significant } from './digits';
import { isMovable } from './movable';
import { isFree, type Surroundings, surroundingsOf } from './surroundings';
import {
  angleDeg,
  difference,
  dot,
  norm,
  rotated,
  rotationAbout,
  rotationBetween,
  scaledBy,
  type Vector,
  vectorAt,
} from './vectors';

/** A larger frame is not copied to try orientations in. */
const MOST_ATOMS = 50000;
/** Partners looked at for the strongest. */
const MOST_PARTNERS = 500;
/** A dipole within this of the field is left as it is, degrees. */
const ALIGNED_DEG = 2;
/** Steps about the dipole where the first orientation is barred. */
const STEPS = 24;
/** What lies farther from a fragment than its extent and this does not touch it, Å. */
const CONTACT_A = 7;
/** The energy must fall by more than what rounding of coordinates makes, kJ/mol. */
const LEAST_GAIN_KJ = 1e-3;

/** A fragment to be turned: toward which partner, the energy of the pair before and after, and the edits. */
export interface Turn {
  readonly fragment: number;
  readonly partner: number;
  readonly angleDeg: number;
  readonly beforeKJPerMol: number;
  readonly afterKJPerMol: number;
  edits(): readonly TextEdit[];
}

/**
 * Turns a fragment about its centre, which stays, so that its dipole lies along the field of its strongest partner: the smallest such
 * rotation, or one of those that differ from it by a rotation about the dipole where it would clash. `null` where nothing turns: no
 * dipole or field, aligned already, cut from a chain, in a clash as it stands, every orientation barred, or no gain.
 */
export function turnTowardStrongest(file: CoordinateTree, frame: FrameAnalysis, fragment: number): Turn | null {
  const { model, moments } = frame;
  const { atoms } = model.tree;
  if (atoms.count > MOST_ATOMS || atoms.dipoleEA !== null || !isMovable(file, frame, fragment, true)) return null;
  const dipole = vectorAt(moments.dipoleEA, fragment);
  if (!(norm(dipole) > ZERO_DIPOLE_EA) || !canRewriteDipole(file, frame, fragment)) return null;
  const pair = strongestPair(frame, fragment);
  if (pair === null) return null;
  const centre = vectorAt(moments.centreA, fragment);
  const reach = 2 * moments.extentA[fragment]! + CONTACT_A;
  // Images of the fragment itself would turn with it.
  if (model.cell !== null && Math.min(...model.cell.widthsA) < reach) return null;
  const around = surroundingsOf(frame, fragment, centre, reach);
  return around === null ? null : new Turner(file, frame, fragment, pair, around).turn(dipole);
}

/** The pair of a fragment that matters most. */
function strongestPair(frame: FrameAnalysis, fragment: number): Pair | null {
  const { system, partners } = frame;
  let strongest: Pair | null = null;
  for (const partner of partners.of(fragment, false).subarray(0, MOST_PARTNERS)) {
    const pair = evaluatePair(system, Math.min(fragment, partner), Math.max(fragment, partner));
    if (pair.contact === 'bonded' || pair.enclosed) continue;
    if (pair.contact === 'apart' && !isWithinCutoff(system, pair.first, pair.second, pair.distanceA)) continue;
    if (strongest === null || mattersMore(pair, strongest)) strongest = pair;
  }
  return strongest;
}

/** Of two pairs that happen to have no energy as they stand, the nearer could have more. */
function mattersMore(pair: Pair, than: Pair): boolean {
  const gain = pair.strengthKJPerMol - than.strengthKJPerMol;
  return Math.abs(gain) > LEAST_GAIN_KJ ? gain > 0 : pair.distanceA < than.distanceA;
}

/** Whether a vector that the file gives for a fragment holds for it alone, so that it can be turned with it. */
function canRewriteDipole(file: CoordinateTree, { model }: FrameAnalysis, fragment: number): boolean {
  const written = model.notes[fragment]!.writtenDipole;
  if (written === null) return true;
  if (file.language === 'pdb' && file.frames.length > 1) return false;
  return model.notes.every((note, f) => f === fragment || note.writtenDipole?.span.start !== written.span.start);
}

class Turner {
  readonly #file: CoordinateTree;
  readonly #frame: FrameAnalysis;
  readonly #fragment: number;
  readonly #pair: Pair;
  readonly #around: Surroundings;
  readonly #whatIf: WhatIf;
  readonly #members: Int32Array;
  readonly #centre: Vector;

  constructor(file: CoordinateTree, frame: FrameAnalysis, fragment: number, pair: Pair, around: Surroundings) {
    this.#file = file;
    this.#frame = frame;
    this.#fragment = fragment;
    this.#pair = pair;
    this.#around = around;
    this.#whatIf = new WhatIf(frame, fragment);
    this.#members = atomsOf(frame.model.fragments, fragment);
    this.#centre = vectorAt(frame.moments.centreA, fragment);
  }

  get #partner(): number {
    return this.#pair.first === this.#fragment ? this.#pair.second : this.#pair.first;
  }

  turn(dipole: Vector): Turn | null {
    // Where atoms crowd, bonds are told otherwise than after the turn: that is to be mended first.
    if (this.#placed((v) => v) === null) return null;
    const before = energyOf(this.#pair);
    for (const field of this.#fields()) {
      const angle = angleDeg(dipole, field);
      if (!(angle > ALIGNED_DEG)) continue;
      const along = rotationBetween(dipole, field);
      const axis = scaledBy(field, 1 / norm(field));
      for (let step = 0; step < STEPS; step++) {
        const about = rotationAbout(axis, (step * 2 * Math.PI) / STEPS);
        const placed = this.#placed((v) => rotated(about, rotated(along, v)));
        if (placed === null) continue;
        const after = energyOf(this.#whatIf.pairWith(this.#partner));
        if (!(before.kJPerMol - after.kJPerMol > LEAST_GAIN_KJ) || before.isReference !== after.isReference) continue;
        return {
          fragment: this.#fragment,
          partner: this.#partner,
          angleDeg: angle,
          beforeKJPerMol: before.kJPerMol,
          afterKJPerMol: after.kJPerMol,
          edits: () => placed,
        };
      }
    }
    return null;
  }

  /** Fields of the partner at the centre: of its atomic charges where those are in use, and of its charge and dipole. */
  #fields(): Vector[] {
    const { system } = this.#frame;
    const g = this.#partner;
    const { distanceA, u, first } = this.#pair;
    // From the partner to this fragment.
    const way = scaledBy(u, first === this.#fragment ? -distanceA : distanceA);
    const fields: Vector[] = [];
    if (system.ownCharges[g]) {
      let sum: Vector = [0, 0, 0];
      for (let k = system.starts[g]!; k < system.starts[g + 1]!; k++) {
        const from = difference(way, vectorAt(system.localA, k));
        const share = scaledBy(from, system.columnE[k]! / norm(from) ** 3);
        sum = [sum[0] + share[0], sum[1] + share[1], sum[2] + share[2]];
      }
      fields.push(sum);
    }
    const away = scaledBy(way, 1 / distanceA);
    const charge = system.moments.chargeE[g]! || 0;
    const dipole = vectorAt(system.moments.dipoleEA, g).map((value) => value || 0) as unknown as Vector;
    const along = 3 * dot(dipole, away);
    fields.push(
      [0, 1, 2].map(
        (a) => (charge * away[a as 0]!) / distanceA ** 2 + (along * away[a as 0]! - dipole[a as 0]!) / distanceA ** 3,
      ) as unknown as Vector,
    );
    return fields.filter((field) => norm(field) > 1e-9);
  }

  /** Places the fragment turned, in numbers as they will be written; `null` where it would clash or not fit its columns. */
  #placed(turn: (v: Vector) => Vector): readonly TextEdit[] | null {
    const { model } = this.#frame;
    const { atoms } = model.tree;
    const members = this.#members;
    const decimals = decimalsOf(this.#file, model.tree, members);
    const shifts = new Float64Array(3 * members.length);
    const places = new Float64Array(3 * members.length);
    const solid: number[] = [];
    const local: number[] = [];
    for (const [k, atom] of members.entries()) {
      const from = vectorAt(model.positionA, atom);
      const to = turn(difference(from, this.#centre));
      for (let a = 0; a < 3; a++) {
        const written = atoms.positionA[3 * atom + a]!;
        const wanted = written + to[a as 0]! + this.#centre[a as 0]! - from[a as 0]!;
        shifts[3 * k + a] = Number(wanted.toFixed(decimals)) - written;
        places[3 * k + a] = from[a as 0]! + shifts[3 * k + a]!;
      }
      if (atoms.flags[atom]! & AtomFlag.ghost) continue;
      solid.push(atoms.element[atom]!);
      local.push(...difference(vectorAt(places, k), this.#centre));
    }
    if (!isFree(solid, local, this.#around)) return null;
    const edits = coordinateEdits(this.#file, model.tree, members, shifts, decimals);
    const vector = this.#turnedDipole(turn);
    if (edits === null) return null;
    this.#whatIf.place(places, vector?.dipoleEA ?? null);
    return [...edits, ...(vector?.edits ?? [])];
  }

  /** The vector that the file gives, turned; `null` where it gives none. */
  #turnedDipole(turn: (v: Vector) => Vector): { dipoleEA: Vector; edits: TextEdit[] } | null {
    const { writtenDipole, dipoleEA } = this.#frame.model.notes[this.#fragment]!;
    if (writtenDipole === null || dipoleEA === null) return null;
    const unit = dipoleUnitEA(writtenDipole.unit)!;
    const texts = writtenDipole.items.map(({ start, end }) => this.#file.text.slice(start, end));
    const size = norm(dipoleEA) / unit;
    const written = turn(dipoleEA).map((value) => significant(value / unit, texts, size));
    const edits = writtenDipole.items.flatMap(({ start, end }, a) =>
      written[a] === texts[a] ? [] : [{ start, end, text: written[a]! }],
    );
    return { dipoleEA: written.map((text) => Number(text) * unit) as unknown as Vector, edits };
  }
}

/** The energy that a pair is judged by: the reference, where there is one, else the point dipole. */
function energyOf(pair: Pair): { kJPerMol: number; isReference: boolean } {
  const isReference = Number.isFinite(pair.referenceKJPerMol);
  return { kJPerMol: isReference ? pair.referenceKJPerMol : pair.energies.pointDipole, isReference };
}
