/** x, y, z. The frame and unit are said where a vector is declared. */
export type Vector3 = [number, number, number];

export interface Box {
  min: Vector3;
  max: Vector3;
}

export const dot = (a: Vector3, b: Vector3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

export const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** The vector of length 1 in the same direction. */
export function normalised(a: Vector3): Vector3 {
  const length = Math.hypot(...a);
  return [a[0] / length, a[1] / length, a[2] / length];
}

/** Two unit vectors across a unit vector, right-handed with it (u, v, along). Across an axis of the coordinates they are axes too. */
export function across(along: Vector3): { u: Vector3; v: Vector3 } {
  const size = along.map(Math.abs);
  const least = size.indexOf(Math.min(...size));
  const u = normalised(cross([least === 0 ? 1 : 0, least === 1 ? 1 : 0, least === 2 ? 1 : 0], along));
  return { u, v: cross(along, u) };
}
