import { momentSteps } from '../analysis/moments';
import type { AnalysisRequest } from '../analysis/settings';
import type { Part } from '../analysis/system';
import { FindingCollector } from '../base/finding';
import { finish } from '../base/steps';
import { buildFrameModel } from '../model/frame-model';
import { readCoordinates, UsageError } from './input';

/** The first frame of the file whose fragments join every frame. */
export async function readCompanion(name: string, request: AnalysisRequest): Promise<Part> {
  const file = await readCoordinates(name, undefined);
  const tree = file.frames[0];
  if (tree === undefined) throw new UsageError(`${name}: holds no frame`);
  const model = buildFrameModel(file, tree, null, false, new FindingCollector());
  return { model, moments: finish(momentSteps(model, request.settings.centre, request.knowledge)) };
}
