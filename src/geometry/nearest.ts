/**
 * Distance of each point (3 per point) to the nearest triangle, as far as it is not above `reach`; Infinity beyond. Points are put
 * into the cells of a grid, triangles look up the cells that they come near: time and memory follow the number of triangles, so this
 * suits few points and many triangles. `reach` should be small against the body, or the points few.
 */
export function nearestDistances(
  { vertices, corners }: { vertices: Float32Array; corners: Uint32Array },
  points: Float64Array,
  reach: number,
): Float64Array {
  const count = points.length / 3;
  const squares = new Float64Array(count).fill(Infinity);
  const cell = 2 * reach;
  const cells = new Map<number, number[]>();
  const index = (value: number): number => Math.floor(value / cell);
  let low = [Infinity, Infinity, Infinity];
  let high = [-Infinity, -Infinity, -Infinity];
  for (let k = 0; k < count; k++) {
    const at = [0, 1, 2].map((axis) => index(points[3 * k + axis]));
    low = low.map((value, axis) => Math.min(value, at[axis]));
    high = high.map((value, axis) => Math.max(value, at[axis]));
  }
  const columns = high[0] - low[0] + 1;
  const rows = high[1] - low[1] + 1;
  const key = (i: number, j: number, k: number): number => ((k - low[2]) * rows + (j - low[1])) * columns + (i - low[0]);
  for (let k = 0; k < count; k++) {
    const at = key(index(points[3 * k]), index(points[3 * k + 1]), index(points[3 * k + 2]));
    const list = cells.get(at);
    if (list === undefined) cells.set(at, [k]);
    else list.push(k);
  }
  const from = [0, 0, 0];
  const to = [0, 0, 0];
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    let empty = false;
    for (let axis = 0; axis < 3; axis++) {
      const least = Math.min(vertices[a + axis], vertices[b + axis], vertices[c + axis]) - reach;
      const most = Math.max(vertices[a + axis], vertices[b + axis], vertices[c + axis]) + reach;
      from[axis] = Math.max(low[axis], index(least));
      to[axis] = Math.min(high[axis], index(most));
      if (from[axis] > to[axis]) empty = true;
    }
    if (empty) continue;
    for (let k = from[2]; k <= to[2]; k++)
      for (let j = from[1]; j <= to[1]; j++)
        for (let i = from[0]; i <= to[0]; i++) {
          const list = cells.get(key(i, j, k));
          if (list === undefined) continue;
          for (const point of list) {
            const square = squaredDistance(points, 3 * point, vertices, a, b, c);
            if (square < squares[point]) squares[point] = square;
          }
        }
  }
  return squares.map((square) => (square <= reach * reach ? Math.sqrt(square) : Infinity));
}

/** Squared distance of a point to a triangle (Ericson, Real-Time Collision Detection, 2005, section 5.1.5). */
function squaredDistance(points: Float64Array, p: number, vertices: Float32Array, a: number, b: number, c: number): number {
  const ax = vertices[a];
  const ay = vertices[a + 1];
  const az = vertices[a + 2];
  const ux = vertices[b] - ax;
  const uy = vertices[b + 1] - ay;
  const uz = vertices[b + 2] - az;
  const vx = vertices[c] - ax;
  const vy = vertices[c + 1] - ay;
  const vz = vertices[c + 2] - az;
  const px = points[p] - ax;
  const py = points[p + 1] - ay;
  const pz = points[p + 2] - az;
  const d1 = ux * px + uy * py + uz * pz;
  const d2 = vx * px + vy * py + vz * pz;
  if (d1 <= 0 && d2 <= 0) return px * px + py * py + pz * pz;
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
    s = vb / sum;
    t = vc / sum;
  }
  const x = px - s * ux - t * vx;
  const y = py - s * uy - t * vy;
  const z = pz - s * uz - t * vz;
  return x * x + y * y + z * z;
}
