import { nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";

/** How well the open cut of a half body keeps to its plane, and whether the body does. Mesh unit and axes. */
export interface CutDeviation {
  /** Vertices of open edges at the cut; 0 where the cut is not open. */
  vertices: number;
  /** Greatest distance of one of them from the plane, and where. */
  deviation: number;
  place: Vector3 | null;
  /** Those farther off than the tolerance. */
  stray: number;
  /** Vertices of the body beyond the plane by more than the tolerance, the farthest, and where. */
  beyond: number;
  beyondBy: number;
  beyondPlace: Vector3 | null;
  tolerance: number;
  isPlanar: boolean;
}

/** A border belongs to the cut when its vertices are on average nearer to the plane than this share of the body's extent along the axis. */
const NEAR = 0.02;

/**
 * Measures the cut of a half body: all vertices of the open borders that keep close to the plane (on average within 2 % of the body's
 * extent along the axis; a border is what hangs together by vertices), and all vertices on the far side of it. The body's side is the
 * one that it reaches farther into.
 *
 * @param axis 0, 1 or 2: the axis across the plane
 * @param plane coordinate of the plane on it
 * @param tolerance what is within it lies in the plane; in practice 0.1 mm, in mesh units
 */
export function cutPlaneDeviation(mesh: SurfaceMesh, axis: number, plane: number, tolerance: number): CutDeviation {
  const { vertices, corners, ring } = mesh;
  let below = 0;
  let above = 0;
  for (let h = 0; h < corners.length; h++) {
    const distance = vertices[3 * corners[h] + axis] - plane;
    if (distance < below) below = distance;
    if (distance > above) above = distance;
  }
  const side = above >= -below ? 1 : -1;
  const seen = new Uint8Array(vertices.length / 3);
  const at = (vertex: number): Vector3 => [vertices[3 * vertex], vertices[3 * vertex + 1], vertices[3 * vertex + 2]];
  const found: CutDeviation = {
    vertices: 0,
    deviation: 0,
    place: null,
    stray: 0,
    beyond: 0,
    beyondBy: 0,
    beyondPlace: null,
    tolerance,
    isPlanar: true,
  };
  for (const vertex of corners) {
    if (seen[vertex] === 1) continue;
    seen[vertex] = 1;
    const past = -side * (vertices[3 * vertex + axis] - plane);
    if (!(past > tolerance)) continue;
    found.beyond++;
    if (past <= found.beyondBy) continue;
    found.beyondBy = past;
    found.beyondPlace = at(vertex);
  }
  const near = NEAR * Math.max(above, -below);
  for (const border of bordersOf(corners, ring)) {
    let sum = 0;
    for (const vertex of border) sum += Math.abs(vertices[3 * vertex + axis] - plane);
    if (sum > near * border.length) continue;
    found.vertices += border.length;
    for (const vertex of border) {
      const distance = Math.abs(vertices[3 * vertex + axis] - plane);
      if (distance > tolerance) found.stray++;
      if (found.place !== null && distance <= found.deviation) continue;
      found.deviation = distance;
      found.place = at(vertex);
    }
  }
  found.isPlanar = found.stray === 0;
  return found;
}

/** The vertices of each set of open edges that hang together, each once. */
function bordersOf(corners: Uint32Array, ring: Uint32Array): number[][] {
  const parent = new Map<number, number>();
  const root = (vertex: number): number => {
    let at = vertex;
    for (let up = parent.get(at) as number; up !== at; up = parent.get(at) as number) {
      parent.set(at, parent.get(up) as number);
      at = up;
    }
    return at;
  };
  for (let h = 0; h < ring.length; h++) {
    if (ring[h] !== h) continue;
    const ends = [corners[h], corners[nextInTriangle(h)]];
    for (const vertex of ends) if (!parent.has(vertex)) parent.set(vertex, vertex);
    parent.set(root(ends[0]), root(ends[1]));
  }
  const borders = new Map<number, number[]>();
  for (const vertex of parent.keys()) {
    const key = root(vertex);
    const border = borders.get(key);
    if (border === undefined) borders.set(key, [vertex]);
    else border.push(vertex);
  }
  return [...borders.values()];
}
