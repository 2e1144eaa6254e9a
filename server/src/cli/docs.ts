import { CATALOGUE, FINDING_CODES, SEVERITIES } from '../base/catalogue';
import { COMMAND_DOCS } from '../features/command-docs';
import { MENDED_CODES } from '../features/remedies/table';
import { MEDIA } from '../physics/media';

/** What is read of the extension's manifest. */
export interface Manifest {
  readonly contributes: {
    readonly commands: readonly { readonly command: string; readonly title: string }[];
    readonly configuration: { readonly properties: Readonly<Record<string, SettingEntry>> };
  };
}

interface SettingEntry {
  readonly default: unknown;
  readonly minimum?: number;
  readonly maximum?: number;
  readonly enum?: readonly string[];
  readonly markdownDescription?: string;
  readonly description?: string;
}

/** Parts of the README that are made from the program's own tables, by the name of their markers. */
export function generatedSections(manifest: Manifest): ReadonlyMap<string, string> {
  return new Map([
    ['commands', commandsSection(manifest)],
    ['findings', findingsSection()],
    ['media', mediaSection()],
    ['settings', settingsSection(manifest)],
  ]);
}

function commandsSection({ contributes }: Manifest): string {
  const rows = contributes.commands.map(({ command, title }) => {
    return `| ${title} | \`${command}\` | ${COMMAND_DOCS[command] ?? ''} |`;
  });
  return ['| command | name for key bindings | what it does |', '| --- | --- | --- |', ...rows].join('\n');
}

function settingsSection({ contributes }: Manifest): string {
  const rows = Object.entries(contributes.configuration.properties).map(([name, entry]) => {
    const { minimum, maximum } = entry;
    const bounds = minimum === undefined && maximum === undefined ? '' : `${minimum ?? ''} to ${maximum ?? ''}`;
    const range = entry.enum === undefined ? bounds : entry.enum.join(', ');
    const text = (entry.markdownDescription ?? entry.description ?? '').replace(/\s*\n\s*/g, ' ').replace(/\|/g, '\\|');
    return `| \`${name}\` | \`${JSON.stringify(entry.default)}\` | ${range} | ${text} |`;
  });
  return ['| setting | default | range | meaning |', '| --- | --- | --- | --- |', ...rows].join('\n');
}

function findingsSection(): string {
  const rows = SEVERITIES.flatMap((severity) =>
    FINDING_CODES.filter((code) => CATALOGUE[code].severity === severity).map((code) => {
      const { title, meaning, remedy } = CATALOGUE[code];
      const mended = MENDED_CODES.includes(code) ? 'yes' : '';
      return `| \`${code}\` | ${severity} | ${title}. ${meaning} | ${remedy} | ${mended} |`;
    }),
  );
  const head = ['| code | severity | what it means | what to do | quick fix |', '| --- | --- | --- | --- | --- |'];
  return [...head, ...rows].join('\n');
}

function mediaSection(): string {
  return MEDIA.map(({ name, otherNames, relativePermittivity, temperatureK }) => {
    return `${[name, ...otherNames].join(', ')} ${relativePermittivity}${temperatureK === null ? '' : ` (${temperatureK} K)`}`;
  }).join(' · ');
}

/** Puts each section between its markers `<!-- name:begin -->` and `<!-- name:end -->`. Throws where a marker is missing. */
export function replaceSections(document: string, sections: ReadonlyMap<string, string>): string {
  let text = document;
  for (const [name, section] of sections) {
    const begin = `<!-- ${name}:begin -->`;
    const end = `<!-- ${name}:end -->`;
    const from = text.indexOf(begin);
    const to = text.indexOf(end);
    if (from < 0 || to < from) throw new Error(`The document has no ${begin} … ${end}`);
    text = `${text.slice(0, from + begin.length)}\n${section}\n${text.slice(to)}`;
  }
  return text;
}
