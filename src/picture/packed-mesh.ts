import type { Vector3 } from "../geometry/vector.js";

/**
 * Vertices on a grid of 65 535 steps over the mesh's own bounding box, and triangles as vertex numbers. Both are written as the change
 * from the vertex or number before (modulo 2^16 or 2^32), little-endian, all low bytes first, then compressed by zlib, in base64.
 */
export interface PackedMesh {
  /** metres, case axes */
  min: Vector3;
  max: Vector3;
  vertices: number;
  triangles: number;
  /** 3 x 16 bit per vertex */
  positions: string;
  /** 3 x 32 bit per triangle */
  indices: string;
}

/** Steps of the grid. */
export const gridSteps = 65_535;
