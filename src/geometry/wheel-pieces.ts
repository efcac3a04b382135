import type { SurfaceMesh } from "./surface-mesh.js";

/**
 * Takes a part apart into the pieces it is made of: triangles that share vertices, then pieces whose bounding boxes overlap (a rim
 * inside a tyre, a bolt inside a rim). Returns triangle numbers, the piece with most triangles first.
 */
export function wheelPieces(mesh: SurfaceMesh, part: number): Uint32Array[] {
  const triangles = trianglesOf(mesh, part);
  const pieces = connected(mesh, triangles);
  return overlapping(mesh, pieces).sort((a, b) => b.length - a.length || a[0] - b[0]);
}

function trianglesOf({ partOf }: SurfaceMesh, part: number): Uint32Array {
  let count = 0;
  for (let t = 0; t < partOf.length; t++) if (partOf[t] === part) count++;
  const triangles = new Uint32Array(count);
  for (let t = 0, k = 0; t < partOf.length; t++) if (partOf[t] === part) triangles[k++] = t;
  return triangles;
}

function connected({ corners }: SurfaceMesh, triangles: Uint32Array): Uint32Array[] {
  const parent = new Map<number, number>();
  const root = (vertex: number): number => {
    let at = vertex;
    for (let above = parent.get(at) ?? at; above !== at; above = parent.get(at) ?? at) {
      parent.set(at, parent.get(above) ?? above);
      at = above;
    }
    return at;
  };
  for (const t of triangles) {
    const a = root(corners[3 * t]);
    for (const vertex of [corners[3 * t + 1], corners[3 * t + 2]]) {
      const b = root(vertex);
      if (a !== b) parent.set(b, a);
    }
  }
  const groups = new Map<number, number[]>();
  for (const t of triangles) {
    const key = root(corners[3 * t]);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [t]);
    else group.push(t);
  }
  return Array.from(groups.values(), (group) => Uint32Array.from(group));
}

interface Piece {
  triangles: Uint32Array[];
  low: number[];
  high: number[];
}

/** Puts together what overlaps, again and again, since a joined box may reach a further piece. */
function overlapping(mesh: SurfaceMesh, found: Uint32Array[]): Uint32Array[] {
  const pieces = found.map((triangles) => boxed(mesh, triangles)).sort((a, b) => sizeOf(b) - sizeOf(a));
  const joined: Piece[] = [];
  for (const piece of pieces) {
    let current = piece;
    for (let k = joined.length - 1; k >= 0; k--) {
      if (!overlap(joined[k], current)) continue;
      current = join(joined[k], current);
      joined.splice(k, 1);
      // The box has grown: those already looked at may touch it now.
      k = joined.length;
    }
    joined.push(current);
  }
  return joined.map(({ triangles }) => {
    if (triangles.length === 1) return triangles[0];
    const all = new Uint32Array(triangles.reduce((sum, some) => sum + some.length, 0));
    let at = 0;
    for (const some of triangles) {
      all.set(some, at);
      at += some.length;
    }
    return all;
  });
}

const sizeOf = ({ low, high }: Piece): number => high.reduce((sum, value, k) => sum + value - low[k], 0);

const overlap = (a: Piece, b: Piece): boolean => a.low.every((value, k) => value <= b.high[k] && b.low[k] <= a.high[k]);

const join = (a: Piece, b: Piece): Piece => ({
  triangles: [...a.triangles, ...b.triangles],
  low: a.low.map((value, k) => Math.min(value, b.low[k])),
  high: a.high.map((value, k) => Math.max(value, b.high[k])),
});

function boxed({ vertices, corners }: SurfaceMesh, triangles: Uint32Array): Piece {
  const low = [Infinity, Infinity, Infinity];
  const high = [-Infinity, -Infinity, -Infinity];
  for (const t of triangles)
    for (let h = 3 * t; h < 3 * t + 3; h++)
      for (let axis = 0; axis < 3; axis++) {
        const value = vertices[3 * corners[h] + axis];
        if (value < low[axis]) low[axis] = value;
        if (value > high[axis]) high[axis] = value;
      }
  return { triangles: [triangles], low, high };
}
