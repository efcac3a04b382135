import type { SurfaceMesh } from "../surface-mesh.js";
import { type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import { NarrowWidths } from "./narrow-widths.js";
import { PART_SIDES } from "./sheets.js";
import { type SurfaceSamples, surfaceSamples } from "./surface-samples.js";
import { CELLS_ACROSS } from "./thickness.js";
import { type FacingWall, WallRays } from "./wall-rays.js";

/** Two parts (`a` not above `b`; equal for a slot within one part) with less air between them than the cells there can fill. */
export interface NarrowGap {
  a: number;
  b: number;
  /** Shares of their areas that face the gap. */
  shareOfA: number;
  shareOfB: number;
  /** Area that faces the gap, both sides together; mesh unit squared. */
  area: number;
  /** Least width met, and where. Mesh unit and axes. */
  least: number;
  place: Vector3;
  /** Half of that area sees less width than this. */
  median: number;
  /** The finer of the two parts' cells. */
  cell: number;
}

export interface Gaps {
  /** Cells that a gap must be wide. */
  cells: number;
  rays: number;
  sampledTriangles: number;
  triangles: number;
  /** Largest area first. */
  narrow: NarrowGap[];
}

/**
 * Gaps in the air: from each sample a ray along the outward normal to the next wall, which must face the surface within 45° (a
 * corner or a hollow of the surface does not) and be nearer than two cells of the finer of the two parts. Rays that leave a solid began
 * inside it; gaps inside another solid do not count, nor do walls that share a corner, or that touch (nearer than a millionth of
 * the body's extent). The two sides of a sheet both count, and of a part that is inside out its back.
 *
 * @param cellOfPart 1 per part: edge of the surface cells there, mesh unit
 * @param sides 1 per part: one of `PART_SIDES`
 * @param samples of the same mesh, about a cell apart
 */
export function gapsOf(
  mesh: SurfaceMesh,
  cellOfPart: ArrayLike<number>,
  sides: ArrayLike<number> = new Uint8Array(cellOfPart.length),
  samples: SurfaceSamples = surfaceSamples(mesh, cellOfPart.length, cellOfPart),
  tree: TriangleTree = triangleTree(mesh),
): Gaps {
  const rays = new WallRays(mesh, tree, sides);
  const search = new GapSearch(mesh, cellOfPart, sides, samples, rays);
  const { triangles, points } = samples;
  for (let k = 0; k < triangles.length; k++)
    if (rays.cast(triangles[k], points, 3 * k, CELLS_ACROSS * cellOfPart[mesh.partOf[triangles[k]]])) search.see(k);
  return search.result();
}

/** The same for a caller that casts the rays with a purpose of its own. */
export class GapSearch {
  private readonly found = new Map<number, { own: Map<number, number>; widths: NarrowWidths }>();

  constructor(
    private readonly mesh: SurfaceMesh,
    private readonly cellOfPart: ArrayLike<number>,
    private readonly sides: ArrayLike<number>,
    private readonly samples: SurfaceSamples,
    private readonly rays: WallRays,
  ) {}

  /** Sample k, whose ray was just cast. Ends what the ray has seen. */
  see(k: number): void {
    const { rays, samples } = this;
    const t = samples.triangles[k];
    const part = this.mesh.partOf[t];
    const side = this.sides[part];
    const ahead = side === PART_SIDES.inward ? null : rays.inFront(1);
    const back = side === PART_SIDES.solid ? null : rays.inFront(-1);
    if (back !== null) this.note(k, part, back);
    if (ahead === null || !this.isNarrow(ahead)) return;
    const covers = side === PART_SIDES.sheet ? 0 : rays.covers(t, samples.points, 3 * k);
    // Below zero: the ray entered more than it left. With the part's own wall, the part is inside out and this is no gap; with another's,
    // the body has a hole somewhere behind.
    if (covers > 0 || (covers < 0 && this.mesh.partOf[ahead.triangle] === part)) return;
    this.note(k, part, ahead);
  }

  private isNarrow(wall: FacingWall): boolean {
    return wall.distance < CELLS_ACROSS * this.cellOfPart[this.mesh.partOf[wall.triangle]];
  }

  private note(k: number, part: number, wall: FacingWall): void {
    if (!this.isNarrow(wall)) return;
    const { samples, found } = this;
    const other = this.mesh.partOf[wall.triangle];
    const key = 65536 * Math.min(part, other) + Math.max(part, other);
    const gap = found.get(key) ?? { own: new Map<number, number>(), widths: new NarrowWidths() };
    found.set(key, gap);
    gap.own.set(part, (gap.own.get(part) ?? 0) + samples.areas[k]);
    gap.widths.add(wall.distance, samples.areas[k], samples.points, 3 * k);
  }

  result(): Gaps {
    const { samples, cellOfPart } = this;
    const share = (own: Map<number, number>, part: number): number => (own.get(part) ?? 0) / samples.areaOfPart[part];
    const narrow = [...this.found].map(([key, { own, widths }]): NarrowGap => {
      const a = Math.floor(key / 65536);
      const b = key % 65536;
      return {
        a,
        b,
        shareOfA: share(own, a),
        shareOfB: share(own, b),
        area: widths.area,
        least: widths.least,
        place: widths.place,
        median: widths.median(),
        cell: Math.min(cellOfPart[a], cellOfPart[b]),
      };
    });
    return {
      cells: CELLS_ACROSS,
      rays: samples.triangles.length,
      sampledTriangles: samples.sampledTriangles,
      triangles: samples.triangleCount,
      narrow: narrow.sort((p, q) => q.area - p.area || p.a - q.a || p.b - q.b),
    };
  }
}
