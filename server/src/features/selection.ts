import type { Span } from '../base/span';
import type { Entry } from '../formats/annotation/entries';
import { listItems } from '../formats/annotation/lists';
import { atomAtLine } from '../formats/reread';
import type { CoordinateTree } from '../formats/tree';
import type { FrameModel } from '../model/frame-model';
import { skipBlanks, skipField, trimEnd } from '../text/numbers';
import { fragmentLines } from './fragment-lines';
import { frameAtLine } from './frame-at';
import { holds, itemsOfEntry, namesOfAxis, spanAt } from './mentions';
import { linesSpan } from './outline';

/**
 * What is selected step by step around an offset, the innermost first; each span holds the one before it and is larger. `model` is that of the
 * frame there, `null` where it is not at hand.
 */
export function selectionSpans(file: CoordinateTree, model: FrameModel | null, offset: number): Span[] {
  const line = file.lines.lineAt(offset);
  const tree = frameAtLine(file, line);
  const entries = tree?.headLine === line ? tree.entries : entriesOfRemark(file, line);
  const around = [
    ...entrySpans(file, entries, offset),
    ...(entries.some((entry) => holds(wholeEntry(entry), offset)) ? [] : fieldSpans(file, line, offset)),
    ...lineSpans(file, line),
    ...(tree === undefined || model === null ? [] : fragmentSpans(file, model, line)),
    ...(tree === undefined ? [] : [linesSpan(file, tree.firstLine, tree.endLine)]),
    { start: 0, end: file.text.length },
  ];
  return nested(around, offset);
}

/** Each span that holds the offset and is larger than all before it. */
function nested(spans: readonly Span[], offset: number): Span[] {
  const chain: Span[] = [];
  for (const span of spans) {
    const inner = chain[chain.length - 1];
    if (!holds(span, offset)) continue;
    const isLarger =
      inner === undefined ||
      (span.start <= inner.start && span.end >= inner.end && span.end - span.start > inner.end - inner.start);
    if (isLarger) chain.push(span);
  }
  return chain;
}

function entriesOfRemark(file: CoordinateTree, line: number): readonly Entry[] {
  return file.remarks.filter((remark) => remark.line === line).flatMap(({ entries }) => entries);
}

function wholeEntry({ keySpan, value }: Entry): Span {
  return { start: keySpan.start, end: value.end };
}

const AXIS_KEYS: ReadonlySet<string> = new Set(['axis', 'fragment_axes', 'kind_axes']);

/** List item, value, value with its quotes, key and value. */
function entrySpans(file: CoordinateTree, entries: readonly Entry[], offset: number): Span[] {
  const entry = entries.find((candidate) => holds(wholeEntry(candidate), offset));
  if (entry === undefined) return [];
  const { key, keySpan, inner, value } = entry;
  if (holds(keySpan, offset)) return [keySpan, wholeEntry(entry)];
  const single = AXIS_KEYS.has(key) ? namesOfAxis(file.text, inner) : listItems(file.text, entry);
  const items = [spanAt(single, offset), spanAt(itemsOfEntry(file.text, entry), offset)];
  return [...items.filter((span) => span !== undefined), inner, value, wholeEntry(entry)];
}

/** The run of units that are not blank around an offset. */
function fieldSpans({ text, lines }: CoordinateTree, line: number, offset: number): Span[] {
  const { bytes } = text;
  const end = lines.end(line);
  for (let at = lines.starts[line]!; at <= offset; ) {
    const start = skipBlanks(bytes, at, end);
    const stop = skipField(bytes, start, end);
    if (stop === start) break;
    if (holds({ start, end: stop }, offset)) return [{ start, end: stop }];
    at = stop;
  }
  return [];
}

/** A line without the blanks at both ends, and with them. */
function lineSpans({ text, lines }: CoordinateTree, line: number): Span[] {
  const whole = { start: lines.starts[line]!, end: lines.end(line) };
  const start = skipBlanks(text.bytes, whole.start, whole.end);
  return [{ start, end: trimEnd(text.bytes, start, whole.end) }, whole];
}

/** The run of lines of the fragment around an atom line, if there is one. */
function fragmentSpans(file: CoordinateTree, model: FrameModel, line: number): Span[] {
  const atom = atomAtLine(model.tree, line);
  const f = atom < 0 ? -1 : model.fragments.ofAtom[atom]!;
  if (f < 0) return [];
  const { starts } = file.lines;
  return fragmentLines(file, model, f).flatMap(({ firstLine, lastLine }) =>
    line < firstLine || line > lastLine ? [] : [{ start: starts[firstLine]!, end: file.lines.end(lastLine) }],
  );
}
