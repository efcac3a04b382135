import type { SurfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";
import { convexHull, ringArea } from "./hull.js";
import type { WheelOwner } from "./wheel-owner.js";
import type { VehicleAxes } from "./wheels.js";

/** Where a wheel meets the ground. Mesh unit and axes. */
export interface ContactPatch {
  /** Middle of the patch's box, on the ground. */
  centre: Vector3;
  /** Along the vehicle. */
  length: number;
  /** Across it. */
  width: number;
  /** Gross: within the convex hull, the grooves of the tread included. */
  area: number;
}

/**
 * The contact patch of each wheel: the hull of all that its parts have no higher than `depth` above `level`, seen from above; null
 * where there is nothing. Triangles are clipped at that height exactly.
 *
 * @param wheels how many wheels there are
 * @param level height of the ground along up
 */
export function contactPatches(
  mesh: SurfaceMesh,
  wheels: number,
  owner: WheelOwner,
  { rearward, right, up }: VehicleAxes,
  level: number,
  depth: number,
): (ContactPatch | null)[] {
  const { vertices, corners, partOf } = mesh;
  const found: number[][] = Array.from({ length: wheels }, () => []);
  const top = level + depth;
  const height = (v: number): number => vertices[v] * up[0] + vertices[v + 1] * up[1] + vertices[v + 2] * up[2];
  const along = (v: number): number => vertices[v] * rearward[0] + vertices[v + 1] * rearward[1] + vertices[v + 2] * rearward[2];
  const across = (v: number): number => vertices[v] * right[0] + vertices[v + 1] * right[1] + vertices[v + 2] * right[2];
  for (let t = 0, h = 0; t < partOf.length; t++, h += 3) {
    const ids = [3 * corners[h], 3 * corners[h + 1], 3 * corners[h + 2]];
    const heights = ids.map(height);
    if (Math.min(...heights) > top) continue;
    const wheel = owner(partOf[t], vertices, ids[0]);
    if (wheel < 0) continue;
    for (let k = 0; k < 3; k++) {
      const next = (k + 1) % 3;
      if (heights[k] <= top) found[wheel].push(along(ids[k]), across(ids[k]));
      if (heights[k] <= top === heights[next] <= top) continue;
      const share = (top - heights[k]) / (heights[next] - heights[k]);
      found[wheel].push(
        along(ids[k]) + share * (along(ids[next]) - along(ids[k])),
        across(ids[k]) + share * (across(ids[next]) - across(ids[k])),
      );
    }
  }
  return found.map((points) => patchOf(Float64Array.from(points), rearward, right, up, level));
}

function patchOf(points: Float64Array, rearward: Vector3, right: Vector3, up: Vector3, level: number): ContactPatch | null {
  if (points.length === 0) return null;
  const low = [Infinity, Infinity];
  const high = [-Infinity, -Infinity];
  for (let at = 0; at < points.length; at++) {
    low[at % 2] = Math.min(low[at % 2], points[at]);
    high[at % 2] = Math.max(high[at % 2], points[at]);
  }
  const middle = [(low[0] + high[0]) / 2, (low[1] + high[1]) / 2];
  return {
    centre: rearward.map((value, k) => value * middle[0] + right[k] * middle[1] + up[k] * level) as Vector3,
    length: high[0] - low[0],
    width: high[1] - low[1],
    area: ringArea(convexHull(points)),
  };
}
