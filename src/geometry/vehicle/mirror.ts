import { nextInTriangle } from "../edges.js";
import { nearestDistance, nearestDistances } from "../nearest.js";
import { silhouette } from "../silhouette/silhouette.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Box, Vector3 } from "../vector.js";

/** How a body and a plane across one axis of the file belong together. Mesh unit. */
export interface Mirror {
  kind: "whole" | "half" | "none";
  /** How the cut of a half looks; null for the others. */
  cut: "open" | "lid" | null;
  /** Area of the lid on the cut; 0 without one. */
  lid: number;
  /** Coordinate of the plane on that axis. */
  plane: number;
  /** whole and none: greatest distance of a mirrored vertex to the surface, over the sampled vertices; half: of the cut from its plane. */
  deviation: number;
}

/** Vertices that are mirrored: one in each cell of a grid, so that fine and coarse regions count alike. */
const MOST_SAMPLES = 6000;
/** Images far from the surface whose distance is measured exactly. */
const FARTHEST = 8;
/** Shares of the body's greatest extent: a mirrored body may be off by this (2 mm on a car), a cut lies this close to its plane. */
const SAME = 5e-4;
const IN_PLANE = 1e-4;
/** A cut is open over half the length at least, or closed by a lid of most of the side view. */
const CUT_LENGTH = 0.5;
const LID_SHARE = 0.7;
const FLAT_SHARE = 0.5;

/**
 * Whether the body is symmetrical about the plane half-way between its bounds on `axis` (0, 1, 2), or is one half of such a body,
 * cut by the plane at one of these bounds: the cut is open along half the body's greatest extent, or the body is not symmetrical and
 * the cut is closed by a lid that fills most of the side view, while the other side is not as flat (a truck's is). The grid, not
 * chance, chooses the vertices that are tried: the result is the same every time.
 */
export function mirrorOf(mesh: SurfaceMesh, bounds: Box, axis: number): Mirror {
  const length = Math.max(...bounds.max.map((value, k) => value - bounds.min[k]));
  const plane = (bounds.min[axis] + bounds.max[axis]) / 2;
  if (!(length > 0)) return { kind: "none", cut: null, lid: 0, plane, deviation: 0 };
  const cuts = [bounds.min[axis], bounds.max[axis]].map((at): Cut => cutAt(mesh, axis, at, IN_PLANE * length));
  const open = cuts.filter((cut) => cut.openSpan >= CUT_LENGTH * length);
  if (open.length === 1) return { kind: "half", cut: "open", lid: 0, plane: open[0].plane, deviation: open[0].deviation };
  const deviation = mirrorDistance(mesh, bounds, axis, plane, length);
  if (deviation <= SAME * length) return { kind: "whole", cut: null, lid: 0, plane, deviation };
  const [lid, other] = cuts[0].lid > cuts[1].lid ? [0, 1] : [1, 0];
  const isLid =
    cuts[lid].lid > 0 &&
    cuts[lid].lid >= LID_SHARE * sideArea(mesh, axis) &&
    flatArea(mesh, axis, other) < FLAT_SHARE * cuts[lid].lid;
  return isLid
    ? { kind: "half", cut: "lid", lid: cuts[lid].lid, plane: cuts[lid].plane, deviation: cuts[lid].deviation }
    : { kind: "none", cut: null, lid: 0, plane, deviation };
}

function sideArea(mesh: SurfaceMesh, axis: number): number {
  const direction: Vector3 = [0, 0, 0];
  direction[axis] = 1;
  return silhouette(mesh, direction).area;
}

function mirrorDistance(mesh: SurfaceMesh, bounds: Box, axis: number, plane: number, length: number): number {
  const vertices = samples(mesh.vertices, bounds.min, length);
  const images = vertices.slice();
  for (let at = axis; at < images.length; at += 3) images[at] = 2 * plane - images[at];
  const distances = nearestDistances(mesh, images, length / 200);
  const beyond: number[] = [];
  distances.forEach((distance, k) => {
    if (distance === Infinity) beyond.push(k);
  });
  if (beyond.length === 0) return distances.reduce((worst, distance) => Math.max(worst, distance), 0);
  // Far off, the distance to the other samples tells which images are worth a look at every triangle.
  const step = Math.ceil(beyond.length / 400);
  const far = beyond
    .filter((_, k) => k % step === 0)
    .map((k) => ({ at: 3 * k, rough: roughDistance(vertices, images, 3 * k) }))
    .sort((a, b) => b.rough - a.rough)
    .slice(0, FARTHEST);
  return far.reduce((worst, { at }) => Math.max(worst, nearestDistance(mesh, images, at)), 0);
}

/** Squared distance of the image at `at` to the nearest of the points. */
function roughDistance(points: Float64Array, images: Float64Array, at: number): number {
  let least = Infinity;
  for (let k = 0; k < points.length; k += 3)
    least = Math.min(
      least,
      (points[k] - images[at]) ** 2 + (points[k + 1] - images[at + 1]) ** 2 + (points[k + 2] - images[at + 2]) ** 2,
    );
  return least;
}

/** 3 per sample: the first vertex of each cell of a grid, coarse enough that there are few. */
function samples(vertices: Float32Array, [x0, y0, z0]: Vector3, length: number): Float64Array {
  for (let cell = length / 80; ; cell *= 1.5) {
    const seen = new Set<number>();
    const found: number[] = [];
    const side = Math.ceil(length / cell) + 1;
    for (let at = 0; at < vertices.length && found.length <= 3 * MOST_SAMPLES; at += 3) {
      const i = Math.floor((vertices[at] - x0) / cell);
      const j = Math.floor((vertices[at + 1] - y0) / cell);
      const k = Math.floor((vertices[at + 2] - z0) / cell);
      const key = (i * side + j) * side + k;
      if (seen.has(key)) continue;
      seen.add(key);
      found.push(vertices[at], vertices[at + 1], vertices[at + 2]);
    }
    if (found.length <= 3 * MOST_SAMPLES) return Float64Array.from(found);
  }
}

/** What lies in a plane across the axis. */
interface Cut {
  plane: number;
  /** Diagonal of the box about the open edges. */
  openSpan: number;
  /** Area of the triangles. */
  lid: number;
  /** How far the open edges stray from the plane. */
  deviation: number;
}

function cutAt({ vertices, corners, ring }: SurfaceMesh, axis: number, plane: number, tolerance: number): Cut {
  const off = (h: number): number => Math.abs(vertices[3 * corners[h] + axis] - plane);
  const low: Vector3 = [Infinity, Infinity, Infinity];
  const high: Vector3 = [-Infinity, -Infinity, -Infinity];
  let lid = 0;
  let deviation = 0;
  for (let h = 0; h < corners.length; h++) {
    if (off(h) > tolerance) continue;
    const next = nextInTriangle(h);
    if (off(next) > tolerance) continue;
    if (ring[h] === h)
      for (const end of [h, next]) {
        deviation = Math.max(deviation, off(end));
        for (let k = 0; k < 3; k++) {
          low[k] = Math.min(low[k], vertices[3 * corners[end] + k]);
          high[k] = Math.max(high[k], vertices[3 * corners[end] + k]);
        }
      }
    if (h % 3 === 0 && off(h + 2) <= tolerance) lid += Math.abs(areaAcross(vertices, corners, h, axis));
  }
  return { plane, openSpan: low[0] > high[0] ? 0 : Math.hypot(...low.map((value, k) => high[k] - value)), lid, deviation };
}

/** Area of the triangles that lie across the axis, whatever plane they are in, and face its low (0) or high (1) end. */
function flatArea({ vertices, corners }: SurfaceMesh, axis: number, end: number): number {
  let sum = 0;
  for (let h = 0; h < corners.length; h += 3) {
    const [a, b, c] = [0, 1, 2].map((k) => vertices[3 * corners[h + k] + axis]);
    const area = areaAcross(vertices, corners, h, axis);
    const facing = end === 1 ? area > 0 : area < 0;
    // A quarter of a degree over the triangle's own size is flat.
    if (facing && Math.max(a, b, c) - Math.min(a, b, c) < 0.005 * Math.sqrt(Math.abs(area))) sum += Math.abs(area);
  }
  return sum;
}

/** Area of the triangle of half-edge `h`, seen along `axis`; negative where it faces the axis' low end. */
function areaAcross(vertices: Float32Array, corners: Uint32Array, h: number, axis: number): number {
  const u = (axis + 1) % 3;
  const v = (axis + 2) % 3;
  const [a, b, c] = [3 * corners[h], 3 * corners[h + 1], 3 * corners[h + 2]];
  const cross =
    (vertices[b + u] - vertices[a + u]) * (vertices[c + v] - vertices[a + v]) -
    (vertices[b + v] - vertices[a + v]) * (vertices[c + u] - vertices[a + u]);
  return cross / 2;
}
