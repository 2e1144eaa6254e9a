import type { FrameAnalysis } from '../analysis/frame-analysis';
import { ION_CHARGE_E } from '../analysis/settings';
import type { Completion, CompletionPlace } from './completion';

/** A frame of more fragments is annotated by kinds. */
const MOST_LISTED = 20;
const MOST_KINDS = 8;

/** Collects text in two forms: with places to fill in, and with what stands in them at first. */
class Template {
  template = '';
  text = '';
  #next = 1;

  add(text: string): this {
    this.text += text;
    this.template += escaped(text);
    return this;
  }

  place(value: string): this {
    this.text += value;
    this.template += `\${${this.#next++}:${escaped(value)}}`;
    return this;
  }

  /** A key with a list of places. */
  list(key: string, values: readonly string[]): this {
    this.add(`${this.text === '' ? '' : ' '}${key}="`);
    for (const [k, value] of values.entries()) this.add(k === 0 ? '' : ' ').place(value);
    return this.add('"');
  }
}

function escaped(text: string): string {
  return text.replace(/[\\$}]/g, '\\$&');
}

/** A header for an empty comment line: with a place for each fragment of the frame where that is at hand. */
export function headerSnippet(frame: FrameAnalysis | null): Completion {
  const count = frame?.model.fragments.count ?? 0;
  const snippet = new Template();
  let detail: string;
  if (frame === null || count === 0) {
    detail = 'fragments with names, charges, dipole sizes and axes';
    snippet.list('fragment_atoms', ['1-3', '4-6']);
    addLists(snippet, ['first', 'second'], ['nan', 'nan']);
  } else if (count <= MOST_LISTED) {
    detail = `names, charges, dipole sizes and axes of ${count} fragment${count === 1 ? '' : 's'}`;
    const fragments = Array.from({ length: count }, (_, f) => f);
    addLists(
      snippet,
      fragments.map((f) => wordFor(frame, f)),
      fragments.map((f) => chargeFor(frame, f)),
    );
  } else {
    const kinds = [...new Set(frame.model.formulas)].slice(0, MOST_KINDS);
    detail = 'dipole sizes and axes by composition';
    snippet.add('kind_dipole_sizes="');
    for (const [k, kind] of kinds.entries()) snippet.add(`${k === 0 ? '' : ' '}${kind}:`).place('nan');
    snippet.add('" kind_axes="');
    for (const [k, kind] of kinds.entries()) {
      const [first = 'X', second = first] = kind.match(/[A-Z][a-z]?/g) ?? [];
      snippet.add(`${k === 0 ? '' : ' '}${kind}:`).place(`${first}>${second}`);
    }
    snippet.add('"');
  }
  const { text, template } = snippet;
  return {
    label: 'annotated header',
    kind: 'snippet',
    detail,
    documentation: `\`\`\`\n${text}\n\`\`\`\n\n\`nan\` stands for a value that is not given.`,
    insert: text,
    template,
    replaced: 0,
  };
}

function addLists(snippet: Template, names: readonly string[], charges: readonly string[]): void {
  const nothing = names.map(() => 'nan');
  snippet
    .list('fragment_names', names)
    .list('fragment_charges', charges)
    .list('fragment_dipole_sizes', nothing)
    .list('fragment_axes', nothing);
}

/** A name for a list: the present one where it has nothing that parts a list. */
function wordFor({ model }: FrameAnalysis, f: number): string {
  const name = model.names[f]!;
  return /^[^\s"',=[\]{}\\]+$/.test(name) ? name : `f${f + 1}`;
}

/** The charge of an ion; what is only assumed is not written. */
function chargeFor({ moments }: FrameAnalysis, f: number): string {
  const charge = moments.chargeE[f]!;
  if (Number.isNaN(charge) || moments.chargeSource[f] === 'assumed') return 'nan';
  const whole = Math.round(charge);
  return String(Math.abs(charge - whole) < ION_CHARGE_E ? whole + 0 : Number(charge.toFixed(3)));
}

/** An annotation line for a fragment of a PDB file. */
export function remarkSnippet({ before, frame }: CompletionPlace): Completion {
  const snippet = new Template().add('REMARK  99 fragment=').place(selectorFor(frame));
  return {
    label: 'REMARK  99 fragment=',
    kind: 'snippet',
    detail: 'annotation of a fragment',
    documentation: 'A line that gives the dipole of a fragment: its size, and atoms on its negative and positive side.',
    insert: snippet.text,
    template: `${snippet.template} dipole_size=$2 axis=$3`,
    replaced: before.length,
  };
}

/** The first fragment whose dipole nothing gives, else the last; often that is the ligand. */
function selectorFor(frame: FrameAnalysis | null): string {
  if (frame === null || frame.model.fragments.count === 0) return 'A:LIG:1';
  const { labels, fragments } = frame.model;
  const unknown = frame.moments.dipoleSource.findIndex((source) => source === 'none' || source === 'estimated');
  const label = labels[unknown < 0 ? fragments.count - 1 : unknown]!;
  return label.split('+')[0]!;
}
