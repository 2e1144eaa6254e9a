import { type FrameAnalysis, pairsOf } from '../analysis/frame-analysis';
import { energyInUse, type Pair } from '../analysis/pair';
import { ZERO_DIPOLE_EA } from '../analysis/settings';
import type { Span } from '../base/span';
import type { Steps } from '../base/steps';
import type { Entry } from '../formats/annotation/entries';
import { atomAtLine } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import { frameAtLine } from './frame-at';
import { KEY_DOCS } from './key-docs';
import { byStrength, namesOf, type PartnerView, pairsOfFragment, viewFrom } from './partner-view';
import { type FragmentRecord, fragmentRecord, type InductionRecord, inductionRecord, known } from './records';

/** What a hover shows, as plain data. */
export type HoverData =
  | {
      readonly kind: 'fragment';
      readonly span: Span;
      readonly atomNumber: number;
      readonly fragment: FragmentRecord;
      readonly centre: string;
      readonly kTKJPerMol: number;
      /** Those that matter most, strongest first. */
      readonly partners: readonly PartnerView[];
      readonly partnerCount: number;
    }
  | {
      readonly kind: 'frame';
      readonly span: Span;
      readonly frame: number;
      readonly frames: number;
      readonly atoms: number;
      readonly fragments: number;
      readonly kTKJPerMol: number;
      readonly strongest: readonly PartnerView[];
      readonly pairCount: number;
      /** Sum over the pairs whose energy is known, and how many these are. */
      readonly sumKJPerMol: number;
      readonly summedPairs: number;
      readonly regimes: Readonly<Record<'far' | 'edge' | 'near' | 'none', number>>;
      readonly induction: InductionRecord;
    }
  | { readonly kind: 'key'; readonly span: Span; readonly key: string; readonly text: string }
  | {
      readonly kind: 'dipole';
      readonly span: Span;
      readonly key: string;
      readonly text: string;
      readonly fragment: FragmentRecord;
      readonly centre: string;
      /** The written value as read, e·Å. */
      readonly sizeEA: number;
      /** Dipole of the charge column, for comparison: size, and angle to the dipole in use. */
      readonly chargesEA: number | null;
      readonly angleDeg: number | null;
    };

const MOST_PARTNERS = 5;
/** A frame with more pairs is not summed up in a hover. */
const MOST_PAIRS = 200000;
/** Pairs looked at between two pauses. */
const PAIRS_A_STEP = 512;

/** What to show at an offset, or `null` where there is nothing to say. `frame` is the one of {@link frameIndexAt}, `null` for none. */
export function* hoverSteps(
  file: CoordinateTree,
  offset: number,
  frame: FrameAnalysis | null,
): Steps<HoverData | null> {
  const line = file.lines.lineAt(offset);
  const tree = frameAtLine(file, line);
  const onLine = file.remarks.filter((remark) => remark.line === line).flatMap((remark) => remark.entries);
  const key = keyAt([...(tree?.entries ?? []), ...onLine], offset);
  if (key !== null) return frame === null ? key : (dipoleAt(frame, key, offset) ?? key);
  if (tree === undefined || frame === null) return null;
  const atom = atomAtLine(tree, line);
  if (atom >= 0) return fragmentHover(frame, atom);
  if (line === tree.headLine || line === tree.firstLine) return yield* frameHover(file, frame, line);
  return null;
}

type KeyHover = Extract<HoverData, { kind: 'key' }>;

/** The dipole written at an offset, with what it is compared with; `null` where none is. */
function dipoleAt(frame: FrameAnalysis, { key, text }: KeyHover, offset: number): HoverData | null {
  const holds = (span: Span | undefined) => span !== undefined && offset >= span.start && offset <= span.end;
  const { notes } = frame.model;
  const f = notes.findIndex((note) => holds(note.writtenDipole?.span) || holds(note.writtenSize?.span));
  if (f < 0) return null;
  const note = notes[f]!;
  const written = holds(note.writtenDipole?.span) ? note.writtenDipole! : note.writtenSize!;
  const { moments } = frame;
  const vector = (array: Float64Array) => [array[3 * f]!, array[3 * f + 1]!, array[3 * f + 2]!] as const;
  const used = vector(moments.dipoleEA);
  const charges = vector(moments.columnDipoleEA);
  const chargesEA = known(Math.hypot(...charges));
  const cosine =
    (used[0] * charges[0] + used[1] * charges[1] + used[2] * charges[2]) /
    (Math.hypot(...used) * Math.hypot(...charges));
  const angle = (Math.acos(Math.max(-1, Math.min(1, cosine))) * 180) / Math.PI;
  return {
    kind: 'dipole',
    span: written.span,
    key,
    text,
    fragment: fragmentRecord(frame, f, namesOf(frame)),
    centre: frame.settings.centre,
    sizeEA:
      note.dipoleEA !== null && written === note.writtenDipole
        ? Math.hypot(...note.dipoleEA)
        : (note.dipoleSizeEA ?? 0),
    chargesEA,
    angleDeg: chargesEA === null || chargesEA < ZERO_DIPOLE_EA ? null : known(angle),
  };
}

function keyAt(entries: readonly Entry[], offset: number): KeyHover | null {
  const entry = entries.find(({ keySpan, value }) => offset >= keySpan.start && offset <= value.end);
  // A key may be called like what every object has.
  const text = entry === undefined || !Object.hasOwn(KEY_DOCS, entry.key) ? undefined : KEY_DOCS[entry.key];
  if (entry === undefined || text === undefined) return null;
  return { kind: 'key', span: { start: entry.keySpan.start, end: entry.value.end }, key: entry.key, text };
}

function fragmentHover(frame: FrameAnalysis, atom: number): HoverData | null {
  const f = frame.model.fragments.ofAtom[atom]!;
  if (f < 0) return null;
  const pairs = pairsOfFragment(frame, f);
  const views = pairs
    .sort(byStrength)
    .slice(0, MOST_PARTNERS)
    .map((pair) => viewFrom(frame, f, pair));
  return {
    kind: 'fragment',
    span: frame.model.tree.fieldSpan(atom, 'line'),
    atomNumber: atom + 1,
    fragment: fragmentRecord(frame, f, namesOf(frame)),
    centre: frame.settings.centre,
    kTKJPerMol: frame.system.kTKJPerMol,
    partners: views,
    partnerCount: pairs.length,
  };
}

function* frameHover(file: CoordinateTree, frame: FrameAnalysis, line: number): Steps<HoverData> {
  const { tree } = frame.model;
  const strongest: Pair[] = [];
  const regimes = { far: 0, edge: 0, near: 0, none: 0 };
  let sum = 0;
  let summed = 0;
  let count = 0;
  for (const pair of pairsOf(frame)) {
    if (++count > MOST_PAIRS) break;
    if (count % PAIRS_A_STEP === 0) yield;
    regimes[pair.regime ?? 'none']++;
    const energy = known(energyInUse(pair));
    if (energy !== null) {
      sum += energy;
      summed++;
    }
    strongest.push(pair);
    if (strongest.length > 4 * MOST_PARTNERS) strongest.sort(byStrength).splice(MOST_PARTNERS);
  }
  const start = file.lines.starts[line]!;
  return {
    kind: 'frame',
    span: { start, end: file.lines.end(line) },
    frame: frame.index + 1,
    frames: file.frames.length,
    atoms: tree.atoms.count,
    fragments: frame.model.fragments.count,
    kTKJPerMol: frame.system.kTKJPerMol,
    strongest: strongest
      .sort(byStrength)
      .slice(0, MOST_PARTNERS)
      .map((pair) => viewFrom(frame, pair.first, pair)),
    pairCount: count,
    sumKJPerMol: sum,
    summedPairs: summed,
    regimes,
    induction: inductionRecord(frame),
  };
}
