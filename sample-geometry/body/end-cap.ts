import type { Vector3 } from "../../src/geometry/vector.js";
import { fillRegion, type Point, pointsBetween } from "./flat-region.js";
import type { Surface } from "./surface.js";

/** Which way the face of a filled end looks. */
export type EndFace = "forward" | "rearward";

/**
 * Fills the region between a half section (from the bottom over y > 0 to the top, both ends on y = 0) and the mid-plane. Inside, x is
 * given by `face`; the section itself stays where it is.
 */
export function fillHalfEnd(
  part: Surface,
  rim: Vector3[],
  spacing: number,
  looks: EndFace,
  face: (y: number, z: number) => number,
): void {
  const top = rim[rim.length - 1];
  const boundary: Point[] = rim.map(([, y, z]): Point => [y, z]);
  boundary.push(...pointsBetween([0, top[2]], [0, rim[0][2]], spacing));
  const { points, triangles } = fillRegion(boundary, spacing);
  const corners = points.map(([y, z], k): Vector3 => (k < rim.length ? rim[k] : [face(y, z), y, z]));
  for (const [a, b, c] of triangles) {
    if (looks === "forward") part.triangle(corners[a], corners[c], corners[b]);
    else part.triangle(corners[a], corners[b], corners[c]);
  }
}

/** Fills a ring that lies in a plane of constant y. `looks`: right is +y. */
export function fillDisc(part: Surface, ring: Vector3[], spacing: number, looks: "left" | "right"): void {
  const y = ring[0][1];
  const { points, triangles } = fillRegion(
    ring.map(([x, , z]): Point => [x, z]),
    spacing,
  );
  const corners = points.map(([x, z]): Vector3 => [x, y, z]);
  for (const [a, b, c] of triangles) {
    if (looks === "right") part.triangle(corners[a], corners[c], corners[b]);
    else part.triangle(corners[a], corners[b], corners[c]);
  }
}
