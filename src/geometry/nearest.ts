import { squaredDistance as toTriangle } from "./point-triangle.js";

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
  const grid = gridOf(points, reach);
  const { cell, low, high, columns, rows, head, next } = grid;
  const index = (value: number): number => Math.floor(value / cell);
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
        for (let i = from[0]; i <= to[0]; i++)
          for (let point = head[((k - low[2]) * rows + (j - low[1])) * columns + (i - low[0])]; point >= 0; point = next[point]) {
            if (squares[point] === 0) continue;
            const square = squaredDistance(points, 3 * point, vertices, a, b, c);
            if (square < squares[point]) squares[point] = square;
          }
  }
  return squares.map((square) => (square <= reach * reach ? Math.sqrt(square) : Infinity));
}

/** Distance of the point at `points[at, at + 3)` to the nearest triangle, however far; looks at every triangle. Infinity without any. */
export function nearestDistance(
  { vertices, corners }: { vertices: Float32Array; corners: Uint32Array },
  points: Float64Array,
  at: number,
): number {
  let square = Infinity;
  let distance = Infinity;
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    // Farther off in one coordinate than the best so far: cannot be nearer.
    let outside = false;
    for (let axis = 0; axis < 3; axis++) {
      const p = points[at + axis];
      if (Math.max(vertices[a + axis], vertices[b + axis], vertices[c + axis]) < p - distance) outside = true;
      if (Math.min(vertices[a + axis], vertices[b + axis], vertices[c + axis]) > p + distance) outside = true;
    }
    if (outside) continue;
    const next = squaredDistance(points, at, vertices, a, b, c);
    if (next >= square) continue;
    square = next;
    distance = Math.sqrt(square);
  }
  return distance;
}

interface Grid {
  cell: number;
  low: number[];
  high: number[];
  columns: number;
  rows: number;
  /** First point of each cell and the next point of each point's cell; -1 ends a list. */
  head: Int32Array;
  next: Int32Array;
}

const MOST_CELLS = 1 << 22;

function gridOf(points: Float64Array, reach: number): Grid {
  const least = [Infinity, Infinity, Infinity];
  const most = [-Infinity, -Infinity, -Infinity];
  for (let at = 0; at < points.length; at++) {
    least[at % 3] = Math.min(least[at % 3], points[at]);
    most[at % 3] = Math.max(most[at % 3], points[at]);
  }
  for (let cell = 2 * reach; ; cell *= 2) {
    const low = least.map((value) => Math.floor(value / cell));
    const high = most.map((value) => Math.floor(value / cell));
    const [columns, rows, layers] = high.map((value, axis) => value - low[axis] + 1);
    if (points.length > 0 && columns * rows * layers > MOST_CELLS) continue;
    const head = new Int32Array(points.length > 0 ? columns * rows * layers : 0).fill(-1);
    const next = new Int32Array(points.length / 3);
    for (let k = 0; 3 * k < points.length; k++) {
      const [i, j, l] = [0, 1, 2].map((axis) => Math.floor(points[3 * k + axis] / cell) - low[axis]);
      const at = (l * rows + j) * columns + i;
      next[k] = head[at];
      head[at] = k;
    }
    return { cell, low, high, columns, rows, head, next };
  }
}

/** Squared distance of the point at `p` to the triangle with corners at `a`, `b` and `c`: places in the arrays. */
function squaredDistance(points: Float64Array, p: number, vertices: Float32Array, a: number, b: number, c: number): number {
  return toTriangle(
    points[p],
    points[p + 1],
    points[p + 2],
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
}
