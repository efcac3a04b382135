import type { SurfaceMesh } from "../surface-mesh.js";

/** A connected piece of a part, or several whose boxes overlap, as a small mesh of its own. Unit and axes of the mesh it comes from. */
export interface WheelPiece {
  /** 3 per vertex */
  vertices: Float64Array;
  /** 3 per triangle */
  corners: Uint32Array;
}

/**
 * Takes each part apart into the pieces it is made of: triangles that share vertices, then pieces whose bounding boxes overlap (a rim
 * inside a tyre, a bolt inside a rim). Per part, the piece with most triangles first.
 */
export function wheelPieces(mesh: SurfaceMesh, parts: number[]): WheelPiece[][] {
  const local = new Int32Array(mesh.vertices.length / 3).fill(-1);
  return trianglesOf(mesh, parts).map((triangles) => {
    const whole = extracted(mesh, triangles, local);
    return overlapping(whole, connected(whole)).sort((a, b) => b.corners.length - a.corners.length);
  });
}

/** Triangle numbers of each of the parts. */
function trianglesOf({ partOf }: SurfaceMesh, parts: number[]): number[][] {
  const lists: number[][] = parts.map(() => []);
  const listOf = new Int32Array(1 << 16).fill(-1);
  parts.forEach((part, k) => {
    listOf[part] = k;
  });
  for (let t = 0; t < partOf.length; t++) if (listOf[partOf[t]] >= 0) lists[listOf[partOf[t]]].push(t);
  return lists;
}

/** The triangles as a mesh with vertices of its own. `local`: scratch, -1 everywhere before and after. */
function extracted({ vertices, corners }: SurfaceMesh, triangles: number[], local: Int32Array): WheelPiece {
  const used: number[] = [];
  const own = new Uint32Array(3 * triangles.length);
  triangles.forEach((t, k) => {
    for (let j = 0; j < 3; j++) {
      const vertex = corners[3 * t + j];
      if (local[vertex] < 0) {
        local[vertex] = used.length;
        used.push(vertex);
      }
      own[3 * k + j] = local[vertex];
    }
  });
  const points = new Float64Array(3 * used.length);
  used.forEach((vertex, k) => {
    points.set(vertices.subarray(3 * vertex, 3 * vertex + 3), 3 * k);
    local[vertex] = -1;
  });
  return { vertices: points, corners: own };
}

/** Number of the connected piece of each vertex, ascending from 0, and how many there are. */
function connected({ vertices, corners }: WheelPiece): { pieceOf: Uint32Array; count: number } {
  const parent = Uint32Array.from({ length: vertices.length / 3 }, (_, k) => k);
  const root = (vertex: number): number => {
    let at = vertex;
    while (parent[at] !== at) at = parent[at] = parent[parent[at]];
    return at;
  };
  for (let h = 0; h < corners.length; h += 3) {
    const a = root(corners[h]);
    const b = root(corners[h + 1]);
    const c = root(corners[h + 2]);
    const lowest = Math.min(a, b, c);
    parent[a] = lowest;
    parent[b] = lowest;
    parent[c] = lowest;
  }
  for (let k = 0; k < parent.length; k++) parent[k] = parent[parent[k]];
  let count = 0;
  for (let k = 0; k < parent.length; k++) parent[k] = parent[k] === k ? count++ : parent[parent[k]];
  return { pieceOf: parent, count };
}

interface Group {
  members: number[];
  low: number[];
  high: number[];
}

/** Puts together what overlaps, again and again, since a joined box may reach a further piece. */
function overlapping(whole: WheelPiece, { pieceOf, count }: { pieceOf: Uint32Array; count: number }): WheelPiece[] {
  const groups = boxes(whole, pieceOf, count).sort((a, b) => sizeOf(b) - sizeOf(a));
  const joined: Group[] = [];
  for (const group of groups) {
    let current = group;
    for (let k = joined.length - 1; k >= 0; k--) {
      if (!overlap(joined[k], current)) continue;
      current = join(joined[k], current);
      joined.splice(k, 1);
      // The box has grown: those already looked at may touch it now.
      k = joined.length;
    }
    joined.push(current);
  }
  if (joined.length === 1) return [whole];
  const groupOf = new Uint32Array(count);
  joined.forEach(({ members }, k) => {
    for (const member of members) groupOf[member] = k;
  });
  const cornersOf: number[][] = joined.map(() => []);
  for (let h = 0; h < whole.corners.length; h += 3)
    cornersOf[groupOf[pieceOf[whole.corners[h]]]].push(whole.corners[h], whole.corners[h + 1], whole.corners[h + 2]);
  return cornersOf.map((corners) => ({ vertices: whole.vertices, corners: Uint32Array.from(corners) }));
}

const sizeOf = ({ low, high }: Group): number => high.reduce((sum, value, k) => sum + value - low[k], 0);

const overlap = (a: Group, b: Group): boolean => a.low.every((value, k) => value <= b.high[k] && b.low[k] <= a.high[k]);

const join = (a: Group, b: Group): Group => ({
  members: [...a.members, ...b.members],
  low: a.low.map((value, k) => Math.min(value, b.low[k])),
  high: a.high.map((value, k) => Math.max(value, b.high[k])),
});

function boxes({ vertices }: WheelPiece, pieceOf: Uint32Array, count: number): Group[] {
  const groups = Array.from(
    { length: count },
    (_, k): Group => ({ members: [k], low: [Infinity, Infinity, Infinity], high: [-Infinity, -Infinity, -Infinity] }),
  );
  for (let k = 0; k < pieceOf.length; k++) {
    const { low, high } = groups[pieceOf[k]];
    for (let axis = 0; axis < 3; axis++) {
      const value = vertices[3 * k + axis];
      if (value < low[axis]) low[axis] = value;
      if (value > high[axis]) high[axis] = value;
    }
  }
  return groups;
}
