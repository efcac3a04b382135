import { COPY, copiesOf } from "../copies.js";
import { NO_EDGE } from "../edges.js";
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
export function findDoubles(mesh: Pick<SurfaceMesh, "corners" | "ring">): Doubles {
  const found: Doubles = { degenerate: [], duplicate: [], opposite: [] };
  const copies = copiesOf(mesh);
  for (let t = 0; t < copies.length; t++)
    if (mesh.ring[3 * t] === NO_EDGE) found.degenerate.push(t);
    else if (copies[t] === COPY.same) found.duplicate.push(t);
    else if (copies[t] === COPY.opposite) found.opposite.push(t);
  return found;
}
