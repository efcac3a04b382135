import type { SurfaceMesh } from "../surface-mesh.js";
import type { Box, Vector3 } from "../vector.js";

/** Layers of free cells around the body. */
export const MARGIN = 2;

/** A grid of cubes about a body; cells are numbered x fastest. Lengths in the mesh unit. */
export interface WallGrid {
  cell: number;
  /** Lower corner. */
  origin: Vector3;
  /** Cells along x, y, z. */
  size: Vector3;
  /** 1 where a triangle may pass through the cell, 0 where none does. */
  wall: Uint8Array;
  /** 6 per cell with surface in it: area vector, then the middle of that surface. */
  dipoles: Float64Array;
}

/**
 * Marks the cells that a surface passes through: those in a triangle's box that its plane cuts. That is a little more than the
 * triangle itself, never less, so holes narrower than a cell are closed.
 */
export function wallGrid({ vertices, corners }: Pick<SurfaceMesh, "vertices" | "corners">, bounds: Box, cell: number): WallGrid {
  const origin = bounds.min.map((value) => value - MARGIN * cell) as Vector3;
  const size = bounds.max.map((value, axis) => Math.floor((value - bounds.min[axis]) / cell + 1e-6) + 1 + 2 * MARGIN) as Vector3;
  const [x0, y0, z0] = origin;
  const [columns, rows] = size;
  const wall = new Uint8Array(size[0] * size[1] * size[2]);
  const dipoles = new Dipoles(origin, size, cell);
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ax = vertices[a] - x0;
    const ay = vertices[a + 1] - y0;
    const az = vertices[a + 2] - z0;
    const bx = vertices[b] - x0;
    const by = vertices[b + 1] - y0;
    const bz = vertices[b + 2] - z0;
    const cx = vertices[c] - x0;
    const cy = vertices[c + 1] - y0;
    const cz = vertices[c + 2] - z0;
    dipoles.add(ax, ay, az, bx, by, bz, cx, cy, cz);
    const i0 = Math.floor(Math.min(ax, bx, cx) / cell);
    const j0 = Math.floor(Math.min(ay, by, cy) / cell);
    const k0 = Math.floor(Math.min(az, bz, cz) / cell);
    const i1 = Math.floor(Math.max(ax, bx, cx) / cell);
    const j1 = Math.floor(Math.max(ay, by, cy) / cell);
    const k1 = Math.floor(Math.max(az, bz, cz) / cell);
    if (i0 === i1 && j0 === j1 && k0 === k1) {
      wall[(k0 * rows + j0) * columns + i0] = 1;
      continue;
    }
    const nx = (by - ay) * (cz - az) - (bz - az) * (cy - ay);
    const ny = (bz - az) * (cx - ax) - (bx - ax) * (cz - az);
    const nz = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
    // Half the cell's extent along the normal: what the plane may be off the cell's middle. A face between two cells must not slip
    // through for rounding.
    const reach = (cell / 2) * (1 + 1e-6) * (Math.abs(nx) + Math.abs(ny) + Math.abs(nz));
    for (let k = k0; k <= k1; k++)
      for (let j = j0; j <= j1; j++) {
        const off = ny * ((j + 0.5) * cell - ay) + nz * ((k + 0.5) * cell - az);
        for (let i = i0; i <= i1; i++)
          if (Math.abs(nx * ((i + 0.5) * cell - ax) + off) <= reach) wall[(k * rows + j) * columns + i] = 1;
      }
  }
  return { cell, origin, size, wall, dipoles: dipoles.result() };
}

/** Sums area vectors by the cell that a triangle's middle is in. Coordinates from the grid's lower corner. */
class Dipoles {
  /** Place of a cell in `sums`; -1 where it has none. */
  private readonly placeOf: Int32Array;
  /** 7 per cell: area vector, area times middle, area. */
  private sums = new Float64Array(7 * 1024);
  private count = 0;
  private readonly longest: number;

  constructor(
    private readonly origin: Vector3,
    private readonly size: Vector3,
    private readonly cell: number,
  ) {
    this.placeOf = new Int32Array(size[0] * size[1] * size[2]).fill(-1);
    this.longest = (1.5 * cell) ** 2;
  }

  /** Triangles longer than a cell are halved at their longest side until they are not. */
  add(ax: number, ay: number, az: number, bx: number, by: number, bz: number, cx: number, cy: number, cz: number): void {
    const ab = (bx - ax) ** 2 + (by - ay) ** 2 + (bz - az) ** 2;
    const bc = (cx - bx) ** 2 + (cy - by) ** 2 + (cz - bz) ** 2;
    const ca = (ax - cx) ** 2 + (ay - cy) ** 2 + (az - cz) ** 2;
    if (ab >= bc && ab >= ca) {
      if (ab <= this.longest) this.put(ax, ay, az, bx, by, bz, cx, cy, cz);
      else {
        const [x, y, z] = [(ax + bx) / 2, (ay + by) / 2, (az + bz) / 2];
        this.add(ax, ay, az, x, y, z, cx, cy, cz);
        this.add(x, y, z, bx, by, bz, cx, cy, cz);
      }
    } else if (bc >= ca) this.add(bx, by, bz, cx, cy, cz, ax, ay, az);
    else this.add(cx, cy, cz, ax, ay, az, bx, by, bz);
  }

  /** 6 per cell: area vector and middle of the surface in it. */
  result(): Float64Array {
    const { sums, origin } = this;
    const dipoles = new Float64Array(6 * this.count);
    for (let k = 0; k < this.count; k++)
      for (let axis = 0; axis < 3; axis++) {
        dipoles[6 * k + axis] = sums[7 * k + axis];
        dipoles[6 * k + 3 + axis] = origin[axis] + sums[7 * k + 3 + axis] / sums[7 * k + 6];
      }
    return dipoles;
  }

  private put(ax: number, ay: number, az: number, bx: number, by: number, bz: number, cx: number, cy: number, cz: number): void {
    const nx = (by - ay) * (cz - az) - (bz - az) * (cy - ay);
    const ny = (bz - az) * (cx - ax) - (bx - ax) * (cz - az);
    const nz = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
    const area = Math.sqrt(nx * nx + ny * ny + nz * nz) / 2;
    if (!(area > 0)) return;
    const x = (ax + bx + cx) / 3;
    const y = (ay + by + cy) / 3;
    const z = (az + bz + cz) / 3;
    const key = (Math.floor(z / this.cell) * this.size[1] + Math.floor(y / this.cell)) * this.size[0] + Math.floor(x / this.cell);
    let at = this.placeOf[key];
    if (at < 0) {
      at = this.placeOf[key] = this.count++;
      if (7 * this.count > this.sums.length) {
        const larger = new Float64Array(2 * this.sums.length);
        larger.set(this.sums);
        this.sums = larger;
      }
    }
    const { sums } = this;
    sums[7 * at] += nx / 2;
    sums[7 * at + 1] += ny / 2;
    sums[7 * at + 2] += nz / 2;
    sums[7 * at + 3] += area * x;
    sums[7 * at + 4] += area * y;
    sums[7 * at + 5] += area * z;
    sums[7 * at + 6] += area;
  }
}

/**
 * How often the surface winds about a point: 1 inside a closed, outward surface, 0 outside, in between where it has holes (the
 * generalized winding number of Jacobson, Kavan and Sorkine-Hornung, 2013), each cell's surface taken as one dipole: good to a few per
 * cent two cells away from the surface.
 */
export function windingNumber({ dipoles }: Pick<WallGrid, "dipoles">, [px, py, pz]: Vector3): number {
  let sum = 0;
  for (let k = 0; k < dipoles.length; k += 6) {
    const x = dipoles[k + 3] - px;
    const y = dipoles[k + 4] - py;
    const z = dipoles[k + 5] - pz;
    const square = x * x + y * y + z * z;
    if (square > 0) sum += (dipoles[k] * x + dipoles[k + 1] * y + dipoles[k + 2] * z) / (square * Math.sqrt(square));
  }
  return sum / (4 * Math.PI);
}
