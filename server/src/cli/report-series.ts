import { csvLine } from '../features/csv';
import { fixed, NOTHING, plural } from '../features/number-text';
import type { SeriesFrame } from '../features/series';
import type { SeriesEvent } from '../features/series-events';
import { type EnergyUnit, energyUnitsPerKJPerMol } from '../physics/units';
import type { Output } from './output';
import { CAUTIONS, shownEnergy } from './report-text';
import type { SeriesForReport } from './series-command';
import { type Column, textTable } from './table';

/** More frames than this are thinned out in the table. */
const MOST_ROWS = 40;
/** More events than this are only counted in the text. */
const MOST_EVENTS = 200;

/** The series as one JSON object, a frame a line. */
export async function writeSeriesJson(output: Output, { name, language, series, nameOf }: SeriesForReport) {
  const { settings, events } = series;
  const fragment = (number: number) => ({ fragment: number, ...nameOf(number - 1) });
  const [first, second] = [fragment(series.first), fragment(series.second)];
  const head = { schema: 'polewise/series/1', file: name, language, settings, first, second };
  output.write(`${JSON.stringify(head).slice(0, -1)},"frames":[`);
  await writeEach(output, series.frames, (frame, k) => `${k === 0 ? '' : ','}\n${JSON.stringify(frame)}`);
  output.write('\n],"events":[');
  await writeEach(output, events, (event, k) => `${k === 0 ? '' : ','}\n${JSON.stringify(event)}`);
  output.write('\n]}\n');
}

/** One frame a row, with the names of the JSON fields; `events` holds the kinds of what happens up to the frame. */
export async function writeSeriesCsv(output: Output, { name, series }: SeriesForReport) {
  const kinds = kindsByFrame(series.events);
  output.write(csvLine(['file', ...Object.keys(series.frames[0]!), 'events']));
  await writeEach(output, series.frames, (frame) =>
    csvLine([name, ...Object.values(frame), (kinds.get(frame.frame) ?? []).join(' ')]),
  );
}

async function writeEach<T>(output: Output, items: readonly T[], text: (item: T, k: number) => string) {
  for (const [k, item] of items.entries()) {
    output.write(text(item, k));
    if (output.isFull) await output.flush();
  }
}

/** Kinds of the events that end in each frame, or during which it misses the pair. */
function kindsByFrame(events: readonly SeriesEvent[]): Map<number, string[]> {
  const kinds = new Map<number, string[]>();
  for (const { kind, fromFrame, toFrame } of events) {
    for (let frame = kind === 'missing' ? fromFrame : toFrame; frame <= toFrame; frame++) {
      const others = kinds.get(frame);
      if (others === undefined) kinds.set(frame, [kind]);
      else others.push(kind);
    }
  }
  return kinds;
}

const COLUMNS: readonly Column[] = [
  { title: 'frame', align: 'right' },
  { title: 'R/Å', align: 'right' },
  { title: 'point', align: 'right' },
  { title: 'reference', align: 'right' },
  { title: 'ind.', align: 'right' },
  { title: 'disp.', align: 'right' },
  { title: '|E|/kT', align: 'right' },
  { title: 'contact', align: 'left' },
  { title: 'regime', align: 'left' },
  { title: 'advice', align: 'left' },
  { title: 'event', align: 'left' },
];

/** The series for people: a table, what happens in words, the caution. */
export async function writeSeriesText(output: Output, opened: SeriesForReport, unit: EnergyUnit) {
  const { frames, events } = opened.series;
  const told = events.slice(0, MOST_EVENTS);
  const shown = shownFrames(frames, told);
  const kinds = kindsByFrame(events);
  output.write(headText(opened));
  output.write(
    `  Energies in ${unit}${shown.length < frames.length ? thinnedText(frames.length, shown.length) : ''}\n`,
  );
  output.write(
    textTable(
      COLUMNS,
      shown.map((frame) => rowOf(frame, unit, kinds.get(frame.frame) ?? [])),
    ),
  );
  output.write(`\n${countsText(events)}\n`);
  output.write(told.map((event) => `  ${eventText(event)}\n`).join(''));
  if (told.length < events.length) output.write(`  … and ${events.length - told.length} more (--format json)\n`);
  output.write(CAUTIONS);
}

function headText({ name, series, nameOf }: SeriesForReport): string {
  const { first, second, settings, frames } = series;
  const [one, other] = [first, second].map((number) => {
    const { name, label } = nameOf(number - 1);
    return label ?? name;
  });
  const temperatures = new Set(frames.flatMap(({ kTKJPerMol }) => (kTKJPerMol === null ? [] : [kTKJPerMol])));
  const facts = [
    `${Number(settings.temperatureK.toFixed(2))} K${temperatures.size > 1 ? ' in the first frame' : ''}`,
    `relative permittivity ${settings.relativePermittivity}`,
    `centre of ${settings.centre === 'nuclear-charge' ? 'nuclear charge' : settings.centre}`,
    ...(settings.periodic ? ['periodic'] : []),
  ];
  return `${name}: pair ${first}–${second} ${one}·${other}, ${plural(frames.length, 'frame')}\n${facts.join(', ')}\n\n`;
}

function countsText(events: readonly SeriesEvent[]): string {
  if (events.length === 0) return 'No events';
  const counts = new Map<string, number>();
  for (const { kind } of events) counts.set(kind, (counts.get(kind) ?? 0) + 1);
  return `${plural(events.length, 'event')}: ${[...counts].map(([kind, count]) => `${count} ${kind}`).join(', ')}`;
}

function thinnedText(total: number, shown: number): string {
  return `; ${shown} of ${total} frames, among them those of the events below (--format csv has every one)`;
}

/** All frames of a short series; of a long one every n-th, the last, and those that events name. */
function shownFrames(frames: readonly SeriesFrame[], events: readonly SeriesEvent[]): readonly SeriesFrame[] {
  if (frames.length <= MOST_ROWS) return frames;
  const stride = Math.ceil(frames.length / MOST_ROWS);
  const named = new Set(events.flatMap(({ fromFrame, toFrame }) => [fromFrame, toFrame]));
  return frames.filter(({ frame }) => (frame - 1) % stride === 0 || frame === frames.length || named.has(frame));
}

function rowOf(frame: SeriesFrame, unit: EnergyUnit, kinds: readonly string[]): string[] {
  const energy = (value: number | null) =>
    value === null || frame.kTKJPerMol === null
      ? NOTHING
      : shownEnergy(value * energyUnitsPerKJPerMol(unit, frame.kTKJPerMol));
  return [
    String(frame.frame),
    fixed(frame.distanceA, 2),
    energy(frame.pointDipoleKJPerMol),
    energy(frame.referenceKJPerMol),
    energy(frame.inductionKJPerMol),
    energy(frame.dispersionKJPerMol),
    fixed(frame.multipleOfKT, 2),
    frame.contact ?? NOTHING,
    frame.regime ?? NOTHING,
    frame.advice ?? NOTHING,
    kinds.join(', '),
  ];
}

const SUBJECTS: Readonly<Record<SeriesEvent['kind'], string>> = {
  sign: 'the energy changes sign, ',
  regime: 'regime ',
  kT: '',
  contact: 'contact ',
  missing: 'missing: ',
};

function eventText({ kind, fromFrame, toFrame, what, fraction, distanceA }: SeriesEvent): string {
  const said = `${SUBJECTS[kind]}${what}`;
  if (kind === 'missing')
    return `${fromFrame === toFrame ? `frame ${fromFrame}` : `frames ${fromFrame} to ${toFrame}`}: ${said}`;
  const place =
    fraction === null
      ? ''
      : `, about frame ${(fromFrame + fraction).toFixed(2)}${distanceA === null ? '' : ` (R ${fixed(distanceA, 2)} Å)`}`;
  return `between frames ${fromFrame} and ${toFrame}: ${said}${place}`;
}
