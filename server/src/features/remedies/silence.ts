import type { Finding } from '../../base/finding';
import { listItems } from '../../formats/annotation/lists';
import type { CoordinateTree } from '../../formats/tree';
import { CommentLine } from '../rewrite/comment-line';
import { remarkInsertion } from '../rewrite/remark-lines';
import { offered, type Remedy } from './remedy';

/** Adds the finding's code to those that the file does not want to hear; an error cannot be waved aside so. */
export function silence({ code, severity }: Finding, file: CoordinateTree): Remedy[] {
  if (severity === 'error') return [];
  const title = `Do not report ${code} in this file`;
  if (file.language === 'pdb') {
    const entry = file.remarks
      .filter(({ selector }) => selector === null)
      .flatMap(({ entries }) => entries)
      .find(({ key }) => key === 'silence');
    if (entry === undefined) return offered(title, [remarkInsertion(file, [`silence=${code}`])]);
    if (!entry.closed) return [];
    const codes = listItems(file.text, entry).map(({ start, end }) => file.text.slice(start, end));
    return offered(title, [{ ...entry.value, text: `"${[...codes, code].join(' ')}"` }]);
  }
  // It holds for the file whichever frame gives it.
  const frame = file.frames.find(({ entries }) => entries.some(({ key }) => key === 'silence')) ?? file.frames[0];
  if (frame === undefined) return [];
  const line = new CommentLine(file, frame);
  line.append('silence', [code]);
  return offered(title, line.edits());
}
