import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Vector3 } from "../geometry/vector.js";
import { weld } from "../geometry/weld.js";
import type { PackedBody } from "./page-model.js";

const steps = 65535;

/** A body welded, indexed and quantised part by part. A corner moves by at most half a step: 1/131070 of the part's extent along each axis. */
export function packBody(set: TriangleSet): PackedBody {
  return {
    parts: set.parts.map(({ name }, index) => {
      const corners = cornersOf(set, index);
      const { vertices, corners: indices } = weld(corners);
      const { min, max } = boundsOf(vertices);
      const grid = new Uint16Array(vertices.length);
      for (let at = 0; at < vertices.length; at++) {
        const axis = at % 3;
        const extent = max[axis] - min[axis];
        grid[at] = extent > 0 ? Math.round(((vertices[at] - min[axis]) / extent) * steps) : 0;
      }
      return {
        name,
        min,
        max,
        vertices: vertices.length / 3,
        triangles: indices.length / 3,
        positions: base64(grid),
        indices: base64(indices),
      };
    }),
  };
}

function cornersOf(set: TriangleSet, part: number): Float32Array {
  let count = 0;
  for (const own of set.partOf) if (own === part) count++;
  const corners = new Float32Array(9 * count);
  let to = 0;
  for (let from = 0; from < set.partOf.length; from++) {
    if (set.partOf[from] !== part) continue;
    corners.set(set.positions.subarray(9 * from, 9 * from + 9), to);
    to += 9;
  }
  return corners;
}

function boundsOf(vertices: Float32Array): { min: Vector3; max: Vector3 } {
  const min: Vector3 = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  const max: Vector3 = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (let at = 0; at < vertices.length; at++) {
    const axis = at % 3;
    if (vertices[at] < min[axis]) min[axis] = vertices[at];
    if (vertices[at] > max[axis]) max[axis] = vertices[at];
  }
  return vertices.length > 0 ? { min, max } : { min: [0, 0, 0], max: [0, 0, 0] };
}

const base64 = (array: Uint16Array | Uint32Array): string =>
  Buffer.from(array.buffer, array.byteOffset, array.byteLength).toString("base64");
