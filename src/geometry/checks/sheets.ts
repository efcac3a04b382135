import { RayCaster } from "../ray-hits.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import type { SurfaceSamples } from "./surface-samples.js";

/** A part with open edges whose back is in the air too: it has no inside. */
export interface SheetPart {
  part: number;
  openEdges: number;
  /** Share of its area behind which no wall ends the inside. */
  exposed: number;
  /** Mesh unit and axes. */
  place: Vector3;
}

/** The plane of a half body: rays that reach it go on in the mirrored half. */
export interface CutPlane {
  axis: number;
  plane: number;
}

/** Rays per part. */
const MOST_RAYS = 300;
/** Share of the area above which a part is a sheet. */
const EXPOSED = 0.5;
/** Of the body's extent: what is nearer lies on the surface. */
const TOUCHING = 1e-6;

/**
 * Finds the parts that are sheets: with open edges, and with more than half of their area such that a ray against the normal meets
 * nothing, or the outside of something. A skin with a hole is none: behind it, the rays meet the inside of the skin. 300 rays a part at
 * most, evenly from the samples.
 *
 * @param openPerPart 1 per part: open edges
 */
export function findSheets(
  mesh: SurfaceMesh,
  openPerPart: Uint32Array,
  samples: SurfaceSamples,
  cut: CutPlane | null = null,
  tree: TriangleTree = triangleTree(mesh),
): SheetPart[] {
  if (openPerPart.every((count) => count === 0)) return [];
  const { partOf } = mesh;
  const counts = new Uint32Array(openPerPart.length);
  for (const t of samples.triangles) counts[partOf[t]]++;
  const rays = new BackRays(mesh, tree, cut);
  const seen = new Uint32Array(openPerPart.length);
  const sampled = new Float64Array(openPerPart.length);
  const exposed = new Float64Array(openPerPart.length);
  const places = new Map<number, Vector3>();
  samples.triangles.forEach((t, k) => {
    const part = partOf[t];
    if (openPerPart[part] === 0) return;
    const step = Math.max(1, Math.floor(counts[part] / MOST_RAYS));
    if (seen[part]++ % step !== 0) return;
    sampled[part] += samples.areas[k];
    if (!rays.isExposed(t, samples.points, 3 * k)) return;
    exposed[part] += samples.areas[k];
    if (!places.has(part)) places.set(part, [samples.points[3 * k], samples.points[3 * k + 1], samples.points[3 * k + 2]]);
  });
  return Array.from(openPerPart, (openEdges, part) => ({
    part,
    openEdges,
    exposed: sampled[part] > 0 ? exposed[part] / sampled[part] : 0,
    place: places.get(part) ?? ([0, 0, 0] as Vector3),
  })).filter((sheet) => sheet.exposed > EXPOSED);
}

/** 1 per part: 1 for sheets. */
export function sheetMask(sheets: SheetPart[], parts: number): Uint8Array {
  const mask = new Uint8Array(parts);
  for (const { part } of sheets) mask[part] = 1;
  return mask;
}

class BackRays {
  private readonly caster: RayCaster;
  private readonly touching: number;

  constructor(
    private readonly mesh: SurfaceMesh,
    tree: TriangleTree,
    private readonly cut: CutPlane | null,
  ) {
    this.caster = new RayCaster(mesh, tree);
    this.touching = TOUCHING * tree.extent;
  }

  /** Whether the ray against the normal meets nothing, or the outside of something. */
  isExposed(t: number, points: Float64Array, at: number): boolean {
    const normal = this.areaVector(t);
    const length = Math.hypot(...normal);
    if (!(length > 0)) return false;
    const from: Vector3 = [points[at], points[at + 1], points[at + 2]];
    const along = normal.map((value) => -value / length) as Vector3;
    const first = this.first(from, along, t);
    if (this.cut === null) return first === null || first.outside;
    const { axis, plane } = this.cut;
    const toPlane = (plane - from[axis]) / along[axis];
    if (!(toPlane > 0) || toPlane === Infinity || (first !== null && first.distance < toPlane))
      return first === null || first.outside;
    const mirrored = from.map((value, k) => value + toPlane * along[k]) as Vector3;
    const back = along.slice() as Vector3;
    back[axis] = -back[axis];
    const second = this.first(mirrored, back, -1);
    return second === null || second.outside;
  }

  private first(from: Vector3, along: Vector3, except: number): { distance: number; outside: boolean } | null {
    const { caster } = this;
    if (caster.hits(...from, ...along, this.touching, Infinity, except) === 0) return null;
    const [x, y, z] = this.areaVector(caster.of[0]);
    return { distance: caster.at[0], outside: x * along[0] + y * along[1] + z * along[2] < 0 };
  }

  private areaVector(t: number): Vector3 {
    const { vertices, corners } = this.mesh;
    const [a, b, c] = [3 * corners[3 * t], 3 * corners[3 * t + 1], 3 * corners[3 * t + 2]];
    const u = [0, 1, 2].map((k) => vertices[b + k] - vertices[a + k]);
    const v = [0, 1, 2].map((k) => vertices[c + k] - vertices[a + k]);
    return [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
  }
}
