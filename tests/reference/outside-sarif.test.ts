import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Ajv from 'ajv-draft-04';
import addFormats from 'ajv-formats';
import { afterAll, describe, expect, it } from 'vitest';
import { polewise, ROOT } from './data/outside-cli';

/**
 * SARIF: `findings --format sarif` against the schema of version 2.1.0 that Microsoft's jest-sarif carries (JSON Schema draft 4), and
 * facts that a schema cannot tell. Source: OASIS, SARIF version 2.1.0 (2020).
 */

interface Region {
  startLine: number;
  startColumn: number;
  endLine: number;
  endColumn: number;
}
interface Place {
  physicalLocation: { artifactLocation: { uri: string }; region: Region };
}
interface Result {
  ruleId: string;
  ruleIndex: number;
  level: string;
  message: { text: string };
  locations: Place[];
  relatedLocations?: (Place & { id: number })[];
}
interface Log {
  version: string;
  runs: {
    tool: { driver: { name: string; rules: { id: string; defaultConfiguration: { level: string } }[] } };
    columnKind: string;
    results: Result[];
  }[];
}
interface Report {
  findings: { code: string; severity: string; message: string; line: number; column: number }[];
}

const schema: Record<string, unknown> = JSON.parse(
  readFileSync(join(ROOT, 'node_modules/@microsoft/jest-sarif/lib/schemas/sarif-2.1.0-rtm.5.json'), 'utf8'),
);
// One pattern of the schema is no regular expression in Unicode mode.
const ajv = new Ajv({ strict: false, allErrors: true, unicodeRegExp: false });
addFormats(ajv);
const validate = ajv.compile(schema);
const problemsOf = (log: unknown) => (validate(log) ? [] : (validate.errors ?? []).slice(0, 5));

const SAMPLES = readdirSync(join(ROOT, 'samples')).map((name) => `samples/${name}`);
const folder = mkdtempSync(join(tmpdir(), 'polewise sarif #é-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function sarif(...files: string[]): Log {
  return JSON.parse(polewise('findings', '--format', 'sarif', ...files).stdout);
}

const log = sarif(...SAMPLES);
const [run] = log.runs;
const results = run!.results;
const placesOf = (result: Result): Place[] => [...result.locations, ...(result.relatedLocations ?? [])];

describe('the schema', () => {
  it('accepts the findings of all samples', () => {
    expect(results.length).toBeGreaterThan(50);
    expect(problemsOf(log)).toEqual([]);
  });

  it.each(SAMPLES)('accepts the findings of %s alone', (sample) => {
    expect(problemsOf(sarif(sample))).toEqual([]);
  });

  it('accepts a run without findings', () => {
    const file = join(folder, 'sound.xyz');
    writeFileSync(file, '1\nProperties=species:S:1:pos:R:3\nAr 0 0 0\n');
    const sound = sarif(file);
    expect(sound.runs[0]!.results).toEqual([]);
    expect(problemsOf(sound)).toEqual([]);
  });

  const spoilt: [what: string, spoil: (log: Log) => void][] = [
    ['another version', (copy) => Object.assign(copy, { version: '2.0.0' })],
    ['a level of its own', (copy) => Object.assign(copy.runs[0]!.results[0]!, { level: 'information' })],
    [
      'a line 0',
      (copy) => Object.assign(copy.runs[0]!.results[0]!.locations[0]!.physicalLocation.region, { startLine: 0 }),
    ],
    ['a result without message', (copy) => Object.assign(copy.runs[0]!.results[0]!, { message: undefined })],
    ['an unknown property', (copy) => Object.assign(copy.runs[0]!.results[0]!, { severity: 'error' })],
    ['an unknown kind of column', (copy) => Object.assign(copy.runs[0]!, { columnKind: 'bytes' })],
  ];
  it.each(spoilt)('would reject %s', (_, spoil) => {
    const copy: Log = structuredClone(log);
    spoil(copy);
    expect(problemsOf(JSON.parse(JSON.stringify(copy)))).not.toEqual([]);
  });
});

describe('facts beyond the schema', () => {
  it('one run by Polewise, version 2.1.0, columns in UTF-16 units', () => {
    expect(log.version).toBe('2.1.0');
    expect(log.runs).toHaveLength(1);
    expect(run!.tool.driver.name).toBe('Polewise');
    expect(run!.columnKind).toBe('utf16CodeUnits');
  });

  it('every result has a level, a message, and one location', () => {
    for (const result of results) {
      expect(['error', 'warning', 'note']).toContain(result.level);
      expect(result.message.text.length).toBeGreaterThan(10);
      expect(result.locations).toHaveLength(1);
    }
  });

  it("every result names a rule, and its index is that rule's", () => {
    const { rules } = run!.tool.driver;
    expect(new Set(rules.map(({ id }) => id)).size).toBe(rules.length);
    for (const { ruleId, ruleIndex } of results) expect(rules[ruleIndex]!.id).toBe(ruleId);
  });

  it('every place lies within its file and is not backwards', () => {
    for (const place of results.flatMap(placesOf)) {
      const { artifactLocation, region } = place.physicalLocation;
      const lines = readFileSync(join(ROOT, artifactLocation.uri), 'utf8').split('\n');
      const { startLine, startColumn, endLine, endColumn } = region;
      expect(startLine).toBeGreaterThanOrEqual(1);
      expect(startColumn).toBeGreaterThanOrEqual(1);
      expect(startColumn).toBeLessThanOrEqual(lines[startLine - 1]!.length + 1);
      expect(endColumn).toBeLessThanOrEqual(lines[endLine - 1]!.length + 1);
      expect(endLine > startLine || (endLine === startLine && endColumn >= startColumn)).toBe(true);
    }
  });

  it('related places of a result have different ids', () => {
    for (const { relatedLocations = [] } of results) {
      expect(new Set(relatedLocations.map(({ id }) => id)).size).toBe(relatedLocations.length);
    }
  });

  it('says the same as --format json: information and hint become notes', () => {
    const reports: Report[] = JSON.parse(polewise('findings', '--format', 'json', ...SAMPLES).stdout);
    const levels: Record<string, string> = { error: 'error', warning: 'warning', information: 'note', hint: 'note' };
    const expected = reports.flatMap(({ findings }) =>
      findings.map(({ code, severity, message, line, column }) => [code, levels[severity], message, line, column]),
    );
    const said = results.map(({ ruleId, level, message, locations }) => {
      const { startLine, startColumn } = locations[0]!.physicalLocation.region;
      return [ruleId, level, message.text, startLine, startColumn];
    });
    expect(said).toEqual(expected);
  });

  it('a column counts UTF-16 units: an emoji before it is two', () => {
    const comment = 'Wasser 💧 é kind_dipole_sises="H2O:1.855"';
    const file = join(folder, 'emoji.xyz');
    writeFileSync(file, `1\n${comment}\nAr 0 0 0\n`);
    const [result] = sarif(file).runs[0]!.results;
    expect(result!.ruleId).toBe('key-misspelt');
    expect(result!.locations[0]!.physicalLocation.region).toEqual({
      startLine: 2,
      startColumn: comment.indexOf('kind') + 1,
      endLine: 2,
      endColumn: comment.indexOf('=') + 1,
    });
  });

  it('a name with a blank, a number sign and an accent becomes a URI that leads back to the file', () => {
    const file = join(folder, 'a b#1é.xyz');
    writeFileSync(file, '2\n\nAr 0 0 0\n');
    const { uri } = sarif(file).runs[0]!.results[0]!.locations[0]!.physicalLocation.artifactLocation;
    expect(uri).toMatch(/^file:\/\/\/[\x21-\x7e]*$/);
    expect(decodeURIComponent(new URL(uri).pathname)).toBe(file);
  });

  it('a relative name stays a relative reference', () => {
    const uris = new Set(results.map(({ locations }) => locations[0]!.physicalLocation.artifactLocation.uri));
    for (const uri of uris) expect(SAMPLES).toContain(uri);
  });
});
