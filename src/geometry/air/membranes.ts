import { NO_EDGE, nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";
import { bitAt, placeAt } from "./bit-lattice.js";
import type { AirFlood } from "./flood.js";

/**
 * The film across one hole: neighbouring points of the lattice, both reached by air, between which the number of times that the
 * surface winds about a point, of either sign, passes one half. Point numbers: (k · rows + j) · columns + i.
 */
export interface Membrane {
  inner: number[];
  outer: number[];
}

/** Above this the surface has wound about a point. */
export const INSIDE = 0.5;
/** Steps around an open edge within which the film that ends at the edge is looked for. */
const AROUND = 3;

/**
 * Finds the films across the holes of a body. The winding number is a harmonic function off the surface, so the face where it is
 * one half cannot be closed: it ends where the surface has a border, open edges and such whose triangles do not face alike. So it is
 * looked for along these and followed from there.
 *
 * `complete` is false where more than `most` points would have had to be looked at.
 */
export function membranesOf(
  flood: AirFlood,
  { vertices, corners, ring }: Pick<SurfaceMesh, "vertices" | "corners" | "ring">,
  most: number,
): { membranes: Membrane[]; complete: boolean } {
  const { lattice, reached, about } = flood;
  const { origin, step, size } = lattice;
  const [columns, rows, layers] = size;
  /** 1 inside, 0 outside, by point number. */
  const known = new Map<number, number>();
  /** 1 inside, 0 outside, -1 where no air gets. */
  const side = (i: number, j: number, k: number): number => {
    if (i < 0 || j < 0 || k < 0 || i >= columns || j >= rows || k >= layers) return -1;
    if (bitAt(lattice, reached, i, j, k) === 0) return -1;
    const key = (k * rows + j) * columns + i;
    let value = known.get(key);
    if (value === undefined) {
      value = about.depth(placeAt(lattice, i, j, k)) > INSIDE ? 1 : 0;
      known.set(key, value);
    }
    return value;
  };
  const taken = new Set<number>();
  const membranes: Membrane[] = [];
  /** Follows the film from an inner point; null where no outer one is beside it. */
  const follow = (first: number): Membrane | null => {
    const inner: number[] = [];
    const outer = new Set<number>();
    const waiting = [first];
    taken.add(first);
    for (let at = waiting.pop(); at !== undefined; at = waiting.pop()) {
      const i = at % columns;
      const j = Math.floor(at / columns) % rows;
      const k = Math.floor(at / (columns * rows));
      let beside = false;
      for (const [x, y, z] of BESIDE)
        if (side(i + x, j + y, k + z) === 0) {
          outer.add(((k + z) * rows + j + y) * columns + i + x);
          beside = true;
        }
      if (!beside) {
        if (at === first) return null;
        continue;
      }
      inner.push(at);
      if (known.size > most) continue;
      for (let z = -1; z <= 1; z++)
        for (let y = -1; y <= 1; y++)
          for (let x = -1; x <= 1; x++) {
            const next = ((k + z) * rows + j + y) * columns + i + x;
            if (taken.has(next) || side(i + x, j + y, k + z) !== 1) continue;
            taken.add(next);
            waiting.push(next);
          }
    }
    return { inner, outer: [...outer] };
  };
  const seen = new Set<number>();
  for (let h = 0; h < corners.length; h++) {
    if (!isBorder(corners, ring, h)) continue;
    const a = 3 * corners[h];
    const b = 3 * corners[nextInTriangle(h)];
    const length = Math.hypot(vertices[b] - vertices[a], vertices[b + 1] - vertices[a + 1], vertices[b + 2] - vertices[a + 2]);
    const parts = Math.max(1, Math.ceil(length / step));
    for (let part = 0; part <= parts; part++) {
      const [i, j, k] = [0, 1, 2].map((axis) =>
        Math.round((vertices[a + axis] + ((vertices[b + axis] - vertices[a + axis]) * part) / parts - origin[axis]) / step),
      );
      const key = (k * rows + j) * columns + i;
      if (seen.has(key)) continue;
      seen.add(key);
      for (let z = -AROUND; z <= AROUND; z++)
        for (let y = -AROUND; y <= AROUND; y++)
          for (let x = -AROUND; x <= AROUND; x++) {
            if (x * x + y * y + z * z > (AROUND + 0.5) ** 2 || side(i + x, j + y, k + z) !== 1) continue;
            const at = ((k + z) * rows + j + y) * columns + i + x;
            if (taken.has(at)) continue;
            const membrane = follow(at);
            if (membrane !== null) membranes.push(membrane);
          }
      if (known.size > most) return { membranes, complete: false };
    }
  }
  return { membranes, complete: known.size <= most };
}

/** Whether a surface has edges at which films can end; where it has none, it has no holes. */
export function hasBorder({ corners, ring }: Pick<SurfaceMesh, "corners" | "ring">): boolean {
  for (let h = 0; h < corners.length; h++) if (isBorder(corners, ring, h)) return true;
  return false;
}

/** Whether the triangles at a half-edge's edge run along it more often one way than the other; said of its lowest half-edge only. */
function isBorder(corners: Uint32Array, ring: Uint32Array, h: number): boolean {
  if (ring[h] === NO_EDGE) return false;
  let ways = 0;
  let at = h;
  do {
    if (at < h) return false;
    ways += corners[at] === corners[h] ? 1 : -1;
    at = ring[at];
  } while (at !== h);
  return ways !== 0;
}

const BESIDE: Vector3[] = [
  [-1, 0, 0],
  [1, 0, 0],
  [0, -1, 0],
  [0, 1, 0],
  [0, 0, -1],
  [0, 0, 1],
];
