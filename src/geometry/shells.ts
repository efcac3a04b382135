import { NO_EDGE } from "./edges.js";
import type { SurfaceMesh } from "./surface-mesh.js";

export interface Shells {
  count: number;
  /** 1 per triangle: shell number, in the order of their first triangles; `NO_EDGE` for a triangle with a vertex twice. */
  shellOf: Uint32Array;
}

/** Shells: sets of triangles that hang together by edges (not by a vertex alone). Union-find (Galler and Fischer, 1964), path halving. */
export function shellsOf(mesh: Pick<SurfaceMesh, "ring">): Shells {
  const { ring } = mesh;
  const triangles = ring.length / 3;
  const parent = new Uint32Array(triangles);
  for (let t = 0; t < triangles; t++) parent[t] = t;
  for (let t = 0, h = 0; t < triangles; t++) {
    for (let k = 0; k < 3; k++, h++) {
      const other = ring[h];
      if (other <= h || other === NO_EDGE) continue;
      let a = t;
      let b = (other / 3) | 0;
      while (parent[a] !== a) a = parent[a] = parent[parent[a]];
      while (parent[b] !== b) b = parent[b] = parent[parent[b]];
      if (a < b) parent[b] = a;
      else parent[a] = b;
    }
  }
  // Every parent is lower than its child, so one pass upwards makes all point to their root, and a second one numbers the roots
  // before anything asks for the number.
  for (let t = 0; t < triangles; t++) parent[t] = parent[parent[t]];
  let count = 0;
  for (let t = 0; t < triangles; t++) {
    if (ring[3 * t] === NO_EDGE) parent[t] = NO_EDGE;
    else parent[t] = parent[t] === t ? count++ : parent[parent[t]];
  }
  return { count, shellOf: parent };
}
