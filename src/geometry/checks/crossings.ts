import type { SurfaceMesh } from "../surface-mesh.js";
import type { Occurrence } from "../topology.js";
import type { Vector3 } from "../vector.js";

/** Pairs of triangles that pass through each other. */
export interface Crossings {
  /** Pairs within one shell: the surface cuts itself. */
  within: Occurrence;
  /** Pairs of different shells: bodies that overlap, as wheels in arches may. */
  between: Occurrence;
}

/** Above so many triangles the search takes longer than all the rest of a survey. */
const MOST_TRIANGLES = 1_500_000;
/** Entries of triangles in cells, per triangle, above which cells are made larger. */
const MOST_ENTRIES = 24;
const MOST_PLACES = 10;

/**
 * Counts pairs of triangles of which an edge of one pierces the inside of the other. Pairs that share a vertex, touch, or lie in one
 * plane do not count. Triangles are put into the cells of a grid about as large as they are; a pair is tried in the first cell that
 * both are in. Sides of planes are computed in doubles from float32 coordinates, and what is nearer than their rounding counts as
 * touching.
 *
 * Null for more than 1.5 million triangles.
 *
 * @param shellOf 1 per triangle
 * @param parts number of parts
 */
export function findCrossings(mesh: SurfaceMesh, shellOf: Uint32Array, parts: number): Crossings | null {
  const triangles = mesh.partOf.length;
  if (triangles > MOST_TRIANGLES) return null;
  const none = (): Occurrence => ({ count: 0, places: [], perPart: new Uint32Array(parts) });
  const found: Crossings = { within: none(), between: none() };
  const boxes = boxesOf(mesh);
  const grid = gridOf(boxes, triangles);
  if (grid === null) return found;
  const { start, members } = grid;
  const pierce = new Piercing(mesh);
  for (let cell = 0; cell + 1 < start.length; cell++)
    for (let p = start[cell]; p < start[cell + 1]; p++) {
      const s = members[p];
      for (let q = p + 1; q < start[cell + 1]; q++) {
        const t = members[q];
        if (!boxesMeet(boxes, s, t) || firstCommonCell(grid, boxes, s, t) !== cell || shareVertex(mesh.corners, s, t)) continue;
        const place = pierce.place(s, t);
        if (place === null) continue;
        const into = shellOf[s] === shellOf[t] ? found.within : found.between;
        into.count++;
        into.perPart[mesh.partOf[s]]++;
        if (into.places.length < MOST_PLACES) into.places.push(place);
      }
    }
  return found;
}

/** 6 per triangle: least x y z, greatest x y z. */
function boxesOf({ vertices, corners }: SurfaceMesh): Float32Array {
  const boxes = new Float32Array(2 * corners.length);
  for (let h = 0, to = 0; h < corners.length; h += 3, to += 6)
    for (let axis = 0; axis < 3; axis++) {
      const a = vertices[3 * corners[h] + axis];
      const b = vertices[3 * corners[h + 1] + axis];
      const c = vertices[3 * corners[h + 2] + axis];
      boxes[to + axis] = Math.min(a, b, c);
      boxes[to + 3 + axis] = Math.max(a, b, c);
    }
  return boxes;
}

function boxesMeet(boxes: Float32Array, s: number, t: number): boolean {
  const a = 6 * s;
  const b = 6 * t;
  return (
    boxes[a] <= boxes[b + 3] &&
    boxes[b] <= boxes[a + 3] &&
    boxes[a + 1] <= boxes[b + 4] &&
    boxes[b + 1] <= boxes[a + 4] &&
    boxes[a + 2] <= boxes[b + 5] &&
    boxes[b + 2] <= boxes[a + 5]
  );
}

function shareVertex(corners: Uint32Array, s: number, t: number): boolean {
  for (let i = 3 * s; i < 3 * s + 3; i++) {
    const vertex = corners[i];
    if (vertex === corners[3 * t] || vertex === corners[3 * t + 1] || vertex === corners[3 * t + 2]) return true;
  }
  return false;
}

interface Grid {
  cell: number;
  low: Vector3;
  columns: number;
  rows: number;
  /** Triangles of cell k, ascending: `members[start[k], start[k + 1])`. */
  start: Uint32Array;
  members: Uint32Array;
}

/** Cells so large that a triangle lies in few, and so many that a cell holds few. Null without extent. */
function gridOf(boxes: Float32Array, triangles: number): Grid | null {
  const low: Vector3 = [Infinity, Infinity, Infinity];
  const high: Vector3 = [-Infinity, -Infinity, -Infinity];
  let extents = 0;
  for (let at = 0; at < boxes.length; at += 6) {
    for (let axis = 0; axis < 3; axis++) {
      low[axis] = Math.min(low[axis], boxes[at + axis]);
      high[axis] = Math.max(high[axis], boxes[at + 3 + axis]);
    }
    extents += Math.max(boxes[at + 3] - boxes[at], boxes[at + 4] - boxes[at + 1], boxes[at + 5] - boxes[at + 2]) / triangles;
  }
  const extent = Math.max(...high.map((value, axis) => value - low[axis]));
  if (!(extent > 0)) return null;
  for (let cell = Math.max(1.5 * extents, extent / 400); ; cell *= 1.5) {
    const [columns, rows, layers] = high.map((value, axis) => Math.floor((value - low[axis]) / cell) + 1);
    if (columns * rows * layers > 16e6) continue;
    const grid = { cell, low, columns, rows };
    const start = new Uint32Array(columns * rows * layers + 1);
    let entries = 0;
    for (let t = 0; t < triangles && entries <= MOST_ENTRIES * triangles + 1e6; t++)
      eachCell(grid, boxes, t, (at) => {
        start[at + 1]++;
        entries++;
      });
    if (entries > MOST_ENTRIES * triangles + 1e6) continue;
    for (let k = 1; k < start.length; k++) start[k] += start[k - 1];
    const members = new Uint32Array(entries);
    const next = start.slice();
    for (let t = 0; t < triangles; t++)
      eachCell(grid, boxes, t, (at) => {
        members[next[at]++] = t;
      });
    return { ...grid, start, members };
  }
}

type Frame = Pick<Grid, "cell" | "low" | "columns" | "rows">;

function eachCell({ cell, low, columns, rows }: Frame, boxes: Float32Array, t: number, visit: (cell: number) => void): void {
  const at = 6 * t;
  const i0 = Math.floor((boxes[at] - low[0]) / cell);
  const j0 = Math.floor((boxes[at + 1] - low[1]) / cell);
  const k0 = Math.floor((boxes[at + 2] - low[2]) / cell);
  const i1 = Math.floor((boxes[at + 3] - low[0]) / cell);
  const j1 = Math.floor((boxes[at + 4] - low[1]) / cell);
  const k1 = Math.floor((boxes[at + 5] - low[2]) / cell);
  for (let k = k0; k <= k1; k++) for (let j = j0; j <= j1; j++) for (let i = i0; i <= i1; i++) visit((k * rows + j) * columns + i);
}

/** The lowest cell that both boxes reach into. */
function firstCommonCell({ cell, low, columns, rows }: Frame, boxes: Float32Array, s: number, t: number): number {
  const i = Math.floor((Math.max(boxes[6 * s], boxes[6 * t]) - low[0]) / cell);
  const j = Math.floor((Math.max(boxes[6 * s + 1], boxes[6 * t + 1]) - low[1]) / cell);
  const k = Math.floor((Math.max(boxes[6 * s + 2], boxes[6 * t + 2]) - low[2]) / cell);
  return (k * rows + j) * columns + i;
}

/** Tries pairs of triangles: where an edge of one pierces the other. */
class Piercing {
  private readonly sides = new Float64Array(3);

  constructor(private readonly mesh: SurfaceMesh) {}

  /** Where triangle s or t is pierced by an edge of the other; null where none is. */
  place(s: number, t: number): Vector3 | null {
    return this.pierced(s, t) ?? this.pierced(t, s);
  }

  /** Where an edge of t pierces s. */
  private pierced(s: number, t: number): Vector3 | null {
    const { corners } = this.mesh;
    const [a, b, c] = [3 * corners[3 * s], 3 * corners[3 * s + 1], 3 * corners[3 * s + 2]];
    for (let k = 0; k < 3; k++) this.sides[k] = this.volume(a, b, c, 3 * corners[3 * t + k]);
    const [d0, d1, d2] = this.sides;
    if ((d0 >= 0 && d1 >= 0 && d2 >= 0) || (d0 <= 0 && d1 <= 0 && d2 <= 0)) return null;
    for (let k = 0; k < 3; k++) {
      const next = k === 2 ? 0 : k + 1;
      if (this.sides[k] * this.sides[next] >= 0) continue;
      const p = 3 * corners[3 * t + k];
      const q = 3 * corners[3 * t + next];
      const e = this.volume(p, q, a, b);
      const f = this.volume(p, q, b, c);
      const g = this.volume(p, q, c, a);
      if (!((e > 0 && f > 0 && g > 0) || (e < 0 && f < 0 && g < 0))) continue;
      const share = this.sides[k] / (this.sides[k] - this.sides[next]);
      const { vertices } = this.mesh;
      return [0, 1, 2].map((axis) => vertices[p + axis] + share * (vertices[q + axis] - vertices[p + axis])) as Vector3;
    }
    return null;
  }

  /** Six times the signed volume of a tetrahedron of vertices; 0 where it is not above the rounding of the sum. */
  private volume(a: number, b: number, c: number, d: number): number {
    const { vertices } = this.mesh;
    const ax = vertices[a] - vertices[d];
    const ay = vertices[a + 1] - vertices[d + 1];
    const az = vertices[a + 2] - vertices[d + 2];
    const bx = vertices[b] - vertices[d];
    const by = vertices[b + 1] - vertices[d + 1];
    const bz = vertices[b + 2] - vertices[d + 2];
    const cx = vertices[c] - vertices[d];
    const cy = vertices[c + 1] - vertices[d + 1];
    const cz = vertices[c + 2] - vertices[d + 2];
    const x = by * cz - bz * cy;
    const y = bz * cx - bx * cz;
    const z = bx * cy - by * cx;
    const sum = ax * x + ay * y + az * z;
    // Rounding of the products (Shewchuk, 1997, the static filter of orient3d, with room to spare).
    const bound =
      1e-15 *
      (Math.abs(ax) * (Math.abs(by * cz) + Math.abs(bz * cy)) +
        Math.abs(ay) * (Math.abs(bz * cx) + Math.abs(bx * cz)) +
        Math.abs(az) * (Math.abs(bx * cy) + Math.abs(by * cx)));
    return Math.abs(sum) > bound ? sum : 0;
  }
}
