import { edgeRings } from "./edges.js";
import type { TriangleSet } from "./triangle-set.js";
import { weld } from "./weld.js";

/** A body whose triangles share vertices and know their neighbours. Unit and axes are those of the triangles it was made of. */
export interface SurfaceMesh {
  /** 3 per vertex: x y z */
  vertices: Float32Array;
  /** 3 per triangle: vertex numbers, counter-clockwise seen from outside */
  corners: Uint32Array;
  /** 1 per triangle: part number */
  partOf: Uint16Array;
  /** 1 per half-edge: the next half-edge of the same edge (see `edgeRings`) */
  ring: Uint32Array;
}

/** Welds the corners of a body exactly and finds its edges. Triangles keep their order. */
export function surfaceMesh(set: Pick<TriangleSet, "positions" | "partOf">): SurfaceMesh {
  const { vertices, corners } = weld(set.positions);
  return { vertices, corners, partOf: set.partOf, ring: edgeRings(corners, vertices.length / 3) };
}
