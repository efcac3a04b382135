import type { Vector3 } from "./vector.js";

/** Twice the area of triangle t as a vector along its outward normal: zeros where it has none. Not for hot loops. */
export function twiceAreaVector({ vertices, corners }: { vertices: Float32Array; corners: Uint32Array }, t: number): Vector3 {
  const [a, b, c] = [3 * corners[3 * t], 3 * corners[3 * t + 1], 3 * corners[3 * t + 2]];
  const u = [0, 1, 2].map((k) => vertices[b + k] - vertices[a + k]);
  const v = [0, 1, 2].map((k) => vertices[c + k] - vertices[a + k]);
  return [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
}
