import { LEAF, type TriangleTree } from "./triangle-tree.js";

/** Finds the triangles that a straight line passes, through a tree of boxes. One instance per thread of work: it keeps its last hits. */
export class RayCaster {
  /** Triangles of the last call, nearest first, and their distances along the ray. */
  readonly of: number[] = [];
  readonly at: number[] = [];
  private readonly stack = new Int32Array(128);
  private readonly slack: number;
  /** Origin, inverse direction, from, to, slack. */
  private readonly ray = new Float64Array(9);

  /** `tree`: of the same vertices and corners. */
  constructor(
    private readonly mesh: { vertices: Float32Array; corners: Uint32Array },
    private readonly tree: TriangleTree,
  ) {
    this.slack = 1e-12 * tree.extent;
  }

  /**
   * All triangles met from `from` to `to` along a ray of unit direction d from o, nearest first; the number of them. A triangle counts
   * when the ray meets its inside or its edges (Möller and Trumbore, 1997), so that a ray through a common edge meets both; triangles
   * along the ray are not met. `except`: a triangle to leave out.
   */
  hits(ox: number, oy: number, oz: number, dx: number, dy: number, dz: number, from: number, to: number, except = -1): number {
    const { of, at, stack, slack } = this;
    const { nodes, leaves, boxes, order } = this.tree;
    of.length = 0;
    at.length = 0;
    const ray = this.ray;
    ray[0] = ox;
    ray[1] = oy;
    ray[2] = oz;
    ray[3] = 1 / dx;
    ray[4] = 1 / dy;
    ray[5] = 1 / dz;
    ray[6] = from;
    ray[7] = to;
    ray[8] = slack;
    let depth = 0;
    if (meets(ray, nodes, 6)) stack[depth++] = 1;
    while (depth > 0) {
      const node = stack[--depth];
      if (node < leaves) {
        if (meets(ray, nodes, 12 * node)) stack[depth++] = 2 * node;
        if (meets(ray, nodes, 12 * node + 6)) stack[depth++] = 2 * node + 1;
        continue;
      }
      const first = LEAF * (node - leaves);
      const end = Math.min(order.length, first + LEAF);
      for (let k = first; k < end; k++)
        if (meets(ray, boxes, 6 * k) && order[k] !== except) this.meet(order[k], ox, oy, oz, dx, dy, dz, from, to);
    }
    return of.length;
  }

  private meet(t: number, ox: number, oy: number, oz: number, dx: number, dy: number, dz: number, from: number, to: number): void {
    const { vertices, corners } = this.mesh;
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const px = dy * vz - dz * vy;
    const py = dz * vx - dx * vz;
    const pz = dx * vy - dy * vx;
    const determinant = ux * px + uy * py + uz * pz;
    if (determinant === 0) return;
    const inverse = 1 / determinant;
    const sx = ox - vertices[a];
    const sy = oy - vertices[a + 1];
    const sz = oz - vertices[a + 2];
    const u = (sx * px + sy * py + sz * pz) * inverse;
    if (!(u >= -EDGE && u <= 1 + EDGE)) return;
    const qx = sy * uz - sz * uy;
    const qy = sz * ux - sx * uz;
    const qz = sx * uy - sy * ux;
    const v = (dx * qx + dy * qy + dz * qz) * inverse;
    if (!(v >= -EDGE && u + v <= 1 + EDGE)) return;
    const distance = (vx * qx + vy * qy + vz * qz) * inverse;
    if (!(distance >= from && distance <= to)) return;
    const { of, at } = this;
    let k = at.length;
    at.push(distance);
    of.push(t);
    for (; k > 0 && (at[k - 1] > distance || (at[k - 1] === distance && of[k - 1] > t)); k--) {
      at[k] = at[k - 1];
      of[k] = of[k - 1];
    }
    at[k] = distance;
    of[k] = t;
  }
}

/** A ray may miss a triangle by this share of its size and still meet its edge. */
const EDGE = 1e-9;

/**
 * Whether a ray meets a box (Kay and Kajiya, 1986). A ray in the plane of a side gives 0 · ∞, which no comparison takes; the sides of
 * an empty box are the wrong way round and let no ray in.
 */
function meets(ray: Float64Array, boxes: Float32Array, box: number): boolean {
  const slack = ray[8];
  let near = ray[6];
  let far = ray[7];
  for (let axis = 0; axis < 3; axis++) {
    const origin = ray[axis];
    const inverse = ray[3 + axis];
    const low = (boxes[box + axis] - origin) * inverse;
    const high = (boxes[box + 3 + axis] - origin) * inverse;
    const first = (inverse < 0 ? high : low) - slack;
    const last = (inverse < 0 ? low : high) + slack;
    if (first > near) near = first;
    if (last < far) far = last;
    if (near > far) return false;
  }
  return true;
}
