import type { SurfaceMesh } from "../surface-mesh.js";
import { type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import { NarrowWidths } from "./narrow-widths.js";
import { PART_SIDES } from "./sheets.js";
import { type SurfaceSamples, surfaceSamples } from "./surface-samples.js";
import { WallRays } from "./wall-rays.js";

/** A part that is somewhere thinner than the cells there can show. Mesh unit and axes. */
export interface ThinPart {
  part: number;
  /** Share of its area behind which the body is thinner than the limit. */
  share: number;
  /** Least thickness met, and where. */
  least: number;
  place: Vector3;
  /** Half of the thin area is thinner than this. */
  median: number;
  /** Cell size of the part. */
  cell: number;
}

export interface Thickness {
  /** Cells that a wall must be thick. */
  cells: number;
  /** Rays cast, and the triangles they started from. */
  rays: number;
  sampledTriangles: number;
  triangles: number;
  /** Largest thin area share first. */
  thin: ThinPart[];
}

/** A mesher that moves cell faces onto a surface needs a layer of cells on each side of what it is to keep. */
export const CELLS_ACROSS = 2;

/**
 * Local thickness against cell size: from each sample a ray against the outward normal to the wall where the solid ends, which must face
 * the surface within 45°. Thin is less than two cells of the finer of the two walls. Solids that overlap count as one; walls inside
 * another solid do not count, nor do sharp edges where the two walls share a corner. Zero thickness, walls that lie on each other, is
 * `findCoincident`'s.
 *
 * @param cellOfPart 1 per part: edge of the surface cells there, mesh unit
 * @param sides 1 per part: one of `PART_SIDES`; only solids have a thickness
 * @param samples of the same mesh, about a cell apart
 */
export function thicknessOf(
  mesh: SurfaceMesh,
  cellOfPart: ArrayLike<number>,
  sides: ArrayLike<number> = new Uint8Array(cellOfPart.length),
  samples: SurfaceSamples = surfaceSamples(mesh, cellOfPart.length, cellOfPart),
  tree: TriangleTree = triangleTree(mesh),
): Thickness {
  const rays = new WallRays(mesh, tree, sides);
  const search = new ThicknessSearch(mesh, cellOfPart, sides, samples, rays);
  const { triangles, points } = samples;
  for (let k = 0; k < triangles.length; k++)
    if (rays.cast(triangles[k], points, 3 * k, CELLS_ACROSS * cellOfPart[mesh.partOf[triangles[k]]])) search.see(k);
  return search.result();
}

/** The same for a caller that casts the rays with a purpose of its own. */
export class ThicknessSearch {
  private readonly narrow = new Map<number, NarrowWidths>();

  constructor(
    private readonly mesh: SurfaceMesh,
    private readonly cellOfPart: ArrayLike<number>,
    private readonly sides: ArrayLike<number>,
    private readonly samples: SurfaceSamples,
    private readonly rays: WallRays,
  ) {}

  /** Sample k, whose ray was just cast. */
  see(k: number): void {
    const { rays, samples, cellOfPart } = this;
    const { partOf } = this.mesh;
    const t = samples.triangles[k];
    const part = partOf[t];
    if (this.sides[part] !== PART_SIDES.solid) return;
    const wall = rays.behind();
    if (wall === null || wall.distance >= CELLS_ACROSS * cellOfPart[partOf[wall.triangle]]) return;
    if (rays.covers(t, samples.points, 3 * k) > 0) return;
    const known = this.narrow.get(part) ?? new NarrowWidths();
    this.narrow.set(part, known);
    known.add(wall.distance, samples.areas[k], samples.points, 3 * k);
  }

  result(): Thickness {
    const { samples, cellOfPart } = this;
    const thin = [...this.narrow].map(
      ([part, found]): ThinPart => ({
        part,
        share: found.area / samples.areaOfPart[part],
        least: found.least,
        place: found.place,
        median: found.median(),
        cell: cellOfPart[part],
      }),
    );
    return {
      cells: CELLS_ACROSS,
      rays: samples.triangles.length,
      sampledTriangles: samples.sampledTriangles,
      triangles: samples.triangleCount,
      thin: thin.sort((a, b) => b.share - a.share || a.part - b.part),
    };
  }
}
