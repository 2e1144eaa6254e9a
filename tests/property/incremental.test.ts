import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { pairsOf } from '../../server/src/analysis/frame-analysis';
import { pairRecord } from '../../server/src/features/records';
import type { Language } from '../../server/src/formats/tree';
import { type Analysed, analyseDocument } from '../../server/src/lsp/analyser';
import { Pace } from '../../server/src/lsp/pace';
import { readSettings } from '../../server/src/lsp/settings';
import { changeDocument, type OpenDocument, openDocument, type TextChange } from '../../server/src/lsp/text-store';
import { proteinLikePdb, waterBoxXyz } from './edit-texts';
import { randomEdit, randomFrom } from './random-edits';

const PACE = new Pace({ turn: async () => {}, now: () => 0 }, () => true);

const sample = (name: string) => readFileSync(fileURLToPath(new URL(`../../samples/${name}`, import.meta.url)), 'utf8');

/** Everything that an analysis says, down to the last bit: numbers as text would hide a sign of zero. */
async function said(analysed: Analysed): Promise<unknown> {
  const frames: unknown[] = [];
  for (const tree of analysed.tree.frames) {
    const frame = await analysed.frames.frame(tree.index, PACE);
    const { model, moments, system } = frame;
    const records = [...pairsOf(frame)].map((pair) => pairRecord(system, pair));
    frames.push({
      atoms: model.tree.atoms,
      residues: model.tree.residues?.map(({ chain, name, number, insertion, segment, atomNames, atoms }) => {
        return [chain, name, number, insertion, segment, atomNames, atoms];
      }),
      entries: model.tree.entries,
      lines: [tree.firstLine, tree.endLine, tree.headLine],
      places: Array.from(model.tree.atoms.line, (_, atom) => model.tree.fieldSpan(atom, 'x')),
      fragments: model.fragments,
      names: model.names,
      labels: model.labels,
      formulas: model.formulas,
      notes: model.notes,
      frameNotes: model.frameNotes,
      positionA: model.positionA,
      usable: model.usable,
      endless: model.endless,
      chainBonds: model.chainBonds,
      close: model.pairs,
      moments,
      system: { ...system, cell: null, chains: null },
      settings: frame.settings,
      records,
    });
  }
  const { findings, fragments, pairs, limited, tree } = analysed;
  return { frames, findings, fragments, pairs, limited, problems: tree.problems, remarks: tree.remarks };
}

interface Case {
  readonly name: string;
  readonly language: Language;
  readonly text: string;
  readonly edits: number;
  /** Å; a short one makes partners come and go. */
  readonly cutoffA?: number;
  /** Whether nothing but numbers is edited, so that one update follows another for long. */
  readonly isCalm?: boolean;
  /** At least this share of the edits must not have led to reading the whole file. */
  readonly quickShare: number;
}

const CASES: readonly Case[] = [
  {
    name: 'water in a row, few partners each',
    language: 'xyz',
    text: waterBoxXyz(16, { kinds: true, row: true }),
    cutoffA: 2,
    edits: 600,
    quickShare: 0.15,
  },
  {
    name: 'numbers alone, one update after another',
    language: 'xyz',
    text: waterBoxXyz(24, { kinds: true, row: true }),
    cutoffA: 2,
    edits: 400,
    isCalm: true,
    quickShare: 0.5,
  },
  {
    name: 'water in a cell',
    language: 'xyz',
    text: waterBoxXyz(27, { kinds: true, cellA: 9.4 }),
    edits: 250,
    quickShare: 0.3,
  },
  {
    name: 'water with charges',
    language: 'xyz',
    text: waterBoxXyz(12, { charges: true }),
    edits: 500,
    quickShare: 0.2,
  },
  {
    name: 'water with a list of dipoles',
    language: 'xyz',
    text: waterBoxXyz(8, { list: true }),
    edits: 300,
    quickShare: 0.1,
  },
  { name: 'a chain of residues', language: 'pdb', text: proteinLikePdb(14), cutoffA: 3, edits: 500, quickShare: 0.2 },
  {
    name: 'an annotation behind the atoms',
    language: 'pdb',
    text: `${proteinLikePdb(3)}REMARK  99 fragment=A:GLY:3 dipole="1 2 3" charge=0.5\n`,
    edits: 100,
    quickShare: 0,
  },
  {
    name: 'two frames',
    language: 'xyz',
    text: waterBoxXyz(6, { kinds: true }) + waterBoxXyz(6, {}),
    edits: 200,
    quickShare: 0,
  },
  { name: 'the sample cluster', language: 'xyz', text: sample('water-cluster.xyz'), edits: 250, quickShare: 0 },
];

describe.each(CASES)(
  'an analysis that goes on from the one before: $name',
  ({ language, text, edits, cutoffA, isCalm = false, quickShare }) => {
    test('says what a fresh one says, after every one of many random edits', async () => {
      const settings = readSettings(cutoffA === undefined ? {} : { cutoff: cutoffA });
      const random = randomFrom(text.length);
      let document: OpenDocument = openDocument('file:///a', language, 0, text);
      let standing = await analyseDocument(document, settings, PACE, null);
      const history = [text];
      let quick = 0;
      for (let version = 1; version <= edits; version++) {
        const before = document.snapshot.slice(0, document.snapshot.length);
        const isDamaged = history[history.length - 1] !== before;
        const changes: TextChange[] = randomEdit(random, before, language, history, { isDamaged, isCalm });
        document = changeDocument(document, version, changes);
        const now = document.snapshot.slice(0, document.snapshot.length);
        // Once in a while two edits come before the first is analysed.
        if (random() < 0.05) continue;
        standing = await analyseDocument(document, settings, PACE, standing);
        if (standing.work.lines < standing.tree.lines.count) quick++;
        const fresh = await analyseDocument(openDocument('file:///a', language, version, now), settings, PACE, null);
        const [ours, theirs] = [await said(standing), await said(fresh)];
        expect(ours, `edit ${version}: ${JSON.stringify(changes)}`).toEqual(theirs);
        if (fresh.tree.problems.length === 0) history.push(now);
      }
      expect(quick).toBeGreaterThanOrEqual(quickShare * edits);
    }, 120_000);
  },
);
