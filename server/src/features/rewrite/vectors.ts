/** Three numbers: a place, a direction or a dipole. */
export type Vector = readonly [number, number, number];

/** The vector at a place of a flat array, three numbers each. */
export function vectorAt(array: ArrayLike<number>, index: number): Vector {
  return [array[3 * index]!, array[3 * index + 1]!, array[3 * index + 2]!];
}

export function dot(a: Vector, b: Vector): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

export function norm(a: Vector): number {
  return Math.sqrt(dot(a, a));
}

export function scaledBy(a: Vector, factor: number): Vector {
  return [a[0] * factor, a[1] * factor, a[2] * factor];
}

export function difference(a: Vector, b: Vector): Vector {
  return [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
}

export function cross(a: Vector, b: Vector): Vector {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

/** Degrees between two directions; NaN where one has none. */
export function angleDeg(a: Vector, b: Vector): number {
  const cosine = dot(a, b) / (norm(a) * norm(b));
  return (Math.acos(Math.max(-1, Math.min(1, cosine))) * 180) / Math.PI;
}

/** A rotation as its three rows. */
export type Rotation = readonly [Vector, Vector, Vector];

/** A vector turned by a rotation. */
export function rotated(rotation: Rotation, v: Vector): Vector {
  return [dot(rotation[0], v), dot(rotation[1], v), dot(rotation[2], v)];
}

/** The rotation by an angle (radians, right-handed) about a unit vector (Rodrigues' formula). */
export function rotationAbout([x, y, z]: Vector, angleRad: number): Rotation {
  const c = Math.cos(angleRad);
  const s = Math.sin(angleRad);
  const t = 1 - c;
  return [
    [t * x * x + c, t * x * y - s * z, t * x * z + s * y],
    [t * x * y + s * z, t * y * y + c, t * y * z - s * x],
    [t * x * z - s * y, t * y * z + s * x, t * z * z + c],
  ];
}

/** The smallest rotation that takes one direction into another; of opposite ones, about a fixed direction across. */
export function rotationBetween(from: Vector, to: Vector): Rotation {
  const axis = cross(from, to);
  const size = norm(axis);
  const angle = Math.atan2(size, dot(from, to));
  if (size > 1e-9 * norm(from) * norm(to)) return rotationAbout(scaledBy(axis, 1 / size), angle);
  const helper: Vector = Math.abs(from[0]) < 0.9 * norm(from) ? [1, 0, 0] : [0, 1, 0];
  const across = cross(from, helper);
  return rotationAbout(scaledBy(across, 1 / norm(across)), angle);
}
