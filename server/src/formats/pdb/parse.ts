import { FindingCollector } from '../../base/finding';
import { indexLines } from '../../text/lines';
import type { Snapshot } from '../../text/snapshot';
import { valueText } from '../annotation/lists';
import { meantChargeColumn, replacement } from '../annotation/meant';
import type { CoordinateTree, FrameTree, RemarkAnnotation } from '../tree';
import { finishTree } from '../unreadable';
import { ModelAtoms } from './atoms';
import { ConnectionRecords } from './connections';
import { readCrystalCell } from './crystal';
import { ATOM_COLUMNS, type ColumnRange, FixedColumns } from './fields';
import { ModelFrame } from './model-frame';
import { checkRemarks, readRemark } from './remarks';

/**
 * Reads the Protein Data Bank format: models, atoms by fixed columns, chains, CONECT, LINK, CRYST1, and the annotation in REMARK
 * records. Any text gives a tree; every problem is in its list. Linear in the text.
 */
export function parsePdb(text: Snapshot): CoordinateTree {
  const lines = indexLines(text);
  const columns = new FixedColumns(text, lines);
  const problems = new FindingCollector();
  const remarks = readRemarks(text, columns, problems);
  const chargeColumn = readChargeColumn(text, remarks, problems);
  const connections = new ConnectionRecords(columns);
  const frames: ModelFrame[] = [];
  let cell: FrameTree['cell'] = null;
  const state: { open: OpenModel | null } = { open: null };

  // Of atoms outside MODEL there is one set, as a rule all to the end of the file.
  const begin = (line: number, isModel: boolean) => {
    const capacity = isModel || frames.length > 0 ? 64 : lines.count - line;
    state.open = { firstLine: line, model: new ModelAtoms(columns, problems, chargeColumn, capacity) };
    return state.open;
  };
  const end = (line: number) => {
    const { open } = state;
    state.open = null;
    if (open === null || open.model.count === 0) return;
    const { atoms, residues, alternateSites, firstAlternateLine } = open.model.build();
    if (alternateSites > 0) {
      const span = columns.span(firstAlternateLine, ATOM_COLUMNS.altLoc);
      problems.add('alternate-locations', span, () => {
        const places = alternateSites === 1 ? 'One residue has' : `${alternateSites} residues have`;
        return `${places} alternate locations; the ones with less occupancy are left out, the first of them here.`;
      });
    }
    frames.push(new ModelFrame(columns, chargeColumn, frames.length, open.firstLine, line, atoms, residues, cell));
  };

  for (let line = 0; line < lines.count; line++) {
    if (state.open !== null) line = state.open.model.readPlainLines(line);
    if (line === lines.count) break;
    switch (recordAt(text.bytes, lines.starts[line]!, lines.end(line))) {
      case 'ATOM':
      case 'HETATM':
        (state.open ?? begin(line, false)).model.read(line);
        break;
      case 'MODEL':
        end(line);
        begin(line, true);
        break;
      case 'ENDMDL':
      case 'END':
        end(line + 1);
        break;
      case 'TER':
        state.open?.model.endSegment();
        break;
      case 'CONECT':
      case 'LINK':
        connections.add(line);
        break;
      case 'CRYST1':
        cell = readCrystalCell(columns, line, problems);
        break;
    }
  }
  end(lines.count);
  for (const frame of frames) frame.bonds = connections.bondsOf(frame);
  checkRemarks(remarks, frames, { snapshot: text, lines }, problems);
  return finishTree({ language: 'pdb', text, lines, frames, remarks }, problems);
}

interface OpenModel {
  readonly firstLine: number;
  readonly model: ModelAtoms;
}

type RecordName = 'ATOM' | 'HETATM' | 'MODEL' | 'ENDMDL' | 'END' | 'TER' | 'CONECT' | 'LINK' | 'CRYST1';

const RECORDS: ReadonlyMap<string, RecordName> = new Map(
  (['ATOM', 'HETATM', 'MODEL', 'ENDMDL', 'END', 'TER', 'CONECT', 'LINK', 'CRYST1'] as const).map((name) => [
    name,
    name,
  ]),
);

/** The record name in columns 1–6, told by its letters without making strings for atoms. */
function recordAt(bytes: Uint8Array, start: number, end: number): RecordName | undefined {
  if (end - start < 3) return undefined;
  const first = bytes[start]!;
  // A, H: the bulk of the file.
  if (first === 65) {
    const isAtom = bytes[start + 1] === 84 && bytes[start + 2] === 79 && bytes[start + 3] === 77;
    return isAtom && (end - start === 4 || bytes[start + 4] === 32) ? 'ATOM' : undefined;
  }
  if (first === 72) {
    // HETATM, not HET, HETNAM or HETSYN.
    const isAtom = bytes[start + 1] === 69 && bytes[start + 2] === 84 && bytes[start + 3] === 65;
    return isAtom && bytes[start + 4] === 84 && bytes[start + 5] === 77 ? 'HETATM' : undefined;
  }
  if (first < 67 || first > 84) return undefined;
  let name = '';
  for (let i = start; i < Math.min(start + 6, end) && bytes[i] !== 32; i++) name += String.fromCharCode(bytes[i]!);
  return RECORDS.get(name);
}

function readRemarks(text: Snapshot, columns: FixedColumns, problems: FindingCollector): RemarkAnnotation[] {
  const { lines } = columns;
  const remarks: RemarkAnnotation[] = [];
  for (let line = 0; line < lines.count; line++) {
    const start = lines.starts[line]!;
    // R, E, M: cheap enough to pass over a million atoms.
    if (text.bytes[start] !== 82 || text.bytes[start + 1] !== 69 || text.bytes[start + 2] !== 77) continue;
    if (text.slice(start, start + 6) !== 'REMARK') continue;
    const remark = readRemark(text, lines, line, problems);
    if (remark !== null) remarks.push(remark);
  }
  return remarks;
}

function readChargeColumn(
  text: Snapshot,
  remarks: readonly RemarkAnnotation[],
  problems: FindingCollector,
): ColumnRange | null {
  for (const remark of remarks) {
    if (remark.selector !== null) continue;
    const entry = remark.entries.find((candidate) => candidate.key === 'charge_column');
    if (entry === undefined) continue;
    const value = valueText(text, entry).trim().toLowerCase();
    if (value === 'occupancy') return ATOM_COLUMNS.occupancy;
    if (value === 'bfactor') return ATOM_COLUMNS.temperatureFactor;
    const match = /^(\d{1,3})-(\d{1,3})$/.exec(value);
    const first = Number(match?.[1]);
    const last = Number(match?.[2]);
    if (match !== null && first >= 55 && last >= first && last <= 200) return [first - 1, last];
    problems.add(
      'value-invalid',
      entry.value,
      () => 'charge_column is occupancy, bfactor, or a range of columns from 55 on such as 71-76.',
      () => replacement(entry.inner, meantChargeColumn(value.slice(0, 40))),
    );
    return null;
  }
  return null;
}
