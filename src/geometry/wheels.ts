import { type Circle, outerCircle } from "./circle.js";
import type { SurfaceMesh } from "./surface-mesh.js";
import type { Vector3 } from "./vector.js";
import { type WheelPiece, wheelPieces } from "./wheel-pieces.js";

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
 * `fit` is null where a piece is no wheel: not round within 3 %, or less than two thirds of a circle.
 */
export function fitWheels(
  mesh: SurfaceMesh,
  parts: number[],
  axes: VehicleAxes,
): { part: number; fit: WheelFit | null; centre: Vector3 }[] {
  return wheelPieces(mesh, parts).flatMap((pieces, k) =>
    pieces.map((piece) => {
      const fit = fitWheel(piece, parts[k], axes);
      return { part: parts[k], fit, centre: fit?.centre ?? middleOf(piece) };
    }),
  );
}

function fitWheel(piece: WheelPiece, part: number, axes: VehicleAxes): WheelFit | null {
  const straight = fitAbout(piece, part, axes.right, axes.up);
  if (straight === null) return null;
  let axis = axes.right;
  for (let round = 0; round < 8; round++) {
    const next = tiltedAxis(piece, axis, axes.up);
    const turned = Math.hypot(next[0] - axis[0], next[1] - axis[1], next[2] - axis[2]);
    axis = next;
    if (turned < 1e-6) break;
  }
  const tilted = fitAbout(piece, part, axis, axes.up);
  // A tilt is believed only when the ring is clearly rounder for it: a balloon tyre or spokes can make one up.
  const best = tilted !== null && tilted.fitError < 0.8 * straight.fitError ? tilted : straight;
  return best.fitError <= NO_WHEEL * best.radius && best.covered >= LEAST_COVERED ? best : null;
}

function fitAbout(piece: WheelPiece, part: number, axis: Vector3, up: Vector3): WheelFit | null {
  const frame = frameAbout(axis, up);
  const { points, low, high } = seenAlong(piece, frame);
  const ring = new Float64Array((2 * points.length) / 3);
  for (let k = 0; 3 * k < points.length; k++) {
    ring[2 * k] = points[3 * k];
    ring[2 * k + 1] = points[3 * k + 1];
  }
  const circle = outerCircle(ring);
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
function tiltedAxis(piece: WheelPiece, axis: Vector3, up: Vector3): Vector3 {
  const frame = frameAbout(axis, up);
  const tread: { at: number; circle: Circle }[] = [];
  for (const { at, points } of sections(piece, frame)) {
    const circle = outerCircle(points);
    if (circle !== null && circle.deviation < ROUND * circle.radius && circle.covered > LEAST_COVERED) tread.push({ at, circle });
  }
  const largest = Math.max(...tread.map(({ circle }) => circle.radius));
  const kept = tread.filter(({ circle }) => circle.radius > NEAR_LARGEST * largest);
  if (kept.length < 2) return axis;
  const mean = (value: (item: { at: number; circle: Circle }) => number): number =>
    kept.reduce((sum, item) => sum + value(item), 0) / kept.length;
  const middle = mean((item) => item.at);
  const spread = mean((item) => (item.at - middle) ** 2);
  const slopeX = mean((item) => (item.at - middle) * item.circle.x) / spread;
  const slopeY = mean((item) => (item.at - middle) * item.circle.y) / spread;
  if (Math.hypot(slopeX, slopeY) > STEEPEST) return axis;
  return normalised([0, 1, 2].map((k) => axis[k] + slopeX * frame.u[k] + slopeY * frame.v[k]) as Vector3);
}

/** The piece's corners in the frame (3 per vertex that a triangle uses: across, up, along) and their range along the axis. */
function seenAlong({ vertices, corners }: WheelPiece, { u, v, w }: Frame): { points: Float64Array; low: number; high: number } {
  const used = new Uint8Array(vertices.length / 3);
  let count = 0;
  for (const vertex of corners) if (used[vertex] === 0) count += used[vertex] = 1;
  const points = new Float64Array(3 * count);
  let low = Infinity;
  let high = -Infinity;
  for (let k = 0, to = 0; k < used.length; k++) {
    if (used[k] === 0) continue;
    const along = dotAt(vertices, 3 * k, w);
    points[to++] = dotAt(vertices, 3 * k, u);
    points[to++] = dotAt(vertices, 3 * k, v);
    points[to++] = along;
    if (along < low) low = along;
    if (along > high) high = along;
  }
  return { points, low, high };
}

/** Where the triangles' edges cross evenly spaced planes across the axis: 2 per crossing. */
function sections({ vertices, corners }: WheelPiece, { u, v, w }: Frame): { at: number; points: Float64Array }[] {
  const along = new Float64Array(vertices.length / 3);
  for (let k = 0; k < along.length; k++) along[k] = dotAt(vertices, 3 * k, w);
  let low = Infinity;
  let high = -Infinity;
  for (const vertex of corners) {
    low = Math.min(low, along[vertex]);
    high = Math.max(high, along[vertex]);
  }
  const step = (high - low) / SECTIONS;
  const found: number[][] = Array.from({ length: SECTIONS }, () => []);
  // The section of a height: planes lie half a step in from either side.
  const index = (height: number): number => Math.ceil((height - low) / step - 0.5);
  for (let h = 0; step > 0 && h < corners.length; h++) {
    const a = corners[h];
    const b = corners[h % 3 === 2 ? h - 2 : h + 1];
    const first = Math.max(0, index(Math.min(along[a], along[b])));
    const last = Math.min(SECTIONS, index(Math.max(along[a], along[b])));
    for (let k = first; k < last; k++) {
      const share = (low + (k + 0.5) * step - along[a]) / (along[b] - along[a]);
      const x = dotAt(vertices, 3 * a, u);
      const y = dotAt(vertices, 3 * a, v);
      found[k].push(x + share * (dotAt(vertices, 3 * b, u) - x), y + share * (dotAt(vertices, 3 * b, v) - y));
    }
  }
  return found.map((points, k) => ({ at: low + (k + 0.5) * step, points: Float64Array.from(points) }));
}

function middleOf({ vertices, corners }: WheelPiece): Vector3 {
  const low: Vector3 = [Infinity, Infinity, Infinity];
  const high: Vector3 = [-Infinity, -Infinity, -Infinity];
  for (const vertex of corners)
    for (let axis = 0; axis < 3; axis++) {
      const value = vertices[3 * vertex + axis];
      low[axis] = Math.min(low[axis], value);
      high[axis] = Math.max(high[axis], value);
    }
  return low.map((value, axis) => (value + high[axis]) / 2) as Vector3;
}

const dotAt = (vertices: Float64Array, at: number, a: Vector3): number =>
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
