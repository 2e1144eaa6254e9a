import { plural } from '../features/number-text';
import type { Analysed } from './analyser';
import { partsOff } from './limits';
import type { StatusParams } from './protocol';

/** How many errors and warnings there are. */
function worstInWords(findings: Analysed['findings']): string {
  const count = (severity: string) => findings.filter((finding) => finding.severity === severity).length;
  return `${plural(count('error'), 'error')}, ${plural(count('warning'), 'warning')}.`;
}

/** While the pairs are being computed. */
export function busyStatus(uri: string): StatusParams {
  return { uri, state: 'busy', text: 'computing', detail: 'The pairs of this document are being computed.' };
}

/** Where the analysis stopped by a fault of ours. */
export function failedStatus(uri: string, reason: string): StatusParams {
  return { uri, state: 'failed', text: 'failed', detail: `The analysis stopped: ${reason}` };
}

/** What was found, and which parts are off for a text of this size. */
export function readyStatus(analysed: Analysed): StatusParams {
  const { document, settings, tree, findings, fragments, pairs, limited } = analysed;
  const frames = plural(tree.frames.length, 'frame');
  const complaints = settings.complaints.length === 0 ? '' : ` Settings: ${settings.complaints.join('; ')}.`;
  if (tree.frames.length === 0) {
    return { uri: document.uri, state: 'idle', text: 'no coordinates', detail: `No frame could be read.${complaints}` };
  }
  const off = partsOff(analysed);
  const alsoOff =
    off.length === 0 ? '' : ` Off for a text of this size: ${off.map(({ reason }) => reason).join(', ')}.`;
  const partsLess = off.filter(({ isBySetting }) => isBySetting).map(({ part }) => part);
  if (limited) {
    const detail = `More atoms than polewise.analysisLimit (${settings.analysisLimit}): the text is checked, pairs are computed on hover alone.${alsoOff}${complaints}`;
    const parts = ['pairs', ...partsLess].join(', ');
    return { uri: document.uri, state: 'limited', text: `${frames}, ${parts} off`, detail };
  }
  const counts = `${frames}, ${plural(fragments, 'fragment')}, ${plural(pairs, 'pair')}`;
  const detail = `${worstInWords(findings)}${alsoOff}${complaints}`;
  if (partsLess.length === 0) return { uri: document.uri, state: 'idle', text: counts, detail };
  const text = `${counts}; ${partsLess.join(', ')} off`;
  return { uri: document.uri, state: 'limited', text, detail };
}
