import { type Circle, outerCircle } from "./circle.js";
import type { SurfaceMesh } from "./surface-mesh.js";
import type { Vector3 } from "./vector.js";
import { wheelPieces } from "./wheel-pieces.js";

/** A wheel found in a part. Mesh unit and axes. */
export interface WheelFit {
  /** part number */
  part: number;
  /** On the axis, half-way between the sides. */
  centre: Vector3;
  /** Unit vector, pointing to the vehicle's right. */
  axis: Vector3;
  /** Greatest radius of the tread about the axis. */
  radius: number;
  /** Between the sides, along the axis. */
  width: number;
  /** Root mean square deviation of the outermost ring from the circle. */
  fitError: number;
  /** Share of the full circle that the ring covers. */
  covered: number;
}

export interface VehicleAxes {
  rearward: Vector3;
  right: Vector3;
  up: Vector3;
}

/** Sections across the width that are looked at for the tilt of the axis. */
const SECTIONS = 15;
/** A section belongs to the tread when it is a circle this good and nearly as large as the largest. */
const ROUND = 0.02;
const NEAR_LARGEST = 0.8;
const NO_WHEEL = 0.03;
const LEAST_COVERED = 0.66;
/** Camber and toe stay below this slope (8 degrees); more comes from sections that do not belong together. */
const STEEPEST = 0.14;

/**
 * Fits an axis, a centre and a radius to every wheel in the given parts. A part may hold several (left and right, or all four): its
 * connected pieces are put together where their boxes overlap.
 *
 * The axis begins as the vehicle's lateral direction. Sections across it give circles through their outermost points; the line
 * through the centres of those that are round is the next axis, until it stands still. Radius and centre come from the outermost
 * ring seen along the axis. Flats and bulges where the tyre meets the ground do not count (see `outerCircle`).
 *
 * Null in `fit` where the piece is no wheel: not round within 3 %, or less than two thirds of a circle.
 */
export function fitWheels(
  mesh: SurfaceMesh,
  parts: number[],
  axes: VehicleAxes,
): { part: number; fit: WheelFit | null; centre: Vector3 }[] {
  return parts.flatMap((part) =>
    wheelPieces(mesh, part).map((triangles) => {
      const fit = fitWheel(mesh, part, triangles, axes);
      return { part, fit, centre: fit?.centre ?? middleOf(mesh, triangles) };
    }),
  );
}

function fitWheel(mesh: SurfaceMesh, part: number, triangles: Uint32Array, axes: VehicleAxes): WheelFit | null {
  let axis = axes.right;
  for (let round = 0; round < 8; round++) {
    const next = tiltedAxis(mesh, triangles, axis, axes.up);
    const turned = Math.hypot(next[0] - axis[0], next[1] - axis[1], next[2] - axis[2]);
    axis = next;
    if (turned < 1e-7) break;
  }
  const straight = fitAbout(mesh, part, triangles, axes.right, axes.up);
  const tilted = fitAbout(mesh, part, triangles, axis, axes.up);
  // A tilt is believed only when the ring is clearly rounder for it: a balloon tyre or spokes can make one up.
  const best = tilted !== null && (straight === null || tilted.fitError < 0.8 * straight.fitError) ? tilted : straight;
  return best !== null && best.fitError <= NO_WHEEL * best.radius && best.covered >= LEAST_COVERED ? best : null;
}

function fitAbout(mesh: SurfaceMesh, part: number, triangles: Uint32Array, axis: Vector3, up: Vector3): WheelFit | null {
  const frame = frameAbout(axis, up);
  const { points, low, high } = seenAlong(mesh, triangles, frame);
  const circle = outerCircle(points);
  if (circle === null) return null;
  const along = (low + high) / 2;
  const centre = [0, 1, 2].map((k) => circle.x * frame.u[k] + circle.y * frame.v[k] + along * axis[k]) as Vector3;
  return { part, centre, axis, radius: circle.reach, width: high - low, fitError: circle.deviation, covered: circle.covered };
}

interface Frame {
  u: Vector3;
  v: Vector3;
  w: Vector3;
}

function frameAbout(w: Vector3, up: Vector3): Frame {
  const u = normalised(cross(up, w));
  return { u, v: cross(w, u), w };
}

/** The axis through the centres of the round sections; the given one where fewer than two are round. */
function tiltedAxis(mesh: SurfaceMesh, triangles: Uint32Array, axis: Vector3, up: Vector3): Vector3 {
  const frame = frameAbout(axis, up);
  const { low, high } = seenAlong(mesh, triangles, frame);
  const found: { at: number; circle: Circle }[] = [];
  for (let k = 0; k < SECTIONS; k++) {
    const at = low + ((k + 0.5) / SECTIONS) * (high - low);
    const circle = outerCircle(section(mesh, triangles, frame, at));
    if (circle !== null && circle.deviation < ROUND * circle.radius && circle.covered > LEAST_COVERED) found.push({ at, circle });
  }
  const largest = Math.max(...found.map(({ circle }) => circle.radius));
  const tread = found.filter(({ circle }) => circle.radius > NEAR_LARGEST * largest);
  if (tread.length < 2) return axis;
  const mean = (value: (item: { at: number; circle: Circle }) => number): number =>
    tread.reduce((sum, item) => sum + value(item), 0) / tread.length;
  const middle = mean((item) => item.at);
  const spread = mean((item) => (item.at - middle) ** 2);
  const slopeX = mean((item) => (item.at - middle) * item.circle.x) / spread;
  const slopeY = mean((item) => (item.at - middle) * item.circle.y) / spread;
  if (Math.hypot(slopeX, slopeY) > STEEPEST) return axis;
  return normalised([0, 1, 2].map((k) => axis[k] + slopeX * frame.u[k] + slopeY * frame.v[k]) as Vector3);
}

/** The vertices in the plane across the axis (2 per corner) and their range along it. */
function seenAlong(
  mesh: SurfaceMesh,
  triangles: Uint32Array,
  { u, v, w }: Frame,
): { points: Float64Array; low: number; high: number } {
  const points = new Float64Array(6 * triangles.length);
  let low = Infinity;
  let high = -Infinity;
  let to = 0;
  for (const t of triangles)
    for (let k = 0; k < 3; k++) {
      const at = 3 * mesh.corners[3 * t + k];
      points[to++] = dotAt(mesh.vertices, at, u);
      points[to++] = dotAt(mesh.vertices, at, v);
      const along = dotAt(mesh.vertices, at, w);
      if (along < low) low = along;
      if (along > high) high = along;
    }
  return { points, low, high };
}

/** Where the triangles' edges cross the plane across the axis at `level`: 2 per crossing. */
function section(mesh: SurfaceMesh, triangles: Uint32Array, { u, v, w }: Frame, level: number): Float64Array {
  const { vertices, corners } = mesh;
  const found: number[] = [];
  for (const t of triangles)
    for (let k = 0; k < 3; k++) {
      const a = 3 * corners[3 * t + k];
      const b = 3 * corners[3 * t + ((k + 1) % 3)];
      const da = dotAt(vertices, a, w) - level;
      const db = dotAt(vertices, b, w) - level;
      if (da > 0 === db > 0) continue;
      const share = da / (da - db);
      found.push(
        dotAt(vertices, a, u) + share * (dotAt(vertices, b, u) - dotAt(vertices, a, u)),
        dotAt(vertices, a, v) + share * (dotAt(vertices, b, v) - dotAt(vertices, a, v)),
      );
    }
  return Float64Array.from(found);
}

function middleOf({ vertices, corners }: SurfaceMesh, triangles: Uint32Array): Vector3 {
  const low: Vector3 = [Infinity, Infinity, Infinity];
  const high: Vector3 = [-Infinity, -Infinity, -Infinity];
  for (const t of triangles)
    for (let k = 0; k < 3; k++)
      for (let axis = 0; axis < 3; axis++) {
        const value = vertices[3 * corners[3 * t + k] + axis];
        low[axis] = Math.min(low[axis], value);
        high[axis] = Math.max(high[axis], value);
      }
  return low.map((value, axis) => (value + high[axis]) / 2) as Vector3;
}

const dotAt = (vertices: Float32Array, at: number, a: Vector3): number =>
  vertices[at] * a[0] + vertices[at + 1] * a[1] + vertices[at + 2] * a[2];

const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

function normalised(a: Vector3): Vector3 {
  const length = Math.hypot(...a);
  return [a[0] / length, a[1] / length, a[2] / length];
}
