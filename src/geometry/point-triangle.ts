/** Squared distance of a point to a triangle (Ericson, Real-Time Collision Detection, 2005, section 5.1.5). */
export function squaredDistance(
  px: number,
  py: number,
  pz: number,
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
  const ux = bx - ax;
  const uy = by - ay;
  const uz = bz - az;
  const vx = cx - ax;
  const vy = cy - ay;
  const vz = cz - az;
  const rx = px - ax;
  const ry = py - ay;
  const rz = pz - az;
  const d1 = ux * rx + uy * ry + uz * rz;
  const d2 = vx * rx + vy * ry + vz * rz;
  if (d1 <= 0 && d2 <= 0) return rx * rx + ry * ry + rz * rz;
  const uu = ux * ux + uy * uy + uz * uz;
  const uv = ux * vx + uy * vy + uz * vz;
  const vv = vx * vx + vy * vy + vz * vz;
  const d3 = d1 - uu;
  const d4 = d2 - uv;
  const d5 = d1 - uv;
  const d6 = d2 - vv;
  let s = 0;
  let t = 0;
  const vc = d1 * d4 - d3 * d2;
  const vb = d5 * d2 - d1 * d6;
  const va = d3 * d6 - d5 * d4;
  if (d3 >= 0 && d4 <= d3) s = 1;
  else if (d6 >= 0 && d5 <= d6) t = 1;
  else if (vc <= 0 && d1 >= 0 && d3 <= 0) s = d1 / (d1 - d3);
  else if (vb <= 0 && d2 >= 0 && d6 <= 0) t = d2 / (d2 - d6);
  else if (va <= 0 && d4 - d3 >= 0 && d5 - d6 >= 0) {
    t = (d4 - d3) / (d4 - d3 + (d5 - d6));
    s = 1 - t;
  } else {
    const sum = va + vb + vc;
    // A triangle without area is its edges.
    if (!(sum > 0)) return edgesOnly(rx, ry, rz, ux, uy, uz, vx, vy, vz);
    s = vb / sum;
    t = vc / sum;
  }
  const x = rx - s * ux - t * vx;
  const y = ry - s * uy - t * vy;
  const z = rz - s * uz - t * vz;
  return x * x + y * y + z * z;
}

function edgesOnly(
  rx: number,
  ry: number,
  rz: number,
  ux: number,
  uy: number,
  uz: number,
  vx: number,
  vy: number,
  vz: number,
): number {
  return Math.min(
    toSegment(rx, ry, rz, ux, uy, uz),
    toSegment(rx, ry, rz, vx, vy, vz),
    toSegment(rx - ux, ry - uy, rz - uz, vx - ux, vy - uy, vz - uz),
  );
}

/** Squared distance to the segment from the origin along a vector. */
function toSegment(x: number, y: number, z: number, dx: number, dy: number, dz: number): number {
  const square = dx * dx + dy * dy + dz * dz;
  const s = square > 0 ? Math.min(1, Math.max(0, (x * dx + y * dy + z * dz) / square)) : 0;
  return (x - s * dx) ** 2 + (y - s * dy) ** 2 + (z - s * dz) ** 2;
}
