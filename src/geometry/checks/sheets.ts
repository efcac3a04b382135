import { twiceAreaVector } from "../area-vector.js";
import { RayCaster } from "../ray-hits.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import type { SurfaceSamples } from "./surface-samples.js";

/** A part with open edges whose back is in the air. */
export interface SheetPart {
  part: number;
  openEdges: number;
  /** Share of its area that says so. */
  exposed: number;
  /** Mesh unit and axes. */
  place: Vector3;
}

export interface OpenParts {
  /** Both sides are in the air: the part has no inside. */
  sheets: SheetPart[];
  /** The back is in the air and the front is inside: a hollow part whose normals point inwards. */
  inward: SheetPart[];
}

/** How rays are to take a part: as a solid, as a sheet, or as a solid that is inside out. */
export const PART_SIDES = { solid: 0, sheet: 1, inward: 2 } as const;

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
 * Tells parts with open edges that are sheets, or hollow and inside out: those of which for more than half of their area a ray against the
 * normal leaves no more solids than it enters. A skin with a hole is neither: such rays leave it on its other side. Where the rays
 * along the normal enter more than they leave, the part is inside out. 300 samples a part at most, evenly.
 *
 * @param openPerPart 1 per part: open edges
 */
export function findSheets(
  mesh: SurfaceMesh,
  openPerPart: Uint32Array,
  samples: SurfaceSamples,
  cut: CutPlane | null = null,
  tree: TriangleTree = triangleTree(mesh),
): OpenParts {
  if (openPerPart.every((count) => count === 0)) return { sheets: [], inward: [] };
  const { partOf } = mesh;
  const parts = openPerPart.length;
  const counts = new Uint32Array(parts);
  for (const t of samples.triangles) counts[partOf[t]]++;
  const rays = new BackRays(mesh, tree, cut);
  const seen = new Uint32Array(parts);
  const sampled = new Float64Array(parts);
  const both = new Float64Array(parts);
  const turned = new Float64Array(parts);
  const places = new Map<number, Vector3>();
  samples.triangles.forEach((t, k) => {
    const part = partOf[t];
    if (openPerPart[part] === 0) return;
    const step = Math.max(1, Math.floor(counts[part] / MOST_RAYS));
    if (seen[part]++ % step !== 0) return;
    sampled[part] += samples.areas[k];
    if (rays.left(t, samples.points, 3 * k, -1) > 0) return;
    (rays.left(t, samples.points, 3 * k, 1) < 0 ? turned : both)[part] += samples.areas[k];
    if (!places.has(part)) places.set(part, [samples.points[3 * k], samples.points[3 * k + 1], samples.points[3 * k + 2]]);
  });
  const over = (areas: Float64Array): SheetPart[] =>
    Array.from(openPerPart, (openEdges, part) => ({
      part,
      openEdges,
      exposed: sampled[part] > 0 ? areas[part] / sampled[part] : 0,
      place: places.get(part) ?? ([0, 0, 0] as Vector3),
    })).filter((sheet) => sheet.exposed > EXPOSED);
  return { sheets: over(both), inward: over(turned) };
}

/** 1 per part: one of `PART_SIDES`. */
export function partSides({ sheets, inward }: OpenParts, parts: number): Uint8Array {
  const sides = new Uint8Array(parts);
  for (const { part } of sheets) sides[part] = PART_SIDES.sheet;
  for (const { part } of inward) sides[part] = PART_SIDES.inward;
  return sides;
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

  /**
   * Walls that a ray along the normal (`way` 1) or against it (-1) leaves less those that it enters, on its whole way: 1 behind the skin
   * of a solid, whatever is inside it; 0 in the air; less than 0 in front of a skin that is inside out.
   */
  left(t: number, points: Float64Array, at: number, way: 1 | -1): number {
    const normal = twiceAreaVector(this.mesh, t);
    const length = Math.hypot(...normal);
    if (!(length > 0)) return way < 0 ? 1 : 0;
    const from: Vector3 = [points[at], points[at + 1], points[at + 2]];
    const along = normal.map((value) => (way * value) / length) as Vector3;
    if (this.cut === null) return this.balance(from, along, t, Infinity);
    const { axis, plane } = this.cut;
    const toPlane = (plane - from[axis]) / along[axis];
    if (!(toPlane > 0 && toPlane < Infinity)) return this.balance(from, along, t, Infinity);
    const mirrored = from.map((value, k) => value + toPlane * along[k]) as Vector3;
    const back = along.slice() as Vector3;
    back[axis] = -back[axis];
    return this.balance(from, along, t, toPlane) + this.balance(mirrored, back, -1, Infinity);
  }

  private balance(from: Vector3, along: Vector3, except: number, to: number): number {
    const { caster, touching } = this;
    const hits = caster.hits(...from, ...along, touching, to, except);
    let left = 0;
    let [lastAt, lastOut] = [-Infinity, false];
    for (let k = 0; k < hits; k++) {
      const [x, y, z] = twiceAreaVector(this.mesh, caster.of[k]);
      const out = x * along[0] + y * along[1] + z * along[2] > 0;
      // A ray through a common edge meets both triangles.
      if (caster.at[k] - lastAt <= 1e-3 * touching && out === lastOut) continue;
      left += out ? 1 : -1;
      lastAt = caster.at[k];
      lastOut = out;
    }
    return left;
  }
}
