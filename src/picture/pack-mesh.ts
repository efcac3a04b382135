import { deflateSync } from "node:zlib";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Vector3 } from "../geometry/vector.js";
import { weld } from "../geometry/weld.js";
import { gridSteps, type PackedMesh } from "./packed-mesh.js";

/**
 * One part welded, indexed, quantised and compressed. `corners`: 9 per triangle, metres. A corner moves by at most half a step along each axis:
 * 1/131070 of the part's extent.
 */
export function packMesh(corners: Float32Array): PackedMesh {
  const { vertices, corners: indices } = weld(corners);
  const { min, max } = boundsOf(vertices);
  const grid = new Uint16Array(vertices.length);
  for (let at = 0; at < vertices.length; at++) {
    const axis = at % 3;
    const extent = max[axis] - min[axis];
    grid[at] = extent > 0 ? Math.round(((vertices[at] - min[axis]) / extent) * gridSteps) : 0;
  }
  return {
    min,
    max,
    vertices: vertices.length / 3,
    triangles: indices.length / 3,
    positions: packed(changes(grid, 3)),
    indices: packed(changes(indices, 1)),
  };
}

/** Corners of the triangles of one part, in order. */
export function cornersOf({ positions, partOf }: Pick<TriangleSet, "positions" | "partOf">, part: number): Float32Array {
  let count = 0;
  for (const own of partOf) if (own === part) count++;
  const corners = new Float32Array(9 * count);
  let to = 0;
  for (let from = 0; from < partOf.length; from++) {
    if (partOf[from] !== part) continue;
    corners.set(positions.subarray(9 * from, 9 * from + 9), to);
    to += 9;
  }
  return corners;
}

function boundsOf(vertices: Float32Array): { min: Vector3; max: Vector3 } {
  if (vertices.length === 0) return { min: [0, 0, 0], max: [0, 0, 0] };
  const min: Vector3 = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  const max: Vector3 = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (let at = 0; at < vertices.length; at++) {
    const axis = at % 3;
    if (vertices[at] < min[axis]) min[axis] = vertices[at];
    if (vertices[at] > max[axis]) max[axis] = vertices[at];
  }
  return { min, max };
}

/** Each value less the one `stride` before it, modulo the type's range: small where neighbours are near. */
function changes<T extends Uint16Array | Uint32Array>(values: T, stride: number): T {
  const result = values.slice() as T;
  for (let at = values.length - 1; at >= stride; at--) result[at] = values[at] - values[at - stride];
  return result;
}

/** Bytes of equal weight together compress better; little-endian whatever the machine. */
function packed(values: Uint16Array | Uint32Array): string {
  const width = values.BYTES_PER_ELEMENT;
  const planes = new Uint8Array(width * values.length);
  for (let at = 0; at < values.length; at++)
    for (let byte = 0; byte < width; byte++) planes[byte * values.length + at] = values[at] >>> (8 * byte);
  return deflateSync(planes, { level: 9 }).toString("base64");
}
