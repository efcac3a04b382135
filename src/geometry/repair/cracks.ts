import { edgeRings, NO_EDGE, nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { findDoubles } from "./doubles.js";

/** Vertices that were joined across cracks. */
export interface ClosedCracks {
  /** 3 per triangle: vertex numbers; the joined ones replaced by the lowest of their group. */
  corners: Uint32Array;
  /** Vertices that went into another one, ascending. */
  joined: number[];
  /** Open edges before and after. */
  openBefore: number;
  openAfter: number;
}

/** Rounds in which joins that spoil an edge are taken back. */
const MOST_ROUNDS = 8;

/**
 * Joins vertices of open edges that lie no farther apart than `tolerance` (mesh unit), where that closes open edges and spoils
 * nothing: a group of vertices is left alone when it would make a triangle lose an edge, make an edge of more than two triangles, or
 * leave all its open edges open. Vertices of closed edges never move.
 */
export function closeCracks(mesh: SurfaceMesh, tolerance: number): ClosedCracks {
  const { vertices, corners, ring } = mesh;
  const border = borderVertices(mesh);
  const openBefore = openEdges(ring);
  const none: ClosedCracks = { corners, joined: [], openBefore, openAfter: openBefore };
  if (border.length === 0 || !(tolerance > 0)) return none;
  const groupOf = groupsWithin(vertices, border, tolerance);
  if (groupOf.size === 0) return none;
  const refused = new Set<number>();
  let joinedCorners = corners;
  let joinedRing = ring;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    joinedCorners = corners.map((vertex) => {
      const lowest = groupOf.get(vertex);
      return lowest === undefined || refused.has(lowest) ? vertex : lowest;
    });
    joinedRing = edgeRings(joinedCorners, vertices.length / 3);
    const { second, ring: without } = withoutCopies(joinedCorners, joinedRing, vertices.length / 3);
    const spoiled = spoiledGroups(corners, ring, without, second, groupOf, refused);
    if (spoiled.size === 0) break;
    for (const group of spoiled) refused.add(group);
    if (round === MOST_ROUNDS - 1) return none;
  }
  const joined = [...groupOf].filter(([vertex, lowest]) => vertex !== lowest && !refused.has(lowest)).map(([vertex]) => vertex);
  if (joined.length === 0) return none;
  return { corners: joinedCorners, joined: joined.sort((a, b) => a - b), openBefore, openAfter: openEdges(joinedRing) };
}

/** Second copies of triangles (1 per triangle), and the edges of what is left when they go. */
function withoutCopies(corners: Uint32Array, ring: Uint32Array, vertices: number): { second: Uint8Array; ring: Uint32Array } {
  const second = new Uint8Array(corners.length / 3);
  const { duplicate } = findDoubles({ corners, ring });
  if (duplicate.length === 0) return { second, ring };
  const left = corners.slice();
  for (const t of duplicate) {
    second[t] = 1;
    left.fill(corners[3 * t], 3 * t, 3 * t + 3);
  }
  return { second, ring: edgeRings(left, vertices) };
}

function openEdges(ring: Uint32Array): number {
  let count = 0;
  for (let h = 0; h < ring.length; h++) if (ring[h] === h) count++;
  return count;
}

/** Vertices at the ends of open edges, ascending. */
function borderVertices({ vertices, corners, ring }: SurfaceMesh): number[] {
  const on = new Uint8Array(vertices.length / 3);
  for (let h = 0; h < ring.length; h++)
    if (ring[h] === h) {
      on[corners[h]] = 1;
      on[corners[nextInTriangle(h)]] = 1;
    }
  const found: number[] = [];
  for (let vertex = 0; vertex < on.length; vertex++) if (on[vertex] === 1) found.push(vertex);
  return found;
}

/** The lowest vertex of each group of border vertices that hang together by steps within the tolerance; groups of one are left out. */
function groupsWithin(vertices: Float32Array, border: number[], tolerance: number): Map<number, number> {
  const cells = new Map<string, number[]>();
  const cellOf = (vertex: number, axis: number): number => Math.floor(vertices[3 * vertex + axis] / tolerance);
  const parent = new Map<number, number>();
  const root = (vertex: number): number => {
    let at = vertex;
    while (parent.get(at) !== undefined && parent.get(at) !== at) at = parent.get(at)!;
    return at;
  };
  for (const vertex of border) {
    const [i, j, k] = [0, 1, 2].map((axis) => cellOf(vertex, axis));
    for (let di = -1; di <= 1; di++)
      for (let dj = -1; dj <= 1; dj++)
        for (let dk = -1; dk <= 1; dk++)
          for (const other of cells.get(`${i + di} ${j + dj} ${k + dk}`) ?? []) {
            const distance = Math.hypot(...[0, 1, 2].map((axis) => vertices[3 * vertex + axis] - vertices[3 * other + axis]));
            if (distance > tolerance) continue;
            const [a, b] = [root(vertex), root(other)];
            parent.set(Math.max(a, b), Math.min(a, b));
          }
    const key = `${i} ${j} ${k}`;
    const cell = cells.get(key);
    if (cell === undefined) cells.set(key, [vertex]);
    else cell.push(vertex);
  }
  const groupOf = new Map<number, number>();
  for (const vertex of border) {
    const lowest = root(vertex);
    if (lowest === vertex) continue;
    groupOf.set(vertex, lowest);
    groupOf.set(lowest, lowest);
  }
  return groupOf;
}

/** Groups whose joins spoil something, or close nothing. */
function spoiledGroups(
  before: Uint32Array,
  ringBefore: Uint32Array,
  ringAfter: Uint32Array,
  second: Uint8Array,
  groupOf: ReadonlyMap<number, number>,
  refused: ReadonlySet<number>,
): Set<number> {
  const spoiled = new Set<number>();
  const useful = new Set<number>();
  const active = (vertex: number): number | undefined => {
    const group = groupOf.get(vertex);
    return group === undefined || refused.has(group) ? undefined : group;
  };
  for (let h = 0; h < before.length; h++) {
    const ends = [active(before[h]), active(before[nextInTriangle(h)])].filter((group) => group !== undefined);
    if (ends.length === 0) continue;
    if (second[(h / 3) | 0] === 1) {
      // A copy of a triangle, but for rounding: closing the crack shows it.
      for (const group of ends) useful.add(group);
      continue;
    }
    if (ringAfter[h] === NO_EDGE) {
      if (ringBefore[h] !== NO_EDGE) for (const group of ends) spoiled.add(group);
      continue;
    }
    const wasLong = ringBefore[h] !== h && ringBefore[ringBefore[h]] !== h;
    const isLong = ringAfter[h] !== h && ringAfter[ringAfter[h]] !== h;
    if (isLong && !wasLong) for (const group of ends) spoiled.add(group);
    else if (ringBefore[h] === h && ringAfter[h] !== h) for (const group of ends) useful.add(group);
  }
  for (const [, group] of groupOf) if (!refused.has(group) && !useful.has(group)) spoiled.add(group);
  return spoiled;
}
