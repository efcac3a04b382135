import type { SurfaceMesh } from "../surface-mesh.js";
import { cross, dot, normalised, type Vector3 } from "../vector.js";
import { outerCircle } from "./circle.js";
import { type Frame, revolutionAxis } from "./revolution-axis.js";
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
  /** Share of the full circle that the ring covers, and how many corners it has. */
  covered: number;
  corners: number;
}

export interface VehicleAxes {
  rearward: Vector3;
  right: Vector3;
  up: Vector3;
}

const NO_WHEEL = 0.03;
const LEAST_COVERED = 0.66;
/** Fewer corners on the outermost ring make a box or a bolt, not a wheel. */
const LEAST_CORNERS = 8;
/** Least gain in roundness, in radii, that makes a tilt credible: a twentieth of a degree on a usual wheel. */
const ROUNDER = 3e-5;
/** Camber and toe stay below this slope (8 degrees). */
const STEEPEST = 0.14;

/**
 * Fits an axis, a centre and a radius to every wheel in the given parts. A part may hold several (left and right, or all four): its
 * connected pieces are put together where their boxes overlap.
 *
 * The axis begins as the vehicle's lateral direction and is tilted to where the normals of the tread meet (see `revolutionAxis`), if
 * the wheel is clearly rounder for it. Radius and centre come from the outermost ring seen along the axis. Flats and bulges where the
 * tyre meets the ground do not count (see `outerCircle`).
 *
 * `fit` is null where a piece is no wheel: not round within 3 %, less than two thirds of a circle, or of fewer than eight corners.
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
  let best = fitAbout(piece, part, axes.right, axes.up);
  if (best === null) return null;
  for (let round = 0; round < 4; round++) {
    const frame = frameAbout(best.axis, axes.up);
    const axis = revolutionAxis(piece, frame, { x: dot(best.centre, frame.u), y: dot(best.centre, frame.v) }, best.radius);
    if (Math.hypot(...cross(axis, axes.right)) > STEEPEST) break;
    const next: WheelFit | null = fitAbout(piece, part, axis, axes.up);
    // Spokes, lugs and coarse facets can make a tilt up: it is believed only when the ring is clearly rounder for it.
    if (next === null || next.fitError > 0.8 * best.fitError || best.fitError - next.fitError < ROUNDER * best.radius) break;
    best = next;
  }
  return best.fitError <= NO_WHEEL * best.radius && best.covered >= LEAST_COVERED && best.corners >= LEAST_CORNERS ? best : null;
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
  return {
    part,
    centre,
    axis,
    radius: circle.reach,
    width: high - low,
    fitError: circle.deviation,
    covered: circle.covered,
    corners: circle.kept,
  };
}

function frameAbout(w: Vector3, up: Vector3): Frame {
  const u = normalised(cross(up, w));
  return { u, v: cross(w, u), w };
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
