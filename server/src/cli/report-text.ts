import type { Advice } from '../analysis/advice';
import type { FrameAnalysis } from '../analysis/frame-analysis';
import { fixed, NOTHING, plural } from '../features/number-text';
import {
  type FragmentName,
  findingRecord,
  fragmentRecord,
  inductionRecord,
  type Maybe,
  type PairRecord,
  pairRecord,
} from '../features/records';
import { energyUnitsPerKJPerMol } from '../physics/units';
import { countBySeverity, countsInWords } from './findings-command';
import type { FileForReport, PairReport, PairsOptions } from './pairs-command';
import { type Column, textTable } from './table';

const MOST_FRAGMENTS = 30;
const PARTIAL = '*';

export const CAUTIONS =
  'Estimates for triage, no substitute for a quantum calculation. Hydrogen bonds, charge transfer and exchange are in none of these\n' +
  'numbers, and a bulk permittivity does not screen touching molecules. Dipoles point from negative to positive charge.\n';

/** The pair table for people: the first frame, or the one asked for. */
export function textReport(options: PairsOptions): PairReport {
  let written = 0;
  return {
    begin() {},
    async writeFile(output, opened, pause) {
      if (written++ > 0) output.write('\n');
      const { frame, pairs, nameOf } = opened.frameAt(0);
      output.write(headText(opened, frame));
      output.write(fragmentTable(frame, nameOf));
      const rows: string[][] = [];
      const advice = new Map<Advice | 'none', number>();
      const scale = energyUnitsPerKJPerMol(options.unit, frame.system.kTKJPerMol);
      for (const pair of pairs) {
        const record = pairRecord(frame.system, pair);
        rows.push(pairRow(record, nameOf, scale, frame.system.kTKJPerMol));
        const key = record.advice ?? 'none';
        advice.set(key, (advice.get(key) ?? 0) + 1);
        const turn = pause();
        if (turn !== undefined) await turn;
      }
      output.write('\n');
      output.write(
        rows.length === 0
          ? `  No pairs within ${frame.settings.cutoffA} Å.\n`
          : `  Energies in ${options.unit}\n${textTable(PAIR_COLUMNS, rows)}`,
      );
      const partial = rows.some((row) => row.some((cell) => cell.endsWith(PARTIAL)));
      if (partial) output.write(`  ${PARTIAL} of the charges alone: a dipole is unknown\n`);
      output.write(sourcesText(frame, options.unit, scale));
      output.write(`\n${footText(opened, options.with, rows.length, advice)}${CAUTIONS}`);
    },
    end() {},
  };
}

function headText({ name, file, frameNumbers }: FileForReport, frame: FrameAnalysis): string {
  const { settings, model, system } = frame;
  const total = file.frames.length;
  const follow = frameNumbers.length - 1;
  const facts = [
    plural(model.tree.atoms.count, 'atom'),
    plural(system.count, 'fragment'),
    `${Number(settings.temperatureK.toFixed(2))} K (kT = ${system.kTKJPerMol.toFixed(3)} kJ/mol)`,
    `relative permittivity ${settings.relativePermittivity}`,
    `centre of ${settings.centre === 'nuclear-charge' ? 'nuclear charge' : settings.centre}`,
    ...(model.cell === null ? [] : ['periodic']),
  ];
  const more = follow > 0 ? `, ${follow} more follow${follow === 1 ? 's' : ''} (--frame N)` : '';
  return `${name}: frame ${frame.index + 1} of ${total}${more}\n${facts.join(', ')}\n\n`;
}

function fragmentTable(frame: FrameAnalysis, nameOf: (f: number) => FragmentName): string {
  const columns: Column[] = [
    { title: '#', align: 'right' },
    { title: 'fragment', align: 'left' },
    { title: 'atoms', align: 'right' },
    { title: 'charge/e', align: 'right' },
    { title: 'from', align: 'left' },
    { title: 'dipole/D', align: 'right' },
    { title: 'from', align: 'left' },
    { title: 'extent/Å', align: 'right' },
  ];
  const shown = Math.min(frame.system.count, MOST_FRAGMENTS);
  const rows = Array.from({ length: shown }, (_, f) => {
    const record = fragmentRecord(frame, f, nameOf);
    return [
      String(record.fragment),
      record.label ?? record.name,
      String(record.atoms.length),
      fixed(record.chargeE, 3),
      record.chargeSource,
      fixed(record.dipoleNormD, 3) +
        (record.dipoleErrorD === null ? '' : ` ±${record.dipoleErrorD.toFixed(2)}`) +
        (record.dipoleD === null && record.dipoleNormD !== null ? ' (no direction)' : ''),
      record.dipoleSource,
      fixed(record.extentA, 2),
    ];
  });
  const more = frame.system.count - shown;
  return textTable(columns, rows) + (more > 0 ? `  … and ${more} more fragments\n` : '');
}

const PAIR_COLUMNS: readonly Column[] = [
  { title: 'pair', align: 'left' },
  { title: 'R/Å', align: 'right' },
  { title: 'θ₁/°', align: 'right' },
  { title: 'θ₂/°', align: 'right' },
  { title: 'φ/°', align: 'right' },
  { title: 'arrangement', align: 'left' },
  { title: 'point', align: 'right' },
  { title: 'reference', align: 'right' },
  { title: 'basis', align: 'left' },
  { title: 'error', align: 'right' },
  { title: 'ind.', align: 'right' },
  { title: 'disp.', align: 'right' },
  { title: '|E|/kT', align: 'right' },
  { title: 'rotating', align: 'right' },
  { title: 'motion', align: 'left' },
  { title: 'contact', align: 'left' },
  { title: 'regime', align: 'left' },
  { title: 'advice', align: 'left' },
];

function pairRow(record: PairRecord, nameOf: (f: number) => FragmentName, scale: number, kTKJPerMol: number): string[] {
  const energy = (value: Maybe) => (value === null ? NOTHING : shownEnergy(value * scale));
  const { pointDipole, chargeCharge, coulomb } = record.energyKJPerMol;
  // Two ions whose dipoles are unknown: what their charges do is known, and is most of it.
  const partial = pointDipole === null && chargeCharge !== null && chargeCharge !== 0 ? chargeCharge : null;
  const mark = partial === null ? '' : PARTIAL;
  const matters = record.referenceKJPerMol ?? pointDipole ?? coulomb ?? partial;
  return [
    `${record.first}–${record.second} ${nameOf(record.first - 1).name}·${nameOf(record.second - 1).name}`,
    fixed(record.distanceA, 2),
    fixed(record.theta1Deg, 0),
    fixed(record.theta2Deg, 0),
    fixed(record.phiDeg, 0),
    record.arrangement ?? NOTHING,
    energy(pointDipole ?? partial) + mark,
    record.referenceKJPerMol === null
      ? NOTHING
      : energy(record.referenceKJPerMol) + uncertainty(record.dipoleUncertaintyKJPerMol, scale),
    record.basis === 'none' ? NOTHING : record.basis,
    record.relativeError === null ? NOTHING : percent(record.relativeError),
    energy(record.energyKJPerMol.induction),
    energy(record.energyKJPerMol.dispersion),
    matters === null ? NOTHING : fixed(Math.abs(matters) / kTKJPerMol, 1) + mark,
    energy(record.thermal.averageKJPerMol),
    record.thermal.motion ?? NOTHING,
    record.contact,
    record.regime ?? NOTHING,
    record.advice ?? NOTHING,
  ];
}

/** What the sources of dipoles mean, where they are not the file's, and the induction of the whole frame. */
function sourcesText(frame: FrameAnalysis, unit: string, scale: number): string {
  const { dipoleSource } = frame.system.moments;
  const lines: string[] = [];
  if (dipoleSource.includes('library')) {
    lines.push('library: published gas-phase dipole of the molecule, ± what sources differ by');
  }
  if (dipoleSource.includes('estimated')) {
    lines.push('estimated: from the geometry alone, ± mean error measured for such molecules');
  }
  const { energyKJPerMol, nonAdditiveKJPerMol } = inductionRecord(frame);
  if (energyKJPerMol !== null && frame.system.count > 2) {
    lines.push(
      `induction of the whole frame ${shownEnergy(energyKJPerMol * scale)} ${unit}, of which ${shownEnergy((nonAdditiveKJPerMol ?? 0) * scale)} is not in the sum of pairs`,
    );
  }
  return lines.map((line) => `  ${line}\n`).join('');
}

/** The mean error for those of published and estimated dipoles, behind an energy. */
function uncertainty(valueKJPerMol: Maybe, scale: number): string {
  if (valueKJPerMol === null || valueKJPerMol === 0) return '';
  const value = valueKJPerMol * scale;
  return ` ±${value >= 1 ? value.toFixed(0) : value.toPrecision(1)}`;
}

function percent(share: number): string {
  return share > 9.99 ? '>999 %' : `${(100 * share).toFixed(share < 0.1 ? 1 : 0)} %`;
}

/** Two decimals, more where the number is small, none where it is large. */
export function shownEnergy(value: number): string {
  const size = Math.abs(value);
  if (size !== 0 && size < 0.001) return value.toExponential(1).replace(/-/g, '−');
  return fixed(value, size >= 1000 ? 0 : size >= 0.1 ? 2 : 4);
}

const ADVICE_ORDER: readonly (Advice | 'none')[] = ['repair', 'compute', 'review', 'accept', 'none'];

function footText(
  opened: FileForReport,
  companion: string | undefined,
  pairs: number,
  advice: ReadonlyMap<Advice | 'none', number>,
): string {
  const counts = ADVICE_ORDER.filter((key) => advice.has(key)).map((key) =>
    key === 'none' ? `${advice.get(key)} within one molecule` : `${advice.get(key)} to ${key}`,
  );
  const records = opened.findings.list().map((finding) => findingRecord(opened.file.lines, finding));
  const found = countsInWords(countBySeverity(records));
  const findings =
    found === ''
      ? ''
      : `Findings: ${found}; see polewise findings${companion === undefined ? '' : ` --with ${companion}`} ${opened.name}\n`;
  return `${pairs} pair${pairs === 1 ? '' : 's'}${counts.length === 0 ? '' : `: ${counts.join(', ')}`}\n${findings}`;
}
