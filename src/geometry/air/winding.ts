import { squaredDistance } from "../point-triangle.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { LEAF, type TriangleTree, triangleTree } from "../triangle-tree.js";
import type { Vector3 } from "../vector.js";

/** A box of the tree counts as one dipole from so many of its radii away. */
const FAR = 2;

/**
 * How a surface lies about points: how many times it winds about one, and how near it comes. Both look into one tree of boxes, so a
 * question takes microseconds however many triangles there are. Mesh unit and axes.
 */
export class SurfaceAbout {
  private readonly tree: TriangleTree;
  /** 7 per node: area vector, its centre, greatest distance of the box's corners from it. */
  private readonly dipoles: Float32Array;
  private readonly stack = new Int32Array(128);

  /** @param cut plane of a half body (axis and coordinate): its mirror image counts too in windings */
  constructor(
    private readonly mesh: Pick<SurfaceMesh, "vertices" | "corners">,
    private readonly cut: { axis: number; plane: number } | null = null,
    tree?: TriangleTree,
  ) {
    this.tree = tree ?? triangleTree(mesh);
    this.dipoles = dipolesOf(mesh, this.tree);
  }

  /**
   * Times that the surface winds about a point: 1 inside of an outward surface, 0 outside, in between where it has holes (Jacobson,
   * Kavan and Sorkine-Hornung, 2013). Near triangles are summed exactly, far ones in heaps (Barill and others, 2018): good to
   * about 0.02.
   */
  winding([x, y, z]: Vector3): number {
    const direct = this.windingOf(x, y, z);
    if (this.cut === null) return direct;
    // The missing half winds about the point as this half winds about its mirror image.
    const image: Vector3 = [x, y, z];
    image[this.cut.axis] = 2 * this.cut.plane - image[this.cut.axis];
    return direct + this.windingOf(image[0], image[1], image[2]);
  }

  /** The winding without its sign: a body that is turned inside out has an inside as well. */
  depth(point: Vector3): number {
    return Math.abs(this.winding(point));
  }

  private windingOf(px: number, py: number, pz: number): number {
    const { dipoles, stack } = this;
    const { order, leaves, nodes } = this.tree;
    const { vertices, corners } = this.mesh;
    let sum = 0;
    let depth = 0;
    stack[depth++] = 1;
    while (depth > 0) {
      const node = stack[--depth];
      if (nodes[6 * node] > nodes[6 * node + 3]) continue;
      const at = 7 * node;
      const x = dipoles[at + 3] - px;
      const y = dipoles[at + 4] - py;
      const z = dipoles[at + 5] - pz;
      const square = x * x + y * y + z * z;
      const near = FAR * dipoles[at + 6];
      if (square > near * near && square > 0) {
        sum += (dipoles[at] * x + dipoles[at + 1] * y + dipoles[at + 2] * z) / (square * Math.sqrt(square));
        continue;
      }
      if (node < leaves) {
        stack[depth++] = 2 * node;
        stack[depth++] = 2 * node + 1;
        continue;
      }
      const first = LEAF * (node - leaves);
      const end = Math.min(order.length, first + LEAF);
      for (let k = first; k < end; k++) {
        const h = 3 * order[k];
        const a = 3 * corners[h];
        const b = 3 * corners[h + 1];
        const c = 3 * corners[h + 2];
        sum += solidAngle(
          vertices[a] - px,
          vertices[a + 1] - py,
          vertices[a + 2] - pz,
          vertices[b] - px,
          vertices[b + 1] - py,
          vertices[b + 2] - pz,
          vertices[c] - px,
          vertices[c + 1] - py,
          vertices[c + 2] - pz,
        );
      }
    }
    return sum / (4 * Math.PI);
  }

  /** Distance of a point to the nearest triangle, or `most` where that is farther. */
  distance([px, py, pz]: Vector3, most = Infinity): number {
    const { stack } = this;
    const { order, leaves, nodes } = this.tree;
    const { vertices, corners } = this.mesh;
    const boxSquare = (node: number): number => {
      const at = 6 * node;
      const x = Math.max(nodes[at] - px, px - nodes[at + 3], 0);
      const y = Math.max(nodes[at + 1] - py, py - nodes[at + 4], 0);
      const z = Math.max(nodes[at + 2] - pz, pz - nodes[at + 5], 0);
      return x * x + y * y + z * z;
    };
    let least = most * most;
    let depth = 0;
    stack[depth++] = 1;
    while (depth > 0) {
      const node = stack[--depth];
      if (!(boxSquare(node) < least)) continue;
      if (node < leaves) {
        const left = boxSquare(2 * node);
        const right = boxSquare(2 * node + 1);
        stack[depth++] = 2 * node + (left < right ? 1 : 0);
        stack[depth++] = 2 * node + (left < right ? 0 : 1);
        continue;
      }
      const first = LEAF * (node - leaves);
      const end = Math.min(order.length, first + LEAF);
      for (let k = first; k < end; k++) {
        const h = 3 * order[k];
        const a = 3 * corners[h];
        const b = 3 * corners[h + 1];
        const c = 3 * corners[h + 2];
        const square = squaredDistance(
          px,
          py,
          pz,
          vertices[a],
          vertices[a + 1],
          vertices[a + 2],
          vertices[b],
          vertices[b + 1],
          vertices[b + 2],
          vertices[c],
          vertices[c + 1],
          vertices[c + 2],
        );
        if (square < least) least = square;
      }
    }
    return Math.sqrt(least);
  }
}

/** Signed solid angle of a triangle seen from the origin (Van Oosterom and Strackee, 1983); positive from behind. */
function solidAngle(
  ax: number,
  ay: number,
  az: number,
  bx: number,
  by: number,
  bz: number,
  cx: number,
  cy: number,
  cz: number,
): number {
  const a = Math.sqrt(ax * ax + ay * ay + az * az);
  const b = Math.sqrt(bx * bx + by * by + bz * bz);
  const c = Math.sqrt(cx * cx + cy * cy + cz * cz);
  const volume = ax * (by * cz - bz * cy) + ay * (bz * cx - bx * cz) + az * (bx * cy - by * cx);
  const below =
    a * b * c + (ax * bx + ay * by + az * bz) * c + (bx * cx + by * cy + bz * cz) * a + (cx * ax + cy * ay + cz * az) * b;
  return 2 * Math.atan2(volume, below);
}

function dipolesOf({ vertices, corners }: Pick<SurfaceMesh, "vertices" | "corners">, tree: TriangleTree): Float32Array {
  const { order, leaves, nodes } = tree;
  // 7 per node: area vector, area times middle, area.
  const sums = new Float64Array(14 * leaves);
  for (let k = 0; k < order.length; k++) {
    const h = 3 * order[k];
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const nx = (uy * vz - uz * vy) / 2;
    const ny = (uz * vx - ux * vz) / 2;
    const nz = (ux * vy - uy * vx) / 2;
    const area = Math.sqrt(nx * nx + ny * ny + nz * nz);
    const at = 7 * (leaves + ((k / LEAF) | 0));
    sums[at] += nx;
    sums[at + 1] += ny;
    sums[at + 2] += nz;
    for (let axis = 0; axis < 3; axis++)
      sums[at + 3 + axis] += (area * (vertices[a + axis] + vertices[b + axis] + vertices[c + axis])) / 3;
    sums[at + 6] += area;
  }
  for (let node = 2 * leaves - 1; node > 1; node--) for (let i = 0; i < 7; i++) sums[7 * (node >> 1) + i] += sums[7 * node + i];
  const dipoles = new Float32Array(14 * leaves);
  for (let node = 1; node < 2 * leaves; node++) {
    const at = 7 * node;
    const area = sums[at + 6];
    let square = 0;
    for (let axis = 0; axis < 3; axis++) {
      const low = nodes[6 * node + axis];
      const high = nodes[6 * node + 3 + axis];
      if (!(low <= high)) continue;
      const middle = area > 0 ? sums[at + 3 + axis] / area : (low + high) / 2;
      dipoles[at + axis] = sums[at + axis];
      dipoles[at + 3 + axis] = middle;
      square += Math.max(middle - low, high - middle) ** 2;
    }
    dipoles[at + 6] = Math.sqrt(square);
  }
  return dipoles;
}
