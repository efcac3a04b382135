import type { SurfaceMesh } from "../surface-mesh.js";
import { eachMeetingPair, type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";
import { CrossingSearch, type Crossings } from "./crossings.js";
import { addPlace, type PartPair, pairEntry } from "./part-pairs.js";

/** Pairs of triangles that lie on each other, and the area they have in common, summed over pairs. Mesh unit. */
export interface Overlay {
  count: number;
  area: number;
}

export interface CoincidentPair extends PartPair {
  /** Both triangles face the same way: one skin, there twice. */
  same: Overlay;
  /** The triangles face opposite ways: solids that touch face to face, or a sheet folded onto itself. */
  opposite: Overlay;
}

export interface CoincidentFaces {
  /** How far from a plane is still in it. Mesh unit. */
  tolerance: number;
  same: Overlay;
  opposite: Overlay;
  /** Part pairs (also of a part with itself), largest area first. */
  pairs: CoincidentPair[];
  /** Up to ten, in the middle of what is shared. */
  places: Vector3[];
  /** False where there were so many pairs to try that the search ended early: there may be more. */
  complete: boolean;
}

/** Of the body's extent: 4 µm on a car, some ten times what float32 coordinates are rounded by. */
const TOLERANCE = 1e-6;

/**
 * Finds triangles that lie on each other without being the same triangle twice: the corners of the smaller are no farther than a
 * millionth of the body's extent from the plane of the larger, and what they share is wider than that tolerance. Neighbours in a
 * plane share no area and do not count; neighbours folded onto each other do. The shared area is that of the smaller one clipped by
 * the larger (Sutherland and Hodgman, 1974).
 *
 * @param tree of the same mesh, where it is there already
 */
export function findCoincident(mesh: SurfaceMesh, tree: TriangleTree = triangleTree(mesh)): CoincidentFaces {
  const search = new CoincidentSearch(mesh, tree.extent);
  const complete = eachMeetingPair(tree, search.tolerance, (s, t) => search.visit(s, t));
  return search.result(complete);
}

/** `findCrossings` and `findCoincident` in one go through the pairs, in two thirds of the time of both. */
export function findOverlaps(
  mesh: SurfaceMesh,
  shellOf: Uint32Array,
  parts: number,
  tree: TriangleTree = triangleTree(mesh),
): { crossings: Crossings; coincident: CoincidentFaces } {
  const crossing = new CrossingSearch(mesh, shellOf, parts, tree.extent);
  const coincident = new CoincidentSearch(mesh, tree.extent);
  const complete = eachMeetingPair(tree, coincident.tolerance, (s, t) => {
    crossing.visit(s, t);
    coincident.visit(s, t);
  });
  return { crossings: crossing.result(complete), coincident: coincident.result(complete) };
}

/** What the cosine of two unit vectors in float32 may be off by, with room to spare. */
const COSINE_ROUNDING = 1e-6;

class CoincidentSearch {
  readonly tolerance: number;
  private readonly same: Overlay = { count: 0, area: 0 };
  private readonly opposite: Overlay = { count: 0, area: 0 };
  private readonly pairs = new Map<number, CoincidentPair>();
  private readonly places: Vector3[] = [];
  /**
   * 4 per triangle: unit normal (zeros without area), and how far the cosine to another normal may be off 1: a triangle whose corners are
   * within the tolerance of a plane is tilted against it by at most twice the tolerance over its least height.
   */
  private readonly normals: Float32Array;
  /** 1 per triangle. */
  private readonly areas: Float32Array;
  private readonly clip = new Clip();

  constructor(
    private readonly mesh: SurfaceMesh,
    private readonly extent: number,
  ) {
    this.tolerance = TOLERANCE * extent;
    const triangles = mesh.partOf.length;
    this.normals = new Float32Array(4 * triangles);
    this.areas = new Float32Array(triangles);
    const { vertices, corners } = mesh;
    for (let t = 0; t < triangles; t++) {
      const a = 3 * corners[3 * t];
      const b = 3 * corners[3 * t + 1];
      const c = 3 * corners[3 * t + 2];
      const ux = vertices[b] - vertices[a];
      const uy = vertices[b + 1] - vertices[a + 1];
      const uz = vertices[b + 2] - vertices[a + 2];
      const vx = vertices[c] - vertices[a];
      const vy = vertices[c + 1] - vertices[a + 1];
      const vz = vertices[c + 2] - vertices[a + 2];
      const x = uy * vz - uz * vy;
      const y = uz * vx - ux * vz;
      const z = ux * vy - uy * vx;
      const length = Math.sqrt(x * x + y * y + z * z);
      this.areas[t] = length / 2;
      if (length === 0) continue;
      const wx = vx - ux;
      const wy = vy - uy;
      const wz = vz - uz;
      const longest = Math.max(ux * ux + uy * uy + uz * uz, vx * vx + vy * vy + vz * vz, wx * wx + wy * wy + wz * wz);
      this.normals[4 * t] = x / length;
      this.normals[4 * t + 1] = y / length;
      this.normals[4 * t + 2] = z / length;
      this.normals[4 * t + 3] = COSINE_ROUNDING + (4 * this.tolerance * this.tolerance * longest) / (length * length);
    }
  }

  visit(s: number, t: number): void {
    const { normals } = this;
    const a = 4 * s;
    const b = 4 * t;
    const cosine = normals[a] * normals[b] + normals[a + 1] * normals[b + 1] + normals[a + 2] * normals[b + 2];
    const off = 1 - Math.abs(cosine);
    if (off > normals[a + 3] && off > normals[b + 3]) return;
    if (cosine === 0) return;
    // The larger one's plane, the smaller one's corners; of equal ones the earlier one's plane.
    const larger = this.areas[s] > this.areas[t] || (this.areas[s] === this.areas[t] && s < t) ? s : t;
    this.look(larger, larger === s ? t : s, cosine > 0);
  }

  private look(large: number, small: number, sameWay: boolean): void {
    const { vertices, corners, partOf } = this.mesh;
    const p = 3 * corners[3 * large];
    const nx = this.normals[4 * large];
    const ny = this.normals[4 * large + 1];
    const nz = this.normals[4 * large + 2];
    let common = 0;
    for (let k = 0; k < 3; k++) {
      const v = corners[3 * small + k];
      if (v === corners[3 * large] || v === corners[3 * large + 1] || v === corners[3 * large + 2]) {
        common++;
        continue;
      }
      const at = 3 * v;
      const distance =
        nx * (vertices[at] - vertices[p]) + ny * (vertices[at + 1] - vertices[p + 1]) + nz * (vertices[at + 2] - vertices[p + 2]);
      if (!(Math.abs(distance) <= this.tolerance)) return;
    }
    if (common === 3) return;
    const { clip } = this;
    // Seen along the axis that the plane faces most, areas shrink by that share of the normal.
    const axis = Math.abs(nx) >= Math.abs(ny) && Math.abs(nx) >= Math.abs(nz) ? 0 : Math.abs(ny) >= Math.abs(nz) ? 1 : 2;
    const shrink = axis === 0 ? nx : axis === 1 ? ny : nz;
    clip.load(vertices, corners, large, small, axis, shrink < 0);
    if (!clip.meet(this.tolerance)) return;
    const area = clip.area() / Math.abs(shrink);
    if (!(area > 2 * this.tolerance * clip.longestOfSmall())) return;
    const place = this.middle(axis, p, nx, ny, nz);
    const a = partOf[large];
    const b = partOf[small];
    const pair = pairEntry(this.pairs, a, b, (fresh) => ({
      ...fresh,
      same: { count: 0, area: 0 },
      opposite: { count: 0, area: 0 },
    }));
    pair.count++;
    addPlace(pair.places, place, this.extent, 3);
    addPlace(this.places, place, this.extent);
    for (const into of sameWay ? [this.same, pair.same] : [this.opposite, pair.opposite]) {
      into.count++;
      into.area += area;
    }
  }

  /** The middle of the clipped area, put back into the plane through vertex `p`. */
  private middle(axis: number, p: number, nx: number, ny: number, nz: number): Vector3 {
    const { vertices } = this.mesh;
    const place: Vector3 = [0, 0, 0];
    const [u, v] = this.clip.centre();
    const normal = [nx, ny, nz];
    const [i, j] = [(axis + 1) % 3, (axis + 2) % 3];
    place[i] = u;
    place[j] = v;
    place[axis] = vertices[p + axis] - (normal[i] * (u - vertices[p + i]) + normal[j] * (v - vertices[p + j])) / normal[axis];
    return place;
  }

  result(complete: boolean): CoincidentFaces {
    const area = (pair: CoincidentPair): number => pair.same.area + pair.opposite.area;
    const pairs = [...this.pairs.values()].sort((p, q) => area(q) - area(p) || p.a - q.a || p.b - q.b);
    return { tolerance: this.tolerance, same: this.same, opposite: this.opposite, pairs, places: this.places, complete };
  }
}

/** Two triangles in a plane, and what they share. Coordinates are those of the axes after the one that is left out. */
class Clip {
  /** x y of three corners, counter-clockwise. */
  private readonly large = new Float64Array(6);
  private readonly small = new Float64Array(6);
  private polygon = new Float64Array(20);
  private next = new Float64Array(20);
  private size = 0;

  load(vertices: Float32Array, corners: Uint32Array, large: number, small: number, axis: number, mirrored: boolean): void {
    const i = (axis + 1) % 3;
    const j = (axis + 2) % 3;
    for (let k = 0; k < 3; k++) {
      const at = 3 * corners[3 * large + (mirrored ? 2 - k : k)];
      this.large[2 * k] = vertices[at + i];
      this.large[2 * k + 1] = vertices[at + j];
      const to = 3 * corners[3 * small + k];
      this.small[2 * k] = vertices[to + i];
      this.small[2 * k + 1] = vertices[to + j];
    }
    const { small: of } = this;
    if ((of[2] - of[0]) * (of[5] - of[1]) - (of[3] - of[1]) * (of[4] - of[0]) >= 0) return;
    const x = of[2];
    const y = of[3];
    of[2] = of[4];
    of[3] = of[5];
    of[4] = x;
    of[5] = y;
  }

  longestOfSmall(): number {
    const [ax, ay, bx, by, cx, cy] = this.small;
    return Math.max(Math.hypot(bx - ax, by - ay), Math.hypot(cx - bx, cy - by), Math.hypot(ax - cx, ay - cy));
  }

  /** Whether no edge of either leaves all corners of the other outside or within `margin` of it (separating axes). */
  meet(margin: number): boolean {
    return !separates(this.large, this.small, margin) && !separates(this.small, this.large, margin);
  }

  /** Area of what they share. */
  area(): number {
    this.polygon.set(this.small);
    this.size = 3;
    for (let k = 0; k < 3 && this.size > 0; k++) this.cut(2 * k, 2 * ((k + 1) % 3));
    let sum = 0;
    for (let k = 1; k + 1 < this.size; k++) sum += this.twice(k);
    return sum / 2;
  }

  /** Centroid of what `area` found. */
  centre(): [number, number] {
    const { polygon } = this;
    let [sum, x, y] = [0, 0, 0];
    for (let k = 1; k + 1 < this.size; k++) {
      const area = this.twice(k);
      sum += area;
      x += (area * (polygon[0] + polygon[2 * k] + polygon[2 * k + 2])) / 3;
      y += (area * (polygon[1] + polygon[2 * k + 1] + polygon[2 * k + 3])) / 3;
    }
    return [x / sum, y / sum];
  }

  private twice(k: number): number {
    const { polygon } = this;
    return (
      (polygon[2 * k] - polygon[0]) * (polygon[2 * k + 3] - polygon[1]) -
      (polygon[2 * k + 1] - polygon[1]) * (polygon[2 * k + 2] - polygon[0])
    );
  }

  /** Keeps what lies left of the edge of the large one from corner `a` to corner `b`. */
  private cut(a: number, b: number): void {
    const { polygon, next, large } = this;
    const ex = large[b] - large[a];
    const ey = large[b + 1] - large[a + 1];
    const side = (k: number): number => ex * (polygon[2 * k + 1] - large[a + 1]) - ey * (polygon[2 * k] - large[a]);
    let size = 0;
    for (let k = 0; k < this.size; k++) {
      const other = k + 1 === this.size ? 0 : k + 1;
      const here = side(k);
      const there = side(other);
      if (here >= 0) {
        next[2 * size] = polygon[2 * k];
        next[2 * size + 1] = polygon[2 * k + 1];
        size++;
      }
      if (here >= 0 === there >= 0) continue;
      const share = here / (here - there);
      next[2 * size] = polygon[2 * k] + share * (polygon[2 * other] - polygon[2 * k]);
      next[2 * size + 1] = polygon[2 * k + 1] + share * (polygon[2 * other + 1] - polygon[2 * k + 1]);
      size++;
    }
    this.size = size;
    this.polygon = next;
    this.next = polygon;
  }
}

/** Whether an edge of the first has all corners of the second on its outer side, or no farther in than `margin`. */
function separates(first: Float64Array, second: Float64Array, margin: number): boolean {
  for (let k = 0; k < 6; k += 2) {
    const to = k === 4 ? 0 : k + 2;
    const ex = first[to] - first[k];
    const ey = first[to + 1] - first[k + 1];
    const limit = margin * Math.sqrt(ex * ex + ey * ey);
    let inside = false;
    for (let j = 0; j < 6 && !inside; j += 2) inside = ex * (second[j + 1] - first[k + 1]) - ey * (second[j] - first[k]) > limit;
    if (!inside) return true;
  }
  return false;
}
