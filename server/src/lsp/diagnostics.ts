import {
  type Diagnostic,
  type DiagnosticRelatedInformation,
  DiagnosticSeverity,
  type Range,
} from 'vscode-languageserver';
import { SEVERITIES, type Severity } from '../base/catalogue';
import type { Finding } from '../base/finding';
import type { Span } from '../base/span';
import type { LineIndex } from '../text/lines';
import type { Analysed } from './analyser';

const SOURCE = 'polewise';
const MOST_RELATED = 3;

const PROTOCOL_SEVERITY: Readonly<Record<Severity, DiagnosticSeverity>> = {
  error: DiagnosticSeverity.Error,
  warning: DiagnosticSeverity.Warning,
  information: DiagnosticSeverity.Information,
  hint: DiagnosticSeverity.Hint,
};

/** A span as the protocol has it: lines and UTF-16 columns from 0. */
export function rangeOf(lines: LineIndex, { start, end }: Span): Range {
  const from = lines.positionAt(start);
  const to = lines.positionAt(end);
  return { start: { line: from.line, character: from.column }, end: { line: to.line, character: to.column } };
}

/**
 * The findings of a document as diagnostics, with the severities of the settings, the worst first where there are more than the settings
 * allow; the last one then says how many were left out.
 */
export function diagnosticsOf({ document, settings, findings }: Analysed): Diagnostic[] {
  const severityOf = (finding: Finding) => settings.severities.get(finding.code) ?? finding.severity;
  const wanted = findings.filter((finding) => severityOf(finding) !== 'off');
  const rank = (finding: Finding) => SEVERITIES.indexOf(severityOf(finding) as Severity);
  const worst =
    wanted.length <= settings.maxFindings
      ? wanted
      : [...wanted].sort((a, b) => rank(a) - rank(b)).slice(0, settings.maxFindings);
  const diagnostics = worst.map((finding): Diagnostic => {
    // The editor lists them all above every other hover: a few do.
    const related = finding.related.slice(0, MOST_RELATED).map(
      ({ message, ...span }): DiagnosticRelatedInformation => ({
        location: { uri: document.uri, range: rangeOf(document.lines, span) },
        message,
      }),
    );
    return {
      range: rangeOf(document.lines, finding),
      severity: PROTOCOL_SEVERITY[severityOf(finding) as Severity],
      code: finding.code,
      source: SOURCE,
      message: finding.message,
      ...(related.length === 0 ? {} : { relatedInformation: related }),
    };
  });
  const left = wanted.length - worst.length;
  if (left > 0) {
    const last = diagnostics[diagnostics.length - 1]!;
    last.message += ` (${left} more findings are not shown; polewise.maxFindings sets how many are.)`;
  }
  return diagnostics;
}
