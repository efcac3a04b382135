import { squaredDistance } from "../point-triangle.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Box } from "../vector.js";
import { allPoints, type Lattice, latticeAbout } from "./bit-lattice.js";

/** Triangles longer than so many steps are halved, so that the box of a slanting one holds few points that are far from it. */
const LONGEST = 24;

/**
 * The lattice about a box and the points of it that lie farther than `reach` from the surface: exact distances, so the answer does not
 * depend on how the surface is cut into triangles. With a reach of half a step no two neighbours that are both clear have a
 * surface between them: it would cross the line from one to the other at most half a step from one of them.
 *
 * @param cut plane of a half body (axis and coordinate): nothing beyond it is clear
 */
export function clearLattice(
  { vertices, corners }: Pick<SurfaceMesh, "vertices" | "corners">,
  bounds: Box,
  step: number,
  reach: number,
  cut: { axis: number; plane: number } | null,
): { lattice: Lattice; clear: Uint32Array } {
  const lattice = latticeAbout(bounds, step);
  const clear = allPoints(lattice);
  const { origin } = lattice;
  const block = blocker(lattice, clear, reach);
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    block(
      vertices[a] - origin[0],
      vertices[a + 1] - origin[1],
      vertices[a + 2] - origin[2],
      vertices[b] - origin[0],
      vertices[b + 1] - origin[1],
      vertices[b + 2] - origin[2],
      vertices[c] - origin[0],
      vertices[c + 1] - origin[1],
      vertices[c + 2] - origin[2],
    );
  }
  if (cut !== null) blockBeyond(lattice, clear, bounds, cut);
  return { lattice, clear };
}

type Nine = (ax: number, ay: number, az: number, bx: number, by: number, bz: number, cx: number, cy: number, cz: number) => void;

/** A function that clears the bits of points near a triangle, whose corners are given from the lattice's origin. */
function blocker({ step, size, rowWords }: Lattice, clear: Uint32Array, asked: number): Nine {
  const [columns, rows, layers] = size;
  // Neighbours on both sides of a face that is half a step from each must not slip through for rounding.
  const reach = asked * (1 + 1e-6);
  const square = reach * reach;
  const longest = (LONGEST * step) ** 2;
  const put: Nine = (ax, ay, az, bx, by, bz, cx, cy, cz) => {
    const nx = (by - ay) * (cz - az) - (bz - az) * (cy - ay);
    const ny = (bz - az) * (cx - ax) - (bx - ax) * (cz - az);
    const nz = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
    const twice = Math.sqrt(nx * nx + ny * ny + nz * nz);
    const wide = Math.max(
      Math.abs(bx - ax),
      Math.abs(by - ay),
      Math.abs(bz - az),
      Math.abs(cx - ax),
      Math.abs(cy - ay),
      Math.abs(cz - az),
    );
    // The plane of a sliver is known too badly to leave points out by it.
    const off = twice > 1e-6 * wide * wide ? reach * twice * (1 + 1e-6) : Infinity;
    const i0 = Math.max(0, Math.ceil((Math.min(ax, bx, cx) - reach) / step));
    const j0 = Math.max(0, Math.ceil((Math.min(ay, by, cy) - reach) / step));
    const k0 = Math.max(0, Math.ceil((Math.min(az, bz, cz) - reach) / step));
    const i1 = Math.min(columns - 1, Math.floor((Math.max(ax, bx, cx) + reach) / step));
    const j1 = Math.min(rows - 1, Math.floor((Math.max(ay, by, cy) + reach) / step));
    const k1 = Math.min(layers - 1, Math.floor((Math.max(az, bz, cz) + reach) / step));
    for (let k = k0; k <= k1; k++)
      for (let j = j0; j <= j1; j++) {
        // The row's part between the two planes beside the triangle's own.
        const rest = ny * (j * step - ay) + nz * (k * step - az);
        let from = i0;
        let to = i1;
        if (nx !== 0) {
          const p = ax - (rest + off) / nx;
          const q = ax - (rest - off) / nx;
          // A step of slack on both sides: nearly parallel rows round badly.
          const low = Math.floor(Math.min(p, q) / step);
          const high = Math.ceil(Math.max(p, q) / step);
          if (low > from) from = low;
          if (high < to) to = high;
        } else if (Math.abs(rest) > off) continue;
        const row = (k * rows + j) * rowWords;
        for (let i = from; i <= to; i++) {
          const word = row + (i >>> 5);
          const bit = 1 << (i & 31);
          if ((clear[word] & bit) === 0) continue;
          if (squaredDistance(i * step, j * step, k * step, ax, ay, az, bx, by, bz, cx, cy, cz) <= square) clear[word] &= ~bit;
        }
      }
  };
  const halve: Nine = (ax, ay, az, bx, by, bz, cx, cy, cz) => {
    const ab = (bx - ax) ** 2 + (by - ay) ** 2 + (bz - az) ** 2;
    const bc = (cx - bx) ** 2 + (cy - by) ** 2 + (cz - bz) ** 2;
    const ca = (ax - cx) ** 2 + (ay - cy) ** 2 + (az - cz) ** 2;
    if (!(Math.max(ab, bc, ca) > longest)) put(ax, ay, az, bx, by, bz, cx, cy, cz);
    else if (ab >= bc && ab >= ca) {
      const x = (ax + bx) / 2;
      const y = (ay + by) / 2;
      const z = (az + bz) / 2;
      halve(ax, ay, az, x, y, z, cx, cy, cz);
      halve(x, y, z, bx, by, bz, cx, cy, cz);
    } else if (bc >= ca) halve(bx, by, bz, cx, cy, cz, ax, ay, az);
    else halve(cx, cy, cz, ax, ay, az, bx, by, bz);
  };
  return halve;
}

/** Clears the bits of all points on the side of the cut where the body is not. */
function blockBeyond(
  { origin, step, size, rowWords }: Lattice,
  clear: Uint32Array,
  bounds: Box,
  { axis, plane }: { axis: number; plane: number },
): void {
  const low = Math.abs(plane - bounds.min[axis]) < Math.abs(plane - bounds.max[axis]);
  const beyond = (index: number): boolean => (low ? origin[axis] + index * step < plane : origin[axis] + index * step > plane);
  const row = new Uint32Array(rowWords).fill(0xffffffff);
  if (axis === 0) for (let i = 0; i < size[0]; i++) if (beyond(i)) row[i >>> 5] &= ~(1 << (i & 31));
  for (let k = 0; k < size[2]; k++)
    for (let j = 0; j < size[1]; j++) {
      const first = (k * size[1] + j) * rowWords;
      if (axis === 0) for (let word = 0; word < rowWords; word++) clear[first + word] &= row[word];
      else if (beyond(axis === 1 ? j : k)) clear.fill(0, first, first + rowWords);
    }
}
