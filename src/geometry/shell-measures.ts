import { NO_EDGE } from "./edges.js";
import { measures } from "./measures.js";
import type { Shells } from "./shells.js";
import type { SurfaceMesh } from "./surface-mesh.js";
import type { Box, Vector3 } from "./vector.js";

/** Of one shell: triangles that hang together by edges. Unit and axes of the mesh. */
export interface ShellMeasures {
  triangles: number;
  /** Numbers of the parts it belongs to, ascending. */
  parts: number[];
  /** No edge of it belongs to one triangle only. */
  closed: boolean;
  area: number;
  /** Signed, by the divergence theorem; meaningless where the shell is open. */
  volume: number;
  /** Of the enclosed volume where the shell is closed, else of the surface. */
  centroid: Vector3;
  bounds: Box;
}

/** As many shells are measured, the largest by triangles; a body has tens, a heap of loose triangles one for each. */
export const mostShells = 100;

/**
 * Measures of the largest shells, that with most triangles first (of two alike, the one nearer to the low end of x, then y, then z).
 * Sums do not depend on the order of the triangles.
 */
export function shellMeasures(mesh: SurfaceMesh, { count, shellOf }: Shells): ShellMeasures[] {
  const sizes = new Uint32Array(count);
  for (let t = 0; t < shellOf.length; t++) if (shellOf[t] !== NO_EDGE) sizes[shellOf[t]]++;
  const largest = Array.from(sizes.keys())
    .sort((a, b) => sizes[b] - sizes[a])
    .slice(0, mostShells);
  // Rank of each shell; those beyond the list get a number that `measures` leaves out of its groups.
  const rank = new Uint32Array(count).fill(largest.length);
  largest.forEach((shell, k) => {
    rank[shell] = k;
  });
  const groupOf = new Uint32Array(shellOf.length);
  const open = new Uint8Array(largest.length + 1);
  const parts = Array.from({ length: largest.length + 1 }, () => new Set<number>());
  for (let t = 0; t < shellOf.length; t++) {
    const group = shellOf[t] === NO_EDGE ? largest.length : rank[shellOf[t]];
    groupOf[t] = group;
    if (group === largest.length) continue;
    parts[group].add(mesh.partOf[t]);
    const h = 3 * t;
    if (mesh.ring[h] === h || mesh.ring[h + 1] === h + 1 || mesh.ring[h + 2] === h + 2) open[group] = 1;
  }
  return measures(mesh, groupOf, largest.length)
    .groups.map(
      (own, k): ShellMeasures => ({
        triangles: own.triangles,
        parts: [...parts[k]].sort((a, b) => a - b),
        closed: open[k] === 0,
        area: own.area,
        volume: own.volume,
        centroid: open[k] === 0 && own.volumeCentroid !== null ? own.volumeCentroid : own.areaCentroid,
        bounds: own.bounds,
      }),
    )
    .sort((a, b) => b.triangles - a.triangles || byPlace(a.bounds.min, b.bounds.min));
}

const byPlace = (a: Vector3, b: Vector3): number => a[0] - b[0] || a[1] - b[1] || a[2] - b[2];
