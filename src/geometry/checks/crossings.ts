import type { SurfaceMesh } from "../surface-mesh.js";
import type { Occurrence } from "../topology.js";
import { eachMeetingPair, type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import { addPlace, type PartPair, pairEntry } from "./part-pairs.js";

/** Pairs of triangles that pass through each other. A pair counts in `perPart` for each of its parts, once. */
export interface Crossings {
  /** Pairs within one shell: the surface cuts itself. */
  within: Occurrence;
  /** Pairs of different shells of one part. */
  betweenShells: Occurrence;
  /** Pairs of different shells and parts: parts that overlap, as wheels in arches may. */
  betweenParts: Occurrence;
  /** The parts that overlap, most pairs first. */
  partPairs: PartPair[];
  /** False where there were so many pairs to try that the search ended early: there may be more. */
  complete: boolean;
}

/**
 * Counts pairs of triangles of which an edge of one pierces the inside of the other. Pairs that share an edge, touch, or lie in one
 * plane do not count. Sides of planes are computed in doubles from the float32 coordinates, and what is nearer than the rounding of
 * that sum counts as touching: the count is that of the surface as stored, not of one that is moved by a tolerance.
 *
 * @param shellOf 1 per triangle
 * @param parts number of parts
 * @param tree of the same mesh, where it is there already
 */
export function findCrossings(
  mesh: SurfaceMesh,
  shellOf: Uint32Array,
  parts: number,
  tree: TriangleTree = triangleTree(mesh),
): Crossings {
  const search = new CrossingSearch(mesh, shellOf, parts, tree.extent);
  const complete = eachMeetingPair(tree, 0, (s, t) => search.visit(s, t));
  return search.result(complete);
}

/** The same search for a caller that goes through the pairs with a purpose of its own. */
export class CrossingSearch {
  private readonly within: Occurrence;
  private readonly betweenShells: Occurrence;
  private readonly betweenParts: Occurrence;
  private readonly pairs = new Map<number, PartPair>();
  private readonly piercing: Piercing;

  constructor(
    private readonly mesh: SurfaceMesh,
    private readonly shellOf: Uint32Array,
    parts: number,
    private readonly extent: number,
  ) {
    const none = (): Occurrence => ({ count: 0, places: [], perPart: new Uint32Array(parts) });
    this.within = none();
    this.betweenShells = none();
    this.betweenParts = none();
    this.piercing = new Piercing(mesh);
  }

  visit(s: number, t: number): void {
    if (this.piercing.mayCross(s, t)) this.note(s, t);
  }

  private note(s: number, t: number): void {
    const place = this.piercing.place(s, t);
    if (place === null) return;
    const { mesh, shellOf, extent } = this;
    const a = mesh.partOf[s];
    const b = mesh.partOf[t];
    const into = shellOf[s] === shellOf[t] ? this.within : a === b ? this.betweenShells : this.betweenParts;
    into.count++;
    into.perPart[a]++;
    if (a !== b) into.perPart[b]++;
    addPlace(into.places, place, extent);
    if (into !== this.betweenParts) return;
    const pair = pairEntry(this.pairs, a, b, (fresh) => fresh);
    pair.count++;
    addPlace(pair.places, place, extent, 3);
  }

  result(complete: boolean): Crossings {
    const partPairs = [...this.pairs.values()].sort((p, q) => q.count - p.count || p.a - q.a || p.b - q.b);
    return { within: this.within, betweenShells: this.betweenShells, betweenParts: this.betweenParts, partPairs, complete };
  }
}

/** Share of a sum of products below which its sign is rounding (Shewchuk, 1997, the static filter of orient3d, with room to spare). */
const ROUNDING = 1e-15;

/** Tries pairs of triangles: where an edge of one pierces the other. */
class Piercing {
  private readonly vertices: Float32Array;
  private readonly corners: Uint32Array;
  /** Plane of a triangle: normal, sums of the magnitudes it is made of, a corner. */
  private readonly first = new Float64Array(9);
  private readonly second = new Float64Array(9);
  private planeOf = -1;
  private readonly sidesOfT = new Float64Array(3);
  private readonly sidesOfS = new Float64Array(3);

  constructor({ vertices, corners }: SurfaceMesh) {
    this.vertices = vertices;
    this.corners = corners;
  }

  /** Whether the triangles have no common edge and each has corners on both sides of the other's plane. */
  mayCross(s: number, t: number): boolean {
    if (this.shareEdge(3 * s, 3 * t)) return false;
    // Pairs come in rows with the same first triangle.
    if (this.planeOf !== s) {
      this.plane(s, this.first);
      this.planeOf = s;
    }
    if (!this.straddles(this.first, t, this.sidesOfT)) return false;
    this.plane(t, this.second);
    return this.straddles(this.second, s, this.sidesOfS);
  }

  private shareEdge(s: number, t: number): boolean {
    const { corners } = this;
    const a = corners[t];
    const b = corners[t + 1];
    const c = corners[t + 2];
    let common = 0;
    for (let h = s; h < s + 3; h++) {
      const vertex = corners[h];
      if (vertex === a || vertex === b || vertex === c) common++;
    }
    return common > 1;
  }

  private plane(t: number, into: Float64Array): void {
    const { vertices, corners } = this;
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ax = vertices[a];
    const ay = vertices[a + 1];
    const az = vertices[a + 2];
    const ux = vertices[b] - ax;
    const uy = vertices[b + 1] - ay;
    const uz = vertices[b + 2] - az;
    const vx = vertices[c] - ax;
    const vy = vertices[c + 1] - ay;
    const vz = vertices[c + 2] - az;
    const yz = uy * vz;
    const zy = uz * vy;
    const zx = uz * vx;
    const xz = ux * vz;
    const xy = ux * vy;
    const yx = uy * vx;
    into[0] = yz - zy;
    into[1] = zx - xz;
    into[2] = xy - yx;
    into[3] = ROUNDING * (Math.abs(yz) + Math.abs(zy));
    into[4] = ROUNDING * (Math.abs(zx) + Math.abs(xz));
    into[5] = ROUNDING * (Math.abs(xy) + Math.abs(yx));
    into[6] = ax;
    into[7] = ay;
    into[8] = az;
  }

  /** Sides of the corners of t: six times the signed volume, 0 where it is not above rounding. Whether there are both. */
  private straddles(plane: Float64Array, t: number, sides: Float64Array): boolean {
    const { vertices, corners } = this;
    let above = false;
    let below = false;
    for (let k = 0; k < 3; k++) {
      const p = 3 * corners[3 * t + k];
      const x = vertices[p] - plane[6];
      const y = vertices[p + 1] - plane[7];
      const z = vertices[p + 2] - plane[8];
      const sum = plane[0] * x + plane[1] * y + plane[2] * z;
      const bound = plane[3] * Math.abs(x) + plane[4] * Math.abs(y) + plane[5] * Math.abs(z);
      if (sum > bound) above = true;
      else if (sum < -bound) below = true;
      sides[k] = Math.abs(sum) > bound ? sum : 0;
    }
    return above && below;
  }

  /** Where triangle s or t is pierced by an edge of the other; null where none is. After `mayCross` of the same pair. */
  place(s: number, t: number): Vector3 | null {
    return this.pierced(s, t, this.sidesOfT) ?? this.pierced(t, s, this.sidesOfS);
  }

  /** Where an edge of t pierces s. */
  private pierced(s: number, t: number, sides: Float64Array): Vector3 | null {
    const { corners, vertices } = this;
    const a = 3 * corners[3 * s];
    const b = 3 * corners[3 * s + 1];
    const c = 3 * corners[3 * s + 2];
    for (let k = 0; k < 3; k++) {
      const next = k === 2 ? 0 : k + 1;
      if (sides[k] * sides[next] >= 0) continue;
      const p = 3 * corners[3 * t + k];
      const q = 3 * corners[3 * t + next];
      const e = this.volume(p, q, a, b);
      if (e === 0) continue;
      const f = this.volume(p, q, b, c);
      if (e > 0 !== f > 0 || f === 0) continue;
      const g = this.volume(p, q, c, a);
      if (e > 0 !== g > 0 || g === 0) continue;
      const share = sides[k] / (sides[k] - sides[next]);
      const at = (axis: number): number => vertices[p + axis] + share * (vertices[q + axis] - vertices[p + axis]);
      return [at(0), at(1), at(2)];
    }
    return null;
  }

  /** Six times the signed volume of a tetrahedron of vertices; 0 where it is not above the rounding of the sum. */
  private volume(a: number, b: number, c: number, d: number): number {
    const { vertices } = this;
    const ax = vertices[a] - vertices[d];
    const ay = vertices[a + 1] - vertices[d + 1];
    const az = vertices[a + 2] - vertices[d + 2];
    const bx = vertices[b] - vertices[d];
    const by = vertices[b + 1] - vertices[d + 1];
    const bz = vertices[b + 2] - vertices[d + 2];
    const cx = vertices[c] - vertices[d];
    const cy = vertices[c + 1] - vertices[d + 1];
    const cz = vertices[c + 2] - vertices[d + 2];
    const sum = ax * (by * cz - bz * cy) + ay * (bz * cx - bx * cz) + az * (bx * cy - by * cx);
    const bound =
      ROUNDING *
      (Math.abs(ax) * (Math.abs(by * cz) + Math.abs(bz * cy)) +
        Math.abs(ay) * (Math.abs(bz * cx) + Math.abs(bx * cz)) +
        Math.abs(az) * (Math.abs(bx * cy) + Math.abs(by * cx)));
    return Math.abs(sum) > bound ? sum : 0;
  }
}
