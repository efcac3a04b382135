import { RayCaster } from "../ray-hits.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { TriangleTree } from "../triangle-tree.js";

/** A wall that faces a point of the surface: how far off, and its triangle. */
export interface FacingWall {
  distance: number;
  triangle: number;
}

/** Walls face each other when their normals are opposite within 45°. */
const FACING = Math.SQRT1_2;
/** Of the body's extent: what is nearer lies on the surface (see `findCoincident`) and is no wall of its own. */
const TOUCHING = 1e-6;

/**
 * Looks from points of a surface along and against its normal for the walls that face it. Solids may overlap: inside is where a ray
 * has entered more of them than it has left. Parts that are no solids, or inside out, do not count as entered or left.
 */
export class WallRays {
  private readonly caster: RayCaster;
  private readonly touching: number;
  /** Walls seen by the last `cast`; 0 after `covers`. */
  hits = 0;
  private triangle = -1;
  /** Unit normal of the last triangle. */
  private nx = 0;
  private ny = 0;
  private nz = 0;

  /** `sides`: 1 per part: one of `PART_SIDES`. */
  constructor(
    private readonly mesh: SurfaceMesh,
    tree: TriangleTree,
    private readonly sides: ArrayLike<number>,
  ) {
    this.caster = new RayCaster(mesh, tree);
    this.touching = TOUCHING * tree.extent;
  }

  /**
   * Looks both ways along the normal of a triangle from the point at `points[at, at + 3)`, as far as `reach`; `behind` and `inFront`
   * then tell what was seen. False for a triangle without a normal.
   */
  cast(triangle: number, points: Float64Array, at: number, reach: number): boolean {
    this.triangle = triangle;
    if (!this.normal(triangle)) return false;
    this.hits = this.caster.hits(points[at], points[at + 1], points[at + 2], this.nx, this.ny, this.nz, -reach, reach, triangle);
    return true;
  }

  /**
   * Where the solid behind the surface ends: the ray against the normal leaves as many solids as it has entered. Null where it does not,
   * where the wall does not face the surface, or where it shares a corner with the triangle, as at a sharp edge.
   */
  behind(): FacingWall | null {
    const { caster, mesh, triangle } = this;
    let depth = 1;
    let last = -1;
    for (let k = this.hits - 1; k >= 0; k--) {
      if (caster.at[k] > -this.touching) continue;
      const hit = caster.of[k];
      if (this.sides[mesh.partOf[hit]]) continue;
      const facing = this.facing(hit);
      // A ray through a common edge meets both triangles.
      if (last >= 0 && this.isSame(last, k, facing)) continue;
      last = k;
      // The ray runs against the normal: a wall that faces against it too is being left.
      depth += facing < 0 ? -1 : 1;
      if (depth > 0) continue;
      return facing <= -FACING && !this.shareCorner(triangle, hit) ? { distance: -caster.at[k], triangle: hit } : null;
    }
    return null;
  }

  /**
   * The next wall in front of the surface. `way`: 1 along the normal; -1 against it, for sheets and what is inside out, whose back is in the air.
   * Null where there is none, where it does not face the surface (then the ray leaves a solid: the surface is inside one), or where
   * it shares a corner with the triangle.
   */
  inFront(way: 1 | -1 = 1): FacingWall | null {
    const { caster, mesh, triangle, touching } = this;
    let k = way > 0 ? 0 : this.hits - 1;
    while (k >= 0 && k < this.hits && way * caster.at[k] < touching) k += way;
    if (k < 0 || k >= this.hits) return null;
    const hit = caster.of[k];
    const facing = way * this.facing(hit);
    const isFacing = this.sides[mesh.partOf[hit]] ? Math.abs(facing) >= FACING : facing <= -FACING;
    return isFacing && !this.shareCorner(triangle, hit) ? { distance: way * caster.at[k], triangle: hit } : null;
  }

  /**
   * How many solids the point in front of the surface is inside of: those that a ray along the normal leaves less those that it enters.
   * 0 in the air, less than 0 in front of a surface that is inside out. Ends what `cast` has seen.
   */
  covers(triangle: number, points: Float64Array, at: number): number {
    this.hits = 0;
    if (!this.normal(triangle)) return 1;
    const { caster, mesh } = this;
    const { nx, ny, nz } = this;
    const hits = caster.hits(points[at], points[at + 1], points[at + 2], nx, ny, nz, this.touching, Infinity, triangle);
    let left = 0;
    let last = -1;
    for (let k = 0; k < hits; k++) {
      if (this.sides[mesh.partOf[caster.of[k]]]) continue;
      const facing = this.facing(caster.of[k]);
      if (last >= 0 && this.isSame(last, k, facing)) continue;
      last = k;
      left += facing > 0 ? 1 : -1;
    }
    return left;
  }

  private isSame(last: number, k: number, facing: number): boolean {
    const { at, of } = this.caster;
    return (
      Math.abs(at[k] - at[last]) <= 1e-3 * this.touching &&
      this.facing(of[last]) > 0 === facing > 0 &&
      this.shareCorner(of[last], of[k])
    );
  }

  private normal(t: number): boolean {
    const { vertices, corners } = this.mesh;
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const x = uy * vz - uz * vy;
    const y = uz * vx - ux * vz;
    const z = ux * vy - uy * vx;
    const length = Math.sqrt(x * x + y * y + z * z);
    if (!(length > 0)) return false;
    this.nx = x / length;
    this.ny = y / length;
    this.nz = z / length;
    return true;
  }

  /** Cosine between the normal of a triangle and the last normal taken. */
  private facing(t: number): number {
    const { vertices, corners } = this.mesh;
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const x = uy * vz - uz * vy;
    const y = uz * vx - ux * vz;
    const z = ux * vy - uy * vx;
    return (x * this.nx + y * this.ny + z * this.nz) / Math.sqrt(x * x + y * y + z * z);
  }

  private shareCorner(s: number, t: number): boolean {
    const { corners } = this.mesh;
    const a = corners[3 * t];
    const b = corners[3 * t + 1];
    const c = corners[3 * t + 2];
    for (let h = 3 * s; h < 3 * s + 3; h++) if (corners[h] === a || corners[h] === b || corners[h] === c) return true;
    return false;
  }
}
