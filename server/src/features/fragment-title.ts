import type { FrameModel } from '../model/frame-model';

/** What a fragment of a frame is called where it stands alone: its residue, else its name with its number. */
export function fragmentTitle({ labels, names }: Pick<FrameModel, 'labels' | 'names'>, f: number): string {
  return labels[f] || `${names[f]} (${f + 1})`;
}
