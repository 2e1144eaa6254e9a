import { FINDING_CODES, type FindingCode } from '../../base/catalogue';
import type { Finding } from '../../base/finding';
import { fromBohr, fromNanometres } from './convert-lengths';
import { declareColumns } from './declare-columns';
import { nameUnit } from './dipole-unit';
import { fillDipole } from './fill-dipole';
import { giveAxis } from './give-axis';
import { groupAtoms } from './group-atoms';
import { ionCharge } from './ion-charge';
import { moveOut } from './move-apart';
import type { Remedy, RemedyMaker, Scene } from './remedy';
import { silence } from './silence';
import { sizeAndAxis } from './size-and-axis';
import { writePairs } from './write-pairs';

/** Remedies that a finding carries already; what they are was known where it was found. */
function carriedBy({ fix }: Finding): Remedy[] {
  return fix === undefined ? [] : [{ title: fix.title, edits: () => fix.edits }];
}

const CARRIED: RemedyMaker = carriedBy;

/** The remedies for each finding that has some, the one that is most often meant first. */
const MAKERS: Readonly<Partial<Record<FindingCode, readonly RemedyMaker[]>>> = {
  'count-wrong': [CARRIED],
  'number-unreadable': [CARRIED],
  'field-missing': [CARRIED],
  'element-unknown': [CARRIED],
  'array-length': [CARRIED],
  'value-invalid': [CARRIED],
  'unit-unknown': [CARRIED],
  'selector-unmatched': [CARRIED],
  'key-repeated': [CARRIED],
  'fragments-overlap': [CARRIED],
  'atoms-coincident': [moveOut],
  clash: [moveOut],
  'near-field': [writePairs],
  'dipole-unit': [CARRIED, nameUnit],
  'dipole-reversed': [CARRIED],
  'dipole-rotated': [CARRIED, sizeAndAxis],
  'electron-parity': [CARRIED],
  'charge-sum': [CARRIED],
  'unit-bohr': [fromBohr],
  'unit-nanometre': [fromNanometres],
  'key-misspelt': [CARRIED],
  'value-unportable': [CARRIED],
  'dipole-missing': [fillDipole],
  'dipole-direction': [giveAxis],
  'ion-charge-missing': [ionCharge],
  'extra-columns': [declareColumns],
  'atoms-ungrouped': [groupAtoms],
};

/** A scene whose frame may not be there: of a file without any, or one that is too large to be analysed. */
export type PartialScene = Omit<Scene, 'frame'> & { readonly frame: Scene['frame'] | null };

/** The codes of the findings for which there is a remedy, where it is clear what to do. */
export const MENDED_CODES: readonly FindingCode[] = FINDING_CODES.filter((code) => MAKERS[code] !== undefined);

/** The remedies for a finding; without its frame those that it carries. */
export function remediesFor(finding: Finding, { frame, ...scene }: PartialScene): Remedy[] {
  if (frame === null) return carriedBy(finding);
  return (MAKERS[finding.code] ?? []).flatMap((maker) => maker(finding, { ...scene, frame }));
}

/** The one that keeps a finding from being told again, which mends nothing. */
export function silencesFor(finding: Finding, { file }: PartialScene): readonly Remedy[] {
  return silence(finding, file);
}
