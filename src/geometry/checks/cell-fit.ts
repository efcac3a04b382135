import type { SurfaceMesh } from "../surface-mesh.js";
import { type TriangleTree, triangleTree } from "../triangle-tree.js";
import { GapSearch, type Gaps } from "./gaps.js";
import { type CutPlane, findSheets, type OpenParts, partSides } from "./sheets.js";
import { surfaceSamples } from "./surface-samples.js";
import { CELLS_ACROSS, type Thickness, ThicknessSearch } from "./thickness.js";
import { WallRays } from "./wall-rays.js";

/** What the cells at a surface are too coarse for. */
export interface CellFit {
  open: OpenParts;
  thickness: Thickness;
  gaps: Gaps;
}

/**
 * Sheets, thin parts and narrow gaps (`findSheets`, `thicknessOf`, `gapsOf`) from one set of samples and rays. All triangles are
 * sampled up to 200 000, above that as many; the result says how many.
 *
 * @param openPerPart 1 per part: open edges (`topologyOf(...).open.perPart`)
 * @param cellOfPart 1 per part: edge of the surface cells there, mesh unit
 * @param cut the plane of a half body whose cut is open
 */
export function cellFitOf(
  mesh: SurfaceMesh,
  openPerPart: Uint32Array,
  cellOfPart: ArrayLike<number>,
  cut: CutPlane | null = null,
  tree: TriangleTree = triangleTree(mesh),
): CellFit {
  const samples = surfaceSamples(mesh, cellOfPart.length, cellOfPart);
  const open = findSheets(mesh, openPerPart, samples, cut, tree);
  const sides = partSides(open, cellOfPart.length);
  const rays = new WallRays(mesh, tree, sides);
  const thickness = new ThicknessSearch(mesh, cellOfPart, sides, samples, rays);
  const gaps = new GapSearch(mesh, cellOfPart, sides, samples, rays);
  const { triangles, points } = samples;
  for (let k = 0; k < triangles.length; k++) {
    const reach = CELLS_ACROSS * cellOfPart[mesh.partOf[triangles[k]]];
    if (!rays.cast(triangles[k], points, 3 * k, reach)) continue;
    const { hits } = rays;
    if (hits === 0) continue;
    thickness.see(k);
    // Looking whether the surface is covered has ended what was seen.
    if (rays.hits === hits || rays.cast(triangles[k], points, 3 * k, reach)) gaps.see(k);
  }
  return { open, thickness: thickness.result(), gaps: gaps.result() };
}
