import {
  type DefinitionLink,
  type DocumentHighlight,
  DocumentHighlightKind,
  type Location,
  LSPErrorCodes,
  type Range,
  ResponseError,
  type SelectionRange,
  type ServerCapabilities,
} from 'vscode-languageserver';
import type { Span } from '../base/span';
import { linesOf } from '../features/fragment-lines';
import { frameIndexAt } from '../features/frame-at';
import { type Concern, concernAt, definitionAt } from '../features/navigation';
import { NOTHING_TO_RENAME, type Renaming, renamingAt } from '../features/rename';
import { selectionSpans } from '../features/selection';
import type { FrameModel } from '../model/frame-model';
import type { Analysed } from './analyser';
import { editOf } from './code-actions';
import { rangeOf } from './diagnostics';
import type { Session } from './session';
import { offsetOf, type PlaceInText } from './text-store';
import type { Workspace } from './workspace';

export const NAVIGATION_CAPABILITIES: ServerCapabilities = {
  definitionProvider: true,
  referencesProvider: true,
  documentHighlightProvider: true,
  renameProvider: { prepareProvider: true },
  selectionRangeProvider: true,
};

/** A place of the newest version of a document, with the frame that stands there. */
interface Spot {
  readonly analysed: Analysed;
  readonly offset: number;
  readonly model: FrameModel;
}

async function spotAt(workspace: Workspace, uri: string, place: PlaceInText): Promise<Spot | null> {
  const analysed = await workspace.analysed(uri);
  if (analysed === null) return null;
  const offset = offsetOf(analysed.document, place);
  const index = frameIndexAt(analysed.tree, offset);
  const frame = index < 0 ? null : await workspace.frame(analysed, index);
  return frame === null ? null : { analysed, offset, model: frame.model };
}

function concernOf({ analysed, offset, model }: Spot): Concern | null {
  return concernAt({ file: analysed.tree, model }, offset);
}

/** Answers what leads from annotation to atoms and back: definition, references, highlights, rename, growing selection. */
export function serveNavigation(session: Session): void {
  const { connection, workspace } = session;

  connection.onDefinition(
    async ({ textDocument: { uri }, position }): Promise<DefinitionLink[] | Location[] | null> => {
      const spot = await spotAt(workspace, uri, position);
      const lead = spot === null ? null : definitionAt({ file: spot.analysed.tree, model: spot.model }, spot.offset);
      if (spot === null || lead === null) return null;
      const { lines } = spot.analysed.document;
      if (!session.client.links) return lead.places.map((place) => ({ uri, range: rangeOf(lines, place) }));
      const originSelectionRange = rangeOf(lines, lead.from);
      return lead.places.map((place) => {
        const [firstLine] = linesOf(spot.analysed.tree, [place]);
        const targetSelectionRange = rangeOf(lines, firstLine!);
        return { originSelectionRange, targetUri: uri, targetRange: rangeOf(lines, place), targetSelectionRange };
      });
    },
  );

  connection.onReferences(async ({ textDocument: { uri }, position, context }): Promise<Location[] | null> => {
    const spot = await spotAt(workspace, uri, position);
    const concern = spot === null ? null : concernOf(spot);
    if (spot === null || concern === null) return null;
    // The atoms are what the annotation speaks of: they count as the declaration.
    const atoms = context.includeDeclaration ? linesOf(spot.analysed.tree, concern.atomRuns) : [];
    const places = [...concern.mentions, ...atoms].sort((a, b) => a.start - b.start);
    return places.map((place) => ({ uri, range: rangeOf(spot.analysed.document.lines, place) }));
  });

  connection.onDocumentHighlight(async ({ textDocument: { uri }, position }): Promise<DocumentHighlight[] | null> => {
    const spot = await spotAt(workspace, uri, position);
    const concern = spot === null ? null : concernOf(spot);
    if (spot === null || concern === null) return null;
    const { lines } = spot.analysed.document;
    const marked = (places: readonly Span[], kind: DocumentHighlightKind) =>
      places.map((place) => ({ range: rangeOf(lines, place), kind }));
    return [
      ...marked(concern.mentions, DocumentHighlightKind.Read),
      ...marked(linesOf(spot.analysed.tree, concern.atomRuns), DocumentHighlightKind.Text),
    ];
  });

  connection.onPrepareRename(async ({ textDocument: { uri }, position }) => {
    const spot = await spotAt(workspace, uri, position);
    if (spot === null) return null;
    const { span, name } = renamingOf(spot);
    return { range: rangeOf(spot.analysed.document.lines, span), placeholder: name };
  });

  connection.onRenameRequest(async ({ textDocument: { uri }, position, newName }) => {
    const spot = await spotAt(workspace, uri, position);
    if (spot === null) return null;
    const renaming = renamingOf(spot);
    const name = newName.trim();
    const reason = renaming.refusal(name);
    if (reason !== null) throw new ResponseError(LSPErrorCodes.RequestFailed, reason);
    return editOf(spot.analysed, renaming.edits(name));
  });

  connection.onSelectionRanges(async ({ textDocument: { uri }, positions }): Promise<SelectionRange[] | null> => {
    const analysed = await workspace.analysed(uri);
    if (analysed === null) return null;
    const { document, tree, limited } = analysed;
    const answers: SelectionRange[] = [];
    for (const position of positions) {
      const offset = offsetOf(document, position);
      const index = limited ? -1 : frameIndexAt(tree, offset);
      const frame = index < 0 ? null : await workspace.frame(analysed, index);
      if (index >= 0 && frame === null) return null;
      const spans = selectionSpans(tree, frame?.model ?? null, offset);
      answers.push(chainOf(document, spans, position));
    }
    return answers;
  });
}

function renamingOf({ analysed, offset, model }: Spot): Renaming {
  const renaming = renamingAt({ file: analysed.tree, model }, offset);
  if (renaming === null) throw new ResponseError(LSPErrorCodes.RequestFailed, NOTHING_TO_RENAME);
  return renaming;
}

/** Spans from the innermost to the outermost as the protocol links them; a place that none holds stands for itself. */
function chainOf(
  document: Analysed['document'],
  spans: readonly Span[],
  { line, character }: PlaceInText,
): SelectionRange {
  let range: SelectionRange | undefined;
  for (const span of [...spans].reverse()) {
    const parent = range;
    range = { range: wholeRangeOf(document, span), ...(parent === undefined ? {} : { parent }) };
  }
  const place = { line, character };
  return range ?? { range: { start: place, end: place } };
}

/** A span as a range; one to the end of the text takes in the empty line that an editor shows behind a last line end. */
function wholeRangeOf({ lines, snapshot }: Analysed['document'], span: Span): Range {
  const range = rangeOf(lines, span);
  const isBehindLineEnd = span.end === snapshot.length && span.end > lines.end(lines.count - 1);
  return isBehindLineEnd ? { start: range.start, end: { line: lines.count, character: 0 } } : range;
}
