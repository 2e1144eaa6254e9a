import { CATALOGUE, FINDING_CODES, type FindingCode, type Severity } from '../base/catalogue';
import type { FindingRecord, PlaceRecord } from '../features/records';
import type { FileReport } from './findings-command';
import { VERSION } from './version';

const LEVELS: Readonly<Record<Severity, 'error' | 'warning' | 'note'>> = {
  error: 'error',
  warning: 'warning',
  information: 'note',
  hint: 'note',
};

/**
 * Findings in the Static Analysis Results Interchange Format, for code-scanning pages.
 * Source: OASIS, SARIF version 2.1.0 (2020).
 */
export function sarifLog(reports: readonly FileReport[]) {
  return {
    $schema: 'https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json',
    version: '2.1.0',
    runs: [
      {
        tool: {
          driver: {
            name: 'Polewise',
            semanticVersion: VERSION,
            rules: FINDING_CODES.map((code) => ({
              id: code,
              shortDescription: { text: CATALOGUE[code].title },
              fullDescription: { text: CATALOGUE[code].meaning },
              help: { text: CATALOGUE[code].remedy },
              defaultConfiguration: { level: LEVELS[CATALOGUE[code].severity] },
            })),
          },
        },
        columnKind: 'utf16CodeUnits',
        results: reports.flatMap(({ file, findings }) => findings.map((finding) => resultOf(file, finding))),
      },
    ],
  };
}

function resultOf(file: string, finding: FindingRecord) {
  return {
    ruleId: finding.code,
    ruleIndex: FINDING_CODES.indexOf(finding.code as FindingCode),
    level: LEVELS[finding.severity],
    message: { text: finding.message },
    locations: [locationOf(file, finding)],
    ...(finding.related.length === 0
      ? {}
      : {
          relatedLocations: finding.related.map((related, id) => ({
            id: id + 1,
            ...locationOf(file, related),
            message: { text: related.message },
          })),
        }),
  };
}

function locationOf(file: string, { line, column, endLine, endColumn }: PlaceRecord) {
  return {
    physicalLocation: {
      artifactLocation: { uri: uriOf(file) },
      region: { startLine: line, startColumn: column, endLine, endColumn },
    },
  };
}

/** A relative reference or a file URI, with the characters escaped that a URI may not hold. */
function uriOf(file: string): string {
  const path = file.replace(/\\/g, '/').split('/').map(encodeURIComponent).join('/');
  return path.startsWith('/') ? `file://${path}` : path;
}
