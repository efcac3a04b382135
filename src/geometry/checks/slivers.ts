import { twiceAreaVector } from "../area-vector.js";
import { NO_EDGE } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";
import { addPlace } from "./part-pairs.js";

/** Triangles far lower than they are long. */
export interface Slivers {
  /** Longest edge over height above which a triangle is one. */
  limit: number;
  count: number;
  /** 1 per part */
  perPart: Uint32Array;
  /** Longest edge over height of the worst; 0 without slivers. */
  worst: number;
  /** Those that face away from all neighbours that are no slivers themselves: their normal is wrong, or the surface folds there. */
  folded: number;
  /** Up to ten, folded ones first. Mesh unit and axes. */
  places: Vector3[];
}

/**
 * The normal of a triangle tips by about the angle under which a displacement of its tip is seen from its longest edge. Six printed
 * digits, the usual in text files, round a body of 4 m to 5 µm; a triangle of 10 mm by 10 µm tips by 27° then, which is near the 30°
 * at which a mesher takes an edge for a feature. Triangles lower than a thousandth of their length are in that range or below it.
 */
const LIMIT = 1000;

/**
 * Finds triangles whose longest edge is more than 1000 times their height. Triangles that are no higher than the rounding of their
 * coordinates are degenerate, not slivers, and do not count here (see `topologyOf`).
 *
 * @param parts number of parts
 * @param extent greatest extent of the body, mesh unit
 */
export function findSlivers(mesh: SurfaceMesh, parts: number, extent: number): Slivers {
  const { vertices, corners, partOf } = mesh;
  const found: Slivers = { limit: LIMIT, count: 0, perPart: new Uint32Array(parts), worst: 0, folded: 0, places: [] };
  const slivers: number[] = [];
  for (let t = 0; t < partOf.length; t++) {
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const wx = vx - ux;
    const wy = vy - uy;
    const wz = vz - uz;
    const longest = Math.max(ux * ux + uy * uy + uz * uz, vx * vx + vy * vy + vz * vz, wx * wx + wy * wy + wz * wz);
    const nx = uy * vz - uz * vy;
    const ny = uz * vx - ux * vz;
    const nz = ux * vy - uy * vx;
    // Twice the area is height times longest edge.
    const square = nx * nx + ny * ny + nz * nz;
    if (square * LIMIT * LIMIT >= longest * longest) continue;
    const largest = Math.max(Math.abs(vertices[a]), Math.abs(vertices[a + 1]), Math.abs(vertices[a + 2]));
    const rounding = largest * 2 ** -24;
    if (square <= rounding * rounding * longest) continue;
    found.count++;
    found.perPart[partOf[t]]++;
    found.worst = Math.max(found.worst, longest / Math.sqrt(square));
    slivers.push(t);
  }
  const isSliver = new Set(slivers);
  const folded = slivers.filter((t) => facesAway(mesh, t, isSliver));
  found.folded = folded.length;
  for (const t of [...folded, ...slivers]) {
    if (found.places.length === 10) break;
    addPlace(found.places, middleOf(mesh, t), extent);
  }
  return found;
}

/** Whether the triangle has neighbours that are no slivers, and is turned by more than 90° against each. */
function facesAway(mesh: SurfaceMesh, t: number, isSliver: Set<number>): boolean {
  const { corners, ring } = mesh;
  const normal = twiceAreaVector(mesh, t);
  let neighbours = 0;
  for (let h = 3 * t; h < 3 * t + 3; h++) {
    const other = ring[h];
    if (other === NO_EDGE || other === h || ring[other] !== h || corners[other] === corners[h]) continue;
    const beyond = (other / 3) | 0;
    if (isSliver.has(beyond)) continue;
    neighbours++;
    const [x, y, z] = twiceAreaVector(mesh, beyond);
    if (normal[0] * x + normal[1] * y + normal[2] * z >= 0) return false;
  }
  return neighbours > 0;
}

function middleOf({ vertices, corners }: SurfaceMesh, t: number): Vector3 {
  const at = (axis: number): number =>
    (vertices[3 * corners[3 * t] + axis] + vertices[3 * corners[3 * t + 1] + axis] + vertices[3 * corners[3 * t + 2] + axis]) / 3;
  return [at(0), at(1), at(2)];
}
