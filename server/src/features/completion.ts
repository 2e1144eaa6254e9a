import type { FrameAnalysis } from '../analysis/frame-analysis';
import { FILE_KEYS, FRAME_KEYS, SELECTED_KEYS } from '../formats/annotation/keys';
import type { Language } from '../formats/tree';
import { elementCompletions } from './complete-element';
import { headerSnippet, remarkSnippet } from './complete-snippet';
import { valueCompletions } from './complete-value';
import { KEY_DOCS, KEY_FACTS } from './key-docs';

/** A word that may stand at a place. */
export interface Completion {
  readonly label: string;
  readonly kind: 'key' | 'value' | 'element' | 'fragment' | 'atom' | 'snippet';
  readonly detail: string;
  /** More of it, as Markdown; '' for nothing. */
  readonly documentation: string;
  /** What is put in place of the word that is there: a key comes with its equals sign. */
  readonly insert: string;
  /** The same with places to be filled in one after another, for editors that have such; `null` where there are none. */
  readonly template: string | null;
  /** How many units before the place the word begins that is replaced. */
  readonly replaced: number;
}

/** Where something is to be completed. */
export interface CompletionPlace {
  readonly language: Language;
  /** The line up to the place, and the rest of it. */
  readonly before: string;
  readonly after: string;
  /** What an XYZ line is by its place: the comment line behind a count, a line for an atom, or one that cannot be told. */
  readonly line: 'comment' | 'atom' | 'other';
  /** Whether it was asked for, or begun with a letter, rather than set off by a sign. */
  readonly isAsked: boolean;
  /** The frame at the place as it was last understood; `null` where it is not at hand. */
  readonly frame: FrameAnalysis | null;
  /** Atomic numbers of the elements that the file begins with. */
  readonly elements: () => readonly number[];
}

const REMARK = /^REMARK {1,3}(?:[6-9]|[1-9]\d) /;

/** The words that may stand at a place; needs nothing but the text, and says more where the frame is at hand. */
export function completionsAt(place: CompletionPlace): Completion[] {
  const { language, before, after, line, isAsked } = place;
  if (language === 'pdb') {
    if (REMARK.test(before)) return annotationCompletions(place);
    const isBeginning = after.trim() === '' && 'REMARK'.startsWith(before) && (isAsked || before !== '');
    return isBeginning ? [remarkSnippet(place)] : [];
  }
  if (line === 'atom') return isAsked ? elementCompletions(before, after, place.elements()) : [];
  if (line !== 'comment') return [];
  const isEmpty = before.trim() === '' && after.trim() === '';
  return [...(isEmpty ? [headerSnippet(place.frame)] : []), ...annotationCompletions(place)];
}

function annotationCompletions(place: CompletionPlace): Completion[] {
  return valueCompletions(place) ?? keyCompletions(place);
}

function keyCompletions({ before, after, language }: CompletionPlace): Completion[] {
  const word = /(?:^|\s)(\w*)$/.exec(before)?.[1];
  if (word === undefined) return [];
  const given = new Set([...`${before}\n${after}`.matchAll(/\b(\w+)=/g)].map(([, key]) => key));
  const keys = language === 'xyz' ? FRAME_KEYS : [...new Set<string>([...SELECTED_KEYS, ...FILE_KEYS])];
  return keys
    .filter((key) => !given.has(key))
    .map((label) => ({
      label,
      kind: 'key',
      // Shown above the documentation, as it is.
      detail: (KEY_FACTS[label]?.values ?? '').replaceAll('`', ''),
      documentation: keyDocumentation(label, language),
      insert: `${label}=`,
      template: null,
      replaced: word.length,
    }));
}

/** What a key means, and an example, as Markdown. */
export function keyDocumentation(key: string, language: Language): string {
  const example = KEY_FACTS[key]?.[language];
  return [KEY_DOCS[key] ?? '', ...(example === undefined ? [] : [`\`${example}\``])].join('\n\n');
}
