import { cross, normalised, type Vector3 } from "../vector.js";
import type { WheelPiece } from "./wheel-pieces.js";

/** Three perpendicular unit vectors; w is the axis. */
export interface Frame {
  u: Vector3;
  v: Vector3;
  w: Vector3;
}

/** Triangles nearer to the axis than this share of the radius are rim, spokes and hub: not all of them go round. */
const TREAD = 0.8;
const ROUNDS = 4;
/** Normals that pass the axis at more than this share of the radius belong to lugs and flats. */
const FAR_OFF = 0.15;
const LEAST_TRIANGLES = 24;
/** Of more triangles than these an even choice is enough. */
const MOST_TRIANGLES = 12_000;

/**
 * The axis of the surface of revolution that the outer part of a wheel is, from the rule that every normal of such a surface meets the
 * axis: least squares of the distance at which the normals pass it (Pottmann and Randrup, 1998, "Rotational and helical surface
 * approximation for reverse engineering"), linear because the tilt against `w` is small. Triangles count with their area. Repeated
 * without normals that pass the axis at more than three robust standard deviations: flats, lugs, bulges.
 *
 * @param centre of the wheel along u and v
 * @returns unit vector near `w`, or `w` where too little is left to tell
 */
export function revolutionAxis(piece: WheelPiece, { u, v, w }: Frame, centre: { x: number; y: number }, radius: number): Vector3 {
  const tread = treadOf(piece, { u, v, w }, centre, radius);
  let limit = FAR_OFF * radius;
  let best: Tilt | null = null;
  for (let round = 0; round < ROUNDS; round++) {
    const next = leastSquares(tread, best, limit, radius);
    if (next === null) break;
    best = next;
    limit = Math.min(FAR_OFF * radius, Math.max(3 * 1.4826 * medianMiss(tread, best), 1e-5 * radius));
  }
  if (best === null) return w;
  const { alongU, alongV } = best;
  return normalised(w.map((value, k) => value + alongU * u[k] + alongV * v[k]) as Vector3);
}

/** 5 per triangle: the moment of its normal about the middle along u, v and w, then the normal along u and v; and its area. */
interface Tread {
  rows: Float64Array;
  areas: Float64Array;
}

/** The axis is w + alongU u + alongV v, through a point that is off the middle as `offset` says. */
interface Tilt {
  alongU: number;
  alongV: number;
  offset: [number, number];
}

function treadOf({ vertices, corners }: WheelPiece, { u, v, w }: Frame, centre: { x: number; y: number }, radius: number): Tread {
  const rows: number[] = [];
  const areas: number[] = [];
  let middle = 0;
  for (const vertex of corners) middle += along(vertices, vertex, w) / corners.length;
  const at = (vertex: number): Vector3 => [
    along(vertices, vertex, u) - centre.x,
    along(vertices, vertex, v) - centre.y,
    along(vertices, vertex, w) - middle,
  ];
  // Chosen by a hash of the number: a fixed step could meet the same half of every quad.
  const kept = Math.min(1, (3 * MOST_TRIANGLES) / corners.length) * 2 ** 32;
  for (let h = 0; h < corners.length; h += 3) {
    if (Math.imul(h + 1, 0x9e3779b1) >>> 0 >= kept) continue;
    const a = at(corners[h]);
    const b = at(corners[h + 1]);
    const c = at(corners[h + 2]);
    const p: Vector3 = [(a[0] + b[0] + c[0]) / 3, (a[1] + b[1] + c[1]) / 3, (a[2] + b[2] + c[2]) / 3];
    if (p[0] * p[0] + p[1] * p[1] < (TREAD * radius) ** 2) continue;
    const n = cross([b[0] - a[0], b[1] - a[1], b[2] - a[2]], [c[0] - a[0], c[1] - a[1], c[2] - a[2]]);
    const twice = Math.hypot(...n);
    if (twice === 0) continue;
    const moment = cross(p, n);
    rows.push(moment[0] / twice, moment[1] / twice, moment[2] / twice, n[0] / twice, n[1] / twice);
    areas.push(twice / 2);
  }
  return { rows: Float64Array.from(rows), areas: Float64Array.from(areas) };
}

/** How far a normal passes the axis, to first order in the tilt. */
function miss(rows: Float64Array, at: number, { alongU, alongV, offset }: Tilt): number {
  return rows[at + 2] + alongU * rows[at] + alongV * rows[at + 1] - offset[0] * rows[at + 3] - offset[1] * rows[at + 4];
}

function leastSquares({ rows, areas }: Tread, last: Tilt | null, limit: number, radius: number): Tilt | null {
  const start: Tilt = last ?? { alongU: 0, alongV: 0, offset: [0, 0] };
  // Normal equations of four unknowns: alongU, alongV and the offsets, the last two in units of the radius.
  const matrix = new Float64Array(16);
  const right = new Float64Array(4);
  let count = 0;
  const row = new Float64Array(4);
  for (let k = 0; k < areas.length; k++) {
    const at = 5 * k;
    if (Math.abs(miss(rows, at, start)) > limit) continue;
    count++;
    row[0] = rows[at] / radius;
    row[1] = rows[at + 1] / radius;
    row[2] = -rows[at + 3];
    row[3] = -rows[at + 4];
    for (let i = 0; i < 4; i++) {
      for (let j = 0; j < 4; j++) matrix[4 * i + j] += areas[k] * row[i] * row[j];
      right[i] -= (areas[k] * row[i] * rows[at + 2]) / radius;
    }
  }
  if (count < LEAST_TRIANGLES) return null;
  const solution = solved(matrix, right);
  return solution === null
    ? null
    : { alongU: solution[0], alongV: solution[1], offset: [solution[2] * radius, solution[3] * radius] };
}

/** Gaussian elimination with pivots; null where the equations do not determine the unknowns. */
function solved(matrix: Float64Array, right: Float64Array): Float64Array | null {
  const n = right.length;
  const scale = Math.max(...matrix.map(Math.abs));
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let row = column + 1; row < n; row++)
      if (Math.abs(matrix[n * row + column]) > Math.abs(matrix[n * pivot + column])) pivot = row;
    if (!(Math.abs(matrix[n * pivot + column]) > 1e-6 * scale)) return null;
    for (let k = 0; k < n; k++) {
      const held = matrix[n * column + k];
      matrix[n * column + k] = matrix[n * pivot + k];
      matrix[n * pivot + k] = held;
    }
    const heldRight = right[column];
    right[column] = right[pivot];
    right[pivot] = heldRight;
    for (let row = column + 1; row < n; row++) {
      const factor = matrix[n * row + column] / matrix[n * column + column];
      for (let k = column; k < n; k++) matrix[n * row + k] -= factor * matrix[n * column + k];
      right[row] -= factor * right[column];
    }
  }
  for (let row = n - 1; row >= 0; row--) {
    for (let k = row + 1; k < n; k++) right[row] -= matrix[n * row + k] * right[k];
    right[row] /= matrix[n * row + row];
  }
  return right;
}

function medianMiss({ rows, areas }: Tread, tilt: Tilt): number {
  const misses = new Float64Array(areas.length);
  for (let k = 0; k < areas.length; k++) misses[k] = Math.abs(miss(rows, 5 * k, tilt));
  return misses.sort()[misses.length >> 1];
}

const along = (vertices: Float64Array, vertex: number, a: Vector3): number =>
  vertices[3 * vertex] * a[0] + vertices[3 * vertex + 1] * a[1] + vertices[3 * vertex + 2] * a[2];
