import type { TriangleSet } from "../geometry/triangle-set.js";
import { weld } from "../geometry/weld.js";

export interface ThinnedBody {
  set: TriangleSet;
  /** No corner was moved farther than this, unit of the body; 0 for a body that is as it was. */
  moved: number;
}

/** Growth of the cells when they turn out too small. */
const growth = 1.25;

/**
 * A body for pictures with no more than `most` triangles: vertices that share a cell of a cubic grid become the first of them, and triangles
 * that lose their area or double another go (vertex clustering: Rossignac and Borrel 1993). Parts, and the seams between them, stay.
 */
export function thinBody(set: TriangleSet, most: number): ThinnedBody {
  if (set.partOf.length <= most) return { set, moved: 0 };
  const { vertices, corners } = weld(set.positions);
  let cell = 0.7 * Math.sqrt((2 * areaOf(set.positions)) / most);
  for (;;) {
    const first = firstInCell(vertices, cell);
    const kept = keptTriangles(corners, first);
    if (kept.length <= most || !(cell > 0)) return { set: subset(set, vertices, corners, first, kept), moved: Math.sqrt(3) * cell };
    cell *= growth;
  }
}

function areaOf(positions: Float32Array): number {
  let sum = 0;
  for (let at = 0; at < positions.length; at += 9) {
    const [ax, ay, az] = [positions[at], positions[at + 1], positions[at + 2]];
    const [ux, uy, uz] = [positions[at + 3] - ax, positions[at + 4] - ay, positions[at + 5] - az];
    const [vx, vy, vz] = [positions[at + 6] - ax, positions[at + 7] - ay, positions[at + 8] - az];
    sum += Math.hypot(uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx) / 2;
  }
  return sum;
}

/** 1 per vertex: the first vertex in its cell. */
function firstInCell(vertices: Float32Array, cell: number): Uint32Array {
  const first = new Uint32Array(vertices.length / 3);
  const seen = new Map<number, number>();
  const side = 2 ** 17;
  const low = [Infinity, Infinity, Infinity];
  for (let at = 0; at < vertices.length; at++) if (vertices[at] < low[at % 3]) low[at % 3] = vertices[at];
  for (let vertex = 0; vertex < first.length; vertex++) {
    const [i, j, k] = [0, 1, 2].map((axis) => Math.floor((vertices[3 * vertex + axis] - low[axis]) / cell));
    const key = (i * side + j) * side + k;
    const known = seen.get(key);
    if (known === undefined) seen.set(key, vertex);
    first[vertex] = known ?? vertex;
  }
  return first;
}

/** Triangles whose corners stay apart, each set of three corners once. */
function keptTriangles(corners: Uint32Array, first: Uint32Array): Uint32Array {
  const kept: number[] = [];
  const seen = new Set<string>();
  for (let t = 0; 3 * t < corners.length; t++) {
    const [a, b, c] = [first[corners[3 * t]], first[corners[3 * t + 1]], first[corners[3 * t + 2]]];
    if (a === b || b === c || c === a) continue;
    const key = [a, b, c].sort((p, q) => p - q).join(" ");
    if (seen.has(key)) continue;
    seen.add(key);
    kept.push(t);
  }
  return Uint32Array.from(kept);
}

function subset(
  set: TriangleSet,
  vertices: Float32Array,
  corners: Uint32Array,
  first: Uint32Array,
  kept: Uint32Array,
): TriangleSet {
  const positions = new Float32Array(9 * kept.length);
  const partOf = new Uint16Array(kept.length);
  kept.forEach((t, to) => {
    partOf[to] = set.partOf[t];
    for (let corner = 0; corner < 3; corner++) {
      const from = 3 * first[corners[3 * t + corner]];
      positions.set(vertices.subarray(from, from + 3), 9 * to + 3 * corner);
    }
  });
  return { ...set, positions, partOf };
}
