/** Names of the special arrangements of two dipoles, and `skewed` for all others. */
export type Arrangement =
  | 'head-to-tail'
  | 'antiparallel'
  | 'parallel'
  | 'head-to-head'
  | 'tail-to-tail'
  | 'crossed'
  | 'T-shaped'
  | 'skewed';

/** How near every angle that counts must be to the name's, degrees. */
const TOLERANCE_DEG = 15;

const near = (angle: number, target: number) => Math.abs(angle - target) <= TOLERANCE_DEG;

/**
 * Names the arrangement by its angles in degrees: θ₁, θ₂ in [0, 180] to the line of centres, φ in (−180, 180] between the planes
 * (NaN where undefined). A name says nothing about the sign of the energy, which other moments share in.
 */
export function nameArrangement(theta1Deg: number, theta2Deg: number, phiDeg: number): Arrangement {
  const along1 = near(theta1Deg, 0) ? 1 : near(theta1Deg, 180) ? -1 : 0;
  const along2 = near(theta2Deg, 0) ? 1 : near(theta2Deg, 180) ? -1 : 0;
  const across1 = near(theta1Deg, 90);
  const across2 = near(theta2Deg, 90);
  if (along1 !== 0 && along2 !== 0) {
    if (along1 === along2) return 'head-to-tail';
    return along1 > 0 ? 'head-to-head' : 'tail-to-tail';
  }
  if ((along1 !== 0 && across2) || (along2 !== 0 && across1)) return 'T-shaped';
  if (across1 && across2) {
    const turn = Math.abs(phiDeg);
    if (near(turn, 180)) return 'antiparallel';
    if (near(turn, 0)) return 'parallel';
    if (near(turn, 90)) return 'crossed';
  }
  return 'skewed';
}
