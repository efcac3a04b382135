import type { SurfaceMesh } from "../surface-mesh.js";
import type { TriangleTree } from "../triangle-tree.js";
import type { Box } from "../vector.js";
import { type Lattice, pointsAbout, reachedFromRim } from "./bit-lattice.js";
import { clearLattice } from "./clear-lattice.js";
import { SurfaceAbout } from "./winding.js";

/** Plane of a half body: axis and coordinate. Nothing passes through it. */
export interface Cut {
  axis: number;
  plane: number;
}

/** Air about a body as far as it gets on a lattice of half the cell. Mesh unit and axes. */
export interface AirFlood {
  /** Edge of the mesh cells that were asked for and that were used: larger where the lattice would have too many points. */
  asked: number;
  cell: number;
  bounds: Box;
  cut: Cut | null;
  /** Points half a cell apart. */
  lattice: Lattice;
  /** Points farther than a quarter of a cell from the surface, and those of them that are reached from outside, as bits. */
  clear: Uint32Array;
  reached: Uint32Array;
  about: SurfaceAbout;
}

/** Points of a lattice, 64 MiB for each set of bits: 60 million cells. */
export const MOST_POINTS = 2 ** 29;
/** Area of a body's surface, in squares of its greatest extent, above which it is rubble. */
const MOST_AREA = 100;

/**
 * Floods the air about a body. The points of a lattice half a cell apart are clear where they lie farther than a quarter of a
 * cell from the surface, by exact distance; the flood goes from the rim over neighbours that are clear. It never goes through a
 * surface (see `clearLattice`), and it goes wherever a ball of 1.37 cells can go, whatever the place and direction of the lattice: the
 * points along the ball's way that the flood needs lie at most √3/2 steps beside it. What lies between is for `findLeak` to measure.
 *
 * Null for a surface so much larger than its box that it cannot be a body's, and for one without extent.
 *
 * @param cell edge of the mesh cells at the surface; enlarged (and said so in the result) where there would be over `mostPoints`
 * @param tree of the same mesh, where there is one already
 */
export function floodAir(
  mesh: Pick<SurfaceMesh, "vertices" | "corners">,
  bounds: Box,
  cut: Cut | null,
  cell: number,
  { tree, mostPoints = MOST_POINTS }: { tree?: TriangleTree; mostPoints?: number } = {},
): AirFlood | null {
  const extent = Math.max(...bounds.max.map((value, axis) => value - bounds.min[axis]));
  if (!(extent > 0) || !(cell > 0) || areaOf(mesh) > MOST_AREA * extent ** 2) return null;
  let used = cell;
  while (pointsAbout(bounds, used / 2) > mostPoints) used *= Math.max(1.001, Math.cbrt(pointsAbout(bounds, used / 2) / mostPoints));
  const { lattice, clear } = clearLattice(mesh, bounds, used / 2, used / 4, cut);
  return {
    asked: cell,
    cell: used,
    bounds,
    cut,
    lattice,
    clear,
    reached: reachedFromRim(lattice, clear),
    about: new SurfaceAbout(mesh, cut, tree),
  };
}

function areaOf({ vertices, corners }: Pick<SurfaceMesh, "vertices" | "corners">): number {
  let sum = 0;
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    sum += Math.sqrt((uy * vz - uz * vy) ** 2 + (uz * vx - ux * vz) ** 2 + (ux * vy - uy * vx) ** 2) / 2;
  }
  return sum;
}
