import { nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";

/** Triangles that can go without a change of the shape, and those that cannot. */
export interface Doubles {
  /** Triangles with a vertex twice: they have no area, and their neighbours already meet. */
  degenerate: number[];
  /** Triangles with the same corners and the same sense as an earlier one. */
  duplicate: number[];
  /** Triangles with the same corners as an earlier one, but the other sense: a sheet without thickness, or solids that touch. Left. */
  opposite: number[];
}

/** Finds them; all lists ascend. */
export function findDoubles({ corners, ring }: Pick<SurfaceMesh, "corners" | "ring">): Doubles {
  const found: Doubles = { degenerate: [], duplicate: [], opposite: [] };
  for (let t = 0, h = 0; h < corners.length; t++, h += 3) {
    const [a, b, c] = [corners[h], corners[h + 1], corners[h + 2]];
    if (a === b || b === c || c === a) {
      found.degenerate.push(t);
      continue;
    }
    let same = false;
    let opposite = false;
    // A triangle with the same corners shares every edge, so the ring of one edge tells.
    for (let other = ring[h]; other !== h; other = ring[other]) {
      if (other > h || corners[nextInTriangle(nextInTriangle(other))] !== c) continue;
      if (corners[other] === a) same = true;
      else opposite = true;
    }
    if (same) found.duplicate.push(t);
    else if (opposite) found.opposite.push(t);
  }
  return found;
}
